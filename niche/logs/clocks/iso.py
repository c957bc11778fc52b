"""ISO 8601 date and time of day (8601-1:2019 with Amendment 1:2022).

Calendar, week and ordinal dates; the extended form ``2026-09-03T08:15:30+02:00``, where a space may stand for the T, and
the basic form ``20260903T081530+0200``, not mixed within one value; seconds and their fraction (point or comma) may be left
out. A value that stops before the minutes is a span of time, not an instant, and is refused with that reason.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc

from niche.logs.clocks.uniform import read_uniform
from niche.logs.clocks.written import UNREADABLE, Written, from_parts

_CALENDAR = r"(?P<year>\d{4})-(?P<month>\d{2})-(?P<day>\d{2})"
_CLOCK = r"(?P<hour>\d{2}):(?P<minute>\d{2})(?::(?P<second>\d{2})(?:[.,](?P<fraction>\d+))?)?"
_OFFSET = r"(?P<offset>Z|[+-]\d{2}(?::?\d{2})?)?"
_EXTENDED = rf"^\s*{_CALENDAR}[T ]{_CLOCK}{_OFFSET}\s*$"

_BASIC_CLOCK = r"(?P<hour>\d{2})(?P<minute>\d{2})(?:(?P<second>\d{2})(?:[.,](?P<fraction>\d+))?)?"
_BASIC_OFFSET = r"(?P<offset>Z|[+-]\d{2}(?:\d{2})?)?"
_OTHERS = (
    rf"^\s*(?P<year>\d{{4}})(?P<month>\d{{2}})(?P<day>\d{{2}})T{_BASIC_CLOCK}{_BASIC_OFFSET}\s*$",
    rf"^\s*(?P<year>\d{{4}})-(?P<ordinal>\d{{3}})[T ]{_CLOCK}{_OFFSET}\s*$",
    rf"^\s*(?P<year>\d{{4}})(?P<ordinal>\d{{3}})T{_BASIC_CLOCK}{_BASIC_OFFSET}\s*$",
    rf"^\s*(?P<year>\d{{4}})-W(?P<week>\d{{2}})-(?P<weekday>\d)[T ]{_CLOCK}{_OFFSET}\s*$",
    rf"^\s*(?P<year>\d{{4}})W(?P<week>\d{{2}})(?P<weekday>\d)T{_BASIC_CLOCK}{_BASIC_OFFSET}\s*$",
)
_DATE = rf"^\s*{_CALENDAR}\s*$"
_SPAN = (
    r"^\s*\d{4}(-\d{2})?\s*$|^\s*(\d{4}-?\d{2}-?\d{2}|\d{4}-?\d{3}|\d{4}-?W\d{2}(-?\d)?)"
    r"(T\d{2}(Z|[+-]\d{2}(:?\d{2})?)?)?\s*$"
)
_MIXED = (
    r"^\s*(\d{4}-(\d{2}-\d{2}|\d{3}|W\d{2}-\d)T\d{4}(\d{2}([.,]\d+)?)?|(\d{8}|\d{7}|\d{4}W\d{3})T\d{2}:\d{2}(:\d{2}([.,]\d+)?)?)"
    r"(Z|[+-]\d{2}(:?\d{2})?)?\s*$|^\s*(\d{8}|\d{7}|\d{4}W\d{3})T\d{4}(\d{2}([.,]\d+)?)?[+-]\d{2}:\d{2}\s*$"
)

SPAN = "a span of time, not an instant: a start or end needs the time of day, hours and minutes"
MIXED_FORM = (
    "basic and extended form of ISO 8601 mixed in one value; write 2026-09-03T08:15+02:00 or 20260903T0815+0200"
)


def read_iso(text: Any) -> Written:
    """Read ISO 8601 times as written.

    Parameters
    ----------
    text : pyarrow string array, length n

    Returns
    -------
    Written
        Cells that do not fit have the problem `UNREADABLE`, `SPAN` or `MIXED_FORM`.
    """
    written = read_uniform(text)
    for pattern in (_EXTENDED, *_OTHERS):
        _try(written, text, pattern)
    left = ~written.fits
    if not left.any():
        return written
    rest = pc.filter(text, pa.array(left))
    problems = np.full(len(rest), UNREADABLE, dtype=object)
    problems[np.asarray(pc.match_substring_regex(rest, _SPAN))] = SPAN
    problems[np.asarray(pc.match_substring_regex(rest, _MIXED))] = MIXED_FORM
    dates = from_parts(pc.extract_regex(rest, _DATE))
    real = dates.fits & (dates.problem == None)  # noqa: E711 - elementwise
    written.ms[left] = np.where(real, dates.ms, 0)
    written.whole_day[left] = real
    written.problem[left] = problems
    return written


def _try(written: Written, text: Any, pattern: str) -> None:
    """Read the cells that have not fitted so far by another form."""
    left = ~written.fits
    if left.any():
        written.put(left, from_parts(pc.extract_regex(pc.filter(text, pa.array(left)), pattern)))
