"""XLSX workbooks (ECMA-376): typed cells by openpyxl, and a look at the sheet's markup for what openpyxl passes over."""

from __future__ import annotations

import re
import warnings
import zipfile
from collections.abc import Iterator
from contextlib import closing
from datetime import date, datetime, timedelta
from itertools import islice
from pathlib import Path
from typing import Any
from xml.parsers import expat

from niche.errors import LogError, NicheError
from niche.logs.formats.counting import SHEET_ROWS
from niche.logs.formats.csv_text import PIECE_ROWS
from niche.logs.formats.sheets import CELLS_LIMIT, Facts, SheetRow, as_date, choose_sheet, sheet_pieces
from niche.logs.formats.typed import EarlyDate
from niche.logs.formats.wanted import Wanted
from niche.logs.formats.zip_guard import open_zip, readable
from niche.logs.pieces import Piece

_ROWS_AT_ONCE = 1000
_CELL = re.compile(rb"<(\w+:)?c[\s/>]")
_LITERAL = re.compile(r'"[^"]*"|\[[^\]]*\]|\\.')
_COORDINATE = re.compile(r"([A-Z]{1,3})(\d+)")


def read_xlsx(path: Path, wanted: Wanted, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a sheet of a workbook: values as stored, never formulas; dates by the workbook's own epoch.

    Raises
    ------
    LogError
        The workbook cannot be read or is out of bounds, or something must be declared.
    NicheError
        openpyxl is not installed.
    """
    try:
        import openpyxl  # type: ignore[import-untyped]
    except ImportError:
        raise NicheError(f"{wanted.name}: reading XLSX needs openpyxl, which is not installed; install it.") from None
    with open_zip(path, wanted.name) as archive:
        with readable(wanted.name), warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about looks that are not kept
            workbook = openpyxl.load_workbook(path, read_only=True, data_only=True, keep_links=False)
        with closing(workbook):
            with readable(wanted.name):
                sheets = {sheet.title: sheet for sheet in workbook.worksheets}
                listed = [
                    (title, sheet.sheet_state != "visible", _has_cells(archive, sheet._worksheet_path))
                    for title, sheet in sheets.items()
                ]
            sheet = sheets[choose_sheet(listed, wanted)]
            with readable(wanted.name):
                facts = _facts(archive, sheet._worksheet_path, wanted)
            yield from sheet_pieces(_rows(workbook, sheet, wanted), facts, wanted, piece_rows)


def _rows(workbook: Any, sheet: Any, wanted: Wanted) -> Iterator[SheetRow]:
    sheet.reset_dimensions()  # what the file says of its size may be wrong
    rows = enumerate(sheet.iter_rows(min_row=1, max_row=SHEET_ROWS), 1)
    looks = _Looks(workbook)
    while True:
        with readable(wanted.name), warnings.catch_warnings():
            warnings.simplefilter("ignore")  # about dates outside the calendar, which come as error values
            some = [looks.row(number, cells) for number, cells in islice(rows, _ROWS_AT_ONCE)]
        if not some:
            return
        yield from some


class _Looks:
    """Values of cells by the way they are shown; each style is looked up once."""

    def __init__(self, workbook: Any) -> None:
        self._styles, self._fills = workbook._cell_styles, workbook._fills
        self._epoch: datetime = workbook.epoch
        self._known: dict[int, tuple[bool, bool]] = {}

    def row(self, number: int, cells: tuple[Any, ...]) -> SheetRow:
        values, coloured = [], False
        for cell in cells:
            value = cell.value
            style = getattr(cell, "_style_id", 0)
            if style or isinstance(value, date):
                if style not in self._known:
                    self._known[style] = self._look(cell, style)
                shows_time, has_colour = self._known[style]
                coloured |= has_colour
                if isinstance(value, datetime):
                    value = self._moment(value, shows_time)
            values.append(value)
        return SheetRow(number, values, coloured)

    def _look(self, cell: Any, style: int) -> tuple[bool, bool]:
        """Whether cells of a style show a time of day, and whether they have a colour."""
        shown = _LITERAL.sub("", cell.number_format or "").lower()
        fill = self._fills[self._styles[style].fillId]
        return "h" in shown or "ss" in shown, getattr(fill, "fill_type", None) not in (None, "none")

    def _moment(self, value: datetime, shows_time: bool) -> date | datetime | EarlyDate:
        from openpyxl.utils.datetime import to_excel  # type: ignore[import-untyped]

        if value.year <= self._epoch.year + (self._epoch.month == 12):  # the calendar's first days
            days = float(to_excel(value, self._epoch))
            return EarlyDate(timedelta(milliseconds=round(days * 86_400_000)))
        return as_date(value, shows_time)


def _has_cells(archive: zipfile.ZipFile, part: str) -> bool:
    """Whether a sheet has any cell, by its markup."""
    with archive.open(part) as stream:
        end = b""
        while block := stream.read(65_536):
            if _CELL.search(end + block):
                return True
            end = block[-20:]
    return False


def _facts(archive: zipfile.ZipFile, part: str, wanted: Wanted) -> Facts:
    """Filled rows, hidden rows, merged cells and formulas without a result, counted by their tags alone."""
    counter = _TagCounter(wanted.name)
    parser = expat.ParserCreate(namespace_separator=" ")
    parser.buffer_text = True
    parser.StartElementHandler = counter.start
    parser.EndElementHandler = counter.end
    parser.CharacterDataHandler = counter.text
    with archive.open(part) as stream:
        parser.ParseFile(stream)
    return counter.facts


class _TagCounter:
    def __init__(self, name: str) -> None:
        self.name, self.facts = name, Facts()
        self._row = self._cells = self._column = 0
        self._filled = self._formula = self._value = self._in_value = False

    def start(self, tag: str, attributes: dict[str, str]) -> None:
        tag = tag.rpartition(" ")[2]
        if tag == "c":
            self._formula = self._value = False
            self._column = column_number(attributes.get("r", "")) or self._column + 1
        elif tag == "v":
            self._in_value = True
        elif tag == "is":
            self._value = True
        elif tag == "f":
            self._formula = True
        elif tag == "row":
            self._begin_row(attributes)
        elif tag == "mergeCell":
            first, _, last = attributes.get("ref", "").partition(":")
            a, b = _COORDINATE.fullmatch(first), _COORDINATE.fullmatch(last or first)
            if a and b:
                columns = column_number(first) - 1, column_number(last or first) - 1
                self.facts.merged.append((int(a[2]), int(b[2]), *columns))

    def text(self, text: str) -> None:
        self._value |= self._in_value and bool(text)

    def end(self, tag: str) -> None:
        tag = tag.rpartition(" ")[2]
        if tag == "v":
            self._in_value = False
        elif tag == "c":
            self._filled |= self._value
            if self._formula and not self._value:
                self.facts.uncached.add(self._row)
        elif tag == "row":
            self.facts.filled += self._filled
            if self._filled:
                self.facts.last = self._row
            self._cells += self._column
            if self._cells > CELLS_LIMIT:
                raise LogError(f"{self.name}: refused: more than {CELLS_LIMIT} cells. Export the sheet as CSV.")

    def _begin_row(self, attributes: dict[str, str]) -> None:
        number = int(attributes.get("r", self._row + 1))
        if not self._row < number <= SHEET_ROWS:
            raise LogError(
                f"{self.name}: row {number} follows row {self._row} in the sheet, which no spreadsheet program writes. "
                "Open the file in one and save it again."
            )
        self._row, self._column, self._filled = number, 0, False
        if attributes.get("hidden") in ("1", "true"):
            self.facts.hidden.append(number)


def column_number(coordinate: str) -> int:
    """Number of a column by its letters, A = 1; 0 without letters."""
    number = 0
    for letter in coordinate:
        if not "A" <= letter <= "Z":
            break
        number = number * 26 + ord(letter) - 64
    return number
