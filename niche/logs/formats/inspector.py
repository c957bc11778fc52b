"""What every file form has in common once its cells are text: rows that are no observations, and how numbers are written.

What a label or a time means is the rules' business.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.formats.heading import Heading, tidy_heading
from niche.logs.formats.numbers import Numbers
from niche.logs.formats.wanted import Wanted
from niche.logs.labels import Labels, key
from niche.logs.ledger import Action
from niche.logs.pieces import Piece

Mask = NDArray[np.bool_]

BLANK: tuple[str, str, Action] = ("blank row", "no cell is filled", "set_aside")
"""Reason, problem and action for a row without a filled cell."""

_LABELS = ("species", "animal", "session", "zone", "tag", "antenna", "deployment", "site", "observer", "date")
_SUMMED = ("species", "animal", "session", "zone", "tag", "date")
_TOTALS = re.compile(
    r"((grand|overall)\s+)?(sub[- ]?)?totals?\b.*|sum\b.*|means?|averages?|(zwischen|gesamt)?summe\b.*|mittelwert|gesamt",
    re.IGNORECASE,
)
_ERROR = re.compile(r"#(N/A|REF!|VALUE!|DIV/0!|NAME\?|NULL!|NUM!|SPILL!|#+)|Err:\d{3}")
"""What a spreadsheet shows in a cell whose formula failed, or that is too narrow."""


class Inspector:
    """Takes the rows of one file piece by piece, in order, and lets through those that a rule can read.

    The others are accounted for in the ledger, each with its row. Call `finish` after the last piece.

    Parameters
    ----------
    wanted : Wanted
    heading : Heading
    delimiter : str, optional
        Sign between the cells of a text file; it decides how surely a decimal comma is one.
    """

    def __init__(self, wanted: Wanted, heading: Heading, delimiter: str | None = None) -> None:
        self.wanted, self.heading = wanted, heading
        self._numbers = Numbers(wanted, delimiter)

    def inspect(self, rows: NDArray[np.int64], columns: list[Any]) -> Piece:
        """One piece of the file as a `Piece`, cleared of rows that no rule should see."""
        dropped = self._blank(columns)
        for row in rows[dropped].tolist():
            self.wanted.drop(row, "", *BLANK)
        rows, columns = _without(rows, columns, dropped)
        dropped = self._repeated_header(columns)
        for row in rows[dropped].tolist():
            problem = "the header (or its units) once more, as where files were put together"
            self.wanted.drop(row, ", ".join(self.heading.names), "repeated header", problem, "set_aside")
        rows, columns = _without(rows, columns, dropped)
        piece = Piece(self.wanted.name, rows, dict(zip(self.heading.names, columns, strict=True)))
        return self._numbers.normalise(self._labels(piece))

    def finish(self) -> None:
        """Add what can be said only about the file as a whole.

        Raises
        ------
        LogError
            Numbers could be read in two ways, and nothing in the file tells which.
        """
        self._numbers.finish()

    def _blank(self, columns: list[Any]) -> Mask:
        """Rows without a filled cell; nearly always the first column alone rules that out."""
        return _all_of(pc.equal(pc.utf8_trim_whitespace(column), "") for column in columns)

    def _repeated_header(self, columns: list[Any]) -> Mask:
        found = np.zeros(len(columns[0]), dtype=bool)
        for written in self.heading.written:
            padded = written + [""] * (len(columns) - len(written))
            found |= _all_of(_reads(column, cell) for column, cell in zip(columns, padded, strict=False))
        return found

    def _labels(self, piece: Piece) -> Piece:
        """Take out rows whose labels are no names: totals, and error values of a spreadsheet."""
        wrong: dict[int, tuple[str, str, str, str, str]] = {}
        for field in _LABELS:
            heading = self.wanted.fields.get(field)
            if heading is None or heading not in piece.columns:
                continue
            labels = Labels.of(piece.columns[heading])
            faults = [self._fault(field, text) for text in labels.written]
            if not any(faults):
                continue
            for position in np.flatnonzero(labels.where(fault is not None for fault in faults)).tolist():
                fault = faults[int(labels.index[position])]
                if fault is not None:
                    wrong.setdefault(position, (field, labels.at(position), *fault))
        for position, (field, value, reason, problem, action) in sorted(wrong.items()):
            row = int(piece.rows[position])
            self.wanted.drop(row, value, reason, problem, "stop" if action == "stop" else "set_aside", field)
        return kept(piece, wrong)

    def _fault(self, field: str, text: str) -> tuple[str, str, str] | None:
        """Reason, problem and action for a label that is none; None for one that may be a name."""
        if not text or key(text) in self.wanted.known:
            return None
        if field in _SUMMED and _TOTALS.fullmatch(text.strip()):
            advice = 'delete it, or set `logs.file.totals` to "set_aside"'
            return "totals row", f"a total would count the rows above again; {advice}", self.wanted.form.totals
        if _ERROR.fullmatch(text.strip()):
            return "spreadsheet error", "the cell holds an error; mend its formula and export again", "stop"
        return None


def kept(piece: Piece, without: dict[int, Any]) -> Piece:
    """A piece without the rows at these positions."""
    if not without:
        return piece
    mask = np.ones(len(piece.rows), dtype=bool)
    mask[list(without)] = False
    chosen = pa.array(mask)
    return Piece(piece.file, piece.rows[mask], {name: column.filter(chosen) for name, column in piece.columns.items()})


def _without(rows: NDArray[np.int64], columns: list[Any], dropped: Mask) -> tuple[NDArray[np.int64], list[Any]]:
    if not dropped.any():
        return rows, columns
    chosen = pa.array(~dropped)
    return rows[~dropped], [column.filter(chosen) for column in columns]


def _all_of(conditions: Iterator[Any]) -> Mask:
    """Where all conditions hold; the later ones are not worked out once none can."""
    found: Mask | None = None
    for condition in conditions:
        mask = np.asarray(condition)
        found = mask if found is None else found & mask
        if not found.any():
            break
    return np.zeros(0, dtype=bool) if found is None else found


def _reads(column: Any, cell: str) -> Any:
    """Where the cells of a column read like a cell of the header."""
    found = pc.equal(column, cell)
    if tidy_heading(cell) and not pc.any(found).as_py():  # spaces may differ
        return pc.equal(pc.utf8_trim_whitespace(column), cell)
    return found
