"""Overlap of every pair as a triangle of cells, each with its estimate and interval."""

from __future__ import annotations

from typing import TYPE_CHECKING

import matplotlib as mpl
import numpy as np
import seaborn as sns
from matplotlib.figure import Figure

from niche.errors import ValueRuleError
from niche.figures.drawing import INK, SCALE, Drawing, look, scale_bar, text_on
from niche.figures.pairs import require_pairs
from niche.figures.words import level, number, span, wrapped
from niche.indices import OVERLAP

if TYPE_CHECKING:
    from niche.analysis import Analysis


def overlap_matrix(analysis: Analysis, index: str = "pianka") -> Drawing:
    """Lower triangle of pairwise overlap, 0 to 1, with estimate and interval in each cell.

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
    found = require_pairs(analysis, "a matrix of overlap")
    if index not in analysis.overlap:
        raise ValueRuleError(f"no overlap {index!r} in the analysis; there are {', '.join(analysis.overlap)}.")
    estimate, names = analysis.overlap[index], analysis.usage.species
    values = np.where(np.tri(len(names), k=-1, dtype=bool), estimate.value, np.nan)[1:, :-1]
    n = len(values)
    with look():
        figure = Figure(figsize=(2.9 + 1.25 * n, max(2.6, 1.3 + 0.72 * n)), layout="constrained")
        axes = figure.subplots()
        sns.heatmap(
            values,
            ax=axes,
            vmin=0,
            vmax=1,
            cmap=SCALE,
            mask=np.isnan(values),
            linewidths=1.2,
            linecolor="white",
            cbar=False,
            xticklabels=False,
            yticklabels=False,
        )
        scale_bar(
            figure, [axes], f"{OVERLAP[index].title} (0 to 1)", aspect=25, shrink=min(1.0, 3.3 / figure.get_figheight())
        )
        colours = mpl.colormaps[SCALE]
        for pair in found:
            value = estimate.value[pair.s, pair.t]
            ink = INK if np.isnan(value) else text_on(colours(value))
            text = _cell(value, estimate.low[pair.s, pair.t], estimate.high[pair.s, pair.t])
            axes.text(pair.s + 0.5, pair.t - 0.5, text, ha="center", va="center", color=ink, fontsize=9)
        axes.set_xticks(np.arange(n) + 0.5, [wrapped(name, 15) for name in names[:-1]], rotation=0)
        axes.set_yticks(np.arange(n) + 0.5, [wrapped(name, 20) for name in names[1:]], rotation=0)
        axes.tick_params(length=0)
    title = f"Overlap of each pair of species ({OVERLAP[index].title})"
    return Drawing(f"overlap_matrix_{index}", title, _alt(analysis, index), figure)


def _cell(value: float, low: float, high: float) -> str:
    if np.isnan(value):
        return number(value)
    return f"{number(value)}\n" + ("no interval" if np.isnan(low) else f"{number(low)}–{number(high)}")


def _alt(analysis: Analysis, index: str) -> str:
    e = analysis.overlap[index]
    found = sorted(require_pairs(analysis, "overlap"), key=lambda p: -np.nan_to_num(e.value[p.s, p.t], nan=-1.0))
    told = []
    for p in found:
        at = (p.s, p.t)
        interval = p.without if np.isnan(e.low[at]) else span(e.low[at], e.high[at])
        told.append(f"{p.first} and {p.second} {number(e.value[at])} ({interval})")
    return (
        f"Triangle of {OVERLAP[index].title} for each pair of species, with {level(analysis.options.confidence)} "
        f"intervals, from the largest to the smallest: {'; '.join(told)}."
    )
