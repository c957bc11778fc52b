"""What a cell that cannot be read looks like, and which key of the study would declare it.

Nothing here reads a time: it only words the question that a person must answer, from all cells of a column together.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

_DATE = r"(?P<a>\d{1,4})(?P<sign>[./-])(?P<b>\d{1,2})(?P=sign)(?P<c>\d{1,4})"
_SECOND = r"(?:(?P=colon)(?P<second>\d{2})(?P<fraction>\.\d+)?)?"
_TIME = rf"(?P<hour>\d{{1,2}})(?P<colon>[:.])(?P<minute>\d{{2}}){_SECOND}(?P<half>\s?[AaPp][Mm])?"
_SHAPE = re.compile(rf"\s*{_DATE}(?:(?P<gap>[T ])\s*{_TIME})?\s*")
_TIME_ALONE = re.compile(rf"\s*{_TIME}\s*")
_NUMBER = re.compile(r"\s*\d+(?:\.\d+)?\s*")
_DECIMAL_TIME = re.compile(r"\s*(?P<date>\S+[T ])?(?P<hour>\d{1,2})[.,](?P<minute>\d{1,6})\s*")

AMBIGUOUS = "day and month ambiguous"
MIXED_ORDERS = "mixed date orders"
NOT_DECLARED = "form of time not declared"
HALF_DAY = "12-hour clock without AM or PM"


@dataclass(frozen=True)
class Question:
    """Kind of problem, and what to do about it."""

    reason: str
    advice: str


def questions(cells: Sequence[str], rows: Sequence[int], *, dated: bool) -> dict[str, Question]:
    """Questions about cells that are not ISO 8601, by the cell.

    Parameters
    ----------
    cells : sequence of str
        Cells that could not be read.
    rows : sequence of int
        Their rows, for the messages.
    dated : bool
        Whether the study names a column of dates, so that a cell here is the date and the time of day together.

    Returns
    -------
    dict
        Only for cells that look like some other way to write a time.
    """
    asked: dict[str, Question] = {}
    shapes = {cell: found for cell in dict.fromkeys(cells) if (found := _SHAPE.fullmatch(cell))}
    order = _order(cells, rows, shapes)
    for cell in dict.fromkeys(cells):
        found = shapes.get(cell)
        question = _by_shape(found, order, dated) if found is not None else _by_other_signs(cell, dated)
        if question is not None:
            asked[cell] = question
    decimal = [_DECIMAL_TIME.fullmatch(cell) for cell in dict.fromkeys(cells)] if dated else []
    if any(decimal):
        asked |= _hours_with_a_point([found for found in decimal if found], asked)
    return asked


@dataclass(frozen=True)
class _Order:
    """Evidence on the order of day and month: rows where only one of the two can be."""

    day_first: tuple[int, ...]
    month_first: tuple[int, ...]


def _order(cells: Sequence[str], rows: Sequence[int], shapes: dict[str, re.Match[str]]) -> _Order:
    day_first, month_first = [], []
    for cell, row in zip(cells, rows, strict=True):
        found = shapes.get(cell)
        if found is not None and len(found["a"]) <= 2:
            if int(found["a"]) > 12:
                day_first.append(row)
            elif int(found["b"]) > 12:
                month_first.append(row)
    return _Order(tuple(day_first), tuple(month_first))


def _by_shape(found: re.Match[str], order: _Order, dated: bool) -> Question | None:
    """Question about a date of three numbers with or without a time of day."""
    if found["hour"] is None:
        if len(found["a"]) > 2:
            return None
        clock = " %H:%M" if dated else ""
    else:
        parts = ["%I" if found["half"] else "%H", "%M", *(["%S"] if found["second"] else [])]
        half = "" if not found["half"] else " %p" if found["half"][0].isspace() else "%p"
        clock = (
            (" " if dated else found["gap"]) + found["colon"].join(parts) + (".%f" if found["fraction"] else "") + half
        )
    sign, year = found["sign"], "%Y" if len(found["c"]) == 4 else "%y"
    if len(found["a"]) > 2:
        if dated and found["colon"] == ".":  # decimal hours, perhaps
            return None
        return Question(NOT_DECLARED, f'set `logs.clock.format` to "%Y{sign}%m{sign}%d{clock}"')
    day_first, month_first = f"%d{sign}%m{sign}{year}{clock}", f"%m{sign}%d{sign}{year}{clock}"
    if order.day_first and order.month_first:
        return Question(
            MIXED_ORDERS,
            f"{listed(order.day_first)} can only be day first and {listed(order.month_first)} only month first; one form "
            "holds for a whole file, so write all its dates one way",
        )
    if order.day_first or order.month_first:
        seen, pattern = (order.day_first, day_first) if order.day_first else (order.month_first, month_first)
        word = "day" if order.day_first else "month"
        return Question(NOT_DECLARED, f'{word} first, as {listed(seen)} shows; set `logs.clock.format` to "{pattern}"')
    return Question(
        AMBIGUOUS,
        f'day first or month first? Every date has both parts at most 12. Set `logs.clock.format` to "{day_first}" or '
        f'"{month_first}"',
    )


def _by_other_signs(cell: str, dated: bool) -> Question | None:
    """Question about a number, or a time of day alone."""
    if _TIME_ALONE.fullmatch(cell) and not _NUMBER.fullmatch(cell) and not dated:
        return Question(
            NOT_DECLARED, "a time of day without its date; name the column of the date as `logs.columns.date`"
        )
    if not _NUMBER.fullmatch(cell):
        return None
    value = float(cell)
    if 20_000 <= value < 60_000:
        return Question(
            NOT_DECLARED,
            'looks like a spreadsheet\'s count of days; set `logs.clock.format` to "spreadsheet", and '
            "`logs.clock.epoch` to 1904 if the workbook counts from 1904",
        )
    if 1e8 <= value < 1e11 or 1e11 <= value < 1e14:
        unit = "seconds" if value < 1e11 else "milliseconds"
        return Question(NOT_DECLARED, f'looks like Unix time in {unit}; set `logs.clock.format` to "unix_{unit}"')
    if value < 20_000:
        return Question(
            NOT_DECLARED,
            'a plain number; if it is time since the start of the session, set `logs.clock.format` to "elapsed" (or '
            '"frames") and `logs.duration_unit` to its unit',
        )
    return None


def _hours_with_a_point(found: list[re.Match[str]], asked: dict[str, Question]) -> dict[str, Question]:
    """Questions about 7.30, which is half past seven or 7 h 18 min."""
    proven = any(len(cell["minute"]) != 2 or int(cell["minute"]) >= 60 for cell in found)
    if proven:
        advice = (
            'decimal hours, for not all values could be hours and minutes; set `logs.clock.format` to "decimal_hours"'
        )
    else:
        advice = (
            'hours and minutes with a point, or decimal hours? Set `logs.clock.format` to "%Y-%m-%d %H.%M" or to '
            '"decimal_hours"'
        )
    return {cell.string: Question(NOT_DECLARED, advice) for cell in found if cell.string not in asked}


def listed(rows: Iterable[int], most: int = 5) -> str:
    """Rows in words: ``row 3``, ``rows 3, 7``, or the first few and how many more."""
    numbers = list(rows)
    shown = ", ".join(map(str, numbers[:most]))
    more = f" and {len(numbers) - most} more" if len(numbers) > most else ""
    return f"row{'s' * (len(numbers) != 1)} {shown}{more}"
