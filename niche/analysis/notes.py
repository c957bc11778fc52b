"""Sentences on what a reader should know before using the numbers: few units, lost draws, doubtful agreement."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np

from niche.indices.catalogue import BREADTH, OVERLAP
from niche.resampling.intervals import FEW_UNITS, FEWEST_UNITS

if TYPE_CHECKING:
    from niche.analysis.results import Analysis, Coefficients, Estimate, Options
    from niche.indices.products import Floats
    from niche.usage import Usage


def notes_on(
    usage: Usage,
    options: Options,
    breadth: Mapping[str, Estimate],
    overlap: Mapping[str, Estimate],
    coefficients: Coefficients | None,
    capacity: Mapping[str, object],
    other_weighting: Floats | None,
) -> tuple[str, ...]:
    """All notes of an analysis, the gravest first."""
    return (
        *_few_units(usage),
        *_lost_draws(usage, options, {**breadth, **overlap}, coefficients),
        *_weightings_differ(usage, options, overlap, other_weighting),
        *_one_animal(usage, breadth, overlap),
        *_nothing_shared(usage, overlap),
        *_no_capacity(usage, coefficients, capacity),
        *_effort(usage),
    )


def _title(name: str) -> str:
    """An index as the tables of a report call it."""
    index = {**BREADTH, **OVERLAP}.get(name)
    return "α, β" if index is None else index.title


def _few_units(usage: Usage) -> Iterator[str]:
    if usage.placed:
        yield (
            "People chose the zone of each deployment, so deployments do not tell how animals differ: values are "
            "pooled, and there is no interval. Uneven numbers of cameras show as uneven use unless `analysis.effort` is "
            '"divide".'
        )
        return
    counts = dict(zip(usage.species, usage.unit_counts.tolist(), strict=True))
    none = [name for name, n in counts.items() if n == 0]
    if none:
        yield f"No use was recorded for {', '.join(none)}; there is no result for it."
    fewest = [f"{name} ({n})" for name, n in counts.items() if 0 < n < FEWEST_UNITS]
    if fewest:
        yield f"No interval with fewer than {FEWEST_UNITS} {usage.unit}s: {', '.join(fewest)}."
    few = [f"{name} ({n})" for name, n in counts.items() if FEWEST_UNITS <= n < FEW_UNITS]
    if few:
        yield (
            f"Fewer than {FEW_UNITS} {usage.unit}s: {', '.join(few)}. Read intervals from so few "
            "with care; a percentile interval would be too narrow."
        )


def _lost_draws(
    usage: Usage, options: Options, estimates: Mapping[str, Estimate], coefficients: Coefficients | None
) -> Iterator[str]:
    every = {**estimates, **({"alpha": coefficients.alpha} if coefficients else {})}
    undefined = {name: int(e.undefined.max()) for name, e in every.items() if e.undefined.any()}
    if undefined:
        name, most = max(undefined.items(), key=lambda item: item[1])
        yield (
            f"Some resamples hold no two different {usage.unit}s of a species, or none that share a zone, and give no "
            f"value: up to {most} of {options.resamples} ({_title(name)}). They are left out of the intervals and counted."
        )
    clipped = {name: int(e.clipped.max()) for name, e in estimates.items() if e.clipped.any()}
    if clipped:
        name, most = max(clipped.items(), key=lambda item: item[1])
        yield (
            f"Sampling noise took some resamples outside the range an index can have: up to {most} of "
            f"{options.resamples} ({_title(name)}). They are counted at the edge of the range."
        )


def _weightings_differ(
    usage: Usage, options: Options, overlap: Mapping[str, Estimate], other: Floats | None
) -> Iterator[str]:
    if other is None:
        return
    pianka = overlap["pianka"]
    for s, t in combinations(range(len(usage.species)), 2):
        if other[s, t] < pianka.low[s, t] or other[s, t] > pianka.high[s, t]:
            second = "each animal counting once" if options.weighting == "time" else "time pooled"
            yield (
                f"{usage.species[s]} and {usage.species[t]}: the weighting matters more than the interval tells. "
                f"Pianka’s overlap is {pianka.value[s, t]:.2f} as set and {other[s, t]:.2f} with {second}."
            )


def _one_animal(usage: Usage, breadth: Mapping[str, Estimate], overlap: Mapping[str, Estimate]) -> Iterator[str]:
    """Results that leaving out one unit moves by more than half the width of their interval."""
    for name, e in {**breadth, **overlap}.items():
        with np.errstate(invalid="ignore"):
            moved = np.maximum(np.abs(e.least - e.value), np.abs(e.most - e.value))
            much = np.argwhere(moved > 0.5 * (e.high - e.low))
        for cell in much[: 1 if e.value.ndim == 1 else 2]:
            who = " and ".join(usage.species[s] for s in dict.fromkeys(cell.tolist()))
            at = tuple(cell)
            yield (
                f"{who}: one {usage.unit} alone moves {_title(name)} by more than half its interval: without it the value "
                f"runs from {e.least[at]:.2f} to {e.most[at]:.2f}."
            )
            if e.value.ndim == 2:
                break


def _nothing_shared(usage: Usage, overlap: Mapping[str, Estimate]) -> Iterator[str]:
    if "pianka" not in overlap:
        return
    value = overlap["pianka"].value
    for s, t in combinations(range(len(usage.species)), 2):
        if value[s, t] == 0:
            yield (
                f"{usage.species[s]} and {usage.species[t]} were never seen in the same zone. That bounds nothing "
                "from above: the interval runs to the end of the range."
            )


def _no_capacity(usage: Usage, coefficients: Coefficients | None, capacity: Mapping[str, object]) -> Iterator[str]:
    if coefficients is not None and sum(name in capacity for name in usage.species) < 2:
        yield "Without K for two species there is no outcome; the coexistence window says for which K₁/K₂ both persist."


def _effort(usage: Usage) -> Iterator[str]:
    if usage.effort is None:
        return
    unseen = [zone for zone, hours in zip(usage.zones, usage.effort.tolist(), strict=True) if hours == 0]
    if unseen:
        yield f"Not looked at: {', '.join(unseen)}. That no use is known there says nothing about the animals."
    hours = usage.effort[usage.effort > 0]
    if not len(hours):  # the logs tell which zones were looked at, and not for how long
        return
    span = f"zones were looked at for {hours.min():g} to {hours.max():g} hours"
    if usage.by_effort:
        yield f"Proportions are of use divided by effort: {span}. The amounts in the table of use are as logged."
    elif hours.min() < hours.max():
        yield (
            f"The {span}, and use is not divided by it: a zone watched longer shows more use. "
            'Set `analysis.effort = "divide"` where use was seen by zone and not by following animals.'
        )


def level(confidence: float) -> str:
    """Confidence as a percentage, with a decimal only where it has one."""
    return f"{100 * confidence:.10g}%"


_METHODS = {
    "jackknife_t": "jackknife-t",
    "percentile": "percentile",
    "widened_percentile": "widened percentile",
    "bca": "BCa",
}


def interval_rests_on(usage: Usage, options: Options) -> str:
    """What every interval of an analysis rests on, in one line for captions and tables."""
    if usage.placed:
        return f"Pooled values without intervals: people chose the zone of each {usage.unit}."
    counts = ", ".join(f"{name} {n}" for name, n in zip(usage.species, usage.unit_counts.tolist(), strict=True))
    method = f"{level(options.confidence)} {_METHODS[options.interval]} intervals"
    drawn = f"{options.resamples} resamples, seed {options.seed}"
    if options.interval == "jackknife_t":
        return f"{method} over {usage.unit}s ({counts}); shares of outcomes and of cores from {drawn}."
    return f"{method} over {usage.unit}s ({counts}), {drawn}."


def cores_in_words(analysis: Analysis) -> tuple[str, ...]:
    """What the core zones of each species really hold, which is mostly more than the share asked for."""
    usage, use = analysis.usage, analysis.use
    return tuple(
        f"Core of {name}, {share:.0%} of its use: "
        f"{', '.join(z for z, inside in zip(usage.zones, core, strict=True) if inside)}."
        for name, core, share in zip(usage.species, use.core, use.core_share, strict=True)
        if core.any()
    )
