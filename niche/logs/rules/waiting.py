"""Rows that wait until the last piece has been read, for rules in which one row's worth depends on others.

Rows may come in any order and in pieces of any size: what comes out depends on the rows alone.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pandas as pd
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Mask, Rows
from niche.logs.visits import visits_table

ALL_LOGS = "all logs"
"""Stands for the file in a line of the ledger about all of them."""

Column = NDArray[Any]


@dataclass
class Waiting:
    """Columns of waiting rows, gathered piece by piece; ``file`` and ``row`` are added to those that the rule gives."""

    _frames: list[pd.DataFrame] = field(default_factory=list)

    def add(self, piece: Piece, which: Mask, **columns: Column) -> None:
        """Gather the chosen rows of a piece."""
        if which.any():
            chosen = {name: column[which] for name, column in columns.items()}
            self._frames.append(pd.DataFrame({**chosen, "file": piece.file, "row": piece.rows[which]}))

    def __bool__(self) -> bool:
        return bool(self._frames)

    def ordered(self, *by: str) -> pd.DataFrame:
        """All rows, sorted by columns and then by their place in the logs, numbered anew from 0."""
        table = pd.concat(self._frames, ignore_index=True)
        return ordered(table, *by)


def ordered(table: pd.DataFrame, *by: str) -> pd.DataFrame:
    """Rows sorted by columns and then by their place in the logs, numbered anew from 0."""
    keys = [codes(table[name]) for name in (*by, "file", "row")]
    return table.iloc[np.lexsort(keys[::-1])].reset_index(drop=True)


def codes(column: pd.Series[Any]) -> NDArray[np.int64]:
    """Whole numbers in the order of the values: sorting and comparing them is faster than the words."""
    if column.dtype.kind == "i":
        return column.to_numpy(dtype=np.int64)
    return np.asarray(pd.factorize(column, sort=True)[0], dtype=np.int64)


def together(table: pd.DataFrame, *by: str) -> NDArray[np.int64]:
    """One whole number a row, the same where rows agree in all of the columns."""
    code = np.zeros(len(table), dtype=np.int64)
    for name in by:
        column, different = pd.factorize(table[name])
        code = np.asarray(pd.factorize(code * (len(different) + 1) + column)[0], dtype=np.int64)
    return code


def begins(table: pd.DataFrame, *by: str) -> Mask:
    """Rows of a sorted table that differ from the row before in any of the columns; the first row does."""
    new = np.zeros(len(table), dtype=bool)
    new[:1] = True
    for name in by:
        values = codes(table[name])
        new[1:] |= values[1:] != values[:-1]
    return new


def hold(rows: Rows, wait_for: Iterable[str] = ()) -> Mask:
    """Account for the rows of a piece that have a problem, and count the others in.

    Parameters
    ----------
    rows : Rows
    wait_for : names of fields
        A row whose problems all lie in these fields waits too, for it still has a place in time.

    Returns
    -------
    array of bool, shape (n,)
        Rows that wait; the rule accounts for them later.
    """
    rows.ledger.come_in(rows.piece.file, len(rows.piece.rows))
    waits = np.ones(len(rows.piece.rows), dtype=bool)
    may_wait = set(wait_for)
    for position, entries in sorted(rows.problems.items()):
        if not {entry.field for entry in entries} <= may_wait:
            rows.ledger.dispose(entries)
            waits[position] = False
    rows.tell()
    return waits


def problems_of(rows: Rows) -> NDArray[np.object_]:
    """The problems of each row as a list of entries, None where there is none."""
    found = np.full(len(rows.piece.rows), None, dtype=object)
    for position, entries in rows.problems.items():
        found[position] = entries
    return found


def count(ledger: Ledger, table: pd.DataFrame, action: Action, ms: NDArray[np.int64] | None = None) -> None:
    """Account for rows that need no line each, by file."""
    worth = np.zeros(len(table), dtype=np.int64) if ms is None else ms
    for file, length in pd.Series(worth, index=table["file"].to_numpy()).groupby(level=0):
        ledger.count(str(file), action, len(length), int(length.sum()))


def entry(row: Any, name: str, value: str, reason: str, problem: str, action: Action) -> Entry:
    """A line of the ledger for a waiting row, given as a named tuple."""
    return Entry(str(row.file), int(row.row), name, value, reason, problem, action)


def part(piece: Piece, which: Mask) -> Piece:
    """The chosen rows of a piece as a piece of their own."""
    chosen = pa.array(which)
    return Piece(piece.file, piece.rows[which], {h: pc.filter(c, chosen) for h, c in piece.columns.items()})


def blank(piece: Piece, heading: str | None) -> Mask:
    """Rows without anything under a heading; all of them where there is no such column."""
    return np.asarray(pc.equal(pc.utf8_trim_whitespace(piece.column(heading)), ""))


def no_visits() -> pd.DataFrame:
    """A visits table without rows."""
    words, numbers = np.array([], dtype=object), np.array([], dtype=np.int64)
    return visits_table(words, words, words, words, numbers, numbers, words, numbers)


def table_of(visits: Mapping[str, Column]) -> pd.DataFrame:
    """Visits from columns by name; ``amount`` is the time where it is not given."""
    given = {name: np.asarray(column) for name, column in visits.items()}
    return visits_table(
        *(given[name] for name in ("species", "animal", "session", "zone", "start", "end", "file", "row")),
        amount=given.get("amount"),
    )


def as_tuples(table: pd.DataFrame, which: Mask) -> Iterator[tuple[int, Any]]:
    """Chosen rows as (position, named tuple)."""
    positions = np.flatnonzero(which)
    yield from zip(positions.tolist(), table.iloc[positions].itertuples(index=False), strict=True)


def as_written(named: Column, column: Any) -> Column:
    """Names as listed, and the text as written where a name is not known: rows that differ stay different."""
    texts = column.to_pylist()
    return np.array([t if name is None else name for name, t in zip(named, texts, strict=True)], dtype=object)
