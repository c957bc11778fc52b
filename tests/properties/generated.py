"""Generated use of zones, and how many examples a property is tried on.

The same examples come in every run. To search further, set ``NICHE_EXAMPLES`` to a factor: ``NICHE_EXAMPLES=50`` tries 50
times as many, fresh ones each time.
"""

from __future__ import annotations

import os
from dataclasses import dataclass

import numpy as np
from hypothesis import HealthCheck, settings
from hypothesis import strategies as st

import niche

_FACTOR = int(os.environ.get("NICHE_EXAMPLES", "1"))


def examples(number: int) -> settings:
    """Settings for a property that is worth ``number`` examples in the usual run."""
    slow = [HealthCheck.too_slow, HealthCheck.data_too_large, HealthCheck.filter_too_much]
    return settings(
        max_examples=number * _FACTOR,
        deadline=None,
        derandomize=_FACTOR == 1,
        database=None,
        suppress_health_check=slow,
    )


@dataclass(frozen=True)
class Watched:
    """Time and visits of each species by unit and zone, whole numbers."""

    time: dict[str, np.ndarray]
    visits: dict[str, np.ndarray]

    @property
    def zones(self) -> list[str]:
        count = next(iter(self.time.values())).shape[1]
        return [f"zone {z}" for z in range(count)]

    def usage(self) -> niche.Usage:
        return niche.Usage.from_units(self.time, zones=self.zones, visits=self.visits)

    def changed(self, change: object) -> Watched:
        """The same change (an array to an array) made to time and visits of every species."""
        return Watched(
            {name: change(a) for name, a in self.time.items()},  # type: ignore[operator]
            {name: change(a) for name, a in self.visits.items()},  # type: ignore[operator]
        )


@st.composite
def watched(
    draw: st.DrawFn, *, species: tuple[int, int] = (2, 3), units: tuple[int, int] = (1, 5), most_zones: int = 5
) -> Watched:
    """A few species, units and zones; many zones are not used, and every unit uses at least one."""
    zones = draw(st.integers(2, most_zones))
    time, visits = {}, {}
    for s in range(draw(st.integers(*species))):
        count = draw(st.integers(*units))
        cells = st.one_of(st.just(0), st.integers(1, 50))
        rows = st.lists(cells, min_size=zones, max_size=zones).filter(any)
        amounts = np.array(draw(st.lists(rows, min_size=count, max_size=count)), dtype=np.int64)
        most = st.integers(1, 3)
        often = np.array(draw(st.lists(most, min_size=amounts.size, max_size=amounts.size))).reshape(amounts.shape)
        time[f"species {s + 1}"] = amounts
        visits[f"species {s + 1}"] = np.where(amounts > 0, often, 0)
    return Watched(time, visits)


def quick(usage: niche.Usage, **options: object) -> niche.Analysis:
    """An analysis on few resamples."""
    return niche.analyse(usage, **{"resamples": 25, "confidence": 0.8, "seed": 7, **options})  # type: ignore[arg-type]


def estimates(analysis: niche.Analysis) -> dict[str, object]:
    """Every estimate of an analysis by name."""
    assert analysis.coefficients is not None
    return {
        "proportion": analysis.use.proportion,
        **analysis.breadth,
        **analysis.overlap,
        "alpha": analysis.coefficients.alpha,
    }


FIELDS = ("value", "low", "high", "pooled", "undefined", "clipped")


def assert_same(
    first: niche.Analysis, second: niche.Analysis, *, exactly: bool = False, fields: tuple = FIELDS
) -> None:
    """Every field of every estimate agrees, to rounding or to the last bit."""
    theirs = estimates(second)
    for name, estimate in estimates(first).items():
        for field in fields:
            a, b = getattr(estimate, field), getattr(theirs[name], field)
            message = f"{name}.{field}"
            if exactly:
                np.testing.assert_array_equal(a, b, err_msg=message)
            else:
                np.testing.assert_allclose(a, b, rtol=1e-9, atol=1e-12, equal_nan=True, err_msg=message)
