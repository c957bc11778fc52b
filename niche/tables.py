"""Results as tidy tables: the only place where labels meet arrays. Column names are a promise to scripts."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from itertools import combinations
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from niche.dynamics import OUTCOMES, TwoSpecies, coexistence_window
from niche.errors import ValueRuleError

if TYPE_CHECKING:
    from niche.analysis.results import Analysis, Estimate

Row = tuple[Any, ...]

_NUMBERS = ("scans", "events", "counts", "occurrences")
"""Measures that are numbers of something."""

_FORMULA = ("=", "+", "-", "@", "\t", "\r")
"""A cell that begins so is a formula to a spreadsheet."""

COLUMNS: dict[str, tuple[str, ...]] = {
    "usage": ("species", "zone", "seconds", "proportion", "low", "high", "units", "core", "visits"),
    "breadth": ("species", "index", "estimate", "low", "high", "pooled", "units", "undefined"),
    "overlap": (
        "species_1",
        "species_2",
        "index",
        "estimate",
        "low",
        "high",
        "pooled",
        "units_1",
        "units_2",
        "undefined",
    ),
    "coefficients": (
        "species_1",
        "species_2",
        "alpha",
        "alpha_low",
        "alpha_high",
        "beta",
        "beta_low",
        "beta_high",
        "demand_ratio",
        "window_low",
        "window_high",
    ),
    "outcome": ("species_1", "species_2", "outcome", "share", "n_1", "n_2"),
    "draws": ("result", "species_1", "species_2", "resamples", "undefined", "clipped"),
}
"""Columns of each table, in order."""

DESCRIPTIONS: dict[str, str] = {
    "species": "Species.",
    "species_1": "First species of the pair.",
    "species_2": "Second species of the pair.",
    "zone": "Zone of the habitat.",
    "seconds": "Time in the zone, in seconds, all animals together; empty where use is not measured in time.",
    "proportion": "Share of the species' use that falls in the zone, 0 to 1, by the weighting set.",
    "low": "Lower end of the interval; empty with fewer than 3 sampling units.",
    "high": "Upper end of the interval; empty with fewer than 3 sampling units.",
    "units": "Sampling units of the species that were resampled.",
    "units_1": "Sampling units of species 1 that were resampled.",
    "units_2": "Sampling units of species 2 that were resampled.",
    "core": "Whether the zone is among the fewest that hold at least the core share of use (a display convention).",
    "visits": "Number of visits to the zone; of scans, events or animals counted where those are what use is measured in.",
    "index": "Name of the index.",
    "estimate": "The estimate; from products between different units where the index allows.",
    "pooled": "The textbook value from pooled use.",
    "undefined": "Resamples without a value, left out of the interval.",
    "clipped": "Resamples that sampling noise took outside the possible range, counted at its edge.",
    "resamples": "Resamples drawn.",
    "result": "Name of the index or coefficient.",
    "alpha": "Effect of one individual of species 2 on species 1, in individuals of species 1.",
    "alpha_low": "Lower end of the interval of alpha.",
    "alpha_high": "Upper end of the interval of alpha.",
    "beta": "Effect of one individual of species 1 on species 2, in individuals of species 2.",
    "beta_low": "Lower end of the interval of beta.",
    "beta_high": "Upper end of the interval of beta.",
    "demand_ratio": "Per-capita demand of species 2 over that of species 1.",
    "window_low": "Both species persist if K1/K2 lies above this (alpha) ...",
    "window_high": "... and below this (1/beta).",
    "outcome": "Outcome of the two-species scenario.",
    "share": "Share of the draws with this outcome, 0 to 1.",
    "n_1": "Median number of species 1 at the end, in the units of its K.",
    "n_2": "Median number of species 2 at the end, in the units of its K.",
    "file": "Log file.",
    "row": "Row of the file as a person finds it, the header being row 1; empty for a count of many rows.",
    "field": "Which of the needed columns the problem is in.",
    "value": "What stands there.",
    "problem": "The rule that it breaks and the remedy, or what was repaired.",
    "action": "used, out_of_sight, set_aside, stop, repaired or flagged.",
}
"""What each column holds, for the data package; `seconds` in the ledger is the time of the row or rows."""


def table(analysis: Analysis, name: str) -> pd.DataFrame:
    """One result as a table with the columns of `COLUMNS`.

    Raises
    ------
    ValueRuleError
        There is no table of that name.
    """
    if name not in _ROWS:
        raise ValueRuleError(f"no table {name!r}; there are {', '.join(_ROWS)}.")
    frame = pd.DataFrame(list(_ROWS[name](analysis)), columns=list(COLUMNS[name]))
    whole = [c for c in ("units", "units_1", "units_2", "undefined", "clipped", "resamples") if c in frame]
    frame = frame.astype(dict.fromkeys(whole, "int64"))
    if "visits" in frame:  # empty where only amounts are known
        frame["visits"] = (
            frame["visits"].astype("Float64").astype("Int64" if _all_whole(frame["visits"]) else "Float64")
        )
    return frame


def outcome_of_numbers(result: TwoSpecies) -> pd.DataFrame:
    """The ``outcome`` table of one pair with given numbers."""
    row = ("species 1", "species 2", result.outcome, 1.0, result.n1, result.n2)
    return pd.DataFrame([row], columns=list(COLUMNS["outcome"]))


def csv_text(frame: pd.DataFrame) -> str:
    """A table as CSV (RFC 4180), with text cells that a spreadsheet would run as a formula made plain text."""
    safe = frame.copy()
    for heading in safe.columns:
        if not pd.api.types.is_numeric_dtype(safe[heading]):
            safe[heading] = ["'" + x if str(x).startswith(_FORMULA) else x for x in safe[heading]]
    return safe.to_csv(index=False, lineterminator="\n")


def _all_whole(column: pd.Series[Any]) -> bool:
    return bool((column.dropna().astype("float64") % 1 == 0).all())


def _pairs(analysis: Analysis) -> Iterator[tuple[int, int, str, str]]:
    for (s, first), (t, second) in combinations(enumerate(analysis.usage.species), 2):
        yield s, t, first, second


def _usage(analysis: Analysis) -> Iterator[Row]:
    usage, use = analysis.usage, analysis.use
    for s, species in enumerate(usage.species):
        amount = usage.time[s].sum(axis=0)
        # Milliseconds are whole numbers; amounts given from outside are shown as given.
        seconds = amount / 1000 if np.issubdtype(usage.time[s].dtype, np.integer) else amount
        counted = usage.visits[s].sum(axis=0) if usage.visits is not None else np.full(len(usage.zones), np.nan)
        if usage.measure != "time":
            seconds = np.full(len(usage.zones), np.nan)
        if usage.measure in _NUMBERS:
            counted = amount
        p = use.proportion
        for z, zone in enumerate(usage.zones):
            interval = (p.value[s, z], p.low[s, z], p.high[s, z])
            yield (species, zone, seconds[z], *interval, len(usage.units[s]), use.core[s, z], counted[z])


def _breadth(analysis: Analysis) -> Iterator[Row]:
    for s, species in enumerate(analysis.usage.species):
        for name, e in analysis.breadth.items():
            units = len(analysis.usage.units[s])
            yield (species, name, e.value[s], e.low[s], e.high[s], e.pooled[s], units, e.undefined[s])


def _overlap(analysis: Analysis) -> Iterator[Row]:
    units = analysis.usage.unit_counts
    for s, t, first, second in _pairs(analysis):
        for name, e in analysis.overlap.items():
            at = (s, t)
            yield (
                first,
                second,
                name,
                e.value[at],
                e.low[at],
                e.high[at],
                e.pooled[at],
                units[s],
                units[t],
                e.undefined[at],
            )


def _coefficients(analysis: Analysis) -> Iterator[Row]:
    if analysis.coefficients is None:
        return
    alpha, demand = analysis.coefficients.alpha, analysis.coefficients.demand
    for s, t, first, second in _pairs(analysis):
        low, high = coexistence_window(alpha.value[s, t], alpha.value[t, s])
        yield (
            first,
            second,
            alpha.value[s, t],
            alpha.low[s, t],
            alpha.high[s, t],
            alpha.value[t, s],
            alpha.low[t, s],
            alpha.high[t, s],
            demand[t] / demand[s],
            float(low),
            float(high),
        )


def _outcome(analysis: Analysis) -> Iterator[Row]:
    names = analysis.usage.species
    for pair in analysis.outcomes:
        for i, name in enumerate(OUTCOMES):
            yield (names[pair.species_1], names[pair.species_2], name, pair.share[i], pair.n_1[i], pair.n_2[i])


def _draws(analysis: Analysis) -> Iterator[Row]:
    resamples = analysis.options.resamples
    for name, e in analysis.breadth.items():
        for s, species in enumerate(analysis.usage.species):
            yield (name, species, "", resamples, e.undefined[s], e.clipped[s])
    matrices: Mapping[str, Estimate] = analysis.overlap
    if analysis.coefficients is not None:
        matrices = {**matrices, "alpha": analysis.coefficients.alpha}
    for name, e in matrices.items():
        for s, t, first, second in _pairs(analysis):
            yield (name, first, second, resamples, e.undefined[s, t], e.clipped[s, t])


_ROWS: dict[str, Callable[[Analysis], Iterator[Row]]] = {
    "usage": _usage,
    "breadth": _breadth,
    "overlap": _overlap,
    "coefficients": _coefficients,
    "outcome": _outcome,
    "draws": _draws,
}
