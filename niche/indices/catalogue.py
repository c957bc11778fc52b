"""The hand-written list of indices: tables, intervals, report and command line all read it.

To add an index, write its function beside its kin and give it a line here (see ``DEVELOPERS.md``).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

from niche.indices.breadth import hurlbert_breadth, levins, levins_standardized, shannon, smith
from niche.indices.inputs import Inputs
from niche.indices.overlap import horn, hurlbert_overlap, morisita_horn, pianka, schoener
from niche.indices.products import Floats

Need = Literal["use", "visits", "availability"]
"""What must be known beside the use of zones."""


@dataclass(frozen=True)
class Index:
    """One index: how it is computed, the range of the population value, and where it comes from."""

    function: Callable[[Inputs], Floats]
    title: str
    source: str
    lower: float = 0.0
    upper: Callable[[int], float] = lambda zones: 1.0
    """Largest value the population can have, from the number of zones."""
    needs: Need = "use"
    scale: Literal["plain", "log"] = "log"
    """Scale on which its sampling is closest to symmetric, by the coverage study."""


def _given(array: Floats | None) -> Floats:
    """What an index needs and `Need` promised."""
    if array is None:
        raise AssertionError("an index was asked for without what it needs")
    return array


BREADTH: dict[str, Index] = {
    "levins": Index(lambda x: levins(x.c), "Levins’ B", "Levins 1968", 1.0, lambda zones: zones, scale="plain"),
    "levins_standardized": Index(
        lambda x: levins_standardized(x.c, x.zones), "Levins’ B, standardised", "Hurlbert 1978", scale="plain"
    ),
    "shannon": Index(lambda x: shannon(x.p, x.variance), "Shannon’s H′ (natural log)", "Shannon 1948", upper=math.log),
    "hurlbert": Index(
        lambda x: hurlbert_breadth(_given(x.weighted)), "Hurlbert’s B′", "Hurlbert 1978", needs="availability"
    ),
    "smith": Index(
        lambda x: smith(x.p, _given(x.availability), x.variance), "Smith’s FT", "Smith 1982", needs="availability"
    ),
}

OVERLAP: dict[str, Index] = {
    "pianka": Index(lambda x: pianka(x.c), "Pianka’s O", "Pianka 1973"),
    "morisita_horn": Index(lambda x: morisita_horn(x.c), "Morisita–Horn", "Horn 1966"),
    "morisita": Index(
        lambda x: morisita_horn(_given(x.visits)), "Morisita (counts of visits)", "Morisita 1959", needs="visits"
    ),
    "schoener": Index(lambda x: schoener(x.p, x.variance), "Schoener’s shared share", "Schoener 1970", scale="plain"),
    "horn": Index(lambda x: horn(x.p, x.variance), "Horn’s R₀ (equal weights)", "Horn 1966"),
    "hurlbert": Index(
        lambda x: hurlbert_overlap(_given(x.weighted)),
        "Hurlbert’s L",
        "Hurlbert 1978",
        upper=lambda zones: math.inf,
        needs="availability",
    ),
}
