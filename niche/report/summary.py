"""The findings in plain sentences, each with its interval, written by rules from the results."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from niche.dynamics import OUTCOMES
from niche.effort import effort
from niche.figures.pairs import pairs
from niche.figures.windows import Window, windows
from niche.figures.words import UNDEFINED, count, joined, level, no_interval, number, percent, span
from niche.report.csv_tables import by_day
from niche.report.measures import holds

if TYPE_CHECKING:
    from niche.analysis import Analysis, Run

Item = tuple[str, str]
"""What a sentence is about, and the sentence."""

_MANY = 8
"""With more pairs than this the summary names the ends of the ranking; the table has them all."""


@dataclass(frozen=True)
class Summary:
    """Sentences of a summary: one on the data, then items on species, on pairs, on the scenario."""

    data: str
    species: tuple[Item, ...]
    pairs: tuple[Item, ...]
    scenario: tuple[Item, ...]

    def text(self) -> str:
        """The summary as plain text, a line an item."""
        items = (*self.species, *self.pairs, *self.scenario)
        return "\n".join([self.data, *(f"{about}: {told}" for about, told in items)])


def summarise(run: Run) -> Summary:
    """Say what a run found."""
    return Summary(_data(run), tuple(_species(run)), tuple(_pairs(run.analysis)), tuple(_scenario(run)))


def _data(run: Run) -> str:
    table = effort(run.log.visits, run.analysis.usage.species, run.log.measure)
    hours, unseen = table["seconds_in_view"].sum() / 3600, table["seconds_out_of_sight"].sum() / 3600
    days = by_day(run).index
    when = "" if days.empty else f", on {days[0]}" if len(days) == 1 else f", from {days[0]} to {days[-1]}"
    units = count(int(run.analysis.usage.unit_counts.sum()), run.analysis.usage.unit)
    species = run.analysis.usage.species
    whom = species[0] if len(species) == 1 else f"{len(species)} species"
    told = f"The logs hold {holds(run, hours)} of {whom}, {units} in all{when}"
    if run.log.measure != "time":
        return f"{told}."
    share = percent(unseen / (hours + unseen)) if hours + unseen > 0 else UNDEFINED
    return f"{told}; the animals were out of sight for {share} of the watching."


def _species(run: Run) -> list[Item]:
    analysis, items = run.analysis, []
    usage, use = analysis.usage, analysis.use
    for s, name in enumerate(usage.species):
        units = int(usage.unit_counts[s])
        if not use.core[s].any():
            items.append((name, "no use of any zone was recorded, so there is no result."))
            continue
        core = [usage.zones[z] for z in np.argsort(-use.amount[s], kind="stable") if use.core[s, z]]
        zones = joined(core) if len(core) <= 5 else count(len(core), "zone")
        text = f"{count(units, usage.unit)}; its core, {zones}, holds {percent(use.core_share[s])} of its use."
        if "levins" in analysis.breadth:
            e = analysis.breadth["levins"]
            interval = _interval(
                e.low[s], e.high[s], analysis, no_interval([units], [name], usage.unit, placed=usage.placed)
            )
            told = (
                UNDEFINED
                if np.isnan(e.value[s])
                else f"{number(e.value[s])} ({interval}) of at most {len(usage.zones)}"
            )
            text += f" Breadth, Levins’ B, is {told}."
        items.append((name, text))
    return items


def _pairs(analysis: Analysis) -> list[Item]:
    if "pianka" not in analysis.overlap:
        return []
    e = analysis.overlap["pianka"]
    ranked = sorted(pairs(analysis), key=lambda p: -np.nan_to_num(e.value[p.s, p.t], nan=-1.0))
    shown = ranked if len(ranked) <= _MANY else [*ranked[:5], *ranked[-3:]]
    items = []
    for pair in shown:
        at = (pair.s, pair.t)
        if np.isnan(e.value[at]):
            text = f"overlap is {UNDEFINED}."
        else:
            interval = _interval(e.low[at], e.high[at], analysis, pair.without)
            text = f"Pianka’s overlap is {number(e.value[at])} ({interval})."
        items.append((f"{pair.first} and {pair.second}", text))
    if len(ranked) > len(shown):
        rest = f"{len(ranked) - len(shown)} pairs lie between these; the table of overlap has them."
        items.insert(5, ("further pairs", rest))
    return items


def _scenario(run: Run) -> list[Item]:
    analysis = run.analysis
    if analysis.coefficients is None or len(analysis.usage.species) < 2:
        return []
    names = analysis.usage.species
    ranges = {s.name: s.k for s in run.study.species if s.k is not None}
    told, items = set(), []
    for result in analysis.outcomes:
        first, second = names[result.species_1], names[result.species_2]
        told.add((result.species_1, result.species_2))
        given = " and ".join(f"{_k(ranges[n].low, ranges[n].high)} for {n}" for n in (first, second) if n in ranges)
        items.append((f"{first} and {second}", f"with K of {given}, {_shares(result.share, first, second)}."))
    open_pairs = [p for p in pairs(analysis) if (p.s, p.t) not in told]
    few = [p for p in open_pairs if p.first in ranges and p.second in ranges]
    items += [(f"{p.first} and {p.second}", f"no outcome shares; {p.without}.") for p in few]
    if len(open_pairs) > len(few):
        unknown = [p for p in open_pairs if p not in few]
        if len(unknown) <= 3:
            confidence = analysis.options.confidence
            wanted = [w for w in windows(analysis) if w.pair in unknown]
            items += [(f"{w.pair.first} and {w.pair.second}", window_told(w, confidence)) for w in wanted]
        else:
            items.append(
                (
                    f"the other {len(unknown)} pairs" if items else "all pairs",
                    "K is not known for both species; see the windows.",
                )
            )
    return items


def window_told(window: Window, confidence: float) -> str:
    """For which K₁/K₂ both species persist, with the interval of each end."""
    if np.isnan(window.low) or np.isnan(window.high):
        return f"the coexistence window is {UNDEFINED}."
    ratio = f"K {window.pair.first} / K {window.pair.second}"
    low, high = (
        number(end) + ("" if np.isnan(ends[0]) else f" ({span(*ends)})")
        for end, ends in ((window.low, window.low_interval), (window.high, window.high_interval))
    )
    named = window.pair.without if np.isnan(window.low_interval[0]) else f"{level(confidence)} intervals in brackets"
    if np.isinf(window.high):
        return f"both persist with {ratio} above {low}; {named}."
    return f"both persist with {ratio} between {low} and {high}; {named}."


def _shares(share: np.ndarray[tuple[int, ...], np.dtype[np.float64]], first: str, second: str) -> str:
    words = {
        "coexistence": "both persist",
        "species_1_excludes": f"{first} excludes {second}",
        "species_2_excludes": f"{second} excludes {first}",
        "priority_effect": "the outcome depends on the starting numbers",
        "boundary": "the outcome lies on a boundary",
    }
    if np.isnan(share).all():
        return "no draw gives an outcome"
    order = sorted(range(len(OUTCOMES)), key=lambda i: -share[i])
    parts = [f"{words[OUTCOMES[i]]} in {percent(share[i])}" for i in order if share[i] > 0]
    parts[0] += " of the draws"
    return joined(parts)


def _k(low: float, high: float) -> str:
    return number(low) if low == high else span(low, high)


def _interval(low: float, high: float, analysis: Analysis, without: str) -> str:
    return without if np.isnan(low) else f"{level(analysis.options.confidence)} interval {span(low, high)}"
