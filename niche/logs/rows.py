"""The rows of a piece while a rule reads them: problems are gathered until a row's worth is known, then accounted for."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any, Protocol

import numpy as np
from numpy.typing import NDArray

from niche.logs.labels import Labels
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece

Mask = NDArray[np.bool_]

_SHOWN = 80
"""Letters of a cell that the ledger keeps: enough to know it by."""


class Written(Protocol):
    """A column as written, looked at row by row only where something is wrong."""

    def at(self, position: int) -> str:
        """The cell of a row."""
        ...


@dataclass
class Cells:
    """A column whose cells mostly differ, such as times."""

    column: Any

    def at(self, position: int) -> str:
        """The cell of a row."""
        return str(self.column[position].as_py())


@dataclass
class Rows:
    """Rows of one piece and what was found in them.

    A rule calls `problem`, `flag`, `repair` as it reads columns, and `settle` once, when it knows what each row is worth.
    """

    piece: Piece
    ledger: Ledger
    problems: dict[int, list[Entry]] = field(default_factory=dict)
    notes: dict[int, list[Entry]] = field(default_factory=dict)
    """Repairs and flags, told only of rows that turn out to be used."""

    def problem(
        self,
        name: str,
        wrong: Mask,
        written: Written,
        reason: str,
        advice: str | dict[str, str],
        action: Action = "set_aside",
    ) -> None:
        """These rows cannot be used.

        Parameters
        ----------
        name : str
            The field, by the name that ``logs.columns`` gives it.
        wrong : array of bool, shape (n,)
        written : Labels or Cells
            The column, for the value in the message.
        reason : str
            The kind of problem in a few words; rows are counted by it.
        advice : str or dict
            Rule and remedy; a dict gives them by the value as written.
        action : {"set_aside", "stop"}
        """
        for position in np.flatnonzero(wrong).tolist():
            entry = self._entry(position, name, written, reason, advice, action)
            self.problems.setdefault(position, []).append(entry)

    def flag(self, name: str, which: Mask, written: Written, reason: str, advice: str | dict[str, str]) -> None:
        """These rows are used, and should be looked at again."""
        self._note(name, which, written, reason, advice, "flagged")

    def repair(self, name: str, which: Mask, written: Written, reason: str, advice: str | dict[str, str]) -> None:
        """These rows are used, after a repair that loses nothing."""
        self._note(name, which, written, reason, advice, "repaired")

    def respelled(self, name: str, labels: Labels, names: list[str | None]) -> None:
        """Note the rows whose label was written otherwise than listed; ``names`` go with ``labels.written``."""
        pairs = list(zip(labels.written, names, strict=True))
        changed = labels.where(bool(found) and found != text for text, found in pairs)
        self.repair(name, changed, labels, "spelling", {text: f"read as {found!r}" for text, found in pairs})

    def usable(self) -> Mask:
        """Rows without a problem so far."""
        mask = np.ones(len(self.piece.rows), dtype=bool)
        mask[list(self.problems)] = False
        return mask

    def tell(self) -> None:
        """Put repairs and flags of rows without a problem into the ledger, once."""
        for position, entries in sorted(self.notes.items()):
            for entry in entries if position not in self.problems else ():
                self.ledger.note(entry)
        self.notes.clear()

    def settle(self, milliseconds: NDArray[np.int64], unseen: Mask) -> Mask:
        """Account for every row of the piece, once.

        Parameters
        ----------
        milliseconds : array of int64, shape (n,)
            Time that each row is worth; 0 where it has none or it cannot be read.
        unseen : array of bool, shape (n,)
            Rows that tell of an animal out of sight.

        Returns
        -------
        array of bool, shape (n,)
            Rows that are used or out of sight; the others have their lines in the ledger.
        """
        self.ledger.come_in(self.piece.file, len(self.piece.rows), int(milliseconds.sum()))
        for position, entries in sorted(self.problems.items()):
            self.ledger.dispose(entries, int(milliseconds[position]))
        self.tell()
        kept = self.usable()
        dispositions: tuple[tuple[Action, Mask], ...] = (("used", kept & ~unseen), ("out_of_sight", kept & unseen))
        for action, which in dispositions:
            if which.any():
                self.ledger.count(self.piece.file, action, int(which.sum()), int(milliseconds[which].sum()))
        return kept

    def _note(
        self, name: str, which: Mask, written: Written, reason: str, advice: str | dict[str, str], action: Action
    ) -> None:
        for position in np.flatnonzero(which).tolist():
            entry = self._entry(position, name, written, reason, advice, action)
            self.notes.setdefault(position, []).append(entry)

    def _entry(
        self, position: int, name: str, written: Written, reason: str, advice: str | dict[str, str], action: Action
    ) -> Entry:
        value = written.at(position)
        text = advice if isinstance(advice, str) else advice[value]
        shown = value if len(value) <= _SHOWN else value[:_SHOWN] + "..."
        return Entry(self.piece.file, int(self.piece.rows[position]), name, shown, reason, text, action)
