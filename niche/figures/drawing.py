"""What a figure function returns, and the look that all figures share."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from typing import Any

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.cm import ScalarMappable
from matplotlib.colors import Normalize, to_rgb
from matplotlib.figure import Figure

INK = "#1a1a1a"
"""Lines and text."""

FAINT = "#e4e4e4"
"""Grid lines, and cells without a value."""

PALETTE = ("#E69F00", "#CC79A7", "#56B4E9", "#D55E00", "#009E73", "#F0E442", "#0072B2", "#000000")
"""Okabe & Ito's colours, told apart with any colour vision; light ones always stand in a dark outline."""

SCALE = "cividis"
"""Colour map of every share and overlap: even in lightness, and read alike with any colour vision."""

_LOOK: dict[Any, Any] = {
    "font.family": ["DejaVu Sans"],
    "font.size": 10,
    "axes.titlesize": 10.5,
    "axes.labelsize": 10,
    "xtick.labelsize": 9,
    "ytick.labelsize": 9,
    "legend.fontsize": 9,
    "legend.frameon": False,
    "text.color": INK,
    "axes.labelcolor": INK,
    "axes.edgecolor": "#555555",
    "xtick.color": INK,
    "ytick.color": INK,
    "axes.axisbelow": True,
    "grid.color": FAINT,
    "hatch.color": "#555555",
    "hatch.linewidth": 0.8,
    "figure.facecolor": "white",
    "savefig.facecolor": "white",
    # A name may hold dollar signs; it must never be read as a formula.
    "text.parse_math": False,
    # Letters as shapes look the same everywhere; the salt keeps the ids of clip paths the same from run to run.
    "svg.fonttype": "path",
    "svg.hashsalt": "niche",
}


@dataclass(frozen=True)
class Drawing:
    """A figure with the words that belong to it.

    Attributes
    ----------
    name : str
        Stem of its file names.
    title : str
        What is drawn, in a few words.
    alt : str
        What it shows, from the numbers: for readers who cannot see it.
    figure : matplotlib.figure.Figure
    """

    name: str
    title: str
    alt: str
    figure: Figure


@contextmanager
def look() -> Iterator[None]:
    """Draw and save with the look of the program, whatever the settings of the machine."""
    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(_LOOK)
        yield


def scale_bar(figure: Figure, axes: Sequence[Axes], label: str, **settings: Any) -> None:
    """Add the legend of `SCALE` from 0 to 1 beside axes, in steps: as shapes, where a smooth one would be an image."""
    steps = ScalarMappable(Normalize(0, 1), mpl.colormaps[SCALE].resampled(40))
    bar = figure.colorbar(steps, ax=list(axes), label=label, **settings)
    bar.outline.set_visible(False)
    if bar.solids is not None:
        bar.solids.set_edgecolor("face")


def contrast(first: str | tuple[float, ...], second: str | tuple[float, ...]) -> float:
    """Contrast of two colours, 1 to 21.

    Source: W3C (2023) *Web Content Accessibility Guidelines 2.2*, definitions of contrast ratio and relative luminance.

    Examples
    --------
    >>> round(contrast("white", "black"), 1)
    21.0
    """
    light, dark = sorted((_luminance(first), _luminance(second)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def text_on(colour: str | tuple[float, ...]) -> str:
    """Black or white, whichever is read more easily on a colour; never below 4.5 : 1."""
    return max(("black", "white"), key=lambda text: contrast(text, colour))


def _luminance(colour: str | tuple[float, ...]) -> float:
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in to_rgb(colour)]  # type: ignore[arg-type]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]
