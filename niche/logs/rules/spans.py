"""Start and end of each bout: from two columns, from a start and a duration, or from an interval in one cell."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from niche.logs.clocks.intervals import read_intervals
from niche.logs.clocks.written import DAY, Written
from niche.logs.ledger import Ledger
from niche.logs.lengths import duration, report_lengths
from niche.logs.rows import Cells, Mask, Rows
from niche.logs.times import PAST_MIDNIGHT, Column, TimeReader
from niche.study.model import Study

_HOUR = 3_600_000

CENTURY = 100 * 366 * DAY
"""A longer bout is a slip of the pen."""

Span = tuple[NDArray[np.int64], NDArray[np.int64], Mask]
"""Start, end, and whether both could be read and are in order."""


@dataclass
class Spans:
    """Reads the spans of bouts, piece by piece."""

    study: Study
    _times: TimeReader = field(init=False)

    def __post_init__(self) -> None:
        self._times = TimeReader(self.study)

    def read(self, rows: Rows) -> Span:
        """Start and end in milliseconds since 1970-01-01T00:00Z, and which rows have both in order."""
        columns = self.study.logs.columns
        if columns.duration is not None:
            start, readable = self._times.read(rows, "start")
            length, fine = duration(rows, self.study, columns.duration)
            span = start, start + length, readable & fine
        elif columns.end is not None:
            span = self._from_two_columns(rows)
        else:
            span = self._from_intervals(rows)
        self._flag_long(rows, span)
        return span

    def finish(self, ledger: Ledger) -> None:
        """Note what only whole files show."""
        self._times.finish(ledger)

    def _from_two_columns(self, rows: Rows) -> Span:
        first, second = self._times.column(rows, "start"), self._times.column(rows, "end")
        self._times.agree(rows, first, second)
        added = self._times.add_nights(rows, first)
        second.written.ms += added * DAY
        self._carry_past_midnight(rows, first.written, second)
        start, readable = self._times.settle(rows, first)
        end, fine = self._times.settle(rows, second)
        return self._in_order(rows, second, (start, end, readable & fine))

    def _from_intervals(self, rows: Rows) -> Span:
        text = rows.piece.column(self.study.logs.columns.start)
        found = read_intervals(text)
        first, second = Column("start", text, found.start), Column("end", text, found.end)
        self._carry_past_midnight(rows, found.start, second)
        start, readable = self._times.settle(rows, first)
        blank = second.written.problem != None  # noqa: E711 - elementwise
        second.written.problem[blank & ~readable] = None  # one message a cell
        end, fine = self._times.settle(rows, second)
        report_lengths(rows, self.study, "start", text, found.length, which=readable & fine)
        start, end = (
            np.where(found.starts, start, end - found.length.ms),
            np.where(found.ends, end, start + found.length.ms),
        )
        return self._in_order(rows, second, (start, end, readable & fine & found.length.fine))

    def _carry_past_midnight(self, rows: Rows, start: Written, end: Column) -> None:
        """Give an end after midnight the next day's date, where it bears that of the start."""
        clock = self.study.logs.clock
        both = (start.problem == None) & (end.written.problem == None) & start.fits & end.written.fits  # noqa: E711
        length = end.written.ms - end.written.offset * 60_000 - (start.ms - start.offset * 60_000)
        same_date = start.ms // DAY == end.written.ms // DAY
        over = both & same_date & (length < 0) & (length + DAY <= clock.longest_bout * _HOUR)
        if clock.midnight == "stop" or not end.written.civil or not over.any():
            return
        end.written.ms[over] += DAY
        advice = "before the start on the same date, so read as the next day"
        rows.repair("end", over, end.cells, PAST_MIDNIGHT, advice)

    def _in_order(self, rows: Rows, end: Column, span: Span) -> Span:
        """Tell the rows which bouts end before they start, or as they start."""
        start, stop, timed = span
        beyond = timed & (stop - start > CENTURY)
        advice = "more than a century after the start; is the year right?"
        rows.problem("end", beyond, end.cells, "unreadable time", advice, self.study.logs.problems.unreadable)
        timed = timed & ~beyond
        backward = timed & (stop < start)
        advice = "the end is before the start; if the bout ran past midnight, give the end the next day's date"
        policy = self.study.logs.problems.end_before_start
        rows.problem("end", backward, end.cells, "end before start", advice, policy)
        rows.flag("end", timed & (stop == start), end.cells, "zero duration", "kept, adds no time")
        return start, stop, timed & ~backward

    def _flag_long(self, rows: Rows, span: Span) -> None:
        start, end, timed = span
        columns, longest = self.study.logs.columns, self.study.logs.clock.longest_bout
        long = timed & (np.where(timed, end - start, 0) > longest * _HOUR)
        name = "duration" if columns.duration is not None else "end" if columns.end is not None else "start"
        advice = f"longer than {longest:g} h, which `logs.clock.longest_bout` gives; check times, unit and date"
        rows.flag(name, long, Cells(rows.piece.column(getattr(columns, name))), "long bout", advice)
