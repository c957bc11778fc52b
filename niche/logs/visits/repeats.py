"""Rows entered twice: the same bout again, the same file under another name, the same log exported anew."""

from __future__ import annotations

from collections import Counter

import pandas as pd

from niche.logs.ledger import Entry, Ledger
from niche.logs.visits.table import KEY, listed, move

REASON = "exact repeat of an earlier row"
_MANY = 10
"""From this many repeats of another file's rows on, a note says so even if the file has other rows too."""


def without_repeats(visits: pd.DataFrame, ledger: Ledger) -> pd.DataFrame:
    """Set aside rows that repeat an earlier row exactly, as a second upload does.

    Rows of two observers are not repeats of each other, nor are rows of two sites.
    """
    by = [*KEY, *(name for name in ("observer", "site") if name in visits)]
    candidates = visits[visits.duplicated(["start", "end"], keep=False)]
    repeated = candidates.duplicated(by)
    if not repeated.any():
        return visits
    repeats = candidates[repeated]
    first = candidates[~repeated][[*by, "file", "row"]]
    found = repeats.merge(first, on=by, suffixes=("", "_first"))
    for row in listed(found):
        move(ledger, row, REASON, f"repeats {row.file_first}, row {row.row_first}, exactly", "set_aside")
    _sum_up(found, Counter(visits["file"].tolist()), ledger)
    return visits.drop(index=repeats.index)


def _sum_up(found: pd.DataFrame, rows_of: Counter[str], ledger: Ledger) -> None:
    """Say of a file whose rows stand in another one that it is the same log."""
    for pair, again in found[found["file"] != found["file_first"]].groupby(["file", "file_first"]):
        file, original = map(str, pair)
        count, of = len(again), rows_of[file]
        ordered = again.sort_values("row")["row_first"].is_monotonic_increasing
        how = "in the same order" if ordered else "in another order"
        if count == of and count > 1:
            problem = (
                f"all its rows repeat rows of {original}, {how}: the same log a second time; leave one of the two out"
            )
        elif count >= _MANY:
            problem = f"{count} of its {of} rows repeat rows of {original}, {how}; leave them out of one of the two"
        else:
            continue
        ledger.note(Entry(file, None, "", f"{count} rows", "the same log again", problem, "flagged"))
