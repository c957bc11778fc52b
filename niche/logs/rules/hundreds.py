"""Percentages told from other numbers: by what the numbers of a row add up to."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Entry
from niche.logs.rules.waiting import as_tuples, entry
from niche.study.model import Study

_FAR = 3.0
"""Rows whose sums lie typically more than so many times above or below 100 do not add up to 100 by chance."""


def percentage_problems(table: pd.DataFrame, study: Study) -> dict[int, Entry]:
    """Rows that are no percentages though they should be, or seem to be percentages though they should not.

    Parameters
    ----------
    table : DataFrame
        Columns total (sum of a row's numbers as written), numbers (how many are above 0), decimals (most of a number).

    Returns
    -------
    dict
        Line of the ledger by position in the table.
    """
    rule = study.logs.tallies
    total = table["total"].to_numpy(dtype=np.float64)
    rounding = 0.5 * 10.0 ** -table["decimals"].to_numpy() * table["numbers"].to_numpy() + 1e-6
    off = np.abs(total - 100.0)
    if rule is None:
        return {}
    if rule.unit == "percent":
        return _not_100(table, (total > 0) & (off > rounding), study)
    if rule.adds_to_100 == "keep":
        return {}
    return _seem_percentages(table, total, off <= np.minimum(rounding, 1.0), rule.unit)


def _not_100(table: pd.DataFrame, which: NDArray[np.bool_], study: Study) -> dict[int, Entry]:
    action, reason = study.logs.problems.unreadable, "percentages do not add up to 100"
    found = {}
    for position, row in as_tuples(table, which):
        hint = "are these shares of 1? Multiply them by 100" if abs(row.total - 1) < 0.05 else "a zone may be missing"
        problem = f'the numbers add up to {row.total:g}, and `logs.tallies.unit` is "percent"; {hint}'
        found[position] = entry(row, "zone", f"{row.total:g}", reason, problem, action)
    return found


def _seem_percentages(
    table: pd.DataFrame, total: NDArray[np.float64], near: NDArray[np.bool_], unit: str
) -> dict[int, Entry]:
    """Rows that add up to 100 where all rows do, or where the others come nowhere near it."""
    others = total[~near & (total > 0)]
    if not near.any() or (len(others) and 100 / _FAR <= float(np.median(others)) <= 100 * _FAR):
        return {}
    company = "as every row does" if not len(others) else "and other rows do not"
    problem = (
        f'the numbers add up to 100, {company}: percentages? `logs.tallies.unit` is "{unit}". If they are percentages, set '
        'it to "percent" or put them into a log of their own; if not, set `logs.tallies.adds_to_100` to "keep"'
    )
    reason = "numbers add up to 100"
    return {p: entry(row, "zone", f"{row.total:g}", reason, problem, "stop") for p, row in as_tuples(table, near)}
