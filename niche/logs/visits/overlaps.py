"""One animal in two places at once.

Sorted by start, a bout overlaps if it starts before the running maximum of the earlier ends: comparing with the row
before alone would miss a bout inside a long one.
"""

from __future__ import annotations

import heapq
from itertools import groupby, pairwise
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Ledger
from niche.logs.visits.table import clock, codes, listed, move, seconds, trim

REASON = "overlaps another bout of the same animal"
TRIMMED = "overlap trimmed"
SHARED = "overlap split"


def overlapping(visits: pd.DataFrame, who: NDArray[np.int64]) -> pd.DataFrame:
    """Bouts that share time with another of the same animal.

    Parameters
    ----------
    visits : DataFrame
    who : array of int, shape (n,)
        The animal of each visit.

    Returns
    -------
    DataFrame
        With the column ``run``: bouts of one run hang together by overlaps. Ordered by run, start, end and then by what
        the bouts say, so that the order of the rows in the logs decides nothing. A bout without length is never there.
    """
    start, end = visits["start"].to_numpy(dtype=np.int64), visits["end"].to_numpy(dtype=np.int64)
    long = np.flatnonzero(end > start)
    order = long[np.lexsort((end[long], start[long], who[long]))]
    animal, start, end = who[order], start[order], end[order]
    running = pd.Series(end).groupby(animal).cummax().to_numpy()
    new = np.ones(len(order), dtype=bool)
    new[1:] = (animal[1:] != animal[:-1]) | (start[1:] >= running[:-1])
    run = np.cumsum(new) - 1
    together = np.bincount(run)[run] > 1 if len(run) else np.zeros(0, dtype=bool)
    found: pd.DataFrame = visits.iloc[order[together]].assign(run=run[together])
    return found.sort_values(["run", "start", "end", "zone", "session", "file", "row"], kind="stable")


def without_overlaps(
    visits: pd.DataFrame, ledger: Ledger, policy: str, who: NDArray[np.int64] | None = None
) -> pd.DataFrame:
    """Visits in which no animal is in two places at once.

    Parameters
    ----------
    visits : DataFrame
        Its index names each row once.
    ledger : Ledger
        Takes what is set aside, stops the work, or is shortened.
    policy : {"stop", "set_aside", "trim_earlier", "split"}
        What to do, as in ``logs.problems.overlap``.
    who : array of int, shape (n,), optional
        The animal of each visit; by default what species and animal say.
    """
    found = overlapping(visits, codes(visits, "species", "animal") if who is None else who)
    if found.empty:
        return visits
    if policy == "trim_earlier":
        return _trimmed(visits, found, ledger)
    if policy == "split":
        return _split(visits, found, ledger)
    clash, other = _first_come(found) if policy == "set_aside" else _any(found)
    rows = listed(found)
    for position in np.flatnonzero(clash).tolist():
        row, holder = rows[position], rows[other[position]]
        problem = (
            f"{row.animal!r} is already in {_zone(holder)} until {clock(holder.end)} ({holder.file}, row {holder.row}); "
            'correct one of the two times, or set `logs.problems.overlap` to "set_aside", "trim_earlier" or "split"'
        )
        move(ledger, row, REASON, problem, "set_aside" if policy == "set_aside" else "stop")
    return visits.drop(index=found.index[clash])


def _any(found: pd.DataFrame) -> tuple[NDArray[np.bool_], NDArray[np.intp]]:
    """Every bout that starts within an earlier one, and the earlier one that ends last."""
    run, end = found["run"].to_numpy(), found["end"].to_numpy()
    first = np.ones(len(run), dtype=bool)
    first[1:] = run[1:] != run[:-1]
    running = found.groupby("run")["end"].cummax().to_numpy()
    highest = first.copy()
    highest[1:] |= end[1:] > running[:-1]
    holder = np.maximum.accumulate(np.where(highest, np.arange(len(run)), 0))
    return ~first, np.concatenate([[0], holder[:-1]]).astype(np.intp)


def _first_come(found: pd.DataFrame) -> tuple[NDArray[np.bool_], NDArray[np.intp]]:
    """Bouts that start within an earlier one that is kept, and which that is."""
    clash, other = np.zeros(len(found), dtype=bool), np.zeros(len(found), dtype=np.intp)
    kept, current, until = 0, -1, 0
    bounds = zip(*(found[name].to_numpy().tolist() for name in ("run", "start", "end")), strict=True)
    for i, (run, start, end) in enumerate(bounds):
        if run != current or start >= until:
            current, kept, until = run, i, end
        else:
            clash[i], other[i] = True, kept
    return clash, other


def _trimmed(visits: pd.DataFrame, found: pd.DataFrame, ledger: Ledger) -> pd.DataFrame:
    """Each bout ends where the next one starts; of bouts that start together none is the earlier."""
    run, start = found["run"].to_numpy(), found["start"].to_numpy()
    level = np.zeros(len(found), dtype=bool)
    level[1:] = (run[1:] == run[:-1]) & (start[1:] == start[:-1])
    rows = listed(found)
    for position in np.flatnonzero(level).tolist():
        row, other = rows[position], rows[position - 1]
        problem = (
            f"starts at the same moment as another bout of {row.animal!r} in {_zone(other)} ({other.file}, row "
            f"{other.row}), so neither is the earlier one to trim; correct one of the two, or set `logs.problems.overlap` "
            'to "set_aside" or "split"'
        )
        move(ledger, row, REASON, problem, "stop")
    rest = found[~level]
    rows = listed(rest)
    run, start, end = (rest[name].to_numpy() for name in ("run", "start", "end"))
    until = end.copy()
    until[:-1] = np.where(run[1:] == run[:-1], np.minimum(end[:-1], start[1:]), end[:-1])
    for position in np.flatnonzero(until < end).tolist():
        row, after, cut = rows[position], rows[position + 1], int(until[position])
        problem = (
            f"ended at {clock(cut)}, where {row.animal!r} is in {_zone(after)} ({after.file}, row {after.row}); "
            f"{seconds(row.end - cut)} s set aside"
        )
        trim(ledger, row, TRIMMED, problem, int(row.end) - cut)
    left = visits.drop(index=found.index[level])
    left.loc[rest.index, "end"] = until
    left.loc[rest.index, "amount"] = until - start
    return left


def _split(visits: pd.DataFrame, found: pd.DataFrame, ledger: Ledger) -> pd.DataFrame:
    """Each bout takes over in the middle of the time that it shares with the bouts before it."""
    parts: list[tuple[int, int, int]] = []
    begun = 0
    for _, numbers in groupby(found["run"].to_numpy().tolist()):
        stop = begun + len(list(numbers))
        bounds = found.iloc[begun:stop]
        shares = takeovers(bounds["start"].to_numpy().tolist(), bounds["end"].to_numpy().tolist())
        parts += [(begun + which, a, b) for which, a, b in shares]
        begun = stop
    rows = listed(found)
    kept: dict[int, list[tuple[int, int]]] = {number: [] for number in range(len(rows))}
    for which, a, b in parts:
        kept[which].append((a, b))
    for number, spans in kept.items():
        row = rows[number]
        lost = int(row.end - row.start) - sum(b - a for a, b in spans)
        if not spans:
            problem = f"its time is shared with two or more other bouts of {row.animal!r}, and no part of it is left"
            move(ledger, row, REASON, problem, "set_aside")
        elif lost:
            shown = " and ".join(f"{clock(a)} to {clock(b)}" for a, b in spans[:3]) + (" and more" if spans[3:] else "")
            problem = (
                f"shares time with another bout of {row.animal!r}; counts from {shown}; {seconds(lost)} s set aside"
            )
            trim(ledger, row, SHARED, problem, lost)
    new = visits.loc[found.index[[which for which, _, _ in parts]]].copy()
    new["start"] = np.array([a for _, a, _ in parts], dtype=np.int64)
    new["end"] = np.array([b for _, _, b in parts], dtype=np.int64)
    new["amount"] = new["end"] - new["start"]
    return pd.concat([visits.drop(index=found.index), new], ignore_index=True)


def takeovers(start: list[int], end: list[int]) -> list[tuple[int, int, int]]:
    """Divide the time of bouts that hang together, so that each moment belongs to one.

    A bout takes over in the middle of the time that it shares with the bouts before it and holds until its end, or until
    the next takes over; after the end of a bout inside a longer one, the longer one goes on. Where three share time, the
    third halves what the second has got.

    Parameters
    ----------
    start, end : lists of int
        Milliseconds, in order of start.

    Returns
    -------
    list of (which, from, to)
        In order of time; which counts from 0.

    Examples
    --------
    >>> takeovers([0, 20], [50, 70])
    [(0, 0, 35), (1, 35, 70)]
    >>> takeovers([0, 20], [100, 40])
    [(0, 0, 30), (1, 30, 40), (0, 40, 100)]
    """
    begins: list[int] = []
    high, last, until = start[0], start[0], start[0]
    for a, b in zip(start, end, strict=True):
        shared = min(b, high)
        since = last if a < last < shared and a < until else a
        begins.append(a if a >= high else (since + shared) // 2)
        high, last, until = max(high, b), begins[-1], b
    waiting = sorted(range(len(start)), key=begins.__getitem__, reverse=True)
    active: list[int] = []
    parts: list[tuple[int, int, int]] = []
    moments = sorted({*begins, *end})
    for now, then in pairwise(moments):
        while waiting and begins[waiting[-1]] <= now:
            heapq.heappush(active, -waiting.pop())
        while active and end[-active[0]] <= now:
            heapq.heappop(active)
        if active:
            which = -active[0]
            if parts and parts[-1][0] == which and parts[-1][2] == now:
                parts[-1] = (which, parts[-1][1], then)
            else:
                parts.append((which, now, then))
    return parts


def _zone(row: Any) -> str:
    return repr(row.zone or "out of sight")
