"""What workbooks share: rows of typed cells to pieces, with what is hidden, merged or coloured said once a file."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from datetime import date, datetime, time, timedelta
from itertools import chain, islice
from typing import Any

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.formats import counting
from niche.logs.formats.csv_text import PIECE_CELLS, PIECE_ROWS
from niche.logs.formats.heading import Heading, find_heading, rows_needed
from niche.logs.formats.inspector import Inspector
from niche.logs.formats.typed import EarlyDate, cell_text, hours_minutes_seconds
from niche.logs.formats.wanted import Wanted
from niche.logs.pieces import Piece

BLANK_ROWS = 10_000
"""Most blank rows in a run: below more of them stands a stray cell, not the log."""
COLUMNS_LIMIT = 16_384
CELLS_LIMIT = 200_000_000

_MIDNIGHT = time()


@dataclass
class Facts:
    """What a look at the sheet's markup tells, taken without the reader.

    ``merged`` holds (first row, last row, first column, last column), counted from 1 and 0; ``uncached`` the rows with
    a formula whose result is not stored.
    """

    filled: int = 0
    last: int = 0
    hidden: list[int] = field(default_factory=list)
    merged: list[tuple[int, int, int, int]] = field(default_factory=list)
    uncached: set[int] = field(default_factory=set)


@dataclass(frozen=True)
class SheetRow:
    """A row as a spreadsheet shows it; ``coloured`` if one of its cells has a colour of its own.

    Blank rows may come as one, with how many ``times`` they stand there.
    """

    number: int
    cells: list[Any]
    coloured: bool = False
    times: int = 1

    @property
    def filled(self) -> bool:
        """Whether any cell has a value."""
        return any(cell is not None for cell in self.cells)


def choose_sheet(sheets: Sequence[tuple[str, bool, bool]], wanted: Wanted) -> str:
    """Name of the sheet to read, of (name, whether hidden, whether it has any cell).

    Raises
    ------
    LogError
        The study names none of several, or one that is not there.
    """
    listed = ", ".join(repr(name) + (" (hidden)" if hidden else "") for name, hidden, _ in sheets)
    declared = wanted.form.sheet
    if declared is not None:
        if declared not in [name for name, _, _ in sheets]:
            raise LogError(f"{wanted.name}: no sheet {declared!r}, which `logs.file.sheet` names. Sheets: {listed}.")
        return declared
    used = [name for name, _, filled in sheets if filled] or [name for name, _, _ in sheets[:1]]
    if not used:
        raise LogError(f"{wanted.name}: the workbook has no sheet with cells.")
    if len(used) > 1:
        raise LogError(f"{wanted.name}: several sheets: {listed}. Set `logs.file.sheet` to the one that is the log.")
    return used[0]


def sheet_pieces(
    rows: Iterator[SheetRow], facts: Facts, wanted: Wanted, piece_rows: int = PIECE_ROWS
) -> Iterator[Piece]:
    """Pieces of a sheet.

    Raises
    ------
    LogError
        The sheet was cut off at the last row that a spreadsheet has, its header is unclear, or the reading is short.
    """
    if facts.last >= counting.SHEET_ROWS:
        raise LogError(
            f"{wanted.name}: filled to row {facts.last}, the last of a spreadsheet: the rest was cut off on the way. "
            "Split the log into several sheets or files where it was made."
        )
    counted = _Counted(rows, wanted)
    top = counted.take(rows_needed(wanted))
    heading, taken = find_heading([(row.number, _texts(row.cells)) for row in top], wanted)
    sheet = _Sheet(wanted, heading, facts)
    inspector = Inspector(wanted, heading)
    limit = max(1, min(piece_rows, PIECE_CELLS // heading.width))
    begun = False
    for row in chain(top[taken:], counted):
        sheet.add(row)
        if len(sheet.rows) >= limit:
            yield inspector.inspect(*sheet.take())
            begun = True
    if sheet.rows or not begun:
        yield inspector.inspect(*sheet.take())
    if counted.filled != facts.filled:
        raise LogError(
            f"{wanted.name}: {counted.filled} filled rows read and {facts.filled} counted in the sheet: the reading was "
            "cut short. Nothing was computed from it."
        )
    sheet.finish()
    inspector.finish()


class _Counted:
    """Rows down to the last filled one, with the blank rows between them; counts the filled ones."""

    def __init__(self, rows: Iterator[SheetRow], wanted: Wanted) -> None:
        self.filled = 0
        self._rows = self._bounded(rows, wanted)

    def __iter__(self) -> Iterator[SheetRow]:
        return self._rows

    def take(self, most: int) -> list[SheetRow]:
        return list(islice(self._rows, most))

    def _bounded(self, rows: Iterator[SheetRow], wanted: Wanted) -> Iterator[SheetRow]:
        blank: list[SheetRow] = []
        run = 0
        for row in rows:
            if not row.filled:
                run += row.times
                if run <= BLANK_ROWS:
                    blank += [SheetRow(row.number + i, []) for i in range(row.times)]
                continue
            if run > BLANK_ROWS:
                raise LogError(
                    f"{wanted.name}: row {row.number}: {run} blank rows above it. Delete what stands below the log."
                )
            self.filled += 1
            yield from blank
            yield row
            blank, run = [], 0


class _Sheet:
    """Typed rows under a known header, to columns of text; rows that cannot be taken as they stand go to the ledger."""

    def __init__(self, wanted: Wanted, heading: Heading, facts: Facts) -> None:
        self.wanted, self.heading, self.facts = wanted, heading, facts
        self.rows: list[int] = []
        self.cells: list[list[str]] = []
        self._durations = {i for i, name in enumerate(heading.names) if wanted.field_of(name) == "duration"}
        self._ids = {i for i, name in enumerate(heading.names) if wanted.field_of(name) in ("tag", "animal")}
        last_header = max(heading.rows)
        self._last_header = last_header
        self._merged: dict[int, str] = {}
        for first, last, left, right in facts.merged:
            if last > last_header and left < heading.width and last - first < counting.SHEET_ROWS:
                start = max(first + (left == right), last_header + 1)
                for row in range(start, min(last, facts.last) + 1):
                    self._merged[row] = f"rows {first} to {last}, columns {left + 1} to {right + 1}"
        self._coloured: list[int] = []
        self._colours = 0

    def add(self, row: SheetRow) -> None:
        """Take a row, or account for it."""
        width = self.heading.width
        if row.number in self._merged:
            problem = (
                f"a cell of it is merged ({self._merged[row.number]}), so it does not say what stands in each row; "
                "unmerge the cells and write the value into every row that it is meant for"
            )
            self._drop(row, "merged cells", problem)
            return
        if row.number in self.facts.uncached:
            problem = "a formula without a stored result; open the file in a spreadsheet program and save it"
            self._drop(row, "formula without result", problem)
            return
        if any(cell is not None for cell in row.cells[width:]):
            problem = f"a cell is filled to the right of the {width} columns that the header names"
            self._drop(row, "wrong number of cells", problem)
            return
        if row.coloured:
            self._colours += 1
            self._coloured = self._coloured or [row.number]
        texts, wrong = self._texts(row)
        if wrong is not None:
            self._drop(row, *wrong)
            return
        self.rows.append(row.number)
        self.cells.append(texts)

    def take(self) -> tuple[np.ndarray[tuple[int], np.dtype[np.int64]], list[Any]]:
        """What was gathered, as row numbers and columns; nothing is left afterwards."""
        columns = zip(*self.cells, strict=True) if self.cells else ([] for _ in range(self.heading.width))
        taken = np.array(self.rows, dtype=np.int64), [pa.array(cells, type=pa.string()) for cells in columns]
        self.rows, self.cells = [], []
        return taken

    def finish(self) -> None:
        """Say what of the sheet's looks was not read."""
        hidden = [row for row in self.facts.hidden if self._last_header < row <= self.facts.last]
        if hidden:
            problem = f"{len(hidden)} hidden rows are read like the others; delete them if they are not meant to count"
            self.wanted.note(hidden[0], "", "hidden rows", problem)
        if self._colours:
            problem = f"{self._colours} rows have coloured cells; colour is never read as data: write it in a column"
            self.wanted.note(self._coloured[0], "", "coloured cells", problem)

    def _drop(self, row: SheetRow, reason: str, problem: str) -> None:
        self.wanted.drop(row.number, ", ".join(filter(None, _texts(row.cells))), reason, problem, "stop")

    def _texts(self, row: SheetRow) -> tuple[list[str], tuple[str, str] | None]:
        """Text of each cell by its column, and what stops the row."""
        texts = [""] * self.heading.width
        problem: tuple[str, str] | None = None
        for i, cell in enumerate(row.cells[: self.heading.width]):
            if cell is None:
                continue
            if isinstance(cell, str):
                texts[i] = cell
            elif isinstance(cell, EarlyDate):
                texts[i] = hours_minutes_seconds(cell.since)
                if i in self._durations:
                    told = f"a duration kept as a date; read as {texts[i]} (h:m:s)"
                    self.wanted.note(row.number, texts[i], "duration as a date", told, "repaired", "duration")
                else:
                    told = f"column {self.heading.names[i]!r}: a date of a spreadsheet's first days; give it its date"
                    problem = "duration as a date", told
            elif i in self._durations and isinstance(cell, time):
                texts[i] = hours_minutes_seconds(_since_midnight(cell))
            elif i in self._ids and isinstance(cell, (int, float)) and abs(cell) >= 1e15:
                texts[i] = cell_text(cell)
                told = f"{self.heading.names[i]!r} is a number of more than 15 digits, of which a spreadsheet keeps 15"
                problem = "id turned into a number", f"{told}; export again with the column as text"
            else:
                texts[i] = cell_text(cell)
        return texts, problem


def _texts(cells: Sequence[Any]) -> list[str]:
    """Text of cells whose columns are not known yet."""
    return [hours_minutes_seconds(c.since) if isinstance(c, EarlyDate) else cell_text(c) for c in cells]


def _since_midnight(clock: time) -> timedelta:
    return timedelta(hours=clock.hour, minutes=clock.minute, seconds=clock.second, microseconds=clock.microsecond)


def as_date(moment: datetime, shows_time: bool) -> date | datetime:
    """A date where the cell shows no time and has none; midnight is kept where the cell shows the time."""
    return moment.date() if not shows_time and moment.time() == _MIDNIGHT else moment
