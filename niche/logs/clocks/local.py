"""Times as written to whole milliseconds of UTC: offsets, named zones with their missing and repeated hours."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import UTC, datetime, timedelta, timezone, tzinfo
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from niche.logs.clocks.written import DAY, IMPOSSIBLE, Written

Repeated = Literal["stop", "earlier", "later"]

NO_OFFSET = (
    "no offset from UTC and no `logs.time_zone` in the study; write it like 2026-09-03T08:15:30+02:00, or declare the time "
    "zone"
)
MIXED_WITH = "no offset, where the file's first time has one; within one file give all times an offset or none"
MIXED_WITHOUT = "an offset, where the file's first time has none; within one file give all times an offset or none"
MISSING_HOUR = "this local time does not exist: clocks were put forward over it; write times with their offset"
REPEATED_HOUR = (
    "this local time came twice: clocks were put back over it; write times with their offset, or set "
    '`logs.clock.repeated_hour` to "earlier" or "later"'
)
READ_AS = {
    "earlier": 'this local time came twice; read as the earlier, as `logs.clock.repeated_hour` = "earlier" says',
    "later": 'this local time came twice; read as the later, as `logs.clock.repeated_hour` = "later" says',
}


@dataclass(frozen=True)
class Instants:
    """Times read: ``ms`` since 1970-01-01T00:00Z, and for each cell the problem (None if none) and any repair."""

    ms: NDArray[np.int64]
    problem: NDArray[np.object_]
    repair: NDArray[np.object_]
    has_offset: bool | None
    """Whether the first time that fits carries an offset; None if no time fits."""

    @property
    def fine(self) -> NDArray[np.bool_]:
        """Cells without a problem."""
        return np.asarray(self.problem == None, dtype=bool)  # noqa: E711 - elementwise


def to_utc(
    written: Written, zone: tzinfo | None, has_offset: bool | None = None, repeated: Repeated = "stop"
) -> Instants:
    """Turn times as written into instants.

    Parameters
    ----------
    written : Written
    zone : tzinfo, optional
        For times without an offset.
    has_offset : bool, optional
        Whether earlier times of the same file carry an offset; the rest must follow.
    repeated : {"stop", "earlier", "later"}
        How to read a local time that came twice. Nothing but this says which, least of all the order of the rows.
    """
    fits, given = written.fits, written.has_offset
    problem, repair, ms = (
        np.full(len(fits), None, dtype=object),
        written.repair.copy(),
        written.ms - written.offset * 60_000,
    )
    if has_offset is None and fits.any():
        has_offset = bool(given[np.argmax(fits)])
    if has_offset:
        problem[fits & ~given] = MIXED_WITH
    elif zone is None:
        problem[fits & ~given] = NO_OFFSET
        problem[fits & given] = MIXED_WITHOUT
    else:
        problem[fits & given] = MIXED_WITHOUT
        local = fits & ~given & (written.problem == None)  # noqa: E711 - elementwise
        shift, problem[local], twice = _local_offsets(written.ms[local], zone, repeated)
        ms[local] = written.ms[local] - shift * 1000
        if repeated != "stop":
            repair[np.flatnonzero(local)[twice]] = READ_AS[repeated]
    told = written.problem != None  # noqa: E711 - elementwise
    problem[told] = written.problem[told]
    # Leap seconds end a month of UTC; any other second 60 is a slip.
    next_day = (ms // DAY + 1).astype("datetime64[D]")
    last_second = (ms % DAY >= DAY - 1000) & (next_day == next_day.astype("datetime64[M]"))
    problem[written.leap & ~last_second] = IMPOSSIBLE
    return Instants(ms, problem, repair, has_offset)


def _local_offsets(
    ms: NDArray[np.int64], zone: tzinfo, repeated: Repeated
) -> tuple[NDArray[np.int64], NDArray[np.object_], NDArray[np.bool_]]:
    """Offset in seconds of local times, their problems, and which of them came twice.

    A day within which the offset is the same throughout needs no closer look; on others each minute is looked up once.
    """
    problems, twice = np.full(len(ms), None, dtype=object), np.zeros(len(ms), dtype=bool)
    if isinstance(zone, timezone):
        return np.full(len(ms), round(zone.utcoffset(None).total_seconds()), dtype=np.int64), problems, twice
    days, which = np.unique(ms // DAY, return_inverse=True)
    steady = [_steady_offset(day, zone) for day in days.tolist()]
    offsets = np.array([0 if size is None else size for size in steady], dtype=np.int64)[which]
    close = np.array([size is None for size in steady], dtype=bool)[which]
    if close.any():
        minutes, inverse = np.unique(ms[close] // 60_000, return_inverse=True)
        looked_up = [_offset_at(minute, zone) for minute in minutes.tolist()]
        earlier, later = (np.array([found[i] for found in looked_up], dtype=np.int64)[inverse] for i in (0, 1))
        said = np.array([found[2] for found in looked_up], dtype=object)[inverse]
        offsets[close] = later if repeated == "later" else earlier
        twice[close] = said == REPEATED_HOUR
        if repeated != "stop":
            said[said == REPEATED_HOUR] = None
        problems[close] = said
    return offsets, problems, twice


_EPOCH = datetime(1970, 1, 1)  # noqa: DTZ001 - a local time, on purpose
_FIRST_DAY, _LAST_DAY = ((datetime(*day) - _EPOCH).days for day in ((1, 1, 1), (9999, 12, 31)))  # noqa: DTZ001


def _steady_offset(day: int, zone: tzinfo) -> int | None:
    """Offset in seconds if it is the same all through a local day; no zone changes twice within six hours."""
    if not _FIRST_DAY < day < _LAST_DAY:  # where local time and UTC do not both have a date
        return None
    found = set()
    for hour in (0, 6, 12, 18, 24):
        local = (_EPOCH + timedelta(days=day, hours=hour)).replace(tzinfo=zone)
        found |= {local.utcoffset(), local.replace(fold=1).utcoffset()}
    size = found.pop()
    return None if found or size is None else round(size.total_seconds())


def _offset_at(minute: int, zone: tzinfo) -> tuple[int, int, str | None]:
    """Offsets in seconds of a local minute as first and as second reading, and what is wrong with it."""
    try:
        local = (_EPOCH + timedelta(minutes=minute)).replace(tzinfo=zone)
        earlier, later = local.utcoffset(), local.replace(fold=1).utcoffset()
        back = local.astimezone(UTC).astimezone(zone).replace(tzinfo=None)
    except OverflowError:  # year 0 or 9999: no such local time
        return 0, 0, IMPOSSIBLE
    if earlier is None or later is None:
        return 0, 0, None
    sizes = round(earlier.total_seconds()), round(later.total_seconds())
    if earlier == later:
        return *sizes, None
    return *sizes, REPEATED_HOUR if back == local.replace(tzinfo=None) else MISSING_HOUR
