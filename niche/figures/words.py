"""Numbers and names as words: the same rounding in figures, alt texts and report."""

from __future__ import annotations

import math
import re
import textwrap
import unicodedata
from collections.abc import Sequence

from niche.analysis.notes import level as level
from niche.resampling.intervals import FEWEST_UNITS

UNDEFINED = "not defined"

_RIGHT_TO_LEFT = "\u0590-\u08ff\ufb1d-\ufdff\ufe70-\ufefc\U00010800-\U00010fff\U0001e800-\U0001efff"
_RUN = re.compile(f"[{_RIGHT_TO_LEFT}]+(?:[ '’.-]+[{_RIGHT_TO_LEFT}]+)*")


def number(value: float, places: int = 2) -> str:
    """A number for reading: two decimals, fewer where it is large, and never a false zero.

    Examples
    --------
    >>> [number(x) for x in (0.8201, 22.16, 1943.7, 0.0004, 0.0, float("inf"), float("nan"))]
    ['0.82', '22.2', '1,944', '<0.01', '0', 'no limit', 'not defined']
    """
    if math.isnan(value):
        return UNDEFINED
    if math.isinf(value):
        return "no limit" if value > 0 else "minus infinity"
    if value == 0:
        return "0"
    size = abs(value)
    if size < 0.5 * 10**-places:
        return ("<" if value > 0 else ">−") + f"{10**-places:.{places}f}"
    if size >= 99.95:
        places = 0
    elif size >= 9.995:
        places = min(places, 1)
    return f"{value:,.{places}f}".replace("-", "−")


def percent(share: float) -> str:
    """A share as a whole percentage; "<1%" and ">99%" where rounding would claim none or all.

    Examples
    --------
    >>> [percent(x) for x in (0.2947, 0.004, 0.0, 0.999, 1.0, float("nan"))]
    ['29%', '<1%', '0%', '>99%', '100%', 'not defined']
    """
    if math.isnan(share):
        return UNDEFINED
    rounded = f"{100 * share:.0f}%"
    if rounded == "0%" and share > 0:
        return "<1%"
    if rounded == "100%" and share < 1 - 1e-9:  # a sum of shares may miss 1 by its rounding
        return ">99%"
    return rounded


def span(low: float, high: float, *, shares: bool = False) -> str:
    """Two ends of an interval for a sentence: "0.64 to 0.98"."""
    show = percent if shares else number
    return f"{show(low)} to {show(high)}"


def count(amount: int, noun: str) -> str:
    """A count with its noun: "1 animal", "14 animals", "no animals"."""
    return f"{'no' if amount == 0 else format(amount, ',')} {noun if amount == 1 else noun + 's'}"


def joined(parts: Sequence[str]) -> str:
    """A list in a sentence: "a, b and c"."""
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}" if parts else ""


def no_interval(units: Sequence[int], names: Sequence[str], unit: str, *, placed: bool = False) -> str:
    """Why there is no interval: which species has too few units, or that people placed the units.

    Examples
    --------
    >>> no_interval([2, 14], ["dunlin", "redshank"], "animal")
    'no interval: 2 animals of dunlin'
    """
    if placed:
        return f"no interval: people chose the zone of each {unit}"
    few = [f"{count(n, unit)} of {name}" for n, name in zip(units, names, strict=True) if n < FEWEST_UNITS]
    return f"no interval: {joined(few)}" if few else "no interval: no resample gives a value"


def runs_leftward(text: str) -> bool:
    """Whether a text holds letters that are written from right to left."""
    return _RUN.search(text) is not None


def isolated(text: str) -> str:
    """A sentence whose right-to-left names keep to themselves and do not turn the words and numbers around them."""
    return _RUN.sub("\u2068\\g<0>\u2069", text)


def wrapped(text: str, width: int, lines: int = 3) -> str:
    """A label over at most so many lines, cut with an ellipsis; wide letters count double, control characters go.

    Examples
    --------
    >>> wrapped("middle channel edge", 14).splitlines(), wrapped("middle channel edge", 14, 1)
    (['middle channel', 'edge'], 'middle channe…')
    """
    clean = "".join(c for c in text if unicodedata.category(c) not in ("Cc", "Cs", "Cn")).strip() or " "
    wide = sum(unicodedata.east_asian_width(c) in "WF" for c in clean)
    room = max(4, round(width / (1 + wide / len(clean))))
    found = textwrap.wrap(clean, room) or [" "]
    if len(found) > lines:
        found = [*found[: lines - 1], found[lines - 1][: room - 1].rstrip() + "…"]
    return "\n".join(found)
