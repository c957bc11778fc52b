"""Pairs of species, as the figures and the report go through them."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING

from niche.errors import ValueRuleError
from niche.figures.words import no_interval

if TYPE_CHECKING:
    from niche.analysis import Analysis


@dataclass(frozen=True)
class Pair:
    """Two species of an analysis: positions, names, and why there may be no interval."""

    s: int
    t: int
    first: str
    second: str
    without: str


def pairs(analysis: Analysis) -> Iterator[Pair]:
    """Every pair once, in the order of the species."""
    usage = analysis.usage
    units = usage.unit_counts.tolist()
    for (s, first), (t, second) in combinations(enumerate(usage.species), 2):
        yield Pair(
            s, t, first, second, no_interval([units[s], units[t]], [first, second], usage.unit, placed=usage.placed)
        )


def require_pairs(analysis: Analysis, what: str) -> list[Pair]:
    """All pairs.

    Raises
    ------
    ValueRuleError
        There are fewer than two species.
    """
    found = list(pairs(analysis))
    if not found:
        raise ValueRuleError(f"{what} needs two species; the analysis has {len(analysis.usage.species)}.")
    return found
