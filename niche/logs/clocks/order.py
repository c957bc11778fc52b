"""What only the order of the rows shows: a night crossed on a sheet dated by its first day, and a clock that was reset.

Each row is judged by the rows before it alone, so that it does not matter into what pieces a log is cut.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.clocks.written import DAY

HALF_DAY = DAY // 2

Key = tuple[object, ...]


@dataclass(frozen=True)
class Groups:
    """Rows by what they share, such as a session and an animal: a code for each row, and the key of each code."""

    codes: NDArray[np.int64]
    keys: list[Key]

    @classmethod
    def of(cls, *columns: NDArray[np.object_] | NDArray[np.int64], file: str = "") -> Groups:
        """Groups of rows that agree in some columns; keys begin with the file, where it is given."""
        codes, distinct = pd.factorize(pd.MultiIndex.from_arrays(list(columns)))
        return cls(np.asarray(codes, dtype=np.int64), [(file, *key) for key in distinct])


@dataclass
class Falls:
    """Watches groups of rows for clocks that fall back by more than half a day."""

    _so_far: dict[Key, tuple[int, int, int]] = field(default_factory=dict)
    """Of each group: its last time, its steps forward, its steps back."""

    def of_clock(self, ms: NDArray[np.int64], groups: Groups) -> NDArray[np.bool_]:
        """Rows at which a group falls back by more than half a day, having been in the order of time before.

        A group is in that order as long as it has stepped forward at least four times as often as back.
        """
        order = np.argsort(groups.codes, kind="stable")
        codes, sorted_ms = groups.codes[order], ms[order]
        first = np.ones(len(ms), dtype=bool)
        first[1:] = codes[1:] != codes[:-1]
        begins = np.flatnonzero(first)
        known = [self._so_far.get(groups.keys[code]) for code in codes[begins].tolist()]
        previous = np.concatenate([sorted_ms[:1], sorted_ms[:-1]])
        previous[begins] = [
            ms if past is None else past[0] for past, ms in zip(known, sorted_ms[begins].tolist(), strict=True)
        ]
        step = sorted_ms - previous
        on, back = (
            self._counts(steps, begins, [0 if p is None else p[i] for p in known])
            for i, steps in ((1, step > 0), (2, step < 0))
        )
        ends = np.append(begins[1:], len(ms)) - 1
        for code, end in zip(codes[begins].tolist(), ends.tolist(), strict=True):
            self._so_far[groups.keys[code]] = int(sorted_ms[end]), int(on[end]), int(back[end])
        falls = np.zeros(len(ms), dtype=bool)
        falls[order] = (step < -HALF_DAY) & (on >= 4 * back)
        return falls

    @staticmethod
    def _counts(steps: NDArray[np.bool_], begins: NDArray[np.int64], before: list[int]) -> NDArray[np.int64]:
        """How many steps each group has made up to each row, with those of earlier pieces."""
        total = np.cumsum(steps, dtype=np.int64)
        sizes = np.diff(np.append(begins, len(steps)))
        moved = np.array(before, dtype=np.int64) - total[begins] + steps[begins]
        return np.asarray(total + np.repeat(moved, sizes), dtype=np.int64)


@dataclass
class Nights:
    """Times on sheets that bear the date of their first day: those after midnight belong to the next day."""

    _so_far: dict[Key, tuple[int, bool, bool]] = field(default_factory=dict)
    """Of each group: its last time, whether it has passed midnight, whether it fell back otherwise before."""

    def days(
        self, ms: NDArray[np.int64], groups: Groups, longest: float
    ) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
        """Days to add to each time, 0 or 1, and rows that fall back once midnight was passed.

        A group passes midnight where it falls back for the first time, by more than half a day.

        Parameters
        ----------
        ms : array of int64, shape (n,)
            Times by the local clock, with the date of the sheet.
        groups : Groups
            One session, animal and date each.
        longest : float
            Longest gap, in milliseconds, that the move to the next day may leave.
        """
        add, doubt = np.zeros(len(ms), dtype=np.int64), np.zeros(len(ms), dtype=bool)
        order = np.argsort(groups.codes, kind="stable")
        begins = np.flatnonzero(np.append(True, np.diff(groups.codes[order]) != 0)) if len(ms) else order
        for rows in np.split(order, begins[1:]) if len(ms) else []:
            key, times = groups.keys[groups.codes[rows[0]]], ms[rows]
            last, passed, fell = self._so_far.get(key, (int(times[0]), False, False))
            if passed or times[0] < last or (np.diff(times) < 0).any():
                last, passed, fell = self._walk(times, rows, (last, passed, fell), longest, add, doubt)
            else:
                last = int(times[-1])
            self._so_far[key] = last, passed, fell
        return add, doubt

    @staticmethod
    def _walk(
        times: NDArray[np.int64],
        rows: NDArray[np.int64],
        state: tuple[int, bool, bool],
        longest: float,
        add: NDArray[np.int64],
        doubt: NDArray[np.bool_],
    ) -> tuple[int, bool, bool]:
        """Go through one group row by row."""
        last, passed, fell = state
        for row, time in zip(rows.tolist(), times.tolist(), strict=True):
            fall = last - time - DAY * passed
            if not (passed or fell) and HALF_DAY < fall < DAY and DAY - fall <= longest:
                passed = True
            elif fall > 0:
                doubt[row], fell = passed, True
            add[row] = passed
            last = time + DAY * passed
        return last, passed, fell
