"""Magurran, A. E. (1988) *Ecological Diversity and its Measurement*: counts by kind, read as use by zone."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
import pytest
from published_tables import MAGURRAN_63, MAGURRAN_145, MAGURRAN_152, counted, pooled
from register import Check, require

from niche.indices import levins, levins_standardized, proportions, shannon

BOOK = "Magurran 1988"


def _shannon(counts: Sequence[int]) -> float:
    return float(shannon(proportions(np.array([counts], dtype=np.float64)))[0])


def _levins(counts: Sequence[int]) -> Callable[[], float]:
    return lambda: float(levins(pooled(counts))[0])


def _unbiased(counts: Sequence[int]) -> Callable[[], float]:
    """Simpson's D without replacement, Σ n(n − 1) / N(N − 1): the product between different observations."""
    return lambda: float(counted(counts)[0, 0])


CHECKS = [
    Check(
        "Shannon H′, p. 145 data, as printed (the book rounds on the way)",
        f"{BOOK}, p. 145",
        "second-hand, cites the page",
        2.404,
        0.005,
        lambda: _shannon(MAGURRAN_145),
    ),
    Check(
        "Shannon H′, p. 145 data, recomputed",
        f"{BOOK}, p. 145",
        "derived here",
        2.40798,
        5e-6,
        lambda: _shannon(MAGURRAN_145),
    ),
    Check(
        "evenness H′ / ln Z, p. 145 data, as printed",
        f"{BOOK}, p. 145",
        "second-hand, cites the page",
        0.8025,
        0.0015,
        lambda: _shannon(MAGURRAN_145) / np.log(20),
    ),
    Check(
        "Simpson’s D between different observations, p. 145 data",
        f"{BOOK}, p. 145",
        "second-hand, cites the page",
        0.1147,
        5e-5,
        _unbiased(MAGURRAN_145),
    ),
    Check("Levins B, p. 145 data", f"{BOOK}, p. 145", "derived here", 8.33814, 5e-6, _levins(MAGURRAN_145)),
    Check(
        "Levins B, standardised, 20 zones, p. 145 data",
        f"{BOOK}, p. 145",
        "derived here",
        0.386218,
        5e-7,
        lambda: float(levins_standardized(pooled(MAGURRAN_145), 20)[0]),
    ),
    Check(
        "Simpson’s D between different observations, p. 152 data, as printed",
        f"{BOOK}, p. 152",
        "second-hand, cites the page",
        0.187,
        5e-4,
        _unbiased(MAGURRAN_152),
    ),
    Check("Levins B, pooled, p. 152 data", f"{BOOK}, p. 152", "derived here", 5.34889, 5e-6, _levins(MAGURRAN_152)),
    Check(
        "Levins B between different observations, p. 152 data",
        f"{BOOK}, p. 152",
        "derived here",
        5.36058,
        5e-6,
        lambda: float(levins(counted(MAGURRAN_152))[0]),
    ),
    Check(
        "Levins B between different observations, p. 63 data, as printed",
        f"{BOOK}, p. 63",
        "second-hand, cites the page",
        8.50,
        0.005,
        lambda: float(levins(counted(MAGURRAN_63))[0]),
    ),
    Check("Levins B, pooled, p. 63 data", f"{BOOK}, p. 63", "derived here", 8.37184, 5e-6, _levins(MAGURRAN_63)),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)
