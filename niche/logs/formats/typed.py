"""Typed cells, of workbooks, databases and Parquet, as the one text that stands for them.

Date and time in ISO 8601, numbers in their shortest form, durations as H:MM:SS (hours may pass 24), true and false.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from decimal import Decimal
from fractions import Fraction
from typing import Any

_PLAIN = 1e16
"""Whole numbers below it are written out; larger ones have no digits to show for it."""
_UNIT_SECONDS = {"s": 1, "min": 60, "h": 3600, "d": 86400}


@dataclass(frozen=True)
class EarlyDate:
    """A date of a spreadsheet's first days, as the time since its day 0: a duration, or a time of day without a date."""

    since: timedelta


def cell_text(value: Any) -> str:
    """Text of a typed value.

    Raises
    ------
    TypeError
        The value is a list, a record or the like, which one cell cannot hold.

    Examples
    --------
    >>> cell_text(12.0), cell_text(0.1), cell_text(True), cell_text(timedelta(hours=26))
    ('12', '0.1', 'true', '26:00:00')
    """
    if value is None:
        return ""
    if isinstance(value, str):
        return value
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int):
        return str(value)
    if isinstance(value, float):
        return number_text(value)
    if isinstance(value, Decimal):
        return "" if value.is_nan() else f"{value:f}"
    if isinstance(value, datetime):
        return value.isoformat(timespec="milliseconds" if value.microsecond else "seconds")
    if isinstance(value, time):
        return value.isoformat(timespec="milliseconds" if value.microsecond else "seconds")
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, timedelta):
        return hours_minutes_seconds(value)
    raise TypeError(type(value).__name__)


def number_text(value: float) -> str:
    """Shortest text of a number; whole numbers without a point, not-a-number as an empty cell."""
    if math.isnan(value):
        return ""
    if value.is_integer() and abs(value) < _PLAIN:
        return str(int(value))
    return repr(value)


def hours_minutes_seconds(length: timedelta) -> str:
    """A duration as H:MM:SS, with milliseconds if it has any."""
    milliseconds = round(length / timedelta(milliseconds=1))
    seconds, rest = divmod(abs(milliseconds), 1000)
    text = f"{seconds // 3600}:{seconds // 60 % 60:02d}:{seconds % 60:02d}" + (f".{rest:03d}" if rest else "")
    return f"-{text}" if milliseconds < 0 else text


def duration_text(length: timedelta, unit: str) -> str:
    """A duration in the unit that the study declares for its column, or as H:MM:SS where that is no plain number."""
    if unit not in _UNIT_SECONDS:
        return hours_minutes_seconds(length)
    exact = Fraction(round(length / timedelta(milliseconds=1)), 1000 * _UNIT_SECONDS[unit])
    return number_text(float(exact))
