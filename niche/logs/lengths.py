"""A column of durations, in the unit that ``logs.duration_unit`` declares."""

from __future__ import annotations

from typing import Any

import numpy as np
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.clocks.durations import HOURS_OR_PARTS, NEGATIVE, THREE_PARTS, TWO_PARTS, Lengths, read_durations
from niche.logs.rows import Cells, Mask, Rows
from niche.study.model import Study


def duration(rows: Rows, study: Study, heading: str) -> tuple[NDArray[np.int64], Mask]:
    """Durations in milliseconds, and which of them could be read."""
    logs = study.logs
    column = rows.piece.column(heading)
    lengths = read_durations(
        column,
        logs.duration_unit,
        frames_per_second=logs.clock.frames_per_second,
        decimal=logs.file.decimal or ".",
        epoch=logs.clock.epoch,
    )
    report_lengths(rows, study, "duration", column, lengths)
    fine = lengths.fine
    rows.flag("duration", fine & (lengths.ms == 0), Cells(column), "zero duration", "kept, adds no time")
    return lengths.ms, fine


def report_lengths(
    rows: Rows, study: Study, name: str, column: Any, lengths: Lengths, which: Mask | bool = True
) -> None:
    """Tell the rows, or some of them, which durations could not be read, and why."""
    cells, policy, problem = Cells(column), study.logs.problems, lengths.problem
    blank = np.asarray(pc.equal(pc.utf8_trim_whitespace(column), ""), dtype=bool) & which
    rows.problem(name, blank, cells, f"{name} missing", "a bout without it has no length")
    told = ~blank & which
    for words in {words for words in problem[told] if words is not None}:
        reason, action = "unreadable duration", policy.unreadable
        if words == NEGATIVE:
            reason, action = "end before start", policy.end_before_start
        elif words in (TWO_PARTS, THREE_PARTS, HOURS_OR_PARTS):
            action = "stop"
        rows.problem(name, (problem == words) & told, cells, reason, words, action)
    for repair in {r for r in lengths.repair[lengths.fine] if r is not None}:
        rows.repair(name, lengths.repair == repair, cells, "duration shown as a date", repair)
