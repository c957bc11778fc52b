"""Delimited text as a dialect describes it (Table Dialect, Data Package 2.0), record by record with its line numbers."""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Iterator
from contextlib import suppress
from dataclasses import dataclass
from typing import IO, Any

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece

PIECE_ROWS = 100_000
_LONGEST_LINE = 10_000_000

ENCODINGS = {
    "utf-8": "utf-8-sig", "utf8": "utf-8-sig", "utf-8-sig": "utf-8-sig", "us-ascii": "utf-8-sig", "ascii": "utf-8-sig",
    "utf-16": "utf-16", "utf-16le": "utf-16-le", "utf-16be": "utf-16-be",
    "iso-8859-1": "latin-1", "latin-1": "latin-1", "latin1": "latin-1", "iso-8859-15": "iso-8859-15",
    "windows-1252": "cp1252", "cp1252": "cp1252",
}  # fmt: skip
"""What a descriptor may call an encoding, and what it is read by."""


@dataclass(frozen=True)
class Dialect:
    """How a delimited file is written; the defaults are those of the standard."""

    delimiter: str = ","
    quote_char: str | None = '"'
    double_quote: bool = True
    escape_char: str | None = None
    skip_initial_space: bool = False
    header_rows: tuple[int, ...] = (1,)
    header_join: str = " "
    comment_rows: tuple[int, ...] = ()
    comment_char: str | None = None
    null_sequence: str | None = None
    encoding: str = "utf-8"

    def check(self, label: str) -> None:
        """Raise LogError for marks that cannot be told apart or an encoding that is not known."""
        marks = {
            "delimiter": self.delimiter,
            "quoteChar": self.quote_char,
            "escapeChar": self.escape_char,
        }
        for mark, text in marks.items():
            if text is not None and (len(text) != 1 or text in "\r\n\0"):
                raise LogError(f"{label}: {mark} is {text!r}; it must be one character and no line end.")
        given = [text for text in marks.values() if text is not None]
        if len(set(given)) < len(given) or self.delimiter == self.comment_char:
            raise LogError(f"{label}: two of delimiter, quoteChar, escapeChar and commentChar are the same character.")
        if self.comment_char is not None and not self.comment_char.strip("\r\n"):
            raise LogError(f"{label}: commentChar is {self.comment_char!r}; it must be a character.")
        if self.encoding.lower() not in ENCODINGS:
            known = ", ".join(sorted(ENCODINGS))
            raise LogError(f"{label}: encoding is {self.encoding!r}; known are {known}.")


class _Lines:
    """Lines of a text stream, counted; comment lines between records are passed over."""

    def __init__(self, stream: io.TextIOWrapper, comment: str | None, label: str) -> None:
        self._stream, self._comment, self._label = stream, comment, label
        self.count, self.fresh, self.begun = 0, True, 0

    def __iter__(self) -> _Lines:
        return self

    def __next__(self) -> str:
        while line := self._stream.readline(_LONGEST_LINE):
            self.count += 1
            if len(line) >= _LONGEST_LINE:
                raise LogError(f"{self._label}: line {self.count} is longer than {_LONGEST_LINE} characters.")
            if self.fresh and self._comment and line.startswith(self._comment):
                continue
            if self.fresh:
                self.fresh, self.begun = False, self.count
            return line
        raise StopIteration


def records(stream: IO[bytes], dialect: Dialect, label: str) -> Iterator[tuple[int, list[str]]]:
    """Records of a file with the line on which each begins, the header included.

    Raises
    ------
    LogError
        The bytes do not fit the encoding, or the quoting is broken.
    """
    dialect.check(label)
    text = io.TextIOWrapper(stream, encoding=ENCODINGS[dialect.encoding.lower()], newline="")
    lines = _Lines(text, dialect.comment_char, label)
    reader = csv.reader(
        lines,
        delimiter=dialect.delimiter,
        quotechar=dialect.quote_char,
        quoting=csv.QUOTE_NONE if dialect.quote_char is None else csv.QUOTE_MINIMAL,
        doublequote=dialect.double_quote,
        escapechar=dialect.escape_char,
        skipinitialspace=dialect.skip_initial_space,
        strict=True,
    )
    number = 0
    try:
        while True:
            lines.fresh = True
            record = next(reader, None)
            if record is None:
                return
            number += 1
            if number in dialect.comment_rows:
                continue
            if dialect.null_sequence is not None:
                record = ["" if cell == dialect.null_sequence else cell for cell in record]
            yield lines.begun, record
    except csv.Error as error:
        raise LogError(
            f"{label}: line {lines.begun}: {error}. A quoted cell must end with a quote before the next delimiter or line "
            "end."
        ) from None
    except UnicodeDecodeError as error:
        raise LogError(
            f"{label}: not {dialect.encoding} (byte {error.object[error.start]:#04x}: {error.reason}). Name the right "
            "encoding in the descriptor."
        ) from None
    except UnicodeError as error:
        raise LogError(f"{label}: not {dialect.encoding} ({error}).") from None
    finally:
        with suppress(ValueError):  # closed already, where the reader of records stopped early
            text.detach()


def header_of(found: Iterator[tuple[int, list[str]]], dialect: Dialect, label: str) -> list[str]:
    """Headings, several header rows joined; the records up to the last header row are taken from the iterator.

    Raises
    ------
    LogError
        There is no header, or a heading stands twice.
    """
    rows: list[list[str]] = []
    # Comment rows are gone from the iterator, but the dialect counts them.
    wanted = {max(row - sum(c < row for c in dialect.comment_rows), 1) for row in dialect.header_rows}
    for number in range(1, max(wanted) + 1):
        record = next(found, None)
        if record is None:
            raise LogError(f"{label}: line 1: no header. The first line names the columns.")
        if number in wanted:
            rows.append(record[1])
    width = max(len(row) for row in rows)
    padded = [row + [""] * (width - len(row)) for row in rows]
    joined = [dialect.header_join.join(cell for cell in column if cell) for column in zip(*padded, strict=True)]
    headings = [" ".join(cell.split()) for cell in joined]
    refuse_repeats(headings, label)
    if not any(headings):
        raise LogError(f"{label}: line 1: no header. The first line names the columns.")
    return headings


def refuse_repeats(headings: list[str], label: str) -> None:
    """Raise LogError where a heading stands twice."""
    seen: set[str] = set()
    for heading in headings:
        if heading and heading in seen:
            raise LogError(f"{label}: the heading {heading!r} stands twice. Each column needs a name of its own.")
        seen.add(heading)


def pieces(
    found: Iterator[tuple[int, list[str]]],
    headings: list[str],
    label: str,
    ledger: Ledger,
    piece_rows: int = PIECE_ROWS,
) -> Iterator[Piece]:
    """Records under their headings; what is blank or ragged goes to the ledger.

    At least one piece comes, so that the headings can be checked. Columns without a heading are left out.
    """
    width, begun = len(headings), False
    kept: list[list[str]] = []
    rows: list[int] = []
    for line, record in found:
        if not any(record):
            set_aside(ledger, label, line, "", "", "blank row", "no cell is filled")
        elif len(record) != width:
            problem = f"{len(record)} cells where the header has {width}; each row needs one cell a column"
            set_aside(ledger, label, line, "", " ".join(record)[:80], "wrong number of cells", problem, "stop")
        else:
            kept.append(record)
            rows.append(line)
        if len(kept) == piece_rows:
            yield piece_of(label, headings, kept, rows)
            kept, rows, begun = [], [], True
    if kept or not begun:
        yield piece_of(label, headings, kept, rows)


def piece_of(label: str, headings: list[str], cells: list[list[str]], rows: list[int]) -> Piece:
    """A piece from records."""
    columns: Any = zip(*cells, strict=True) if cells else ([] for _ in headings)
    named = {h: pa.array(column, type=pa.string()) for h, column in zip(headings, columns, strict=True) if h}
    return Piece(label, np.array(rows, dtype=np.int64), named)


def set_aside(
    ledger: Ledger,
    file: str,
    row: int,
    field: str,
    value: str,
    reason: str,
    problem: str,
    action: Action = "set_aside",
    milliseconds: int = 0,
) -> None:
    """Account for a row that never reaches a rule."""
    ledger.come_in(file, 1, milliseconds)
    ledger.dispose([Entry(file, row, field, value, reason, problem, action)], milliseconds)


def without(
    piece: Piece, ledger: Ledger, found: dict[int, list[Entry]], milliseconds: Callable[[int], int] = lambda _: 0
) -> Piece:
    """The piece without the rows that have problems, each of which is accounted for.

    Parameters
    ----------
    found : dict
        Position in the piece to its problems.
    milliseconds : callable
        Time of the row at a position, where it can be read.
    """
    if not found:
        return piece
    for position, entries in sorted(found.items()):
        time = milliseconds(position)
        ledger.come_in(piece.file, 1, time)
        ledger.dispose(entries, time)
    keep = np.ones(len(piece.rows), dtype=bool)
    keep[list(found)] = False
    mask = pa.array(keep)
    return Piece(piece.file, piece.rows[keep], {name: column.filter(mask) for name, column in piece.columns.items()})
