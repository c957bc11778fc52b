"""Krebs, C. J. (1999) *Ecological Methodology*, 2nd ed., Box 13.2, p. 467: seeds of seven kinds taken by two species."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from published_tables import KREBS, counted, pooled
from register import Check, Status, require

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

SOURCE = "Krebs 1999, Box 13.2, p. 467"
C, P = pooled(*KREBS), proportions(np.array(KREBS, dtype=np.float64))


def _check(
    name: str, expected: float, got: Callable[[], float], status: Status = "derived here", places: int = 6
) -> Check:
    return Check(f"{name}, seeds", SOURCE, status, expected, 0.5 * 10**-places, got)


CHECKS = [
    _check("Levins B, species 1", 1.533313, lambda: levins(C)[0]),
    _check("Levins B, species 2", 2.491417, lambda: levins(C)[1]),
    _check("Levins B, standardised, 7 kinds, species 1", 0.088886, lambda: levins_standardized(C, 7)[0]),
    _check("Levins B, standardised, 7 kinds, species 2", 0.248570, lambda: levins_standardized(C, 7)[1]),
    _check("Levins B, standardised, the 4 kinds it took, species 1", 0.177771, lambda: levins_standardized(C, 4)[0]),
    _check("Shannon H′, species 1", 0.601581, lambda: shannon(P)[0]),
    _check("Shannon H′, species 2", 1.179391, lambda: shannon(P)[1]),
    _check("evenness H′ / ln 7, species 1", 0.309152, lambda: shannon(P)[0] / np.log(7)),
    _check("evenness H′ / ln 7, species 2", 0.606087, lambda: shannon(P)[1] / np.log(7)),
    _check("MacArthur–Levins α, effect of 2 on 1", 0.222840, lambda: macarthur_levins(C)[0, 1]),
    _check("MacArthur–Levins β, effect of 1 on 2", 0.362084, lambda: macarthur_levins(C)[1, 0]),
    _check("determinant of the community matrix", 0.919313, lambda: np.linalg.det(macarthur_levins(C))),
    _check("Pianka’s overlap", 0.284055, lambda: pianka(C)[0, 1]),
    _check("Schoener’s shared percentage", 26.1603, lambda: 100 * schoener(P)[0, 1], places=4),
    _check("Schoener’s shared percentage, as printed", 26.16, lambda: 100 * schoener(P)[0, 1], "from memory", places=2),
    _check("Morisita, from counts", 0.276806, lambda: morisita_horn(counted(*KREBS))[0, 1]),
    _check("Morisita–Horn", 0.275889, lambda: morisita_horn(C)[0, 1]),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)
