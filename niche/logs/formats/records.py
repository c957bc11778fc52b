"""Records of a text file: one by one where something needs care, chunks at a time where nothing does.

The standard library's reader in strict mode tells exactly where quoting goes wrong; pyarrow's is ten times as fast and
tells nothing. So a chunk goes to pyarrow only if every quoted cell in it is closed in its own line, and if pyarrow then
finds as many cells in every line as the header has. Both mean the same by such a chunk.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator
from typing import Any

import pyarrow as pa
import pyarrow.compute as pc
from pyarrow import csv as fast_csv

from niche.errors import LogError
from niche.logs.formats.counting import line_end

LONGEST_CELL = 1_000_000
"""Most letters of a cell."""

csv.field_size_limit(LONGEST_CELL)


def _lines_with_quotes(chunk: bytes) -> Iterator[tuple[int, int]]:
    """Start and end of each line that has a quote, without its line end."""
    end = 0
    while (quote := chunk.find(b'"', end)) >= 0:
        start = max(chunk.rfind(b"\n", end, quote) + 1, end)
        end = chunk.find(b"\n", quote)
        end = len(chunk) if end < 0 else end
        yield start, end - (chunk[end - 1 : end] == b"\r")


class Records:
    """Reads chunks of whole lines, from the top to the foot, once.

    Parameters
    ----------
    chunks : iterator of bytes
        UTF-8, each but the last ending at a line end.
    name : str
    delimiter : str
    """

    def __init__(self, chunks: Iterator[bytes], name: str, delimiter: str) -> None:
        self.name, self.delimiter = name, delimiter
        self.count = 0
        self._chunks, self._chunk, self._at, self._line = chunks, b"", 0, 0
        self._reader = csv.reader(self._lines(), strict=True, delimiter=delimiter)
        cell = rb'(?>"[^"]*+(?:""[^"]*+)*+"|[^"%b]*+)' % re.escape(delimiter.encode())
        self._closed = re.compile(rb"%b(?:%b%b)*+" % (cell, re.escape(delimiter.encode()), cell))

    def next_record(self) -> tuple[int, list[str], int] | None:
        """Next record as (its first line, its cells, its last line); None at the foot.

        Raises
        ------
        LogError
            The record breaks the quoting rules.
        """
        first = self._line + 1
        try:
            record = next(self._reader, None)
        except csv.Error as error:
            seen = f" (seen at line {self._line}, in the row that begins here)" if self._line > first else ""
            raise LogError(
                f"{self.name}: line {first}: {error}{seen}. A quoted cell must end with a quote before the next "
                "comma or line end; two quotes in a row stand for one."
            ) from None
        if record is None:
            return None
        self.count += 1
        return first, record, self._line

    def next_columns(self, width: int) -> tuple[int, list[Any]] | None:
        """All rows left in the chunk as (line of the first, columns of text), or None if they need care, or at the foot."""
        if not self._fill() or len(self.delimiter.encode()) > 1:
            return None
        chunk = self._chunk[self._at :] if self._at else self._chunk
        if chunk.count(b"\r") != chunk.count(b"\r\n"):
            return None
        if not all(self._closed.fullmatch(chunk, *ends) for ends in _lines_with_quotes(chunk)):
            return None
        try:
            table = fast_csv.read_csv(
                pa.BufferReader(chunk),
                fast_csv.ReadOptions(column_names=[str(i) for i in range(width)], block_size=len(chunk) + 1),
                fast_csv.ParseOptions(delimiter=self.delimiter, ignore_empty_lines=False),
                fast_csv.ConvertOptions(
                    column_types={str(i): pa.string() for i in range(width)}, strings_can_be_null=False
                ),
            )
        except pa.ArrowInvalid:  # lines with other numbers of cells: the careful reader names them
            return None
        lines = chunk.count(b"\n") + (not chunk.endswith(b"\n"))
        if table.num_rows != lines:
            return None
        if any((pc.max(pc.binary_length(column)).as_py() or 0) > LONGEST_CELL for column in table.columns):
            return None
        first = self._line + 1
        self._line += lines
        self._at = len(self._chunk)
        self.count += lines
        return first, [column.combine_chunks() for column in table.columns]

    def more(self) -> bool:
        """Whether a line is left."""
        return self._fill()

    @property
    def chunk_done(self) -> bool:
        """Whether the chunk in hand has been read to its end."""
        return self._at >= len(self._chunk)

    def _fill(self) -> bool:
        while self._at >= len(self._chunk):
            chunk = next(self._chunks, None)
            if chunk is None:
                return False
            self._chunk, self._at = chunk, 0
        return True

    def _lines(self) -> Iterator[str]:
        while self._fill():
            end = line_end(self._chunk, self._at)
            line = self._chunk[self._at : end].decode()
            self._at = end
            self._line += 1
            yield line
