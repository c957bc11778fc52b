"""Columns of times, read as ``logs.clock`` declares them.

One reader goes through all pieces of the logs, for some things show only in the file as a whole: whether times carry an
offset, whether any tells seconds, whether the clock runs to 12 or to 24, whether it falls back.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.clocks.diagnose import Question, questions
from niche.logs.clocks.durations import read_durations
from niche.logs.clocks.iso import read_iso
from niche.logs.clocks.local import READ_AS, to_utc
from niche.logs.clocks.numbers import DAY_ZERO, elapsed, read_decimal_hours, read_spreadsheet, read_unix
from niche.logs.clocks.order import Falls, Groups, Nights
from niche.logs.clocks.patterns import exchanged, read_pattern
from niche.logs.clocks.seen import Seen
from niche.logs.clocks.written import DAY, END_OF_DAY, LEAP_SECOND, MIDNIGHT, UNREADABLE, Written
from niche.logs.clocks.years import START_YEARS, day_zero, outside, restarted
from niche.logs.labels import Labels, tidy
from niche.logs.ledger import Entry, Ledger
from niche.logs.rows import Cells, Mask, Rows
from niche.study.model import Study
from niche.study.time_zone import time_zone

_REPAIRS = {
    END_OF_DAY: "24:00",
    LEAP_SECOND: "leap second",
    MIDNIGHT: "midnight without its time",
    READ_AS["earlier"]: "repeated hour",
    READ_AS["later"]: "repeated hour",
}
PAST_MIDNIGHT = "past midnight"
CLOCK = "clock reset"
_OUT_OF_ORDER = (
    "earlier than the row before, although the session had passed midnight: the rows of the sheet are not in the order of "
    "time; sort them, or give each row its own date"
)


@dataclass
class Column:
    """A column of times as written, with what the cells say for the messages."""

    name: str
    text: Any
    written: Written

    @property
    def cells(self) -> Cells:
        """Cells for messages; a date and a time of day from two columns stand together."""
        return Cells(self.text)


@dataclass
class TimeReader:
    """Reads times of all logs of a study, piece by piece."""

    study: Study
    _file: str = field(default="", init=False)
    _has_offset: bool | None = field(default=None, init=False)
    _agreed: bool | None = field(default=None, init=False)
    _seen: dict[str, Seen] = field(default_factory=dict, init=False)
    _nights: Nights = field(default_factory=Nights, init=False)
    _falls: Falls = field(default_factory=Falls, init=False)
    _starts: dict[str, int] | None = field(default=None, init=False)

    def read(self, rows: Rows, name: str) -> tuple[NDArray[np.int64], Mask]:
        """Times of a column in milliseconds since 1970-01-01T00:00Z, and which of them could be read.

        Parameters
        ----------
        rows : Rows
        name : {"start", "end", "time"}
            The column, by the name that ``logs.columns`` gives it.
        """
        column = self.column(rows, name)
        self.add_nights(rows, column)
        return self.settle(rows, column)

    def column(self, rows: Rows, name: str) -> Column:
        """A column as written."""
        text, written = self._written(rows, getattr(self.study.logs.columns, name), name)
        return Column(name, text, written)

    def add_nights(self, rows: Rows, column: Column) -> NDArray[np.int64]:
        """Move times after midnight to the next day, where the sheet bears the date of its first; days added by row."""
        columns, clock = self.study.logs.columns, self.study.logs.clock
        added, doubt = (np.zeros(len(rows.piece.rows), dtype=kind) for kind in (np.int64, bool))
        if columns.date is None or columns.session is None or clock.midnight == "stop":
            return added
        fine = column.written.problem == None  # noqa: E711 - elementwise
        at = np.flatnonzero(fine)
        ms = column.written.ms[at]
        who = self._groups(rows, at, "session", "animal")
        groups = Groups.of(*who, ms // DAY, file=rows.piece.file)
        added[at], doubt[at] = self._nights.days(ms, groups, clock.longest_bout * 3_600_000)
        column.written.ms += added * DAY
        advice = "after midnight in the order of the session, so read as the day after the date of the sheet"
        rows.repair(column.name, (added > 0) & ~doubt, column.cells, PAST_MIDNIGHT, advice)
        rows.problem(column.name, doubt, column.cells, CLOCK, _OUT_OF_ORDER, "stop")
        return added

    def agree(self, rows: Rows, *columns: Column) -> None:
        """Let the first time of a file, whichever column it stands in, say whether the others have offsets too."""
        self._begin(rows.piece.file)
        firsts = [
            (int(np.argmax(column.written.fits)), number)
            for number, column in enumerate(columns)
            if column.written.fits.any()
        ]
        if self._agreed is None and firsts:
            place, number = min(firsts)
            self._agreed = bool(columns[number].written.has_offset[place])

    def _begin(self, file: str) -> None:
        """Forget what the file before had agreed on."""
        if file != self._file:
            self._file, self._has_offset, self._agreed = file, None, None

    def settle(self, rows: Rows, column: Column) -> tuple[NDArray[np.int64], Mask]:
        """Turn times as written into milliseconds of UTC, and tell the rows what is wrong."""
        logs, name, written, cells = self.study.logs, column.name, column.written, column.cells
        self._begin(rows.piece.file)
        written.mend_midnights(self._has_offset is not None)
        zone = None if logs.time_zone is None else time_zone(logs.time_zone)
        found = to_utc(
            written, zone, self._agreed if self._has_offset is None else self._has_offset, logs.clock.repeated_hour
        )
        self._has_offset = found.has_offset
        fine = found.fine
        self._report(rows, column, found.problem)
        for repair in {r for r in found.repair[fine] if r is not None}:
            rows.repair(name, fine & (found.repair == repair), cells, _REPAIRS.get(repair, "repaired"), repair)
        fine &= ~self._doubt_years(rows, column, fine)
        fine &= ~self._doubt_falls(rows, column, found.ms, fine)
        self._seen.setdefault(rows.piece.file, Seen()).add(name, written, fine)
        return found.ms, fine

    def finish(self, ledger: Ledger) -> None:
        """Note what only a whole file shows; call once after the last piece."""
        for file, seen in self._seen.items():
            for question in seen.notes(self.study):
                ledger.note(Entry(file, None, seen.name, "", question.reason, question.advice, "flagged"))

    def _written(self, rows: Rows, heading: str | None, name: str) -> tuple[Any, Written]:
        """Text and times as written of a column, by the declared form."""
        logs = self.study.logs
        form, decimal = logs.clock.format, logs.file.decimal or "."
        text = rows.piece.column(heading)
        dates = rows.piece.column(logs.columns.date)
        trimmed = pc.utf8_trim_whitespace(text)
        blank = pc.equal(trimmed, "")
        if logs.columns.date is not None:
            no_date = pc.and_(pc.equal(pc.utf8_trim_whitespace(dates), ""), pc.invert(blank))
            rows.problem("date", np.asarray(no_date), Cells(dates), "date missing", "a time needs its date; fill it in")
            text = _together(dates, trimmed, blank, "T" if form == "iso" else " ")
        if form == "iso":
            return text, read_iso(trimmed if logs.columns.date is None else text)
        if "%" in form:
            return text, read_pattern(text, form)
        if decimal == ",":
            trimmed, dates = (pc.replace_substring(column, ",", ".") for column in (trimmed, dates))
        if form == "spreadsheet":
            parts = None if logs.columns.date is None else pc.utf8_trim_whitespace(dates)
            return text, read_spreadsheet(trimmed, logs.clock.epoch, parts)
        if form == "decimal_hours":
            return text, read_decimal_hours(trimmed, rows.piece.column(logs.columns.date))
        if form in ("unix_seconds", "unix_milliseconds"):
            return text, read_unix(trimmed, 1 if form == "unix_seconds" else 1000)
        unit = "frames" if form == "frames" else logs.duration_unit
        lengths = read_durations(trimmed, unit, frames_per_second=logs.clock.frames_per_second)
        return text, elapsed(lengths, *self._session_starts(rows))

    def _session_starts(self, rows: Rows) -> tuple[NDArray[np.int64], Mask]:
        """Start of each row's session, and whether it is known."""
        if self._starts is None:
            from niche.logs.sessions import read_sessions

            self._starts = {name: session.start_ms for name, session in read_sessions(self.study).items()}
        labels = Labels.of(rows.piece.column(self.study.logs.columns.session))
        starts = [self._starts.get(tidy(text)) for text in labels.written]
        known = labels.where(start is not None for start in starts)
        return labels.spread(start or 0 for start in starts).astype(np.int64), known

    def _report(self, rows: Rows, column: Column, problem: NDArray[np.object_]) -> None:
        """Tell the rows which cells could not be read, and why."""
        logs, name, cells = self.study.logs, column.name, column.cells
        blank = np.asarray(pc.equal(pc.utf8_trim_whitespace(column.text), ""), dtype=bool) & (problem != None)  # noqa: E711
        missing = "a bout without it has no length" if name in ("start", "end") else "fill it in"
        rows.problem(name, blank, cells, f"{name} missing", missing)
        wrong = np.flatnonzero((problem != None) & ~blank)  # noqa: E711 - elementwise
        if not wrong.size:
            return
        texts, numbers = [cells.at(position) for position in wrong.tolist()], rows.piece.rows[wrong].tolist()
        asked: dict[str, Question] = {}
        if logs.clock.format == "iso":
            unread = [problem[position] == UNREADABLE for position in wrong.tolist()]
            asked = questions(
                [text for text, is_so in zip(texts, unread, strict=True) if is_so],
                [number for number, is_so in zip(numbers, unread, strict=True) if is_so],
                dated=logs.columns.date is not None,
            )
        elif "%" in logs.clock.format:
            asked = exchanged(column.text, rows.piece.rows, column.written, logs.clock.format)
        policy = logs.problems.unreadable
        for reason, advice in {(question.reason, question.advice) for question in asked.values()}:
            these = np.zeros(len(problem), dtype=bool)
            chosen = [asked.get(text) == Question(reason, advice) for text in texts]
            these[wrong[np.array(chosen, dtype=bool)]] = True
            rows.problem(name, these, cells, reason, advice, "stop")
        left = np.zeros(len(problem), dtype=bool)
        left[wrong] = [text not in asked for text in texts]
        for words in {words for words in problem[left] if words is not None}:
            action = "stop" if words == DAY_ZERO else policy
            rows.problem(name, left & (problem == words), cells, "unreadable time", words, action)

    def _doubt_years(self, rows: Rows, column: Column, fine: Mask) -> Mask:
        """Rows whose year shows that the clock was wrong, or that the cell holds no date."""
        clock, ms, name, cells = self.study.logs.clock, column.written.ms, column.name, column.cells
        zero = day_zero(ms, fine) if column.written.civil else np.zeros(len(ms), dtype=bool)
        rows.problem(name, zero, cells, "unreadable time", DAY_ZERO, "stop")
        fine = fine & ~zero
        said = outside(ms, fine, clock.first_year, clock.last_year)
        for words in {w for w in said if w is not None}:
            rows.problem(name, said == words, cells, CLOCK, words, "stop")
        out = said != None  # noqa: E711 - elementwise
        again = (
            restarted(ms, fine & ~out) if clock.first_year is None and clock.last_year is None else np.zeros_like(zero)
        )
        years = ", ".join(map(str, START_YEARS))
        advice = (
            f"clocks begin again in {years} when their battery was out, and most times of the file lie elsewhere; correct "
            "the times of this deployment, or say with `logs.clock.first_year` and `last_year` that the year is right"
        )
        rows.problem(name, again, cells, CLOCK, advice, "stop")
        return np.asarray(zero | out | again, dtype=bool)

    def _doubt_falls(self, rows: Rows, column: Column, ms: NDArray[np.int64], fine: Mask) -> Mask:
        """Rows at which the clock falls back by more than half a day, in a log that is otherwise in the order of time."""
        columns = self.study.logs.columns
        doubt = np.zeros(len(ms), dtype=bool)
        places = [n for n in ("session", "deployment", "antenna") if getattr(columns, n) is not None]
        at = np.flatnonzero(fine)
        if column.name == "end" or not places or not at.size:
            return doubt
        with_whom = (
            [] if columns.date is not None else [n for n in ("animal", "tag") if getattr(columns, n) is not None]
        )
        groups = Groups.of(*self._groups(rows, at, *places, *with_whom), file=rows.piece.file)
        doubt[at] = self._falls.of_clock(ms[at], groups)
        advice = (
            "the clock falls back by more than 12 hours against the row before; if it was reset, correct the times of this "
            "session or deployment; if rows are only out of order, sort them by time"
        )
        rows.problem(column.name, doubt, column.cells, CLOCK, advice, "stop")
        return doubt

    def _groups(self, rows: Rows, at: NDArray[np.int64], *names: str) -> list[NDArray[np.object_]]:
        """Labels of the chosen rows in some columns, as far as the study names them."""
        headings = [getattr(self.study.logs.columns, name) for name in names]
        columns = [Labels.of(rows.piece.column(heading)) for heading in headings if heading is not None]
        return [labels.spread(tidy(text) for text in labels.written)[at] for labels in columns]


def _together(dates: Any, times: Any, blank: Any, between: str) -> Any:
    """A date and a time of day from two columns; empty where there is no time. A spreadsheet may give dates a 00:00."""
    day = pc.replace_substring_regex(pc.utf8_trim_whitespace(dates), r"^(\d{4}-\d{2}-\d{2})[T ]00:00(:00)?$", r"\1")
    return pc.if_else(blank, "", pc.binary_join_element_wise(day, times, between))


def instant(
    rows: Rows, study: Study, heading: str | None, name: str, has_offset: bool | None
) -> tuple[NDArray[np.int64], Mask, bool | None]:
    """Times of a column of one piece, where no other piece has to be known but for ``has_offset``.

    Returns
    -------
    ms : array of int64
        Milliseconds since 1970-01-01T00:00Z.
    fine : array of bool
        Which of them could be read.
    has_offset : bool or None
        Whether times of the file carry an offset, to be passed with its next piece.
    """
    reader = TimeReader(study)
    reader._file, reader._has_offset = rows.piece.file, has_offset
    column = Column(name, *reader._written(rows, heading, name))
    ms, fine = reader.settle(rows, column)
    return ms, fine, reader._has_offset
