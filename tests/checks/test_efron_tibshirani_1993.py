"""Efron, B. & Tibshirani, R. J. (1993) *An Introduction to the Bootstrap*: resamples as weights, percentile intervals.

Where all resamples can be listed (7⁷ = 823,543) the quantiles are exact; elsewhere the tolerance covers the random error
of both sides.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
import pytest
from register import Check, Status, require

from niche.resampling import percentile, unit_weights

BOOK = "Efron & Tibshirani 1993"
RESAMPLES = 100_000

SPATIAL = np.array(
    [48, 36, 20, 29, 42, 42, 20, 42, 22, 41, 45, 14, 6, 0, 33, 28, 34, 4, 32, 24, 47, 41, 24, 26, 30, 41], dtype=float
)
TREATMENT = np.array([94, 197, 16, 38, 99, 141, 23], dtype=float)
LSAT = np.array([576, 635, 558, 578, 666, 580, 555, 661, 651, 605, 653, 575, 545, 572, 594], dtype=float)
GPA = np.array([3.39, 3.30, 2.81, 3.03, 3.44, 3.07, 3.00, 3.43, 3.36, 3.13, 3.12, 2.74, 2.76, 2.88, 2.96])
SKEWED = np.array([10, 12, 12.5, 12.5, 13.9, 15, 21, 22, 23, 34, 50, 81, 89, 121, 134, 213])


@cache
def _weights(units: int) -> np.ndarray:
    """Shares of the units in each resample, drawn by the program."""
    return unit_weights(units, RESAMPLES, np.random.default_rng(1993)) / units


@cache
def _every_mean() -> np.ndarray:
    """Mean of the treated mice in each of all 7⁷ equally likely resamples."""
    total = np.zeros(1)
    for _ in range(7):
        total = (total[:, None] + TREATMENT).ravel()
    return total / 7


def _variance() -> np.ndarray:
    w = _weights(26)
    return np.asarray(w @ SPATIAL**2 - (w @ SPATIAL) ** 2)


def _correlation() -> np.ndarray:
    w = _weights(15)
    x, y = w @ LSAT, w @ GPA
    spread = np.sqrt((w @ LSAT**2 - x**2) * (w @ GPA**2 - y**2))
    return np.asarray((w @ (LSAT * GPA) - x * y) / spread)


def _random(
    name: str,
    source: str,
    status: Status,
    expected: float,
    tolerance: float,
    draws: Callable[[], np.ndarray],
    confidence: float,
    end: int,
) -> Check:
    return Check(
        name, source, status, expected, tolerance, lambda: float(percentile(draws(), confidence)[end]), random=True
    )


def _exact(level: float, expected: float) -> Check:
    """A quantile of the exact distribution of the mean, as an end of a central interval."""
    end = int(level > 0.5)
    confidence = abs(2 * level - 1)
    return Check(
        f"mouse data, exact bootstrap of the mean, {level:.1%} quantile",
        f"data {BOOK}; all 7⁷ resamples listed",
        "derived here",
        expected,
        0.005,
        lambda: float(percentile(_every_mean(), confidence)[end]),
    )


TABLE = f"{BOOK}, Table 14.2, p. 183"
LAW = f"data {BOOK}, law school"
PROGRAM = "SciPy’s tests, 10⁶ resamples by another program"
CHECKS = [
    _random(
        "spatial data, variance, 90 % percentile interval, low, as printed (2,000 resamples)",
        TABLE,
        "second-hand, cites the page",
        100.8,
        3.6,
        _variance,
        0.9,
        0,
    ),
    _random(
        "spatial data, variance, 90 % percentile interval, high, as printed (2,000 resamples)",
        TABLE,
        "second-hand, cites the page",
        233.9,
        3.6,
        _variance,
        0.9,
        1,
    ),
    _random(
        "spatial data, variance, 90 % percentile interval, low (400,000 resamples)",
        TABLE,
        "derived here",
        97.9,
        1.0,
        _variance,
        0.9,
        0,
    ),
    _random(
        "spatial data, variance, 90 % percentile interval, high (400,000 resamples)",
        TABLE,
        "derived here",
        235.8,
        1.0,
        _variance,
        0.9,
        1,
    ),
    *(
        _exact(level, expected)
        for level, expected in (
            (0.025, 43.43),
            (0.05, 49.43),
            (0.10, 57.14),
            (0.16, 63.14),
            (0.50, 86.14),
            (0.84, 110.57),
            (0.90, 117.71),
            (0.95, 126.71),
            (0.975, 134.43),
        )
    ),
    Check(
        "mouse data, standard error of the mean over resamples (plug-in formula 23.3635)",
        f"{BOOK}, mouse data",
        "derived here",
        23.3635,
        0.25,
        lambda: float((_weights(7) @ TREATMENT).std()),
        random=True,
    ),
    _random("law school, correlation, 95 % percentile, low", LAW, "derived here", 0.460, 0.006, _correlation, 0.95, 0),
    _random("law school, correlation, 95 % percentile, high", LAW, "derived here", 0.962, 0.006, _correlation, 0.95, 1),
    _random("law school, correlation, 90 % percentile, low", LAW, "derived here", 0.523, 0.006, _correlation, 0.90, 0),
    _random("law school, correlation, 90 % percentile, high", LAW, "derived here", 0.947, 0.006, _correlation, 0.90, 1),
    _random(
        "16 skewed values, mean, 95 % percentile interval, low",
        PROGRAM,
        "seen in the source",
        28.86,
        0.3,
        lambda: _weights(16) @ SKEWED,
        0.95,
        0,
    ),
    _random(
        "16 skewed values, mean, 95 % percentile interval, high",
        PROGRAM,
        "seen in the source",
        84.21,
        0.6,
        lambda: _weights(16) @ SKEWED,
        0.95,
        1,
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)
