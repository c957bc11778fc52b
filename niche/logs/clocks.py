"""Times as written to whole milliseconds of UTC.

ISO 8601 date and time in the extended form, ``2026-09-03T08:15:30+02:00``: a space may stand for the T, seconds and
their fraction may be left out, the offset may be left out where the study declares a time zone. 24:00 is the end of the
day. Nothing is guessed: what does not fit is returned as a problem in words.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from typing import Any
from zoneinfo import ZoneInfo

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

_ISO = (
    r"^(?P<year>\d{4})-(?P<month>\d{2})-(?P<day>\d{2})[T ](?P<hour>\d{2}):(?P<minute>\d{2})"
    r"(?::(?P<second>\d{2})(?:[.,](?P<fraction>\d{1,3})\d*)?)?"
    r"(?P<offset>Z|[+-]\d{2}(?::?\d{2})?)?$"
)
_EXAMPLE = "write it like 2026-09-03T08:15:30+02:00"

UNREADABLE = f"not an ISO 8601 date and time; {_EXAMPLE}"
IMPOSSIBLE = "no such date or time of day"
NO_OFFSET = f"no offset from UTC and no `logs.time_zone` in the study; {_EXAMPLE}, or declare the time zone"
MIXED_WITH = "no offset, where the file's first time has one; within one file give all times an offset or none"
MIXED_WITHOUT = "an offset, where the file's first time has none; within one file give all times an offset or none"
MISSING_HOUR = "this local time does not exist: clocks were put forward over it; write times with their offset"
REPEATED_HOUR = "this local time came twice: clocks were put back over it; write times with their offset"
END_OF_DAY = "24:00 read as 00:00 of the next day"

DAY = 86_400_000
_NO_OFFSET = 100 * 60
"""Minutes of an offset that no place can have."""


@dataclass(frozen=True)
class Instants:
    """Times read: ``ms`` since 1970-01-01T00:00Z, and for each cell the problem (None if none) and any repair."""

    ms: NDArray[np.int64]
    problem: NDArray[np.object_]
    repair: NDArray[np.object_]
    has_offset: bool | None
    """Whether the first time that fits carries an offset; None if no time fits."""


def read_times(text: Any, time_zone: str | None, has_offset: bool | None = None) -> Instants:
    """Read ISO 8601 times.

    Parameters
    ----------
    text : pyarrow string array, length n
        Cells as written. A blank cell is not this function's business and comes back as `UNREADABLE`.
    time_zone : str, optional
        IANA name for times without an offset.
    has_offset : bool, optional
        Whether earlier times of the same file carry an offset; the rest must follow.

    Returns
    -------
    Instants
    """
    found = pc.extract_regex(pc.utf8_trim_whitespace(text), _ISO)
    fits = np.asarray(pc.is_valid(found))
    year, month, day, hour, minute, second = (
        _integers(found, name) for name in ("year", "month", "day", "hour", "minute", "second")
    )
    fraction = pc.utf8_rpad(pc.fill_null(pc.struct_field(found, "fraction"), ""), 3, "0")
    milli = np.asarray(pc.cast(fraction, pa.int64()))
    days = ((year - 1970) * 12 + month - 1).astype("datetime64[M]").astype("datetime64[D]") + (day - 1)
    same_month = days.astype("datetime64[M]").astype(np.int64) == (year - 1970) * 12 + month - 1
    end_of_day = (hour == 24) & (minute == 0) & (second == 0) & (milli == 0)
    real = same_month & (day >= 1) & (month >= 1) & (month <= 12) & (minute <= 59) & (second <= 59)
    real &= (hour <= 23) | end_of_day
    real &= (year >= 1) & (year <= 9998)  # as far as the local calendar of any zone can be reckoned
    ms = days.astype(np.int64) * DAY + ((hour * 60 + minute) * 60 + second) * 1000 + milli

    offset, written = _offsets(found)
    real &= np.abs(offset) <= 18 * 60
    problem = np.full(len(ms), None, dtype=object)
    if has_offset is None and fits.any():
        has_offset = bool(written[np.argmax(fits)])
    if has_offset:
        problem[fits & ~written] = MIXED_WITH
    elif time_zone is None:
        problem[fits & ~written] = NO_OFFSET
        problem[fits & written] = MIXED_WITHOUT
    else:
        problem[fits & written] = MIXED_WITHOUT
        local = fits & ~written & real
        offset[local], problem[local] = _local_offsets(ms[local], ZoneInfo(time_zone))
    problem[fits & ~real] = IMPOSSIBLE
    problem[~fits] = UNREADABLE
    repair = np.full(len(ms), None, dtype=object)
    repair[fits & real & end_of_day] = END_OF_DAY
    return Instants(ms - offset * 60_000, problem, repair, has_offset)


def _integers(found: Any, name: str) -> NDArray[np.int64]:
    """A group of digits as integers; 0 where the group is absent."""
    digits = pc.struct_field(found, name)
    digits = pc.if_else(pc.equal(digits, ""), "0", digits)
    return np.array(pc.cast(pc.fill_null(digits, "0"), pa.int64()), dtype=np.int64)


def _offsets(found: Any) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
    """Written offsets in minutes, and whether there is one. Few differ, so each is read once."""
    coded = pc.dictionary_encode(pc.fill_null(pc.struct_field(found, "offset"), ""))
    minutes = []
    for text in coded.dictionary.to_pylist():
        digits = text[1:].replace(":", "").ljust(4, "0")
        size = int(digits[:2]) * 60 + int(digits[2:]) if text not in ("", "Z") else 0
        size = size if int(digits[2:]) <= 59 else _NO_OFFSET
        minutes.append(-size if text.startswith("-") else size)
    index = np.asarray(coded.indices)
    names = np.array(coded.dictionary.to_pylist(), dtype=object)
    return np.array(minutes, dtype=np.int64)[index], (names != "")[index].astype(bool)


def _local_offsets(ms: NDArray[np.int64], zone: ZoneInfo) -> tuple[NDArray[np.int64], NDArray[np.object_]]:
    """Offset in minutes of local times, with the missing and the repeated hour as problems.

    Offsets change on whole minutes, so each minute is looked up once however many times fall into it.
    """
    minutes, inverse = np.unique(ms // 60_000, return_inverse=True)
    offsets = np.zeros(len(minutes), dtype=np.int64)
    problems = np.full(len(minutes), None, dtype=object)
    epoch = datetime(1970, 1, 1)  # noqa: DTZ001 - a local time, on purpose
    for i, count in enumerate(minutes.tolist()):
        try:
            local = (epoch + timedelta(minutes=count)).replace(tzinfo=zone)
            earlier, later = local.utcoffset(), local.replace(fold=1).utcoffset()
            back = local.astimezone(UTC).astimezone(zone).replace(tzinfo=None)
        except OverflowError:  # year 0 or 9999: no such local time
            problems[i] = IMPOSSIBLE
            continue
        if earlier is None or later is None:
            continue
        offsets[i] = round(earlier.total_seconds() / 60)
        if earlier != later:
            problems[i] = REPEATED_HOUR if back == local.replace(tzinfo=None) else MISSING_HOUR
    return offsets[inverse], problems[inverse]
