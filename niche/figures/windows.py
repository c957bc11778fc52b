"""Coexistence windows: for which ratios of K both species of a pair persist under the model."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.patches import Patch
from matplotlib.ticker import FixedLocator, NullLocator

from niche.errors import ValueRuleError
from niche.figures.drawing import INK, Drawing, look
from niche.figures.pairs import Pair, require_pairs
from niche.figures.words import UNDEFINED, level, number, span, wrapped

if TYPE_CHECKING:
    from niche.analysis import Analysis

_FARTHEST = 1000.0
"""The axis ends here at the latest, on either side of 1; what goes on beyond gets an arrow."""

_CLEAR = {"facecolor": "white", "edgecolor": "none", "pad": 1.5}
"""Box behind words, so that no line runs through them."""

_WINDOW, _GIVEN = "#56B4E9", "#E69F00"


@dataclass(frozen=True)
class Window:
    """K₁/K₂ within which both species persist: ``α`` to ``1/β``, the interval of each end, and K₁/K₂ as given."""

    pair: Pair
    low: float
    high: float
    low_interval: tuple[float, float]
    high_interval: tuple[float, float]
    given: tuple[float, float] | None


def windows(analysis: Analysis, capacity: Mapping[str, tuple[float, float]] | None = None) -> list[Window]:
    """Windows of all pairs.

    Parameters
    ----------
    analysis : Analysis
        With coefficients.
    capacity : mapping of species name to (low, high), optional
        Ranges of K; a pair in which both are known gets the range of their ratio.

    Raises
    ------
    ValueRuleError
        Fewer than two species, or no coefficients.
    """
    if analysis.coefficients is None:
        raise ValueRuleError("the analysis has no coefficients; ask for the index 'alpha'.")
    a, known = analysis.coefficients.alpha, capacity or {}
    result = []
    for pair in require_pairs(analysis, "a coexistence window"):
        s, t = pair.s, pair.t
        given = None
        if pair.first in known and pair.second in known:
            (low_1, high_1), (low_2, high_2) = known[pair.first], known[pair.second]
            given = (low_1 / high_2, high_1 / low_2)
        result.append(
            Window(
                pair,
                float(a.value[s, t]),
                _inverse(a.value[t, s]),
                (float(a.low[s, t]), float(a.high[s, t])),
                (_inverse(a.high[t, s]), _inverse(a.low[t, s])),
                given,
            )
        )
    return result


def coexistence_windows(analysis: Analysis, capacity: Mapping[str, tuple[float, float]] | None = None) -> Drawing:
    """The window of every pair on one logarithmic axis, with the interval of each end and K₁/K₂ where it is known.

    Parameters, errors: see `windows`.

    Returns
    -------
    Drawing
    """
    found = windows(analysis, capacity)
    confidence = level(analysis.options.confidence)
    left, right = _limits(found)
    with look():
        figure = Figure(figsize=(8.2, 1.4 + 0.62 * len(found)), layout="constrained")
        axes = figure.subplots()
        axes.set_xscale("log")
        axes.set_xlim(left, right)
        for y, window in enumerate(found):
            _row(axes, y, window, left, right)
        axes.axvline(1, color="#777777", linewidth=1, linestyle=(0, (4, 3)), zorder=1)
        labels = [f"{wrapped('K ' + w.pair.first, 24, 2)}\n/ {wrapped('K ' + w.pair.second, 22, 2)}" for w in found]
        axes.set_yticks(range(len(found)), labels)
        axes.set_ylim(len(found) - 0.45, -0.55)
        ticks = _ticks(left, right)
        axes.xaxis.set_major_locator(FixedLocator(ticks))
        axes.xaxis.set_minor_locator(NullLocator())
        axes.set_xticklabels([f"{tick:g}" for tick in ticks])
        axes.set_xlabel("ratio of carrying capacities, K of the first over K of the second (log scale)")
        axes.grid(axis="x")
        axes.spines[["top", "right", "left"]].set_visible(False)
        axes.tick_params(axis="y", length=0)
        handles: list[Patch | Line2D] = [
            Patch(facecolor=_WINDOW, edgecolor=INK, label="both persist"),
            Line2D([], [], color=INK, marker="|", markersize=9, label=f"{confidence} interval of each end"),
        ]
        if any(w.given for w in found):
            handles.append(Patch(facecolor=_GIVEN, edgecolor=INK, hatch="////", label="ratio by the K given"))
        figure.legend(handles=handles, loc="outside lower center", ncols=3)
    return Drawing("coexistence_windows", "Coexistence window of each pair", _alt(found, confidence), figure)


def _row(axes: Axes, y: int, window: Window, left: float, right: float) -> None:
    if math.isnan(window.low) or math.isnan(window.high):
        axes.text(math.sqrt(left * right), y, UNDEFINED, ha="center", va="center", fontsize=9, bbox=_CLEAR)
    else:
        _bar(axes, y - 0.12, (window.low, window.high), left, right, _WINDOW, "")
        # One above the other: in a narrow window the two intervals share a stretch of the axis.
        for height, (low, high) in ((y - 0.19, window.low_interval), (y - 0.05, window.high_interval)):
            if not math.isnan(low) and low < right and high > left:
                axes.plot([max(low, left), min(high, right)], [height] * 2, color=INK, linewidth=1.2, zorder=4)
                inside = [x for x in (low, high) if left < x < right]
                axes.plot(inside, [height] * len(inside), "|", color=INK, markersize=6, zorder=4)
        if math.isnan(window.low_interval[0]):
            at = (min(window.high, right), y - 0.12)
            axes.annotate("no interval", at, (6, 0), textcoords="offset points", va="center", fontsize=9, bbox=_CLEAR)
    if window.given is not None:
        _bar(axes, y + 0.22, window.given, left, right, _GIVEN, "////")


def _bar(axes: Axes, y: float, ends: tuple[float, float], left: float, right: float, colour: str, hatch: str) -> None:
    """A bar cut at the ends of the axis, with an arrow where it goes on."""
    low, high = max(ends[0], left), min(ends[1], right)
    if low <= high:
        height = 0.2 if hatch else 0.3
        axes.barh(y, high - low, left=low, height=height, facecolor=colour, edgecolor=INK, hatch=hatch)
    for outside, x, marker in ((ends[0] < left, left, "<"), (ends[1] > right, right, ">")):
        if outside:
            axes.plot(x, y, marker, color=INK, markersize=8, clip_on=False, zorder=5)


def _inverse(beta: float) -> float:
    return math.inf if beta == 0 else float(1 / beta)


def _limits(found: list[Window]) -> tuple[float, float]:
    """Ends of the axis: all ends with their intervals, and some way around 1, within reason."""
    every = [0.7, 1.0, 1 / 0.7]
    for w in found:
        every += [w.low, w.high, *w.low_interval, *w.high_interval, *(w.given or ())]
    finite = [x for x in every if math.isfinite(x) and x > 0]
    return max(min(finite) / 1.4, 1 / _FARTHEST), min(max(finite) * 1.4, _FARTHEST)


def _ticks(left: float, right: float) -> list[float]:
    """Round numbers on the axis, as many as fit."""
    steps = (1, 2, 5) if math.log10(right / left) < 3 else (1,)
    decades = range(math.floor(math.log10(left)), math.ceil(math.log10(right)) + 1)
    return [tick for d in decades for step in steps if left <= (tick := float(f"{step}e{d}")) <= right]


def _alt(found: list[Window], confidence: str) -> str:
    told = []
    for w in found:
        ratio = f"K {w.pair.first} / K {w.pair.second}"
        if math.isnan(w.low) or math.isnan(w.high):
            told.append(f"the window for {ratio} is {UNDEFINED}")
            continue
        ends = [
            number(x) + ("" if np.isnan(i[0]) else f" ({span(*i)})")
            for x, i in ((w.low, w.low_interval), (w.high, w.high_interval))
        ]
        given = "" if w.given is None else f"; by the K given the ratio is {span(*w.given)}"
        told.append(f"both persist for {ratio} between {ends[0]} and {ends[1]}{given}")
    return f"Coexistence windows with the {confidence} interval of each end: {'; '.join(told)}."
