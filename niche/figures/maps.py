"""Maps of zone use: one panel a species, the zones in their places, one colour scale for all."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import matplotlib as mpl
import numpy as np
import seaborn as sns
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patches import Patch, Rectangle
from matplotlib.ticker import PercentFormatter

from niche.figures.drawing import FAINT, INK, SCALE, Drawing, look, scale_bar, text_on
from niche.figures.words import count, joined, percent, wrapped

if TYPE_CHECKING:
    from niche.analysis import Analysis
    from niche.indices.products import Floats
    from niche.study import Zones

_WIDEST = 9.4
"""Width of the figure in inches up to which panels stand side by side."""

_ROOM_FOR_NAMES = 6
"""With more columns a cell is too narrow for a name of its own."""


def zone_maps(analysis: Analysis, zones: Zones) -> Drawing:
    """Heat maps of each species' use on the layout of the zones, core zones outlined.

    Parameters
    ----------
    analysis : Analysis
    zones : Zones
        Layout with the same zones as the analysis.

    Returns
    -------
    Drawing
    """
    species = analysis.usage.species
    rows, columns = len(zones.rows), len(zones.columns)
    roomy = columns <= (4 if _told_by_headings(zones) else _ROOM_FOR_NAMES)
    cell = (0.9, 0.62) if roomy else (0.62, 0.55)
    beside = 0.35 + cell[0] * columns
    across = max(1, min(len(species), int((_WIDEST - 1.5) // beside)))
    down = math.ceil(len(species) / across)
    size = (max(5.0, 1.9 + across * beside), max(2.8, 0.6 + down * (1.15 + cell[1] * rows)))
    with look():
        figure = Figure(figsize=size, layout="constrained")
        grid = figure.subplots(down, across, squeeze=False)
        for place, axes in enumerate(grid.flat):
            if place < len(species):
                _panel(axes, analysis, zones, place, cell[0], first=place % across == 0)
            else:
                axes.set_axis_off()
        scale_bar(
            figure,
            grid.ravel().tolist(),
            "share of use",
            format=PercentFormatter(1.0),
            shrink=min(0.7, 3.3 / size[1]),
            anchor=(0.0, 0.5 if down < 3 else 1.0),
            aspect=25,
        )
        handles = [Patch(facecolor="white", edgecolor=INK, linewidth=2, label="core zone")]
        if any(not zone for row in zones.layout for zone in row):
            handles.append(Patch(facecolor="white", edgecolor="#555555", hatch="////", label="no such zone"))
        figure.legend(handles=handles, loc="outside lower center", ncols=2, handleheight=1.2)
    return Drawing("zone_maps", "Use of the zones by each species", _alt(analysis), figure)


def grid_of(values: Floats, names: tuple[str, ...], zones: Zones) -> Floats:
    """Values by zone laid out as the zones lie, shape (rows, columns); NaN where there is no zone."""
    place = {name: number for number, name in enumerate(names)}
    return np.array([[values[place[zone]] if zone else np.nan for zone in row] for row in zones.layout])


def panel_title(analysis: Analysis, s: int) -> str:
    """What the core of a species really holds, and how many units that rests on."""
    units = count(int(analysis.usage.unit_counts[s]), analysis.usage.unit)
    if not analysis.use.core[s].any():
        return f"no use recorded, {units}"
    zones = count(int(analysis.use.core[s].sum()), "zone")
    return f"core: {percent(analysis.use.core_share[s])} in {zones}, {units}"


def _panel(axes: Axes, analysis: Analysis, zones: Zones, s: int, cell_width: float, *, first: bool) -> None:
    values = grid_of(analysis.use.proportion.value[s], analysis.usage.zones, zones)
    core = grid_of(analysis.use.core[s].astype(float), analysis.usage.zones, zones)
    with np.errstate(invalid="ignore"):
        sns.heatmap(
            values,
            ax=axes,
            vmin=0,
            vmax=1,
            cmap=SCALE,
            mask=np.isnan(values),
            cbar=False,
            linewidths=1.2,
            linecolor="white",
            xticklabels=False,
            yticklabels=False,
        )
    axes.set_facecolor(FAINT)
    named = len(zones.columns) <= _ROOM_FOR_NAMES and not _told_by_headings(zones)
    colours = mpl.colormaps[SCALE]
    for (i, j), value in np.ndenumerate(values):
        zone = zones.layout[i][j]
        if not zone:
            axes.add_patch(Rectangle((j, i), 1, 1, facecolor="white", edgecolor="#555555", hatch="////", linewidth=0))
            continue
        ink = INK if np.isnan(value) else text_on(colours(value))
        text = "–" if np.isnan(value) else percent(value)
        if named:
            text = f"{wrapped(zone, int(cell_width * 12), 2)}\n{text}"
        axes.text(j + 0.5, i + 0.5, text, ha="center", va="center", color=ink, fontsize=9 if named else 10)
        if core[i, j] == 1:
            # Dark within white: one of the two stands out on every colour of the scale.
            for colour, width in (("white", 5.0), (INK, 2.4)):
                axes.add_patch(
                    Rectangle((j + 0.06, i + 0.08), 0.88, 0.84, fill=False, edgecolor=colour, linewidth=width, zorder=4)
                )
    axes.set_xticks(
        np.arange(len(zones.columns)) + 0.5, [wrapped(c, int(cell_width * 11), 3) for c in zones.columns], rotation=0
    )
    labels = [wrapped(r, 12, 2) for r in zones.rows] if first else [""] * len(zones.rows)
    axes.set_yticks(np.arange(len(zones.rows)) + 0.5, labels, rotation=0)
    axes.tick_params(length=0)
    room = max(24, int(cell_width * len(zones.columns) * 11))
    core_held = panel_title(analysis, s)
    if len(core_held) > room:
        core_held = core_held.replace(", ", ",\n")
    axes.set_title(f"{wrapped(analysis.usage.species[s], room, 2)}\n{core_held}")


def _told_by_headings(zones: Zones) -> bool:
    """Whether row and column headings together tell each zone's name, so that cells need not repeat it."""
    return all(
        set(zone.casefold().split()) <= set(f"{row} {column}".casefold().split())
        for row, line in zip(zones.rows, zones.layout, strict=True)
        for column, zone in zip(zones.columns, line, strict=True)
    )


def _alt(analysis: Analysis) -> str:
    sentences = [
        "Heat maps of zone use on the layout of the zones, one for each species, on one scale from 0% to 100%."
    ]
    for s, name in enumerate(analysis.usage.species):
        p = analysis.use.proportion.value[s]
        if np.isnan(p).all():
            sentences.append(f"{name}: {panel_title(analysis, s)}.")
            continue
        most = [z for z in np.argsort(-p, kind="stable")[:3] if p[z] > 0]
        used = joined([f"{analysis.usage.zones[z]} ({percent(p[z])})" for z in most])
        sentences.append(f"{name}: most used {'is' if len(most) == 1 else 'are'} {used}; {panel_title(analysis, s)}.")
    return " ".join(sentences)
