"""Durations to whole milliseconds: plain numbers in a declared unit, parts with colons, ISO 8601 ``PT1H30M`` and ``P2W``."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.clocks.written import DAY, from_parts

UNIT_MS = {"s": 1000, "min": 60_000, "h": 3_600_000, "d": DAY}
LONGEST = 100 * 366 * DAY
"""A century: a longer duration is a slip of the pen."""

_COLONS = {
    "h:m:s": r"^(?P<h>\d{1,6}):(?P<min>[0-5]\d):(?P<s>[0-5]\d(?:\.\d+)?)$",
    "h:m": r"^(?P<h>\d{1,6}):(?P<min>[0-5]\d)(?::00)?$",
    "m:s": r"^(?P<min>\d{1,6}):(?P<s>[0-5]\d(?:\.\d+)?)$",
}
_N = r"\d{1,15}(?:[.,]\d+)?"
_ISO = rf"^P(?:(?P<w>{_N})W|(?:(?P<d>{_N})D)?(?:T(?:(?P<h>{_N})H)?(?:(?P<min>{_N})M)?(?:(?P<s>{_N})S)?)?)$"
_ISO_MS = {"w": 7 * DAY, **UNIT_MS}
_DATED = (
    r"^(?P<year>\d{4})-(?P<month>\d{2})-(?P<day>\d{2})"
    r"(?:[T ](?P<hour>\d{2}):(?P<minute>\d{2})(?::(?P<second>\d{2})(?:\.(?P<fraction>\d+))?)?)?$"
)

NEGATIVE = "a duration is not negative"
NO_FIXED_LENGTH = "years and months have no fixed length; write days, hours, minutes or seconds, such as P3D or PT1H30M"
LOWEST_ONLY = "only the lowest part of an ISO 8601 duration may have a decimal"
NOT_ISO = "not an ISO 8601 duration such as PT1H30M, PT42.5S or P2W"
TWO_PARTS = 'two parts could be hours and minutes or minutes and seconds; set `logs.duration_unit` to "h:m" or "m:s"'
THREE_PARTS = 'hours, minutes and seconds; set `logs.duration_unit` to "h:m:s", which then holds for every row'
DECIMAL_COMMA = 'a decimal comma; set `logs.file.decimal` to ","'
HOURS_OR_PARTS = (
    'decimal hours, or hours and minutes with a point? For decimal hours set `logs.duration_unit` to "h"; else write '
    "hours and minutes like 7:30"
)


@dataclass(frozen=True)
class Lengths:
    """Durations read: milliseconds, and for each cell the problem (None if none) and any repair."""

    ms: NDArray[np.int64]
    problem: NDArray[np.object_]
    repair: NDArray[np.object_]

    @property
    def fine(self) -> NDArray[np.bool_]:
        """Cells without a problem."""
        return np.asarray(self.problem == None, dtype=bool)  # noqa: E711 - elementwise


def read_durations(
    text: Any, unit: str, *, frames_per_second: float | None = None, decimal: str = ".", epoch: int = 1900
) -> Lengths:
    """Read durations.

    Parameters
    ----------
    text : pyarrow string array, length n
        A blank cell comes back with a problem.
    unit : {"s", "min", "h", "d", "h:m:s", "h:m", "m:s", "frames"}
        What a plain number or parts with colons mean. ISO 8601 durations say it themselves.
    frames_per_second : float, optional
        Needed for frames.
    decimal : {".", ","}
    epoch : {1900, 1904}
        Of the spreadsheet, for durations that it shows as a date.

    Returns
    -------
    Lengths
        Within 0 and a century; anything else is a problem.
    """
    text = pc.utf8_trim_whitespace(text)
    plain = pc.replace_substring(text, ",", ".") if decimal == "," else text
    count = len(text)
    problem, repair = np.full(count, None, dtype=object), np.full(count, None, dtype=object)
    if unit in _COLONS:
        length, fits = _parts(plain, _COLONS[unit], UNIT_MS)
    else:
        step = 1000 / frames_per_second if unit == "frames" and frames_per_second else UNIT_MS.get(unit, 0)
        length, fits = numbers(plain)
        length *= step
    left = np.flatnonzero(~fits)
    if left.size:
        rest = pc.take(text, pa.array(left))
        length[left], problem[left], repair[left] = _others(rest, unit, decimal, epoch)
    problem[(problem == None) & (length < 0)] = NEGATIVE  # noqa: E711 - elementwise
    problem[(problem == None) & (length > LONGEST)] = f"longer than a century; is the unit {unit!r} right?"  # noqa: E711
    fine = problem == None  # noqa: E711
    return Lengths(np.rint(np.where(fine, length, 0)).astype(np.int64), problem, repair)


def numbers(text: Any) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """Plain numbers with a decimal point, and which cells are such; 0 elsewhere."""
    fits = np.array(pc.match_substring_regex(text, r"^-?\d{1,15}(\.\d+)?$"), dtype=bool)
    value = pc.cast(pc.if_else(pa.array(fits), text, "0"), pa.float64())
    return np.array(value, dtype=np.float64), fits


def _parts(text: Any, pattern: str, worth: dict[str, int]) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """Sum of the named groups, each times what one of it is worth."""
    found = pc.extract_regex(text, pattern)
    fits = np.array(pc.is_valid(found), dtype=bool)
    total = np.zeros(len(fits))
    for name, ms in worth.items():
        if found.type.get_field_index(name) >= 0:
            group = pc.fill_null(pc.struct_field(found, name), "")
            group = pc.if_else(pc.equal(group, ""), "0", pc.replace_substring(group, ",", "."))
            total += np.asarray(pc.cast(group, pa.float64())) * ms
    return total, fits


def _others(
    text: Any, unit: str, decimal: str, epoch: int
) -> tuple[NDArray[np.float64], NDArray[np.object_], NDArray[np.object_]]:
    """Cells that are not in the declared unit: ISO 8601, spreadsheet dates, and what is wrong with the rest."""
    length, iso = _parts(text, _ISO, _ISO_MS)
    iso &= np.asarray(pc.match_substring_regex(text, r"\d[WDHMS]$"))

    def like(pattern: str) -> NDArray[np.bool_]:
        return np.asarray(pc.match_substring_regex(text, pattern), dtype=bool)

    problem = np.full(len(text), _plain_words(unit), dtype=object)
    if unit not in _COLONS:
        problem[like(r"^\d+:\d\d$")] = TWO_PARTS
        problem[like(r"^\d+:\d\d:\d\d([.,]\d+)?$")] = THREE_PARTS
    else:
        problem[like(r"^\d+[.,]\d+$")] = HOURS_OR_PARTS if unit == "h:m" else _plain_words(unit)
        problem[like(r"^\d+:\d\d$")] = TWO_PARTS if unit == "h:m:s" else _plain_words(unit)
        problem[like(r"^\d+:\d\d:\d\d([.,]\d+)?$")] = _plain_words(unit) if unit == "h:m:s" else THREE_PARTS
    problem[like(r"^-?\d+,\d+$") & (decimal == ".") & (unit not in _COLONS)] = DECIMAL_COMMA
    problem[like(r"^-(P|\d+:\d\d)")] = NEGATIVE
    problem[like(r"^P")] = NOT_ISO
    problem[like(r"^P(\d+([.,]\d+)?Y)?(\d+([.,]\d+)?M)?(\d+([.,]\d+)?D)?(T.*)?$") & like(r"^P[^T]*[YM]")] = (
        NO_FIXED_LENGTH
    )
    problem[iso] = None
    problem[iso & like(r"[.,]\d+[DHM]T?\d")] = LOWEST_ONLY
    dated, there = _spreadsheet_dates(text, epoch)
    repair = np.full(len(text), None, dtype=object)
    if there.any():
        length = np.where(there, dated, length)
        problem[there] = None
        for position in np.flatnonzero(there):
            repair[position] = (
                f"a spreadsheet showed this duration as a date: read as {hours_text(int(dated[position]))}"
            )
    return length, problem, repair


def _spreadsheet_dates(text: Any, epoch: int) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """Durations that a spreadsheet shows as a date near its day 0.

    With the epoch 1900 two ways of counting meet: 1 January is day 1, or 30 December 1899 is day 0. Dates in 1899 occur in
    the second way only, so they decide for the column.
    """
    found = from_parts(pc.extract_regex(text, _DATED))
    fits = found.fits & (found.problem == None)  # noqa: E711 - elementwise
    day_0 = _day("1904-01-01") if epoch == 1904 else _day("1899-12-31")
    if epoch == 1900 and (fits & (found.ms < _day("1900-01-01"))).any():
        day_0 = _day("1899-12-30")
    there = fits & (found.ms >= day_0) & (found.ms < day_0 + 60 * DAY)
    return (found.ms - day_0).astype(np.float64), there


def _day(text: str) -> int:
    return int(np.datetime64(text, "ms").astype(np.int64))


def hours_text(ms: int) -> str:
    """Hours, minutes, seconds, as H:MM:SS."""
    seconds = ms // 1000
    return f"{seconds // 3600}:{seconds // 60 % 60:02d}:{seconds % 60:02d}"


def _plain_words(unit: str) -> str:
    example = {"h:m:s": "0:42:30", "h:m": "0:42", "m:s": "42:30"}.get(unit)
    if example is None:
        return "not a plain number, such as 42 or 42.5"
    return f"not in the form {unit} that `logs.duration_unit` declares, such as {example}"
