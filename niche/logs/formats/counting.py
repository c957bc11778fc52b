"""How many records a text file has, counted without the reader, so that a reading cut short is an error.

A record ends at a line end that is not inside quotes. A quote opens a cell only where the cell begins.
"""

from __future__ import annotations

import re
from collections.abc import Iterable

SHEET_ROWS = 1_048_576
"""Most rows of a spreadsheet: a file of exactly so many was cut off there."""

_LINE = re.compile(rb"[^\r\n]*+(?:\r\n?|\n)?+")


def count_records(chunks: Iterable[bytes], delimiter: str) -> int:
    """Records of a text in chunks of whole lines, blank lines and header counted.

    Parameters
    ----------
    chunks : iterable of bytes
        UTF-8, each chunk but the last ending at a line end.
    delimiter : str

    Returns
    -------
    int
    """
    between, records, inside = delimiter.encode(), 0, False
    for chunk in chunks:
        at = 0
        while at < len(chunk):
            if not inside:
                # Lines without a quote end where they end: count them together.
                quote = chunk.find(b'"', at)
                start = (
                    len(chunk) if quote < 0 else max(chunk.rfind(b"\n", at, quote), chunk.rfind(b"\r", at, quote)) + 1
                )
                if start > at:
                    records += _lines(chunk, at, start)
                    at = start
                    continue
            end = line_end(chunk, at)
            inside = _open_after(chunk[at:end], between, inside)
            records += not inside
            at = end
    return records + inside


def line_end(chunk: bytes, start: int) -> int:
    """Where the line that starts here ends, its line end (CR, LF or both) included."""
    found = _LINE.match(chunk, start)
    return len(chunk) if found is None else found.end()


def line_ends(chunk: bytes, start: int = 0, end: int | None = None) -> int:
    """Line ends of any kind (CR, LF or both) between two places, each counted once."""
    ends = chunk.count(b"\n", start, end)
    if chunk.find(b"\r", start, end) >= 0:
        ends += chunk.count(b"\r", start, end) - chunk.count(b"\r\n", start, end)
    return ends


def _lines(chunk: bytes, start: int, end: int) -> int:
    """Lines between two line starts, the last of them perhaps without its line end."""
    return line_ends(chunk, start, end) + (chunk[end - 1 : end] not in (b"\n", b"\r"))


def _open_after(line: bytes, delimiter: bytes, inside: bool) -> bool:
    """Whether a quoted cell is still open at the end of a line."""
    at = 0
    while (at := line.find(b'"', at)) >= 0:
        if inside:
            if line[at + 1 : at + 2] == b'"':  # two quotes stand for one
                at += 2
                continue
            inside = False
        elif at == 0 or line.startswith(delimiter, max(0, at - len(delimiter))):
            inside = True
        at += 1
    return inside
