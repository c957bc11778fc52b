"""The visits table: one row a stay of one animal in one zone."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Action, Entry, Ledger

OUT_OF_SIGHT = ""
"""Zone of a visit during which the animal could not be seen."""

KEY = ["species", "animal", "session", "zone", "start", "end"]
COLUMNS = [*KEY, "amount", "file", "row"]
"""Start and end are milliseconds since 1970-01-01T00:00Z; a visit is the half-open ``[start, end)``. ``amount`` is what
the visit adds to the use of its zone: its milliseconds, or a number of scans, events or counts where time is not known
(then start and end are the same)."""


def visits_table(
    species: NDArray[np.object_],
    animal: NDArray[np.object_],
    session: NDArray[np.object_],
    zone: NDArray[np.object_],
    start: NDArray[np.int64],
    end: NDArray[np.int64],
    file: str | NDArray[np.object_],
    row: NDArray[np.int64],
    kept: NDArray[np.bool_] | slice = slice(None),
    *,
    amount: NDArray[np.int64] | None = None,
) -> pd.DataFrame:
    """The canonical table from columns of equal length, rows chosen by ``kept``; ``amount`` is the time by default."""
    return pd.DataFrame(
        {
            "species": species[kept],
            "animal": animal[kept],
            "session": session[kept],
            "zone": zone[kept],
            "start": start[kept],
            "end": end[kept],
            "amount": (end - start if amount is None else amount)[kept],
            "file": file if isinstance(file, str) else file[kept],
            "row": row[kept],
        },
        columns=COLUMNS,
    )


def codes(visits: pd.DataFrame, *names: str) -> NDArray[np.int64]:
    """A number for each row, the same where the named columns agree."""
    code = np.zeros(len(visits), dtype=np.int64)
    for name in names:
        number, different = pd.factorize(visits[name])
        code = pd.factorize(code * (len(different) + 1) + number)[0].astype(np.int64)
    return code


def listed(visits: pd.DataFrame) -> list[Any]:
    """The rows, each with its cells as attributes."""
    return list(visits.itertuples(index=False))


def move(ledger: Ledger, row: Any, reason: str, problem: str, action: Action) -> None:
    """Set aside a visit, or let it stop the work, that a rule had let through."""
    span = f"{clock(row.start)} to {clock(row.end)}"
    entry = Entry(row.file, int(row.row), "start", span, reason, problem, action, int(row.end - row.start))
    ledger.move(entry, account(row))


def trim(ledger: Ledger, row: Any, reason: str, problem: str, milliseconds: int) -> None:
    """Set aside a part of the time of a visit that is used all the same."""
    ledger.count(row.file, account(row), 0, -milliseconds)
    ledger.count(row.file, "set_aside", 0, milliseconds)
    span = f"{clock(row.start)} to {clock(row.end)}"
    ledger.note(Entry(row.file, int(row.row), "end", span, reason, problem, "repaired"))


def account(row: Any) -> Action:
    """Where the ledger has counted a visit so far."""
    return "out_of_sight" if row.zone == OUT_OF_SIGHT else "used"


def clock(ms: int) -> str:
    """UTC in ISO 8601, with milliseconds only where there are any."""
    text = str(np.datetime64(int(ms), "ms"))
    return text.removesuffix(".000") + "Z"


def seconds(ms: int) -> str:
    """Seconds exactly, to the millisecond where there are any."""
    whole, rest = divmod(int(ms), 1000)
    return f"{whole}.{rest:03d}" if rest else str(whole)
