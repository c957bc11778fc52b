"""What more fieldwork would change: which numbers are thin, said briefly and with its cost."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from niche.effort import effort
from niche.figures.pairs import pairs
from niche.figures.words import count, joined, percent, span
from niche.resampling.intervals import FEW_UNITS

if TYPE_CHECKING:
    from niche.analysis import Run

_HEAVY = 0.2
"""Share of a species' time above which one animal is named, if it is also twice an even share."""


def fieldwork(run: Run) -> list[str]:
    """Sentences on what is thin; none promises what more data would show."""
    analysis = run.analysis
    usage, unit = analysis.usage, analysis.usage.unit
    counts = usage.unit_counts
    fewest = int(counts.min())
    names = joined([name for name, n in zip(usage.species, counts, strict=True) if n == fewest])
    told = [f"Fewest {unit}s: {names} ({fewest})."]
    few = [name for name, n in zip(usage.species, counts, strict=True) if n < FEW_UNITS]
    if few:
        told.append(f"With fewer than {FEW_UNITS} {unit}s ({joined(few)}) intervals may be too narrow.")
    told += _widest(run)
    if unit == "animal":
        told.append(
            "The intervals rest on the number of animals. Watching the same animals for longer cannot make up for few "
            "animals that differ from one another; as a rule of thumb, half the width takes four times the animals."
        )
    told += _uneven(run)
    return told


def _widest(run: Run) -> list[str]:
    e = run.analysis.overlap.get("pianka")
    known = [p for p in pairs(run.analysis) if e is not None and not np.isnan(e.low[p.s, p.t])]
    if e is None or not known:
        return []
    pair = max(known, key=lambda p: float(e.high[p.s, p.t] - e.low[p.s, p.t]))
    low, high = float(e.low[pair.s, pair.t]), float(e.high[pair.s, pair.t])
    if len(known) == 1:
        return [f"The interval of overlap is {span(low, high)}; more animals of either species would narrow it."]
    return [
        f"The widest interval of overlap is that of {pair.first} and {pair.second}, {span(low, high)}; more animals of "
        "either would narrow it."
    ]


def _uneven(run: Run) -> list[str]:
    if run.study.logs.columns.animal is None:
        return []
    table = effort(run.log.visits, run.analysis.usage.species)
    heavy = [
        f"{percent(float(share))} of the time of {name} ({count(int(animals), 'animal')})"
        for name, share, animals in zip(table["species"], table["most_watched_share"], table["animals"], strict=True)
        if animals > 1 and share > max(_HEAVY, 2 / animals)
    ]
    if not heavy:
        return []
    return [f"One animal makes up {joined(heavy)}: spreading the watching evenly would serve these better."]
