"""The hand-written list of indices: tables, report and command line all read it.

To add an index, write its function beside its kin and give it a line here (see ``DEVELOPERS.md``).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from niche.indices.breadth import levins, levins_standardized, shannon
from niche.indices.overlap import morisita_horn, pianka, schoener
from niche.indices.products import Floats

Basis = Literal["between", "visits", "proportions"]
"""What an index is estimated from: products between different units, products between different visits, or pooled
proportions."""


@dataclass(frozen=True)
class Index:
    """One index: how it is computed, the range of the population value, and where it comes from."""

    function: Callable[[Floats, int], Floats]
    """Takes the array that ``basis`` names, and the number of zones."""
    basis: Basis
    title: str
    upper: Callable[[int], float]
    """Largest value the population can have, from the number of zones."""
    lower: float
    source: str


BREADTH: dict[str, Index] = {
    "levins": Index(lambda c, zones: levins(c), "between", "Levins’ B", lambda zones: zones, 1.0, "Levins 1968"),
    "levins_standardized": Index(
        levins_standardized, "between", "Levins’ B, standardised", lambda zones: 1.0, 0.0, "Hurlbert 1978"
    ),
    "shannon": Index(
        lambda p, zones: shannon(p), "proportions", "Shannon’s H′ (natural log)", math.log, 0.0, "Shannon 1948"
    ),
}

OVERLAP: dict[str, Index] = {
    "pianka": Index(lambda c, zones: pianka(c), "between", "Pianka’s O", lambda zones: 1.0, 0.0, "Pianka 1973"),
    "morisita_horn": Index(
        lambda c, zones: morisita_horn(c), "between", "Morisita–Horn", lambda zones: 1.0, 0.0, "Horn 1966"
    ),
    "morisita": Index(
        lambda c, zones: morisita_horn(c),
        "visits",
        "Morisita (counts of visits)",
        lambda zones: 1.0,
        0.0,
        "Morisita 1959",
    ),
    "schoener": Index(
        lambda p, zones: schoener(p), "proportions", "Schoener’s shared share", lambda zones: 1.0, 0.0, "Schoener 1970"
    ),
}
