"""Values that follow from the definitions alone, whatever the data."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from published_tables import KREBS, LIZARDS_JOINT, pooled, waders
from register import Check, require

from niche.indices import (
    levins,
    levins_standardized,
    macarthur_levins,
    morisita_horn,
    pianka,
    proportions,
    schoener,
    shannon,
)

USE = [1.0, 3.0, 2.0, 0.0]
EVEN, ONE_ZONE = [5.0] * 8, [0.0, 3.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]
TABLES = {
    "seeds": np.array(KREBS, dtype=float),
    "lizards": LIZARDS_JOINT,
    "waders": np.array(list(waders().values())),
}


def _check(name: str, expected: float, got: Callable[[], float]) -> Check:
    return Check(name, "definition", "derived here", expected, 1e-12, got)


CHECKS = [
    _check("even use of 8 zones: Levins B", 8, lambda: levins(pooled(EVEN))[0]),
    _check("even use of 8 zones: Levins B, standardised", 1, lambda: levins_standardized(pooled(EVEN), 8)[0]),
    _check("even use of 8 zones: H′ = ln 8", np.log(8), lambda: shannon(proportions(np.array([EVEN])))[0]),
    _check("one zone of 8: Levins B", 1, lambda: levins(pooled(ONE_ZONE))[0]),
    _check("one zone of 8: Levins B, standardised", 0, lambda: levins_standardized(pooled(ONE_ZONE), 8)[0]),
    _check("one zone of 8: H′", 0, lambda: shannon(proportions(np.array([ONE_ZONE])))[0]),
    _check("even use and one zone of 8: Pianka = √(1/8)", 8**-0.5, lambda: pianka(pooled(EVEN, ONE_ZONE))[0, 1]),
    _check(
        "even use and one zone of 8: Schoener", 1 / 8, lambda: schoener(proportions(np.array([EVEN, ONE_ZONE])))[0, 1]
    ),
    _check(
        "even use and one zone of 8: effect of the narrow species on the broad",
        1,
        lambda: macarthur_levins(pooled(EVEN, ONE_ZONE))[0, 1],
    ),
    _check(
        "even use and one zone of 8: effect of the broad species on the narrow",
        1 / 8,
        lambda: macarthur_levins(pooled(EVEN, ONE_ZONE))[1, 0],
    ),
    *(
        _check(f"{kind} use of zones: {name}", expected, got)
        for kind, other, expected in (("equal", [2.0, 6.0, 4.0, 0.0], 1.0), ("disjoint", [0.0, 0.0, 0.0, 1.0], 0.0))
        for name, got in (
            ("Pianka", lambda other=other: pianka(pooled(USE, other))[0, 1]),  # type: ignore[misc]
            ("Morisita–Horn", lambda other=other: morisita_horn(pooled(USE, other))[0, 1]),  # type: ignore[misc]
            ("α", lambda other=other: macarthur_levins(pooled(USE, other))[0, 1]),  # type: ignore[misc]
            ("Schoener", lambda other=other: schoener(proportions(np.array([USE, other])))[0, 1]),  # type: ignore[misc]
        )
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_one_zone_alone_has_no_standardised_breadth() -> None:
    assert np.isnan(levins_standardized(pooled([3.0]), 1)[0])


@pytest.mark.parametrize("name", TABLES)
@pytest.mark.parametrize("demand", [1.0, 0.1, 7.3])
def test_pianka_is_the_geometric_mean_of_the_alphas_at_any_demand(name: str, demand: float) -> None:
    c = pooled(*TABLES[name])
    alpha = macarthur_levins(c, demand ** np.arange(len(c), dtype=float))
    assert pianka(c) == pytest.approx(np.sqrt(alpha * alpha.T), rel=1e-12)
    assert (alpha * alpha.T).max() <= 1 + 1e-12


@pytest.mark.parametrize("name", TABLES)
def test_morisita_horn_is_the_harmonic_mean_of_the_alphas_and_at_most_pianka(name: str) -> None:
    c = pooled(*TABLES[name])
    alpha = macarthur_levins(c)
    assert morisita_horn(c) == pytest.approx(2 / (1 / alpha + 1 / alpha.T), rel=1e-12)
    assert (morisita_horn(c) <= pianka(c) + 1e-12).all()


def test_pianka_and_morisita_horn_agree_where_breadths_do() -> None:
    c = pooled([6, 3, 1, 0], [0, 1, 6, 3])
    assert pianka(c)[0, 1] == pytest.approx(morisita_horn(c)[0, 1], rel=1e-12)


@pytest.mark.parametrize("name", TABLES)
def test_breadth_is_the_reciprocal_of_the_own_product(name: str) -> None:
    p = TABLES[name] / TABLES[name].sum(axis=1, keepdims=True)
    assert levins(pooled(*TABLES[name])) == pytest.approx(1 / (p**2).sum(axis=1), rel=1e-12)
