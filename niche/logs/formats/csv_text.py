"""Text tables (RFC 4180 and its relatives): CSV, TSV, semicolons, packed or not, every row with its line number."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import islice
from pathlib import Path

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.formats import counting
from niche.logs.formats.byte_source import find_encoding, whole_lines
from niche.logs.formats.counting import count_records
from niche.logs.formats.delimiter import SAMPLE_LINES, SIGNS, find_delimiter
from niche.logs.formats.heading import Heading, find_heading, rows_needed
from niche.logs.formats.inspector import BLANK, Inspector
from niche.logs.formats.records import Records
from niche.logs.formats.wanted import Wanted
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece

PIECE_ROWS = 100_000
PIECE_CELLS = 4_000_000
"""Most cells of a piece that is put together row by row."""

_CELLS = {
    False: "leave a cell empty where there is nothing to write, but keep its {sign}",
    True: "a {sign} inside a cell needs quotes round the cell",
}
"""Remedy for too few cells, and for too many."""

Row = tuple[int, list[str]]


def read_csv(path: Path, name: str, ledger: Ledger, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a text table that no study describes: UTF-8, the header in its first line.

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
        The file cannot be opened or decoded, has no header, repeats a heading, or breaks the quoting rules.
    """
    yield from read_text(path, Wanted.of(name, ledger, None), piece_rows)


def read_text(path: Path, wanted: Wanted, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a text table as the study declares it; a file without rows gives one empty piece with its headings.

    The file is gone through twice: records are counted without the reader first, and the reading must come to the same
    number.

    Raises
    ------
    LogError
        The file cannot be opened, decoded or taken apart, something must be declared, or it was cut off.
    """
    encoding, mark = find_encoding(path, wanted)
    sample = b"".join(islice(whole_lines(path, wanted.name, encoding, mark), 1)).decode()
    lines = sample.splitlines(keepends=True)[: SAMPLE_LINES + (wanted.form.header_row or 1)]
    suffix = Path(path.stem).suffix if path.suffix.lower() == ".gz" else path.suffix
    delimiter = find_delimiter(lines, wanted, suffix.lower())
    expected = count_records(whole_lines(path, wanted.name, encoding, mark), delimiter)
    if expected == counting.SHEET_ROWS:
        raise LogError(
            f"{wanted.name}: exactly {expected} lines, the most a spreadsheet holds: the rest was cut off on the way. "
            "Export again in parts; or add an empty line at the end if nothing is missing."
        )
    records = Records(whole_lines(path, wanted.name, encoding, mark), wanted.name, delimiter)
    yield from _pieces(records, wanted, piece_rows)
    if records.count != expected:
        raise LogError(
            f"{wanted.name}: {records.count} records read and {expected} counted: the reading was cut short or a quote "
            "stands where none should. Nothing was computed from it."
        )


def _pieces(records: Records, wanted: Wanted, piece_rows: int) -> Iterator[Piece]:
    top: list[Row] = []
    ends: dict[int, int] = {}
    for _ in range(rows_needed(wanted)):
        record = records.next_record()
        if record is None:
            break
        top.append(record[:2])
        ends[record[0]] = record[2]
    heading, taken = find_heading(top, wanted)
    inspector, batch = Inspector(wanted, heading, records.delimiter), _Batch(wanted, heading, records.delimiter)
    begun = False
    limit = max(1, min(piece_rows, PIECE_CELLS // max(1, heading.width)))
    for row, cells in top[taken:]:
        batch.add(row, cells, ends[row])
        if len(batch.rows) >= limit:
            yield inspector.inspect(*batch.take())
            begun = True
    while records.more():
        if (block := records.next_columns(heading.width)) is not None:
            if batch.rows:
                yield inspector.inspect(*batch.take())
            first, columns = block
            rows = np.arange(first, first + len(columns[0]), dtype=np.int64)
            for start in range(0, len(rows), piece_rows):
                part = slice(start, start + piece_rows)
                yield inspector.inspect(rows[part], [c.slice(start, piece_rows) for c in columns])
            begun = True
            continue
        for record in iter(records.next_record, None):
            batch.add(*record)
            if len(batch.rows) >= limit:
                yield inspector.inspect(*batch.take())
                begun = True
            if records.chunk_done:
                break
    if batch.rows or not begun:
        yield inspector.inspect(*batch.take())
    inspector.finish()


class _Batch:
    """Records gathered one by one; those with the wrong number of cells go to the ledger."""

    def __init__(self, wanted: Wanted, heading: Heading, delimiter: str) -> None:
        self.wanted, self.heading, self.delimiter = wanted, heading, delimiter
        self.rows: list[int] = []
        self.records: list[list[str]] = []

    def add(self, row: int, cells: list[str], end: int) -> None:
        """Take a record that ends in line ``end``."""
        width, sign = self.heading.width, self.delimiter
        if len(cells) in (0, width) and not any(map(str.strip, cells)):
            self.wanted.drop(row, "", *BLANK)
        elif end > row and self._holds_rows(cells):
            seen = f"a quoted cell runs on to line {end} and holds what look like whole rows"
            problem = f"{seen}; is the quote at its end missing?"
            self.wanted.drop(row, sign.join(cells), "quote left open", problem, "stop")
        elif len(cells) != width:
            advice = _CELLS[len(cells) > width].format(sign=SIGNS.get(sign, repr(sign)))
            problem = f"{len(cells)} cells where the header has {width}; {advice}"
            self.wanted.drop(row, sign.join(cells), "wrong number of cells", problem, "stop")
        else:
            self.rows.append(row)
            self.records.append(cells)

    def _holds_rows(self, cells: list[str]) -> bool:
        """Whether a cell with line breaks has as many delimiters a break as a row has: rows swallowed by an open quote.

        Such a record can have the right number of cells, so that nothing else would tell of the rows inside it.
        """
        width, sign = self.heading.width, self.delimiter
        breaks = ((cell, max(cell.count("\n"), cell.count("\r"))) for cell in cells)
        return width > 2 and any(times and cell.count(sign) >= times * (width - 1) for cell, times in breaks)

    def take(self) -> tuple[np.ndarray[tuple[int], np.dtype[np.int64]], list[pa.Array]]:
        """What was gathered, as row numbers and columns; the batch is empty afterwards."""
        width = self.heading.width
        columns = zip(*self.records, strict=True) if self.records else ([] for _ in range(width))
        taken = np.array(self.rows, dtype=np.int64), [pa.array(cells, type=pa.string()) for cells in columns]
        self.rows, self.records = [], []
        return taken
