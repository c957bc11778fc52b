"""OpenDocument spreadsheets (ISO/IEC 26300), read from their XML row by row, so that a large sheet fits in memory."""

from __future__ import annotations

import re
import zipfile
from collections import deque
from collections.abc import Iterator
from datetime import date, datetime, time, timedelta
from pathlib import Path
from typing import Any
from xml.etree.ElementTree import Element, iterparse
from xml.parsers import expat

from niche.errors import LogError
from niche.logs.formats.counting import SHEET_ROWS
from niche.logs.formats.csv_text import PIECE_ROWS
from niche.logs.formats.sheets import CELLS_LIMIT, COLUMNS_LIMIT, Facts, SheetRow, choose_sheet, sheet_pieces
from niche.logs.formats.typed import EarlyDate
from niche.logs.formats.wanted import Wanted
from niche.logs.formats.zip_guard import open_zip, readable
from niche.logs.pieces import Piece

_NS = "urn:oasis:names:tc:opendocument:xmlns:"
_TABLE, _OFFICE, _TEXT, _STYLE = (f"{{{_NS}{n}:1.0}}" for n in ("table", "office", "text", "style"))
_FO = f"{{{_NS}xsl-fo-compatible:1.0}}"
_DURATION = re.compile(r"(-)?P(?:(\d+)D)?T?(?:(\d+)H)?(?:(\d+)M)?(?:(\d+(?:[.,]\d+)?)S)?")
_SPACES_LIMIT = 1000
_FIRST_YEARS = 1901
_CELLS = (f"{_TABLE}table-cell", f"{_TABLE}covered-table-cell")


def read_ods(path: Path, wanted: Wanted, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a sheet of an OpenDocument spreadsheet: values as stored, never formulas.

    Raises
    ------
    LogError
        The file cannot be read or is out of bounds, or something must be declared.
    """
    with open_zip(path, wanted.name) as archive:
        with readable(wanted.name):
            sheets = _sheets(archive)
        sheet = choose_sheet(sheets, wanted)
        facts = Facts()
        with readable(wanted.name):
            deque(_Reader(archive, sheet, wanted, facts).rows(), maxlen=0)
            facts.filled = _filled_rows(archive, sheet)
        rows = _guarded(_Reader(archive, sheet, wanted, Facts()).rows(), wanted)
        yield from sheet_pieces(rows, facts, wanted, piece_rows)


def _guarded(rows: Iterator[SheetRow], wanted: Wanted) -> Iterator[SheetRow]:
    while True:
        with readable(wanted.name):
            row = next(rows, None)
        if row is None:
            return
        yield row


def _sheets(archive: zipfile.ZipFile) -> list[tuple[str, bool, bool]]:
    """Sheets as (name, whether hidden, whether any cell has a value)."""
    found: list[tuple[str, bool, bool]] = []
    hidden_styles: set[str] = set()
    for event, element in _elements(archive):
        if event == "start":
            if element.tag == f"{_TABLE}table":
                hidden = element.get(f"{_TABLE}style-name", "") in hidden_styles
                found.append((element.get(f"{_TABLE}name", ""), hidden, False))
        elif element.tag == f"{_STYLE}style":
            properties = element.find(f"{_STYLE}table-properties")
            if properties is not None and properties.get(f"{_TABLE}display") == "false":
                hidden_styles.add(element.get(f"{_STYLE}name", ""))
        elif element.tag == _CELLS[0] and found and element.get(f"{_OFFICE}value-type"):
            found[-1] = (*found[-1][:2], True)
    return found


def _elements(archive: zipfile.ZipFile) -> Iterator[tuple[str, Element]]:
    """Starts and ends of the elements of the content; rows are let go of once they have been seen."""
    around: list[Element] = []
    with archive.open("content.xml") as stream:
        for event, element in iterparse(stream, events=("start", "end")):
            if event == "start":
                around.append(element)
                yield event, element
                continue
            around.pop()
            yield event, element
            if element.tag == f"{_TABLE}table-row" and around:
                around[-1].remove(element)


def _filled_rows(archive: zipfile.ZipFile, sheet: str) -> int:
    """Rows with a value, counted by their tags alone."""
    state = {"in": False, "repeat": 1, "filled": False, "count": 0}
    parser = expat.ParserCreate(namespace_separator=" ")
    table, office = f"{_NS}table:1.0", f"{_NS}office:1.0"

    def start(tag: str, attributes: dict[str, str]) -> None:
        if tag == f"{table} table":
            state["in"] = attributes.get(f"{table} name", "") == sheet
        elif tag == f"{table} table-row":
            state["repeat"], state["filled"] = int(attributes.get(f"{table} number-rows-repeated", 1)), False
        elif tag == f"{table} table-cell" and f"{office} value-type" in attributes:
            state["filled"] = True

    def end(tag: str) -> None:
        if tag == f"{table} table-row" and state["in"] and state["filled"]:
            state["count"] += state["repeat"]

    parser.StartElementHandler, parser.EndElementHandler = start, end
    with archive.open("content.xml") as stream:
        parser.ParseFile(stream)
    return int(state["count"])


class _Reader:
    """Reads the rows of one sheet; what it sees of their looks goes into ``facts``."""

    def __init__(self, archive: zipfile.ZipFile, sheet: str, wanted: Wanted, facts: Facts) -> None:
        self.archive, self.sheet, self.wanted, self.facts = archive, sheet, wanted, facts
        self._coloured: set[str] = set()
        self._day_zero = date(1899, 12, 30)
        self._cells = 0

    def rows(self) -> Iterator[SheetRow]:
        """Every row with its number, repeated rows as often as they stand there."""
        number, inside = 0, False
        for event, element in _elements(self.archive):
            if event == "start":
                if element.tag == f"{_TABLE}table":
                    inside = element.get(f"{_TABLE}name", "") == self.sheet
            elif element.tag == f"{_STYLE}style":
                self._style(element)
            elif element.tag == f"{_TABLE}null-date":
                self._day_zero = date.fromisoformat(element.get(f"{_TABLE}date-value", "1899-12-30"))
            elif element.tag == f"{_TABLE}table-row" and inside:
                yield from self._row(element, number)
                number += _repeats(element, "rows")

    def _row(self, element: Element, above: int) -> Iterator[SheetRow]:
        times = _repeats(element, "rows")
        values, coloured = self._values(element, above + 1)
        while values and values[-1] is None:
            values.pop()
        if not values:  # blank down to the foot of the sheet, as often as not
            yield SheetRow(above + 1, [], times=times)
            return
        last = above + times
        if last > SHEET_ROWS:
            raise LogError(f"{self.wanted.name}: rows down to {last}, more than a spreadsheet has.")
        self._cells += times * len(values)
        if self._cells > CELLS_LIMIT:
            raise LogError(f"{self.wanted.name}: refused: more than {CELLS_LIMIT} cells. Export the sheet as CSV.")
        self.facts.last = last
        if element.get(f"{_TABLE}visibility") in ("collapse", "filter"):
            self.facts.hidden.extend(range(above + 1, last + 1))
        for i in range(times):
            yield SheetRow(above + 1 + i, values, coloured)

    def _values(self, element: Element, row: int) -> tuple[list[Any], bool]:
        values: list[Any] = []
        coloured = False
        for cell in element:
            if cell.tag not in _CELLS:
                continue
            repeats = _repeats(cell, "columns")
            value = self._value(cell)
            if value is None and cell.get(f"{_TABLE}formula"):
                self.facts.uncached.add(row)
            if value is not None:
                coloured |= cell.get(f"{_TABLE}style-name", "") in self._coloured
            wide, high = (int(cell.get(f"{_TABLE}number-{axis}-spanned", 1)) for axis in ("columns", "rows"))
            if wide > 1 or high > 1:
                self.facts.merged.append((row, row + high - 1, len(values), len(values) + wide - 1))
            if value is not None and len(values) + repeats > COLUMNS_LIMIT:
                raise LogError(f"{self.wanted.name}: row {row}: more than {COLUMNS_LIMIT} columns.")
            values.extend([value] * min(repeats, COLUMNS_LIMIT - min(len(values), COLUMNS_LIMIT)))
        return values, coloured

    def _style(self, element: Element) -> None:
        properties = element.find(f"{_STYLE}table-cell-properties")
        if properties is not None and properties.get(f"{_FO}background-color", "transparent") != "transparent":
            self._coloured.add(element.get(f"{_STYLE}name", ""))

    def _value(self, cell: Element) -> Any:
        kind = cell.get(f"{_OFFICE}value-type")
        if kind is None or cell.tag == _CELLS[1]:
            return None
        if kind in ("float", "percentage", "currency"):
            return float(cell.attrib[f"{_OFFICE}value"])
        if kind == "boolean":
            return cell.attrib[f"{_OFFICE}boolean-value"] == "true"
        if kind == "date":
            return self._date(cell.attrib[f"{_OFFICE}date-value"])
        if kind == "time":
            return _duration(cell.attrib[f"{_OFFICE}time-value"])
        written = cell.get(f"{_OFFICE}string-value")
        return written if written is not None else "\n".join(_text(p) for p in cell.findall(f"{_TEXT}p"))

    def _date(self, written: str) -> Any:
        moment = datetime.fromisoformat(written)
        if moment.year < _FIRST_YEARS or moment.year == self._day_zero.year:
            return EarlyDate(moment.replace(tzinfo=None) - datetime.combine(self._day_zero, time()))
        return moment.date() if len(written) == len("2026-09-03") else moment


def _repeats(element: Element, axis: str) -> int:
    return max(1, int(element.get(f"{_TABLE}number-{axis}-repeated", 1)))


def _duration(written: str) -> timedelta:
    """An ISO 8601 duration of days and less."""
    found = _DURATION.fullmatch(written)
    if found is None:
        raise ValueError(f"{written!r} is no duration")
    sign, *parts = found.groups()
    days, hours, minutes, seconds = (float((part or "0").replace(",", ".")) for part in parts)
    length = timedelta(days=days, hours=hours, minutes=minutes, seconds=seconds)
    return -length if sign else length


def _text(paragraph: Element) -> str:
    """Text of a paragraph of a cell, without the remarks attached to it."""
    parts = [paragraph.text or ""]
    for child in paragraph:
        if child.tag == f"{_TEXT}s":
            parts.append(" " * min(int(child.get(f"{_TEXT}c", 1)), _SPACES_LIMIT))
        elif child.tag in (f"{_TEXT}tab", f"{_TEXT}line-break"):
            parts.append("\t" if child.tag.endswith("tab") else "\n")
        elif child.tag != f"{_OFFICE}annotation":
            parts.append(_text(child))
        parts.append(child.tail or "")
    return "".join(parts)
