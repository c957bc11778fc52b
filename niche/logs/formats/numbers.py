"""Plain numbers written with a decimal comma or with signs between thousands.

A comma is taken for the decimal sign, and said so, where nothing else fits: cells are not parted by commas, some cell
has other than three digits after it, and no cell of the file has a decimal point. Thousands signs are never taken off.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.errors import LogError
from niche.logs.formats.wanted import Wanted
from niche.logs.pieces import Piece

_COMMA = r"^\s*[+-]?\d+,\d+\s*$"
_POINT = r"^\s*[+-]?\d+\.\d+\s*$"
_EITHER = r"^\s*[+-]?[1-9]\d{0,2}[.,]\d{3}\s*$"
"""One thousands sign, or a decimal sign before three digits."""
_THOUSANDS = r"^\s*[+-]?\d{1,3}(?:([.,' \x{a0}\x{202f}’])\d{3})+(?:[.,]\d*)?\s*$"


@dataclass
class _Seen:
    """First cell of a kind, and how many there are."""

    row: int
    value: str
    field: str
    count: int = 0


class Numbers:
    """Normalises numbers through a file, and remembers what it has seen."""

    def __init__(self, wanted: Wanted, delimiter: str | None) -> None:
        self.wanted = wanted
        self._by_comma = delimiter == ","
        self._point_is_usual = delimiter != ";"
        self._commas: _Seen | None = None
        self._points: _Seen | None = None
        self._sure_comma = self._sure_point = False

    def normalise(self, piece: Piece) -> Piece:
        """A piece with decimal points in its columns of numbers, without the rows whose numbers have thousands signs.

        Raises
        ------
        LogError
            Both signs stand for decimals in the file.
        """
        declared = self.wanted.form.decimal
        if declared == "." or (declared is None and self._by_comma):
            return piece
        for heading in [h for h in piece.columns if self.wanted.is_number(h)]:
            field, column = self.wanted.field_of(heading), piece.columns[heading]
            comma, point = _where(column, _COMMA), _where(column, _POINT)
            grouped = _where(column, _THOUSANDS) & ~comma & ~point
            either = _where(column, _EITHER)
            if declared == ",":
                grouped |= point
            elif comma.any() or point.any():
                self._commas = self._see(self._commas, comma, piece, heading)
                self._points = self._see(self._points, point, piece, heading)
                self._sure_comma |= bool((comma & ~either).any())
                self._sure_point |= bool((point & ~either).any())
                if self._commas is not None and self._points is not None:
                    self._ask(f"and {self._points.value!r} in row {self._points.row} has a point")
            if comma.any():
                text = pc.replace_substring(column, ",", ".")
                piece = Piece(
                    piece.file, piece.rows, {**piece.columns, heading: pc.if_else(pa.array(comma), text, column)}
                )
            if grouped.any():
                piece = self._without_grouped(piece, heading, field, grouped, declared)
        return piece

    def finish(self) -> None:
        """Note the commas read as points, once for the file.

        Raises
        ------
        LogError
            Every comma (or, among semicolons, every point) stands before three digits and could part thousands.
        """
        if self.wanted.form.decimal is not None:
            return
        if self._commas is not None and not self._sure_comma:
            self._ask("and every such number of the file could have it between thousands")
        if self._points is not None and not self._sure_point and not self._point_is_usual:
            self._commas = self._points
            self._ask("and every such number of the file could have it between thousands")
        if (seen := self._commas) is not None:
            problem = f"decimal comma read as a point, in {seen.count} cells of the file"
            self.wanted.note(seen.row, seen.value, "decimal comma", problem, "repaired", seen.field)

    def _see(self, seen: _Seen | None, which: NDArray[np.bool_], piece: Piece, heading: str) -> _Seen | None:
        if not which.any():
            return seen
        if seen is None:
            at = int(np.argmax(which))
            value = piece.columns[heading][at].as_py().strip()
            seen = _Seen(int(piece.rows[at]), value, self.wanted.field_of(heading))
        seen.count += int(which.sum())
        return seen

    def _ask(self, why: str) -> None:
        seen = self._commas
        assert seen is not None
        raise LogError(
            f"{self.wanted.name}: row {seen.row}: {seen.field} {seen.value!r}: decimal or thousands? It has one sign, "
            f'{why}. Set `logs.file.decimal` to "," or "." as the file means it.'
        )

    def _without_grouped(
        self, piece: Piece, heading: str, field: str, grouped: NDArray[np.bool_], declared: str | None
    ) -> Piece:
        column: Any = piece.columns[heading]
        for at in np.flatnonzero(grouped).tolist():
            problem = "signs between thousands are not read; write the number without them, such as 12345 or 12345.5"
            if declared == ",":
                problem = "a point, where `logs.file.decimal` is a comma; " + problem
            self.wanted.drop(int(piece.rows[at]), column[at].as_py(), "thousands sign", problem, "stop", field)
        chosen = pa.array(~grouped)
        return Piece(piece.file, piece.rows[~grouped], {name: c.filter(chosen) for name, c in piece.columns.items()})


def _where(column: Any, pattern: str) -> NDArray[np.bool_]:
    return np.asarray(pc.match_substring_regex(column, pattern))
