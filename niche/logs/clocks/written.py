"""Times as a cell gives them: calendar and clock parts, before anything is said about their time zone."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

DAY = 86_400_000
NO_OFFSET = 100 * 60
"""Minutes of an offset that no place can have."""

Numbers = NDArray[np.int64]

_EXAMPLE = "write it like 2026-09-03T08:15:30+02:00"
UNREADABLE = f"not an ISO 8601 date and time; {_EXAMPLE}"
IMPOSSIBLE = "no such date or time of day"
END_OF_DAY = "24:00 read as 00:00 of the next day"
LEAP_SECOND = "leap second :60 read as :59"


@dataclass
class Written:
    """Times of a column as written, all arrays of length n.

    Attributes
    ----------
    ms : array of int64
        Milliseconds since 1970-01-01T00:00 by the clock that the cell shows.
    offset : array of int64
        Offset from UTC that the cell gives, in minutes; 0 where it gives none.
    has_offset : array of bool
    fits : array of bool
        Cells in the declared form, whether or not there is such a time.
    problem, repair : array of object
        In words, or None.
    whole_day : array of bool
        Cells that give a date alone, ``ms`` being its midnight; they do not fit.
    leap : array of bool
        Cells with second 60, ``ms`` being that of second 59.
    seconds : bool
        Whether any cell tells seconds.
    civil : bool
        False for times counted from a fixed moment, which know no date.
    """

    ms: Numbers
    offset: Numbers
    has_offset: NDArray[np.bool_]
    fits: NDArray[np.bool_]
    problem: NDArray[np.object_]
    repair: NDArray[np.object_]
    whole_day: NDArray[np.bool_]
    leap: NDArray[np.bool_]
    seconds: bool = False
    civil: bool = True

    @classmethod
    def blank(cls, length: int, problem: str | None = UNREADABLE) -> Written:
        """Cells of which none fits."""
        problems = np.full(length, problem, dtype=object)
        none, number = (np.zeros(length, dtype=kind) for kind in (bool, np.int64))
        repairs = np.full(length, None, dtype=object)
        return cls(number, number.copy(), none, none.copy(), problems, repairs, none.copy(), none.copy())

    def put(self, where: NDArray[np.bool_], other: Written) -> None:
        """Take over cells that were read apart; ``other`` has one for each True of ``where``."""
        for name in ("ms", "offset", "has_offset", "fits", "problem", "repair", "whole_day", "leap"):
            getattr(self, name)[where] = getattr(other, name)
        self.seconds |= other.seconds

    def mend_midnights(self, earlier: bool) -> None:
        """Read dates alone as their midnight, where they are few among full times: a spreadsheet hides 00:00.

        Parameters
        ----------
        earlier : bool
            Whether full times came before in the same file.
        """
        few = 2 * int(self.whole_day.sum()) <= int(self.fits.sum()) or (earlier and not self.fits.any())
        if few and self.whole_day.any():
            self.repair[self.whole_day] = MIDNIGHT
            self.problem[self.whole_day] = None
            self.fits |= self.whole_day


MIDNIGHT = "a date alone among dates with times: read as its midnight, 00:00, which spreadsheets hide"


def from_parts(found: Any) -> Written:
    """Times from the groups of a regular expression.

    Parameters
    ----------
    found : pyarrow struct array
        Fields out of year, short_year, month, day, ordinal, week, weekday, hour, half_hour, half, minute, second, fraction,
        offset; null where the expression does not fit.
    """
    fits = np.array(pc.is_valid(found), dtype=bool)
    days, real = _days(found)
    hour, minute, second = (integers(found, name) for name in ("hour", "minute", "second"))
    if has(found, "half_hour"):
        twelfth = integers(found, "half_hour")
        real &= (twelfth >= 1) & (twelfth <= 12)
        afternoon = np.asarray(pc.equal(pc.utf8_lower(text_of(found, "half")), "pm"))
        hour = twelfth % 12 + 12 * afternoon
    milli = pc.utf8_slice_codeunits(pc.utf8_rpad(text_of(found, "fraction"), 3, "0"), 0, 3)
    clock = hour, minute, second, np.array(pc.cast(milli, pa.int64()), dtype=np.int64)
    written = assembled(fits, (days, real), clock, _offsets(found))
    written.seconds = bool(
        has(found, "second") and (np.asarray(pc.not_equal(text_of(found, "second"), "")) & fits).any()
    )
    return written


def assembled(
    fits: NDArray[np.bool_],
    date: tuple[Numbers, NDArray[np.bool_]],
    clock: tuple[Numbers, Numbers, Numbers, Numbers],
    zone: tuple[Numbers, NDArray[np.bool_]],
) -> Written:
    """Times from numbers.

    Parameters
    ----------
    fits : array of bool, shape (n,)
        Cells in the form; whatever the other parts say of other cells counts for nothing.
    date : tuple
        Days since 1970-01-01, and whether there is such a date.
    clock : tuple
        Hour, minute, second, millisecond.
    zone : tuple
        Offset from UTC in minutes, and whether the cell gives one.
    """
    written = Written.blank(len(fits))
    (days, real), (hour, minute, second, milli) = date, clock
    end_of_day = (hour == 24) & (minute == 0) & (second == 0) & (milli == 0)
    leap = fits & (second == 60)
    second = np.where(leap, 59, second)
    real = real & (minute <= 59) & (second <= 59) & ((hour <= 23) | end_of_day) & (np.abs(zone[0]) <= 18 * 60)
    written.fits, written.leap = fits, leap
    written.ms = days * DAY + ((hour * 60 + minute) * 60 + second) * 1000 + milli
    written.offset, written.has_offset = zone
    written.problem[fits & real] = None
    written.problem[fits & ~real] = IMPOSSIBLE
    written.repair[fits & end_of_day] = END_OF_DAY
    written.repair[leap] = LEAP_SECOND
    return written


def _days(found: Any) -> tuple[Numbers, NDArray[np.bool_]]:
    """Days since 1970-01-01, and whether there is such a date."""
    year = integers(found, "year")
    if has(found, "short_year"):
        short = integers(found, "short_year")
        year = short + np.where(short >= 69, 1900, 2000)
    january = _day_number((year - 1970) * 12)
    if has(found, "ordinal"):
        ordinal = integers(found, "ordinal")
        return january + ordinal - 1, (ordinal >= 1) & (ordinal <= _day_number((year - 1969) * 12) - january)
    if has(found, "week"):
        # Week 1 is the week, Monday to Sunday, that holds 4 January; 1970-01-01 was a Thursday.
        week, weekday = integers(found, "week"), integers(found, "weekday")
        days = january + 3 - (january + 6) % 7 + (week - 1) * 7 + weekday - 1
        thursday = (days - weekday + 4).astype("datetime64[D]").astype("datetime64[Y]").astype(np.int64) + 1970
        return days, (week >= 1) & (weekday >= 1) & (weekday <= 7) & (thursday == year)
    return calendar_days(year, integers(found, "month"), integers(found, "day"))


def calendar_days(year: Numbers, month: Numbers, day: Numbers) -> tuple[Numbers, NDArray[np.bool_]]:
    """Days since 1970-01-01, and whether there is such a date."""
    months = (year - 1970) * 12 + month - 1
    days = _day_number(months) + day - 1
    real = (month >= 1) & (month <= 12) & (day >= 1) & (days < _day_number(months + 1))
    return days, real


def _day_number(months: Numbers) -> Numbers:
    """First day of a month, both counted from January 1970."""
    return months.astype("datetime64[M]").astype("datetime64[D]").astype(np.int64)


def _offsets(found: Any) -> tuple[Numbers, NDArray[np.bool_]]:
    """Written offsets in minutes, and whether there is one. Few differ, so each is read once."""
    coded = pc.dictionary_encode(text_of(found, "offset"))
    minutes = []
    for text in coded.dictionary.to_pylist():
        digits = text[1:].replace(":", "").ljust(4, "0")
        size = int(digits[:2]) * 60 + int(digits[2:]) if text not in ("", "Z") else 0
        if text not in ("", "Z") and int(digits[2:]) > 59:
            size = NO_OFFSET
        minutes.append(-size if text.startswith("-") else size)
    index = np.asarray(coded.indices)
    names = np.array(coded.dictionary.to_pylist(), dtype=object)
    return np.array(minutes, dtype=np.int64)[index], (names != "")[index].astype(bool)


def has(found: Any, name: str) -> bool:
    """Whether the expression has a group of this name."""
    return bool(found.type.get_field_index(name) >= 0)


def text_of(found: Any, name: str) -> Any:
    """A group as text, empty where it is absent."""
    if not has(found, name):
        return pa.array([""] * len(found), type=pa.string())
    return pc.fill_null(pc.struct_field(found, name), "")


def integers(found: Any, name: str) -> Numbers:
    """A group of digits as integers; 0 where the group is absent."""
    if not has(found, name):
        return np.zeros(len(found), dtype=np.int64)
    digits = text_of(found, name)
    return np.array(pc.cast(pc.if_else(pc.equal(digits, ""), "0", digits), pa.int64()), dtype=np.int64)
