"""The ledger: every row and every millisecond of the input, used or set aside with a reason.

A row has one disposition: *used*, *out_of_sight*, *set_aside* or *stop* (it stops the work until mended). Rows used or
out of sight are counted by file; every other row has a line of its own. A row that was repaired or flagged is used, and
has a line that says so. Milliseconds are whole numbers, so the sums close exactly or the program is wrong.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, Literal

import numpy as np
from numpy.typing import NDArray

from niche.errors import NicheError

if TYPE_CHECKING:
    import pandas as pd

Action = Literal["used", "out_of_sight", "set_aside", "stop", "repaired", "flagged"]
DISPOSITIONS: tuple[Action, ...] = ("used", "out_of_sight", "set_aside", "stop")


@dataclass(frozen=True)
class Entry:
    """One line of the ledger.

    ``row`` is None for a line that counts many rows of a file; ``reason`` is the kind of problem in a few words, and
    ``problem`` tells it in full, with the remedy.
    """

    file: str
    row: int | None
    field: str
    value: str
    reason: str
    problem: str
    action: Action
    milliseconds: int = 0


@dataclass
class Ledger:
    """Accounts of one reading of the logs."""

    entries: list[Entry] = field(default_factory=list)
    rows_read: Counter[str] = field(default_factory=Counter)
    """Rows by file, counted as they come in, before anything is decided about them."""
    milliseconds_read: int = 0
    """Time of all rows whose start and end could be read."""
    rows: Counter[Action] = field(default_factory=Counter)
    milliseconds: Counter[Action] = field(default_factory=Counter)
    reasons: Counter[tuple[Action, str]] = field(default_factory=Counter)
    """Rows set aside, or stopping the work, by their worst problem."""
    by_file: defaultdict[tuple[str, Action], NDArray[np.object_]] = field(
        default_factory=lambda: defaultdict(lambda: np.array([0, 0], dtype=object))
    )
    """Rows and milliseconds that need no line each, by file and disposition."""

    def come_in(self, file: str, rows: int, milliseconds: int = 0) -> None:
        """Note that rows were read, with their time where it could be read."""
        self.rows_read[file] += rows
        self.milliseconds_read += milliseconds

    def count(self, file: str, action: Action, rows: int, milliseconds: int) -> None:
        """Account for many rows of a file that need no line each."""
        self.rows[action] += rows
        self.milliseconds[action] += milliseconds
        self.by_file[file, action] += np.array([rows, milliseconds], dtype=object)

    def dispose(self, entries: list[Entry], milliseconds: int = 0) -> None:
        """Account for one row that is not used, by its problems: the worst carries the row and its time."""
        worst = next((e for e in entries if e.action == "stop"), entries[0])
        for entry in entries:
            if entry is worst:
                entry = replace(entry, milliseconds=milliseconds)
                self.rows[entry.action] += 1
                self.milliseconds[entry.action] += milliseconds
                self.reasons[entry.action, entry.reason] += 1
            self.entries.append(entry)

    def move(self, entry: Entry, taken_from: Action) -> None:
        """Set aside a row that had been counted otherwise."""
        self.count(entry.file, taken_from, -1, -entry.milliseconds)
        self.dispose([entry], entry.milliseconds)

    def note(self, entry: Entry) -> None:
        """Add a line that moves no row: a repair or a flag."""
        self.entries.append(entry)

    @property
    def stops(self) -> list[Entry]:
        """Lines that stop the work, in the order of the logs."""
        return sorted((e for e in self.entries if e.action == "stop"), key=lambda e: (e.file, e.row or 0))

    def close(self) -> None:
        """Raise unless rows and milliseconds add up.

        Raises
        ------
        NicheError
            The sums differ: a defect of the program, never of the log.
        """
        rows, milliseconds = sum(self.rows_read.values()), sum(self.milliseconds.values())
        if rows != sum(self.rows.values()) or self.milliseconds_read != milliseconds:
            raise NicheError(
                f"The ledger does not close: {rows} rows read and {sum(self.rows.values())} accounted for, "
                f"{self.milliseconds_read} ms read and {milliseconds} accounted for. This is a defect of niche."
            )

    def sums(self) -> list[tuple[str, int, int]]:
        """What became of the input: (label, rows, milliseconds), the total first."""
        lines = [("read", sum(self.rows_read.values()), self.milliseconds_read)]
        lines += [(name, self.rows[name], self.milliseconds[name]) for name in DISPOSITIONS]
        return lines

    def table(self) -> pd.DataFrame:
        """The ledger as the ``ledger`` table; the seconds of its rows add up to the time read."""
        import pandas as pd

        counted = [
            Entry(file, None, "", f"{rows} row{'s' * (rows != 1)}", "", action.replace("_", " "), action, milliseconds)
            for (file, action), (rows, milliseconds) in self.by_file.items()
            if rows
        ]
        ordered = sorted(counted + self.entries, key=lambda e: (e.file, e.row is not None, e.row or 0))
        return pd.DataFrame(
            {
                "file": [e.file for e in ordered],
                "row": pd.array([e.row for e in ordered], dtype="Int64"),
                "field": [e.field for e in ordered],
                "value": [e.value for e in ordered],
                "problem": [e.problem for e in ordered],
                "action": [e.action for e in ordered],
                "seconds": [e.milliseconds / 1000 for e in ordered],
            }
        )
