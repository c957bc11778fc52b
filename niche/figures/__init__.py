"""Figures of an analysis, drawn off screen: nothing here keeps a state or opens a window.

Each figure is a `Drawing`: the matplotlib Figure with its name, its title and the text that says what it shows.
"""

from niche.figures.drawing import Drawing
from niche.figures.effort import effort_timeline
from niche.figures.intervals import overlap_intervals
from niche.figures.maps import zone_maps
from niche.figures.matrix import overlap_matrix
from niche.figures.saving import inline_svg, png_bytes, save, svg_text
from niche.figures.windows import coexistence_windows

__all__ = [
    "Drawing",
    "coexistence_windows",
    "effort_timeline",
    "inline_svg",
    "overlap_intervals",
    "overlap_matrix",
    "png_bytes",
    "save",
    "svg_text",
    "zone_maps",
]
