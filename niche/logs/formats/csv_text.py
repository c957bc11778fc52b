"""CSV in UTF-8 (RFC 4180), read record by record so that every row keeps its line number.

The standard library's reader in strict mode tells exactly where quoting goes wrong, which a person needs more than speed.
"""

from __future__ import annotations

import csv
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece

if TYPE_CHECKING:
    from _csv import Reader

PIECE_ROWS = 100_000

csv.field_size_limit(1_000_000)

_CELLS = {
    False: "leave a cell empty where there is nothing to write, but keep its comma",
    True: "a comma inside a cell needs quotes round the cell",
}
"""Remedy for too few cells, and for too many."""


def read_csv(path: Path, name: str, ledger: Ledger, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a CSV file.

    Parameters
    ----------
    path : Path
    name : str
        The file as messages and the ledger call it.
    ledger : Ledger
        Takes every row that cannot be read as a record (wrong number of cells, blank line).
    piece_rows : int
        Most rows a piece.

    Raises
    ------
    LogError
        The file cannot be opened, is not UTF-8, has no header, repeats a heading, or breaks the quoting rules.
    """
    try:
        with path.open(encoding="utf-8-sig", newline="") as stream:
            yield from _pieces(csv.reader(stream, strict=True), name, ledger, piece_rows)
    except FileNotFoundError:
        raise LogError(f"{name}: there is no such file.") from None
    except UnicodeDecodeError as error:
        raise LogError(
            f"{name}: not UTF-8 (byte {error.object[error.start]:#04x}: {error.reason}). Save the log as UTF-8 CSV."
        ) from None
    except OSError as error:
        raise LogError(f"{name}: cannot be read ({error.strerror}).") from None


def _pieces(reader: Reader, name: str, ledger: Ledger, piece_rows: int) -> Iterator[Piece]:
    header = _next_record(reader, name, 1)
    if header is None or not any(header):
        raise LogError(f"{name}: line 1: no header. The first line names the columns.")
    headings = [" ".join(cell.split()) for cell in header]
    for heading in headings:
        if heading and headings.count(heading) > 1:
            raise LogError(
                f"{name}: line 1: the heading {heading!r} stands twice. Each column needs a name of its own."
            )
    width, records, rows, begun = len(headings), [], [], False
    line = reader.line_num + 1
    while (record := _next_record(reader, name, line)) is not None:
        if reader.line_num > line and _holds_rows(record, width):
            problem = (
                f"a quoted cell runs on to line {reader.line_num} and holds what look like whole rows; is the quote at "
                "its end missing?"
            )
            _set_aside(ledger, name, line, ",".join(record)[:80], "quote left open", problem, "stop")
        elif len(record) == width:
            if any(record):
                records.append(record)
                rows.append(line)
            else:
                _set_aside(ledger, name, line, "", "blank row", "no cell is filled", "set_aside")
        elif not record:
            _set_aside(ledger, name, line, "", "blank row", "no cell is filled", "set_aside")
        else:
            problem = f"{len(record)} cells where the header has {width}; {_CELLS[len(record) > width]}"
            _set_aside(ledger, name, line, ",".join(record)[:80], "wrong number of cells", problem, "stop")
        line = reader.line_num + 1
        if len(records) == piece_rows:
            yield _piece(name, headings, records, rows)
            records, rows, begun = [], [], True
    if records or not begun:  # a file without rows still gives its headings, to be checked
        yield _piece(name, headings, records, rows)


def _set_aside(ledger: Ledger, name: str, line: int, value: str, reason: str, problem: str, action: Action) -> None:
    """Account for a row that cannot be read as a record."""
    ledger.come_in(name, 1)
    ledger.dispose([Entry(name, line, "", value, reason, problem, action)])


def _holds_rows(record: list[str], width: int) -> bool:
    """Whether a cell with line breaks has as many commas a break as a row has: rows swallowed by an open quote.

    Such a record can have the right number of cells, so that nothing else would tell of the rows inside it.
    """
    breaks = ((cell, max(cell.count("\n"), cell.count("\r"))) for cell in record)
    return width > 2 and any(times and cell.count(",") >= times * (width - 1) for cell, times in breaks)


def _next_record(reader: Reader, name: str, line: int) -> list[str] | None:
    try:
        return next(reader, None)
    except csv.Error as error:
        raise LogError(
            f"{name}: line {line}: {error}{_found_at(line, reader.line_num)}. A quoted cell must end with a quote before "
            "the next comma or line end; two quotes in a row stand for one."
        ) from None


def _found_at(line: int, end: int) -> str:
    """Words for the place where it showed, if the row began on an earlier line."""
    return f" (seen at line {end}, in the row that begins here)" if end > line else ""


def _piece(name: str, headings: list[str], records: list[list[str]], rows: list[int]) -> Piece:
    columns = zip(*records, strict=True) if records else ([] for _ in headings)
    return Piece(
        name,
        np.array(rows, dtype=np.int64),
        {heading: pa.array(cells, type=pa.string()) for heading, cells in zip(headings, columns, strict=True)},
    )
