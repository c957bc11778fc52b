"""From the values of a statistic to an `Estimate`: interval, range with one unit left out, what noise did."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from niche.analysis.results import Estimate, Options
from niche.indices.products import Floats
from niche.resampling import INTERVALS, Evidence
from niche.resampling.evidence import Scale
from niche.resampling.intervals import FEWEST_UNITS
from niche.usage import Usage

_HUGE = 1e300

_SLACK = 1e-9
"""Rounding alone is no excursion out of the range."""


@dataclass(frozen=True)
class Estimator:
    """What all estimates of an analysis share."""

    usage: Usage
    options: Options
    owner: NDArray[np.intp]

    def units(self, dimensions: int) -> NDArray[np.int64]:
        """Fewest units that each cell rests on: shape (S,), or (S, S) for pairs."""
        counts = np.zeros_like(self.usage.unit_counts) if self.usage.placed else self.usage.unit_counts
        return counts if dimensions == 1 else np.minimum(counts[:, None], counts[None, :])

    def estimate(
        self,
        value: Floats,
        pooled: Floats,
        draws: Floats,
        left_out: Floats,
        units: NDArray[np.int64],
        scale: Scale,
        limits: tuple[float, float] = (-np.inf, np.inf),
    ) -> Estimate:
        """An estimate held to its limits, with its interval; cells with too few units get none."""
        clipped = ((draws < limits[0] - _SLACK) | (draws > limits[1] + _SLACK)).sum(axis=0)
        # Held to the limits only at the end: draws heaped up at a limit would mislead a bias correction. An infinite draw
        # (units that share no zone) is the largest of all, not an undefined one.
        evidence = Evidence(value, np.clip(draws, -_HUGE, _HUGE), left_out, self.owner, units, scale)
        interval = INTERVALS[self.options.interval](evidence, self.options.confidence)
        few = units < FEWEST_UNITS
        least, most, mover = _influence(value, np.clip(left_out, *limits), limits)
        return Estimate(
            value=np.clip(value, *limits),
            low=np.where(few, np.nan, np.clip(interval.low, *limits)),
            high=np.where(few, np.nan, np.clip(interval.high, *limits)),
            pooled=pooled,
            undefined=np.where(few, 0, np.isnan(draws).sum(axis=0)),
            clipped=np.where(few, 0, clipped),
            least=np.where(units < 2, np.nan, least),
            most=np.where(units < 2, np.nan, most),
            mover=np.where(units < 2, -1, mover),
        )


def _influence(
    value: Floats, left_out: Floats, limits: tuple[float, float]
) -> tuple[Floats, Floats, NDArray[np.int64]]:
    """Range of the value with one unit left out, and which unit moves it most (-1 where none does)."""
    moved = np.abs(left_out - np.clip(value, *limits))
    defined = ~np.isnan(left_out)
    least = np.where(defined, left_out, np.inf).min(axis=0)
    most = np.where(defined, left_out, -np.inf).max(axis=0)
    size = np.where(np.isnan(moved), -1.0, moved)
    mover = np.where(size.max(axis=0) > 0, size.argmax(axis=0), -1)
    return np.where(np.isinf(least), np.nan, least), np.where(np.isinf(most), np.nan, most), mover
