"""Two species of *Anolis* at Whitehouse, Jamaica: 431 and 133 sightings in 24 cells of light, perch and time of day.

Schoener 1970, *Ecology* 51:408–418; Fienberg 1970, *Ecology* 51:419–433; McCullagh & Nelder 1989, p. 128–129. The counts
are published; the indices are computed here from their definitions. The cell that neither species used counts as a zone.
"""

from __future__ import annotations

from collections.abc import Callable

import pytest
from published_tables import LIZARD_AXES, LIZARDS_JOINT, Floats, counted, lizards_along, pooled
from register import Check, require

from niche.dynamics import coexistence_window
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

SOURCE = "data Schoener 1970, Fienberg 1970"
C, P = pooled(*LIZARDS_JOINT), proportions(LIZARDS_JOINT)

INDICES: dict[str, Callable[[Floats], float]] = {
    "Schoener": lambda counts: float(schoener(proportions(counts))[0, 1]),
    "Pianka": lambda counts: float(pianka(pooled(*counts))[0, 1]),
    "Morisita–Horn": lambda counts: float(morisita_horn(pooled(*counts))[0, 1]),
}
ALONG = {
    "Schoener": (0.90629, 0.78987, 0.76458, 0.90269),
    "Pianka": (0.99180, 0.91736, 0.92184, 0.98272),
    "Morisita–Horn": (0.98807, 0.91644, 0.90994, 0.98145),
}


def _check(name: str, expected: float, got: Callable[[], float], tolerance: float = 5e-6) -> Check:
    return Check(f"lizards, {name}", SOURCE, "derived here", expected, tolerance, got)


CHECKS = [
    _check("Levins B, grahami", 11.64719, lambda: levins(C)[0]),
    _check("Levins B, opalinus", 8.55781, lambda: levins(C)[1]),
    _check("Levins B, standardised, 24 cells, grahami", 0.46292, lambda: levins_standardized(C, 24)[0]),
    _check("Levins B, standardised, 24 cells, opalinus", 0.32860, lambda: levins_standardized(C, 24)[1]),
    _check("Levins B, standardised, the 23 cells used, grahami", 0.48396, lambda: levins_standardized(C, 23)[0]),
    _check("Shannon H′, grahami", 2.73221, lambda: shannon(P)[0]),
    _check("Shannon H′, opalinus", 2.47320, lambda: shannon(P)[1]),
    _check("α, effect of opalinus on grahami", 0.98098, lambda: macarthur_levins(C)[0, 1]),
    _check("β, effect of grahami on opalinus", 0.72078, lambda: macarthur_levins(C)[1, 0]),
    _check(
        "lower end of the coexistence window of K₁/K₂",
        0.98098,
        lambda: float(coexistence_window(macarthur_levins(C)[0, 1], macarthur_levins(C)[1, 0])[0]),
    ),
    _check(
        "upper end of the coexistence window of K₁/K₂ (1/β from β to five places)",
        1.38738,
        lambda: float(coexistence_window(macarthur_levins(C)[0, 1], macarthur_levins(C)[1, 0])[1]),
        2e-5,
    ),
    _check("Pianka, 24 cells", 0.84087, lambda: INDICES["Pianka"](LIZARDS_JOINT)),
    _check("Schoener, 24 cells", 0.68470, lambda: INDICES["Schoener"](LIZARDS_JOINT)),
    _check("Morisita–Horn, 24 cells", 0.83099, lambda: INDICES["Morisita–Horn"](LIZARDS_JOINT)),
    _check("Morisita, 24 cells", 0.86877, lambda: morisita_horn(counted(*LIZARDS_JOINT))[0, 1]),
    *(
        _check(f"{name}, {axis} alone", expected, lambda name=name, axis=axis: INDICES[name](lizards_along(axis)))  # type: ignore[misc]
        for name, numbers in ALONG.items()
        for axis, expected in zip(LIZARD_AXES, numbers, strict=True)
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


@pytest.mark.parametrize("name", INDICES)
def test_joint_overlap_lies_between_product_and_mean_of_the_axes(name: str) -> None:
    """True of these data for these three indices; no law (Horn's information overlap breaks it here)."""
    along = [INDICES[name](lizards_along(axis)) for axis in LIZARD_AXES]
    product = along[0] * along[1] * along[2] * along[3]
    assert product < INDICES[name](LIZARDS_JOINT) < sum(along) / 4
