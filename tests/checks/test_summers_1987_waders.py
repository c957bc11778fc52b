"""19 species of wader at 15 sites of southern Africa: Summers et al. 1987, *Wader Study Group Bulletin* 49 Suppl.:15–34.

The counts are published (Gower & Hand 1996, Table 9.1); the indices are computed from their definitions.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from published_tables import pooled, waders
from register import Check, require

from niche.indices import levins, levins_standardized, macarthur_levins, pianka, proportions, schoener

SOURCE = "data Summers et al. 1987, as in Gower & Hand 1996, Table 9.1"


def _check(name: str, expected: float, got: Callable[[], float], tolerance: float = 5e-6) -> Check:
    return Check(f"waders, {name}", SOURCE, "derived here", expected, tolerance, got)


def _species(*codes: str) -> np.ndarray:
    return pooled(*(waders()[code] for code in codes))


def _shared(*codes: str) -> float:
    return float(schoener(proportions(np.array([waders()[code] for code in codes])))[0, 1])


def _pairs(matrix: np.ndarray) -> np.ndarray:
    return np.asarray(matrix[np.triu_indices(19, 1)])


def _all_pianka() -> np.ndarray:
    return _pairs(pianka(_species(*waders())))


CHECKS = [
    _check("Levins B, knot", 2.23298, lambda: levins(_species("S13"))[0]),
    _check("Levins B, standardised, knot", 0.08807, lambda: levins_standardized(_species("S13"), 15)[0]),
    _check("Levins B, white-fronted plover", 8.31119, lambda: levins(_species("S2"))[0]),
    _check("Levins B, standardised, white-fronted plover", 0.52223, lambda: levins_standardized(_species("S2"), 15)[0]),
    _check("Pianka, knot and sanderling", 0.38087, lambda: pianka(_species("S13", "S14"))[0, 1]),
    _check("Schoener, knot and sanderling", 0.40127, lambda: _shared("S13", "S14")),
    _check("α, sanderling on knot", 0.24268, lambda: macarthur_levins(_species("S13", "S14"))[0, 1]),
    _check("β, knot on sanderling", 0.59775, lambda: macarthur_levins(_species("S13", "S14"))[1, 0]),
    _check("Pianka, ruff and avocet", 0.82044, lambda: pianka(_species("S17", "S18"))[0, 1]),
    _check("Schoener, ruff and avocet", 0.70014, lambda: _shared("S17", "S18")),
    _check("Pianka, mean of the 171 pairs", 0.520075, lambda: _all_pianka().mean(), 5e-7),
    _check("Pianka, least of the 171 pairs", 0.071240, lambda: _all_pianka().min(), 5e-7),
    _check("Pianka, most of the 171 pairs", 0.986989, lambda: _all_pianka().max(), 5e-7),
    _check(
        "Schoener, mean of the 171 pairs",
        0.436787,
        lambda: _pairs(schoener(proportions(np.array(list(waders().values()))))).mean(),
        5e-7,
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_the_table_is_the_published_one() -> None:
    totals = [counts.sum() for counts in waders().values()]
    assert (len(totals), min(totals), max(totals)) == (19, 710, 106037)
