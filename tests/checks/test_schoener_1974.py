"""Schoener, T. W. (1974) *American Naturalist* 108:332–340: coefficients from diet, weighted by what the habitat offers.

    α_ij = (T_j / T_i) Σ_k (d_ik / f_k)(d_jk / f_k) b_ik / Σ_k (d_ik / f_k)² b_ik        (abstract; b_ik = 1 here)

This is α from products with zone weights 1/f². With time in zones in place of diet, and a resource that grows with the
area of the zone, the same system gives weights 1/f: derived, not quoted.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from published_tables import KREBS, KREBS_AVAILABILITY
from register import Check, require

from niche.indices import macarthur_levins, pianka, products

USE, F = np.array(KREBS, dtype=np.float64), np.array(KREBS_AVAILABILITY)
SOURCE = "formula Schoener 1974, abstract; data Krebs 1999, Box 13.2; f invented"


def _products(power: int) -> np.ndarray:
    return products(USE, zone_weights=F**power)


def _alpha(power: int, intake: float = 1.0) -> np.ndarray:
    return macarthur_levins(_products(power), np.array([1.0, intake]))


def _three(weights: str, power: int, intake: float, alpha: float, beta: float, both: float) -> list[Check]:
    """α, β and their geometric mean under one weighting."""
    numbers: tuple[tuple[str, float, Callable[[], float]], ...] = (
        ("α", alpha, lambda: _alpha(power, intake)[0, 1]),
        ("β", beta, lambda: _alpha(power, intake)[1, 0]),
        ("√(αβ) as Pianka’s overlap", both, lambda: pianka(_products(power))[0, 1]),
    )
    taking = "" if intake == 1 else f", species 2 takes {intake:g} times as much"
    return [Check(f"{n}, {weights}{taking}", SOURCE, "derived here", x, 5e-7, got) for n, x, got in numbers]


CHECKS = [
    *_three("no weights (MacArthur–Levins)", 0, 1, 0.222840, 0.362084, 0.284055),
    *_three("weights 1/f (time in zones)", -1, 1, 0.230976, 0.196501, 0.213043),
    *_three("weights 1/f² (diet)", -2, 1, 0.241936, 0.105904, 0.160069),
    *_three("weights 1/f² (diet)", -2, 2, 0.483871, 0.052952, 0.160069),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_formula_of_the_abstract_term_by_term() -> None:
    d, intake = USE / USE.sum(axis=1, keepdims=True), (1.0, 3.0)
    for i, j in ((0, 1), (1, 0)):
        above = sum((d[i, k] / F[k]) * (d[j, k] / F[k]) for k in range(7))
        below = sum((d[i, k] / F[k]) ** 2 for k in range(7))
        expected = intake[j] / intake[i] * above / below
        assert macarthur_levins(_products(-2), np.array(intake))[i, j] == pytest.approx(expected, rel=1e-12)


def test_even_availability_gives_macarthur_levins() -> None:
    even = macarthur_levins(products(USE, zone_weights=np.full(7, 7.0) ** 2))
    assert even == pytest.approx(macarthur_levins(products(USE)), rel=1e-14)
