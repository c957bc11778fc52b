"""Figures to files and into a page: equal figures give equal bytes.

Letters are drawn as shapes, so a figure looks the same everywhere. Where the font that ships with matplotlib lacks a
letter, an installed font that has it is used; where none has it, the SVG carries its text as text, for the reader's own
fonts to show.
"""

from __future__ import annotations

import io
import re
import warnings
from html import escape
from pathlib import Path
from typing import Any

import matplotlib as mpl
from matplotlib import font_manager
from matplotlib.figure import Figure
from matplotlib.ft2font import FT2Font
from matplotlib.text import Text

from niche.figures.drawing import Drawing, look

_DPI = 150
_OWN = "DejaVu Sans"


def svg_text(drawing: Drawing) -> str:
    """The figure as an SVG document, with its title and alt text in it."""
    metadata = {"Date": None, "Creator": None, "Title": drawing.title, "Description": drawing.alt}
    return _written(drawing.figure, "svg", metadata).decode("utf-8")


def png_bytes(drawing: Drawing) -> bytes:
    """The figure as a PNG of 150 dots an inch, with its title and alt text in it."""
    metadata = {"Software": None, "Title": drawing.title, "Description": drawing.alt}
    return _written(drawing.figure, "png", metadata)


def save(drawing: Drawing, folder: Path) -> tuple[Path, Path]:
    """Write ``name.svg`` and ``name.png`` into a folder that is there.

    Returns
    -------
    svg, png : Path
    """
    svg, png = (folder / f"{drawing.name}.{ending}" for ending in ("svg", "png"))
    svg.write_text(svg_text(drawing), encoding="utf-8", newline="\n")
    png.write_bytes(png_bytes(drawing))
    return svg, png


def inline_svg(drawing: Drawing, svg: str | None = None) -> str:
    """The figure as an ``<svg>`` element for a page.

    Ids are prefixed with the figure's name, so several figures can stand in one page; ``<title>`` and ``<desc>`` carry
    title and alt text, escaped.

    Parameters
    ----------
    drawing : Drawing
    svg : str, optional
        What `svg_text` gave, to spare drawing it again.
    """
    text = svg_text(drawing) if svg is None else svg
    body = text[text.index("<svg") :]
    for part in ("<metadata>.*?</metadata>", "<title>.*?</title>", "<!--.*?-->"):
        body = re.sub(rf"{part}\s*", "", body, flags=re.DOTALL)
    own = drawing.name
    body = re.sub(r'(\sid=")', rf"\1{own}-", body)
    body = re.sub(r'((?:xlink:)?href="#)', rf"\1{own}-", body)
    body = re.sub(r"(url\(#)", rf"\1{own}-", body)
    # In a page a rule for every element would reach beyond the figure.
    body = body.replace('<style type="text/css">*{', f'<style type="text/css">#{own} *{{', 1)
    head, rest = body.split(">", 1)
    words = f'<title id="{own}-title">{escape(drawing.title)}</title><desc id="{own}-desc">{escape(drawing.alt)}</desc>'
    return f'{head} id="{own}" role="img" aria-labelledby="{own}-title {own}-desc">{words}{rest}'


def _written(figure: Figure, form: str, metadata: dict[str, str | None]) -> bytes:
    stream = io.BytesIO()
    with look(), warnings.catch_warnings():
        if _use_fonts_for(figure):
            mpl.rcParams["svg.fonttype"] = "none"
            warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        _settle(figure)
        figure.savefig(stream, format=form, dpi=_DPI, metadata=metadata)
    return stream.getvalue()


def _settle(figure: Figure) -> None:
    """Lay the figure out once, for good: laid out again for each file, its parts would move a little each time."""
    if figure.get_layout_engine() is not None:
        figure.draw_without_rendering()
        figure.set_layout_engine("none")


def _use_fonts_for(figure: Figure) -> set[int]:
    """Give the figure's text fonts that have all its letters; what is left is in no installed font."""
    texts: list[Any] = figure.findobj(Text)
    own = _letters(font_manager.findfont(_OWN))
    missing = {ord(c) for text in texts for c in text.get_text() if not c.isspace()} - own
    families = [_OWN]
    for entry in sorted(font_manager.fontManager.ttflist, key=lambda e: (e.name, e.fname)) if missing else []:
        if entry.weight in (400, "normal", "regular") and entry.style == "normal":
            has = missing & _letters(entry.fname)
            if has:
                families.append(entry.name)
                missing -= has
    if len(families) > 1:
        for text in texts:
            text.set_fontfamily(families)
    return missing


def _letters(path: str) -> set[int]:
    try:
        return set(FT2Font(path).get_charmap())
    except (OSError, RuntimeError):  # a font file that cannot be read has no letters to offer
        return set()
