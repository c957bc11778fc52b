"""MacArthur, R. & Levins, R. (1967) *American Naturalist* 101:377–385: coefficients from bell-shaped use along one axis.

Equal curves of width w at distance d give α = exp(−d²/4w²); unequal widths, with S = w₁² + w₂²,
α = √2 w₁/√S · exp(−d²/2S). Here the curves stand as use of 4,001 narrow zones.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from register import Check, Status, require
from scipy.optimize import brentq

from niche.indices import macarthur_levins, pianka, products

SOURCE = "MacArthur & Levins 1967"


def _curves(distance: float, width_1: float = 1.0, width_2: float = 1.0) -> np.ndarray:
    x = np.linspace(-20, 20, 4001)
    return products(np.stack([np.exp(-(x**2) / (2 * width_1**2)), np.exp(-((x - distance) ** 2) / (2 * width_2**2))]))


def _alpha(i: int, j: int, *curves: float) -> Callable[[], float]:
    return lambda: float(macarthur_levins(_curves(*curves))[i, j])


def _limiting() -> float:
    """Distance at which a species midway between two residents of equal K has no growth to spare when rare.

    The residents stand at K / (1 + α(2d)), so it grows iff 2 α(d) < 1 + α(2d).
    """
    return float(brentq(lambda d: 2 * _alpha(0, 1, d)() - 1 - _alpha(0, 1, 2 * d)(), 1.0, 3.0, xtol=1e-10))


def _check(
    name: str, expected: float, got: Callable[[], float], status: Status = "derived here", tol: float = 5e-7
) -> Check:
    return Check(name, SOURCE, status, expected, tol, got)


CHECKS = [
    _check("α, equal curves, distance 0.5 widths", 0.939413, _alpha(0, 1, 0.5)),
    _check("α, equal curves, distance 1 width", 0.778801, _alpha(0, 1, 1.0)),
    _check("α, equal curves, distance 2 widths", 0.367879, _alpha(0, 1, 2.0)),
    _check("α, equal curves, distance 3 widths", 0.105399, _alpha(0, 1, 3.0)),
    _check("distance at which a third species just fits between two, in widths", 1.561, _limiting, tol=5e-4),
    _check("that distance, as printed", 1.56, _limiting, "from memory", 0.005),
    _check("α at that distance", 0.543689, lambda: _alpha(0, 1, _limiting())()),
    _check("α at that distance, as printed", 0.544, lambda: _alpha(0, 1, _limiting())(), "from memory", 5e-4),
    _check("α, widths 1 and 2, distance 1", 0.572269, _alpha(0, 1, 1.0, 1.0, 2.0)),
    _check("β, widths 1 and 2, distance 1 (above 1: the broad species suffers more)", 1.144539, _alpha(1, 0, 1, 1, 2)),
    _check("Pianka’s overlap, widths 1 and 2, distance 1", 0.809311, lambda: float(pianka(_curves(1, 1, 2))[0, 1])),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


@pytest.mark.parametrize("distance", [0.0, 0.7, 1.9])
@pytest.mark.parametrize("width", [0.5, 1.0, 2.5])
def test_closed_form_of_unequal_widths(distance: float, width: float) -> None:
    s = 1 + width**2
    alpha = macarthur_levins(_curves(distance, 1.0, width))
    assert alpha[0, 1] == pytest.approx(np.sqrt(2 / s) * np.exp(-(distance**2) / (2 * s)), abs=1e-9)
    assert alpha[1, 0] == pytest.approx(width * np.sqrt(2 / s) * np.exp(-(distance**2) / (2 * s)), abs=1e-9)
