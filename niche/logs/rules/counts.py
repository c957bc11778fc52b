"""Counts: how many animals a row tells of."""

from __future__ import annotations

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.rows import Cells, Rows
from niche.study.model import Study


def counts(rows: Rows, study: Study) -> NDArray[np.int64]:
    """Count of each row: a whole number at least 0; 1 throughout where the study names no such column."""
    heading = study.logs.columns.count
    if heading is None:
        return np.ones(len(rows.piece.rows), dtype=np.int64)
    column = pc.utf8_trim_whitespace(rows.piece.column(heading))
    whole = pc.match_substring_regex(column, r"^\d{1,9}(\.0+)?$")
    digits = pc.replace_substring_regex(column, r"\.0+$", "")
    value = np.asarray(pc.cast(pc.if_else(whole, digits, "0"), pa.int64()))
    empty = np.asarray(pc.equal(column, ""))
    cells, policy = Cells(column), study.logs.problems.unreadable
    advice = 'fill it in; where every row is one animal, leave `logs.columns.count` out or set it to ""'
    rows.problem("count", empty, cells, "count missing", advice, policy)
    advice = "not a whole number at least 0, such as 3"
    rows.problem("count", ~np.asarray(whole) & ~empty, cells, "unreadable count", advice, policy)
    return value
