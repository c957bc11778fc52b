"""Morisita, M. (1959) *Mem. Fac. Sci. Kyushu Univ. E* 3:65–80: similarity of two samples of counts.

    C_λ = 2 Σ x y / ((λ₁ + λ₂) X Y),   λ = Σ x (x − 1) / X (X − 1)

With one observation a unit, products between different units are products between different observations, so the
between-animal Morisita–Horn overlap must be this index, whichever way round it is computed.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache

import numpy as np
import pytest
from published_tables import KREBS, LIZARDS_JOINT, as_animals, counted, waders
from register import Check, require

import niche
from niche.indices import morisita_horn

IDENTICAL = ((3, 2), (3, 2))
"""Two small samples with equal counts: the index passes 1 here (1.3)."""


def textbook(x: Sequence[float], y: Sequence[float]) -> float:
    """Morisita's index written out as in the source, in plain numbers."""
    total_x, total_y = sum(x), sum(y)
    lambda_x = sum(n * (n - 1) for n in x) / (total_x * (total_x - 1))
    lambda_y = sum(n * (n - 1) for n in y) / (total_y * (total_y - 1))
    return 2 * sum(a * b for a, b in zip(x, y, strict=True)) / ((lambda_x + lambda_y) * total_x * total_y)


DATA = {
    "seeds (Krebs 1999, Box 13.2)": KREBS,
    "lizards (Schoener 1970)": tuple(tuple(row) for row in LIZARDS_JOINT.tolist()),
    "knot and sanderling (Summers et al. 1987), one in a hundred": tuple(
        tuple((waders()[code] // 100).tolist()) for code in ("S13", "S14")
    ),
}


@cache
def _analysed(name: str) -> niche.Analysis:
    """Each observation an animal seen once, through the whole analysis."""
    first, second = DATA[name]
    animals = {"first": as_animals(first), "second": as_animals(second)}
    usage = niche.Usage.from_units(animals, zones=[str(z) for z in range(len(first))], visits=animals)
    return niche.analyse(usage, resamples=1, indices={"morisita_horn", "morisita"})


CHECKS = [
    *(
        Check(
            f"{name}: {label}",
            "formula Morisita 1959",
            "derived here",
            textbook(*DATA[name]),
            1e-12,
            lambda name=name, index=index: float(_analysed(name).overlap[index].value[0, 1]),  # type: ignore[misc]
        )
        for name in DATA
        for index, label in (
            ("morisita_horn", "between-animal Morisita–Horn, animals seen once"),
            ("morisita", "Morisita from visits, animals seen once"),
        )
    ),
    Check(
        "two samples of counts 3, 2: the estimate before it is held to its range",
        "formula Morisita 1959",
        "derived here",
        1.3,
        1e-12,
        lambda: float(morisita_horn(counted(*IDENTICAL))[0, 1]),
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_visits_of_few_animals_give_the_same_index_as_visits_of_many() -> None:
    """Morisita's index takes visits as independent, so who made them must not matter."""
    visits = {"first": [[4, 1, 0], [3, 0, 2]], "second": [[1, 1, 5], [0, 2, 2]]}
    usage = niche.Usage.from_units(visits, zones=["a", "b", "c"], visits=visits)
    got = niche.analyse(usage, resamples=1, indices={"morisita"}).overlap["morisita"].value[0, 1]
    assert got == pytest.approx(textbook([7, 1, 2], [1, 3, 7]), rel=1e-12)


def test_a_sample_of_one_observation_has_no_index() -> None:
    assert np.isnan(morisita_horn(counted((1, 0), (3, 2)))[0, 1])
