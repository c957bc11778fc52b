"""The visits table, and what can only be seen across rows: exact repeats, and one animal in two places at once."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

from niche.logs.ledger import Action, Entry, Ledger

OUT_OF_SIGHT = ""
"""Zone of a visit during which the animal could not be seen."""

KEY = ["species", "animal", "session", "zone", "start", "end"]
COLUMNS = [*KEY, "file", "row"]
"""Start and end are milliseconds since 1970-01-01T00:00Z; a visit is the half-open ``[start, end)``."""


def without_repeats(visits: pd.DataFrame, ledger: Ledger) -> pd.DataFrame:
    """Drop rows that repeat an earlier row exactly, as a second upload does."""
    repeated = visits.duplicated(KEY).to_numpy()
    if not repeated.any():
        return visits
    first = visits.drop_duplicates(KEY)[[*KEY, "file", "row"]]
    found = visits[repeated].merge(first, on=KEY, suffixes=("", "_first"))
    for row in found.itertuples(index=False):
        problem = f"repeats {row.file_first}, row {row.row_first}, exactly"
        _move(ledger, row, "exact repeat of an earlier row", problem, "set_aside")
    return visits[~repeated]


def without_overlaps(visits: pd.DataFrame, ledger: Ledger, action: Action) -> pd.DataFrame:
    """Take out bouts in which an animal is already in another zone.

    Sorted by start, a bout overlaps if it starts before the running maximum of the earlier ends: comparing with the row
    before alone would miss a bout inside a long one.
    """
    ordered = visits.sort_values(["species", "animal", "start", "end", "file", "row"], kind="stable")
    ordered = ordered[ordered["end"] > ordered["start"]]
    animal = ordered.groupby(["species", "animal"], sort=False)
    number = animal.ngroup().to_numpy()
    start, end = ordered["start"].to_numpy(), ordered["end"].to_numpy()
    running = animal["end"].cummax().to_numpy()
    clash = np.zeros(len(ordered), dtype=bool)
    clash[1:] = (start[1:] < running[:-1]) & (number[1:] == number[:-1])
    if not clash.any():
        return visits
    # Where the running maximum was last reached is the row that holds it: the one to name in the message.
    new = np.ones(len(ordered), dtype=bool)
    new[1:] = (end[1:] > running[:-1]) | (number[1:] != number[:-1])
    holder = np.maximum.accumulate(np.where(new, np.arange(len(ordered)), 0))
    for position in np.flatnonzero(clash):
        row, other = ordered.iloc[position], ordered.iloc[holder[position - 1]]
        problem = (
            f"{row.animal!r} is already in {other.zone or 'out of sight'!r} until {_clock(other.end)} "
            f"({other.file}, row {other.row}); correct one of the two times, or set "
            '`logs.problems.overlap` to "set_aside"'
        )
        _move(ledger, row, "overlaps another bout of the same animal", problem, action)
    return visits.drop(index=ordered.index[clash])


def _move(ledger: Ledger, row: Any, reason: str, problem: str, action: Action) -> None:
    """Set aside a visit that the rule had let through."""
    span = f"{_clock(row.start)} to {_clock(row.end)}"
    entry = Entry(row.file, int(row.row), "start", span, reason, problem, action, int(row.end - row.start))
    ledger.move(entry, "out_of_sight" if row.zone == OUT_OF_SIGHT else "used")


def _clock(ms: int) -> str:
    """UTC in ISO 8601, with milliseconds only where there are any."""
    text = str(np.datetime64(int(ms), "ms"))
    return text.removesuffix(".000") + "Z"
