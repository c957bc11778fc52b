"""Overlap of every pair as estimate and interval, with the pooled value beside it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from matplotlib.figure import Figure
from matplotlib.lines import Line2D

from niche.errors import ValueRuleError
from niche.figures.drawing import INK, Drawing, look
from niche.figures.pairs import Pair, require_pairs
from niche.figures.words import UNDEFINED, level, number, runs_leftward, span, wrapped
from niche.indices import OVERLAP

if TYPE_CHECKING:
    from niche.analysis import Analysis

_COLOUR = "#0072B2"


def overlap_intervals(analysis: Analysis, index: str = "pianka") -> Drawing:
    """A line a pair: dot for the estimate, line for the interval, open diamond for the pooled value.

    Parameters
    ----------
    analysis : Analysis
    index : str
        A name from `niche.indices.OVERLAP` that the analysis holds.

    Returns
    -------
    Drawing

    Raises
    ------
    ValueRuleError
        Fewer than two species, or the analysis does not hold the index.
    """
    found = require_pairs(analysis, "overlap")
    if index not in analysis.overlap:
        raise ValueRuleError(f"no overlap {index!r} in the analysis; there are {', '.join(analysis.overlap)}.")
    e = analysis.overlap[index]
    confidence = level(analysis.options.confidence)
    with look():
        figure = Figure(figsize=(7.4, 1.2 + 0.46 * len(found)), layout="constrained")
        axes = figure.subplots()
        for y, pair in enumerate(found):
            at = (pair.s, pair.t)
            if np.isnan(e.value[at]):
                axes.text(0.5, y, UNDEFINED, ha="center", va="center", fontsize=9)
                continue
            if np.isnan(e.low[at]):
                right = e.value[at] < 0.6
                offset = 0.03 if right else -0.03
                axes.text(
                    e.value[at] + offset, y, "no interval", ha="left" if right else "right", va="center", fontsize=9
                )
            else:
                axes.plot([e.low[at], e.high[at]], [y, y], color=_COLOUR, linewidth=2.4, solid_capstyle="butt")
            # A little below the line, where it does not hide the estimate.
            axes.plot(
                e.pooled[at], y + 0.24, "D", markersize=5.5, markerfacecolor="none", markeredgecolor=INK, zorder=4
            )
            axes.plot(e.value[at], y, "o", markersize=7, color=_COLOUR, markeredgecolor="white", zorder=3)
        axes.set_yticks(range(len(found)), [_label(p) for p in found])
        axes.set_ylim(len(found) - 0.4, -0.6)
        axes.set_xlim(-0.02, 1.02)
        axes.set_xlabel(f"{OVERLAP[index].title}: 0 no zone shared, 1 same use")
        axes.grid(axis="x")
        axes.spines[["top", "right", "left"]].set_visible(False)
        axes.tick_params(axis="y", length=0)
        handles = [
            Line2D(
                [], [], color=_COLOUR, marker="o", markersize=7, linewidth=2.4, label=f"estimate, {confidence} interval"
            ),
            Line2D(
                [], [], color=INK, marker="D", markersize=5.5, markerfacecolor="none", linewidth=0, label="pooled value"
            ),
        ]
        figure.legend(handles=handles, loc="outside lower center", ncols=2)
    title = f"Overlap of each pair with its interval ({OVERLAP[index].title})"
    told = [
        _told(p.first, p.second, e.value[p.s, p.t], e.low[p.s, p.t], e.high[p.s, p.t], e.pooled[p.s, p.t])
        for p in found
    ]
    alt = f"{OVERLAP[index].title} of each pair with its {confidence} interval and the pooled value: {'; '.join(told)}."
    return Drawing(f"overlap_intervals_{index}", title, alt, figure)


def _label(pair: Pair) -> str:
    """Both names on a line, or on one each where writing direction would swap them."""
    if runs_leftward(pair.first + pair.second):
        return f"{wrapped(pair.first, 34, 1)}\n{wrapped(pair.second, 34, 1)}"
    return wrapped(f"{pair.first} – {pair.second}", 34, 2)


def _told(first: str, second: str, value: float, low: float, high: float, pooled: float) -> str:
    if np.isnan(value):
        return f"{first} and {second} {UNDEFINED}"
    interval = "no interval" if np.isnan(low) else span(low, high)
    return f"{first} and {second} {number(value)} ({interval}), pooled {number(pooled)}"
