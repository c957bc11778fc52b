"""Times that are numbers: spreadsheet day counts, Unix time, decimal hours of a day, time since a session's start."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from niche.logs.clocks.durations import Lengths, numbers
from niche.logs.clocks.iso import read_iso
from niche.logs.clocks.written import DAY, IMPOSSIBLE, Written

NOT_A_NUMBER = "not a plain number, which `logs.clock.format` = {!r} declares"
DAY_ZERO = (
    "near day 0 of a spreadsheet, so the cell holds a time of day or a duration and has no date; put the date into the "
    "cell, or name its column as `logs.columns.date`"
)
NO_SESSION = "the session is not in the table that `logs.sessions.file` names, so its start is not known"
MILLISECONDS = 'so many seconds lead beyond the year 5000; set `logs.clock.format` to "unix_milliseconds"'
SECONDS = 'so few milliseconds lead to 1970; set `logs.clock.format` to "unix_seconds"'

# Serial 0. A spreadsheet of the epoch 1900 counts a 29 February 1900 that never was, so that from March 1900 on its day 0
# is 30 December 1899.
_DAY_0 = {1900: -25_569, 1904: -24_107}
_LAST_SERIAL = 2_958_465


def read_spreadsheet(text: Any, epoch: int, dates: Any = None) -> Written:
    """Read days since a spreadsheet's epoch, the fraction being the time of day by the local clock.

    Parameters
    ----------
    text : pyarrow string array, length n
    epoch : {1900, 1904}
    dates : pyarrow string array, optional
        Whole days, where a column of their own holds them; ``text`` is then the fraction.
    """
    value, fits = numbers(text)
    if dates is not None:
        days, dated = numbers(dates)
        value, fits = value + days, fits & dated
    written = Written.blank(len(fits), NOT_A_NUMBER.format("spreadsheet"))
    written.fits = fits
    written.problem[fits] = None
    written.problem[fits & ((value < 0) | (value > _LAST_SERIAL))] = IMPOSSIBLE
    written.problem[fits & (value >= 0) & (value < 61)] = DAY_ZERO
    fine = fits & (written.problem == None)  # noqa: E711 - elementwise
    written.ms = np.rint((np.where(fine, value, 0) + _DAY_0[epoch]) * DAY).astype(np.int64)
    written.seconds = bool((written.ms[fine] % 60_000 != 0).any())
    return written


def read_unix(text: Any, per_second: int) -> Written:
    """Read Unix time in seconds (``per_second`` = 1) or milliseconds (1000); it is UTC by definition."""
    value, fits = numbers(text)
    name = "unix_seconds" if per_second == 1 else "unix_milliseconds"
    written = Written.blank(len(fits), NOT_A_NUMBER.format(name))
    ms = value * (1000 // per_second)
    written.fits, written.has_offset, written.civil = fits, np.ones(len(fits), dtype=bool), False
    written.problem[fits] = None
    if per_second == 1:
        written.problem[fits & (np.abs(value) >= 1e11)] = MILLISECONDS
    else:
        written.problem[fits & (np.abs(value) > 0) & (np.abs(value) < 1e10)] = SECONDS
    written.problem[fits & (np.abs(ms) > 2.5e14) & (per_second != 1)] = IMPOSSIBLE
    fine = written.problem == None  # noqa: E711 - elementwise
    written.ms = np.rint(np.where(fine, ms, 0)).astype(np.int64)
    written.seconds = bool((written.ms[fine] % 60_000 != 0).any())
    return written


def read_decimal_hours(text: Any, dates: Any, decimal: str = ".") -> Written:
    """Read hours of a day as decimal numbers (7.5 is half past seven); ``dates`` are ISO 8601 dates."""
    value, fits = _decimal(text, decimal)
    day = read_iso(dates)
    written = Written.blank(len(fits), NOT_A_NUMBER.format("decimal_hours"))
    written.problem[fits & ~day.whole_day] = "the date is not an ISO 8601 date such as 2026-09-03"
    written.fits = fits & day.whole_day
    written.problem[written.fits] = None
    written.problem[written.fits & ((value < 0) | (value > 24))] = IMPOSSIBLE
    hours = np.where(written.problem == None, value, 0)  # noqa: E711 - elementwise
    written.ms = day.ms + np.rint(hours * 3_600_000).astype(np.int64)
    written.seconds = bool((written.ms[written.fits] % 60_000 != 0).any())
    return written


def _decimal(text: Any, decimal: str) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    import pyarrow.compute as pc

    return numbers(pc.replace_substring(text, ",", ".") if decimal == "," else text)


def elapsed(lengths: Lengths, starts: NDArray[np.int64], known: NDArray[np.bool_]) -> Written:
    """Instants from time since the start of a session.

    Parameters
    ----------
    lengths : Lengths
        Time since the start, one a row.
    starts : array of int64, shape (n,)
        Start of each row's session, in milliseconds since 1970-01-01T00:00Z.
    known : array of bool, shape (n,)
        Rows whose session has a known start.
    """
    written = Written.blank(len(starts), None)
    written.fits = lengths.fine & known
    written.has_offset, written.civil = np.ones(len(starts), dtype=bool), False
    written.problem = np.where(known | ~lengths.fine, lengths.problem, NO_SESSION)
    written.repair = lengths.repair.copy()
    written.ms = np.where(written.fits, starts + lengths.ms, 0)
    written.seconds = bool((lengths.ms[written.fits] % 60_000 != 0).any())
    return written
