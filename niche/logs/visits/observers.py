"""Two observers with one animal at the same time: one watch, written down twice."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.labels import toml_text
from niche.logs.ledger import Ledger
from niche.logs.visits.table import listed, move
from niche.study.names import key

REASON = "two observers"
SECOND = "second observer"


def one_observer(
    visits: pd.DataFrame, who: NDArray[np.int64], ledger: Ledger, chosen: str | None, policy: str
) -> tuple[pd.DataFrame, NDArray[np.int64]]:
    """Visits in which no two observers tell of one animal at the same time.

    Parameters
    ----------
    visits : DataFrame
        With the column ``observer``; a row without one is nobody's second.
    who : array of int, shape (n,)
        The animal of each visit.
    ledger : Ledger
    chosen : str, optional
        Whose rows count where they overlap with another's, from ``logs.observer``.
    policy : {"stop", "set_aside_later"}
        What else to do: with ``set_aside_later`` the rows of the one who had the animal first count, watch by watch.

    Returns
    -------
    visits : DataFrame
    who : array of int
        With an animal of its own for each observer where the work stops, so that the same rows do not stop it twice.
    """
    observer = visits["observer"].to_numpy(dtype=object)
    number, names = pd.factorize(observer)
    pairs = np.unique(np.stack([who, number])[:, observer != ""], axis=1)
    several = np.flatnonzero(np.bincount(pairs[0], minlength=int(who.max(initial=-1)) + 1) > 1)
    gone = np.zeros(len(visits), dtype=bool)
    who = who.copy()
    inside = np.flatnonzero(np.isin(who, several) & (observer != ""))
    inside = inside[np.argsort(who[inside], kind="stable")]
    for animal in np.split(inside, np.flatnonzero(np.diff(who[inside])) + 1) if len(inside) else []:
        watch = _Watch(visits.iloc[animal], number[animal])
        if not watch.double().any():
            continue
        out = np.zeros(len(animal), dtype=bool)
        for keeper in _keepers(watch, names, chosen, policy):
            out |= watch.give_way(keeper, ledger, by_choice=chosen is not None and key(names[keeper]) == key(chosen))
        gone[animal[out]] = True
        if watch.double().any():
            watch.stop(ledger, names)
            gone[animal[watch.out]] = True
            who[animal] = len(visits) + who[animal] * len(names) + number[animal]
    return visits[~gone], pd.factorize(who[~gone])[0].astype(np.int64)


def _keepers(watch: _Watch, names: NDArray[np.object_], chosen: str | None, policy: str) -> Iterator[int]:
    """Observers whose rows count, the first before the second."""
    if chosen is not None:
        yield from (n for n in watch.observers() if key(names[n]) == key(chosen))
    if policy == "set_aside_later":
        yield from watch.observers()


@dataclass
class _Watch:
    """Visits of one animal, with the observer of each; ``out`` marks those already taken out."""

    visits: pd.DataFrame
    observer: NDArray[np.int64]

    def __post_init__(self) -> None:
        self.start = self.visits["start"].to_numpy(dtype=np.int64)
        self.end = np.maximum(self.visits["end"].to_numpy(dtype=np.int64), self.start + 1)
        self.out = np.zeros(len(self.visits), dtype=bool)

    def observers(self) -> list[int]:
        """Observers in the order in which they began; by name where two began together."""
        first = {n: int(self.start[self.observer == n].min()) for n in set(self.observer.tolist())}
        name = dict(zip(self.observer.tolist(), self.visits["observer"], strict=True))
        return sorted(first, key=lambda n: (first[n], name[n]))

    def meeting(self, mine: NDArray[np.bool_], theirs: NDArray[np.bool_]) -> NDArray[np.intp]:
        """For each of my visits, one of theirs that shares time with it; -1 where there is none."""
        order = np.flatnonzero(theirs)[np.argsort(self.start[theirs], kind="stable")]
        found = np.full(int(mine.sum()), -1, dtype=np.intp)
        if len(order):
            end = self.end[order]
            highest = np.concatenate([[True], end[1:] > np.maximum.accumulate(end)[:-1]])
            holder = np.maximum.accumulate(np.where(highest, np.arange(len(order)), 0))
            before = np.searchsorted(self.start[order], self.end[mine], side="left") - 1
            last = holder[np.maximum(before, 0)]
            meets = (before >= 0) & (end[last] > self.start[mine])
            found[meets] = order[last[meets]]
        return found

    def double(self) -> NDArray[np.bool_]:
        """Visits left that share time with another observer's."""
        found = np.zeros(len(self.visits), dtype=bool)
        for number in set(self.observer.tolist()):
            mine = (self.observer == number) & ~self.out
            found[mine] = self.meeting(mine, (self.observer != number) & ~self.out) >= 0
        return found

    def give_way(self, keeper: int, ledger: Ledger, *, by_choice: bool) -> NDArray[np.bool_]:
        """Set aside the others' visits that share time with the keeper's."""
        others = np.flatnonzero((self.observer != keeper) & ~self.out)
        mask = np.zeros(len(self.visits), dtype=bool)
        mask[others] = True
        met = self.meeting(mask, (self.observer == keeper) & ~self.out)
        rows = listed(self.visits)
        for position, with_whom in zip(others[met >= 0].tolist(), met[met >= 0].tolist(), strict=True):
            row, first = rows[position], rows[with_whom]
            why = (
                "logs.observer says whose rows count" if by_choice else "the one who began first with the animal counts"
            )
            problem = (
                f"{row.observer!r} and {first.observer!r} logged {row.animal!r} at the same time ({first.file}, row "
                f"{first.row}), and {why}; kept apart"
            )
            move(ledger, row, SECOND, problem, "set_aside")
            self.out[position] = True
        return self.out

    def stop(self, ledger: Ledger, names: NDArray[np.object_]) -> None:
        """Stop the work, once for each two observers of the animal."""
        rows = listed(self.visits)
        order = self.observers()
        for place, first in enumerate(order):
            for second in order[place + 1 :]:
                mine, theirs = ((self.observer == n) & ~self.out for n in (second, first))
                met = self.meeting(mine, theirs)
                if not (met >= 0).any():
                    continue
                position, other = int(np.flatnonzero(mine)[met >= 0][0]), int(met[met >= 0][0])
                row, earlier = rows[position], rows[other]
                problem = (
                    f"{names[first]!r} and {names[second]!r} both logged {row.animal!r} at this time ({earlier.file}, row "
                    f"{earlier.row}), with {_rows(int((met >= 0).sum()))} of {names[second]!r} in all; say whose rows "
                    f"count, as in `logs.observer = {toml_text(names[first])}`; the other’s are then set aside, not lost"
                )
                move(ledger, row, REASON, problem, "stop")
                self.out[position] = True


def _rows(number: int) -> str:
    return "1 row" if number == 1 else f"{number} rows"
