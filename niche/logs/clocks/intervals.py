"""ISO 8601 intervals in one cell: start/end, start/duration, duration/end, with ``/`` or, as in file names, ``--``.

The end may leave out what it shares with the start: ``2026-09-03T08:15/08:40``. An offset on the start holds for an end
without one.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.clocks.durations import Lengths, read_durations
from niche.logs.clocks.iso import read_iso
from niche.logs.clocks.written import Written

NOT_AN_INTERVAL = (
    "not an interval such as 2026-09-03T08:15/08:40; `logs.columns` names neither `end` nor `duration`, so each start cell "
    "needs its end or its length too"
)
TWO_DURATIONS = "an interval needs a start or an end beside the duration"

_SPLIT = r"^\s*(?P<left>[^/]*?)\s*(?:/|--)\s*(?P<right>[^/]*?)\s*$"
_START = r"^(?P<date>(?P<month>(?P<year>\d{4}-?)\d{2}-?)?[^T ]*[T ])?[^Z+-]*(?P<offset>Z|[+-]\d{2}(?::?\d{2})?)?$"
_SHORT = (
    # What the end gives, and which group of the start goes before it.
    (
        r"^\d{2}:\d{2}(:\d{2}([.,]\d+)?)?(Z|[+-]\d{2}(:?\d{2})?)?$|^\d{4}(\d{2}([.,]\d+)?)?(Z|[+-]\d{2}(\d{2})?)?$",
        "date",
    ),
    (r"^T\d{2}:?\d{2}(:?\d{2}([.,]\d+)?)?(Z|[+-]\d{2}(:?\d{2})?)?$", "day"),
    (r"^\d{2}[T ]\d{2}", "month"),
    (r"^\d{2}-?\d{2}[T ]\d{2}", "year"),
)


@dataclass(frozen=True)
class Intervals:
    """Intervals as written; where a side is a duration, it is in ``length`` and that side is blank."""

    start: Written
    end: Written
    length: Lengths
    starts: NDArray[np.bool_]
    """Cells that give their start, and not their length before an end."""
    ends: NDArray[np.bool_]


def read_intervals(text: Any) -> Intervals:
    """Read intervals.

    Parameters
    ----------
    text : pyarrow string array, length n

    Returns
    -------
    Intervals
        A cell that is no interval has the problem `NOT_AN_INTERVAL` in its start.
    """
    found = pc.extract_regex(text, _SPLIT)
    split = np.array(pc.is_valid(found), dtype=bool)
    left, right = (pc.fill_null(pc.struct_field(found, side), "") for side in ("left", "right"))
    before, after = (np.array(pc.starts_with(side, "P"), dtype=bool) for side in (left, right))
    right = _completed(left, right)
    start, end = read_iso(left), read_iso(right)
    length = read_durations(pc.if_else(pa.array(before), left, pc.if_else(pa.array(after), right, "PT0S")), "s")
    start.problem[~split] = NOT_AN_INTERVAL
    start.problem[before & after] = TWO_DURATIONS
    for side, is_length in ((start, before & ~after), (end, after)):
        side.problem[is_length] = None
    end.problem[~split | (before & after)] = None
    start.seconds |= end.seconds
    return Intervals(start, end, length, split & ~before, split & ~after)


def _completed(left: Any, right: Any) -> Any:
    """Ends with the leading parts, and the offset, that they share with the start."""
    parts = pc.extract_regex(left, _START)
    groups = {name: pc.fill_null(pc.struct_field(parts, name), "") for name in ("year", "month", "date", "offset")}
    groups["day"] = pc.utf8_rtrim(groups["date"], "T ")
    whole = right
    for pattern, name in _SHORT:
        whole = pc.if_else(pc.match_substring_regex(right, pattern), _joined(groups[name], right), whole)
    bare = pc.and_(
        pc.match_substring_regex(whole, r"[T ][^Z+-]*$"),
        pc.invert(pc.starts_with(right, "P")),
    )
    return pc.if_else(bare, _joined(whole, groups["offset"]), whole)


def _joined(first: Any, second: Any) -> Any:
    return pc.binary_join_element_wise(first, second, "")
