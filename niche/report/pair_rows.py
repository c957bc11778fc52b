"""Tables of the page on pairs of species: overlap, coefficients, windows, outcomes."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from niche.dynamics import OUTCOMES
from niche.figures.pairs import pairs
from niche.figures.words import number, percent, span
from niche.indices import OVERLAP
from niche.report.rows import Table, interval_heading

if TYPE_CHECKING:
    from niche.analysis import Run
    from niche.figures.windows import Window


def overlap_table(run: Run, index: str = "pianka") -> Table | None:
    """One index of overlap by pair; None where it was not computed."""
    analysis = run.analysis
    if index not in analysis.overlap:
        return None
    e, units, rows = analysis.overlap[index], analysis.usage.unit_counts.tolist(), []
    for pair in pairs(analysis):
        at = (pair.s, pair.t)
        interval = pair.without if np.isnan(e.low[at]) else span(e.low[at], e.high[at])
        row = (number(e.value[at]), interval, number(e.pooled[at]), f"{units[pair.s]}, {units[pair.t]}")
        rows.append((pair.first, pair.second, *row, f"{e.undefined[at]:,}"))
    named = f"{analysis.usage.unit.capitalize()}s of each"
    headings = (
        "First species",
        "Second species",
        "Estimate",
        interval_heading(run),
        "Pooled",
        named,
        "Undefined draws",
    )
    return Table("overlap", "overlap", OVERLAP[index].title, headings, tuple(rows), 2, 2)


def other_overlap_table(run: Run, index: str = "pianka") -> Table | None:
    """The other indices of overlap side by side; None where there are none."""
    analysis = run.analysis
    others = {name: e for name, e in analysis.overlap.items() if name != index}
    if not others:
        return None
    rows = []
    for pair in pairs(analysis):
        at = (pair.s, pair.t)
        cells = []
        for e in others.values():
            interval = "" if np.isnan(e.low[at]) else f" ({span(e.low[at], e.high[at])})"
            cells.append(f"{number(e.value[at])}{interval}, pooled {number(e.pooled[at])}")
        rows.append((pair.first, pair.second, *cells))
    headings = ("First species", "Second species", *(OVERLAP[name].title for name in others))
    return Table("overlap-others", "overlap", "Other indices of overlap", headings, tuple(rows), 2, 2)


def coefficients_table(run: Run) -> Table:
    """α and β of each pair with the ratio of demand."""
    analysis = run.analysis
    if analysis.coefficients is None:
        return Table("coefficients", "coefficients", "", (), ())
    a, demand, rows = analysis.coefficients.alpha, analysis.coefficients.demand, []
    for pair in pairs(analysis):
        cells = []
        for at in ((pair.s, pair.t), (pair.t, pair.s)):
            interval = pair.without if np.isnan(a.low[at]) else span(a.low[at], a.high[at])
            cells += [number(a.value[at]), interval]
        rows.append((pair.first, pair.second, *cells, number(demand[pair.t] / demand[pair.s])))
    headings = (
        "First species",
        "Second species",
        "α",
        f"α, {interval_heading(run)}",
        "β",
        f"β, {interval_heading(run)}",
        "Demand, 2nd / 1st",
    )
    return Table("coefficients", "coefficients", "Competition coefficients", headings, tuple(rows), 2, 2)


def windows_table(run: Run, found: list[Window]) -> Table:
    """Ends of each coexistence window with their intervals, and K₁/K₂ by the K given."""
    rows = []
    for w in found:
        ends = [
            (number(end), w.pair.without if np.isnan(ends[0]) else span(*ends))
            for end, ends in ((w.low, w.low_interval), (w.high, w.high_interval))
        ]
        given = "not given" if w.given is None else span(*w.given)
        rows.append((f"K {w.pair.first} / K {w.pair.second}", *ends[0], *ends[1], given))
    headings = (
        "Ratio",
        "Above",
        f"Above, {interval_heading(run)}",
        "Below",
        f"Below, {interval_heading(run)}",
        "Ratio by the K given",
    )
    return Table("windows", "coefficients", "Coexistence window: both species persist", headings, tuple(rows))


def outcome_table(run: Run) -> Table | None:
    """Share of the draws by outcome, with the numbers where both persist; None where no pair has an outcome."""
    names, rows = run.analysis.usage.species, []
    for result in run.analysis.outcomes:
        first, second = names[result.species_1], names[result.species_2]
        words = {
            "species_1_excludes": f"{first} excludes {second}",
            "species_2_excludes": f"{second} excludes {first}",
            "coexistence": "both persist",
            "priority_effect": "depends on starting numbers",
            "boundary": "on a boundary",
        }
        for i, name in enumerate(OUTCOMES):
            numbers = [number(result.n_1[i]), number(result.n_2[i])] if result.share[i] > 0 else ["–", "–"]
            rows.append((f"{first} and {second}", words[name], percent(result.share[i]), *numbers))
    if not rows:
        return None
    headings = ("Pair", "Outcome", "Share of draws", "Median number of the first", "Median number of the second")
    return Table("outcome", "outcome", "Outcome of the scenario", headings, tuple(rows), 2, 2)


def capacity_table(run: Run) -> Table | None:
    """K as given; None where none is."""
    rows = [
        (s.name, s.k.source, s.k.distribution, number(s.k.low), number(s.k.high))
        for s in run.study.species
        if s.k is not None
    ]
    if not rows:
        return None
    headings = ("Species", "Source", "Drawn", "K, low", "K, high")
    return Table("capacity", "capacity", "Carrying capacities given in the study", headings, tuple(rows), 1, 3)
