"""Bouts: one row is one stay of one animal in one zone, from its start to its end or over its duration."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pandas as pd
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.errors import LogError
from niche.logs.clocks import DAY, UNREADABLE, Instants, read_times
from niche.logs.labels import Labels, key, listing, propose, tidy
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

_UNIT_MS = {"s": 1000, "min": 60_000, "h": 3_600_000}
_LONGEST = 100 * 366 * 86_400_000
"""A century: a longer bout is a slip of the pen."""
_LONG = ("long bout", "longer than a day; used as it stands")
_SHOWN = 80
"""Letters of a cell that the ledger keeps: enough to know it by."""


@dataclass
class Bouts:
    """Reads the pieces of one file, in order; keeps what later pieces must agree with.

    The ledger gets every row: used and out-of-sight rows counted, all others with their problems.
    """

    study: Study
    ledger: Ledger
    has_offset: bool | None = field(default=None, init=False)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """Visits of one piece (columns of `niche.logs.visits.COLUMNS`)."""
        columns = self.study.logs.columns
        self._check_headings(piece)
        rows = _Rows(piece, self.ledger)
        species = self._species(rows)
        animal = self._plain(rows, columns.animal, "animal")
        session = self._plain(rows, columns.session, "session")
        start, end, timed = self._times(rows)
        zone = self._zones(rows)
        milliseconds = np.where(timed, end - start, 0)
        self.ledger.come_in(piece.file, len(piece.rows), int(milliseconds.sum()))
        kept = rows.settle(milliseconds, zone == OUT_OF_SIGHT)
        return pd.DataFrame(
            {
                "species": species[kept],
                "animal": (session if columns.animal is None else animal)[kept],
                "session": (animal if columns.session is None else session)[kept],
                "zone": zone[kept],
                "start": start[kept],
                "end": end[kept],
                "file": piece.file,
                "row": piece.rows[kept],
            }
        )

    def _check_headings(self, piece: Piece) -> None:
        for name, heading in self.study.logs.columns.model_dump().items():
            if heading is not None and heading not in piece.columns:
                there = ", ".join(repr(h) for h in piece.columns if h)
                raise LogError(
                    f"{piece.file}: line 1: no heading {heading!r}, which `logs.columns.{name}` names. Headings there: "
                    f"{there}. Put the right one into the study file."
                )

    def _species(self, rows: _Rows) -> NDArray[np.object_]:
        listed = listing(species.name for species in self.study.species)
        labels = Labels.of(rows.piece.column(self.study.logs.columns.species))
        keys = [key(text) for text in labels.written]
        rows.problem("species", labels.where(k == "" for k in keys), labels, "species missing", "fill it in")
        if not listed:
            return labels.spread(tidy(text) for text in labels.written)
        names = [listed.get(k) for k in keys]
        unknown = labels.where(bool(k) and name is None for k, name in zip(keys, names, strict=True))
        advice = {text: f"not listed under `species`; {propose(text, listed)}" for text in labels.written}
        rows.problem("species", unknown, labels, "unknown species", advice, self.study.logs.problems.unknown_species)
        rows.repaired("species", labels, names)
        return labels.spread(names)

    def _zones(self, rows: _Rows) -> NDArray[np.object_]:
        listed = listing(self.study.zones.names)
        unseen = listing(self.study.logs.out_of_sight)
        labels = Labels.of(rows.piece.column(self.study.logs.columns.zone))
        keys = [key(text) for text in labels.written]
        names = [OUT_OF_SIGHT if k == "" or k in unseen else listed.get(k) for k in keys]
        blank = labels.where(k == "" for k in keys)
        rows.flagged("zone", blank, labels, "zone blank", "counted as out of sight")
        unknown = labels.where(name is None for name in names)
        allowed = listed | unseen
        advice = {text: f"no such zone; {propose(text, allowed)}" for text in labels.written}
        rows.problem("zone", unknown, labels, "unknown zone", advice, self.study.logs.problems.unknown_zone)
        spelled = [
            unseen.get(k, name) if name == OUT_OF_SIGHT and k else name for k, name in zip(keys, names, strict=True)
        ]
        rows.repaired("zone", labels, spelled)
        return labels.spread(names)

    def _plain(self, rows: _Rows, heading: str | None, name: str) -> NDArray[np.object_]:
        """Animal or session: any name, but not none."""
        labels = Labels.of(rows.piece.column(heading))
        names = [tidy(text) for text in labels.written]
        if heading is not None:
            rows.problem(name, labels.where(n == "" for n in names), labels, f"{name} missing", "fill it in")
        return labels.spread(names)

    def _times(self, rows: _Rows) -> tuple[NDArray[np.int64], NDArray[np.int64], NDArray[np.bool_]]:
        """Start, end, and whether both could be read in the right order."""
        logs = self.study.logs
        if logs.columns.duration is not None:
            (instants,) = self._instants(rows, [logs.columns.start])
            start, readable = self._time(rows, instants, logs.columns.start, "start")
            length, fine = self._duration(rows, logs.columns.duration)
            rows.flagged(
                "duration", readable & fine & (length > DAY), _Cells(rows.piece.column(logs.columns.duration)), *_LONG
            )
            return start, start + length, readable & fine
        starts, stops = self._instants(rows, [logs.columns.start, logs.columns.end])
        start, readable = self._time(rows, starts, logs.columns.start, "start")
        end, fine = self._time(rows, stops, logs.columns.end, "end")
        timed = readable & fine
        ends = Labels.of(rows.piece.column(logs.columns.end))
        beyond = timed & (end - start > _LONGEST)
        advice = "more than a century after the start; is the year right?"
        rows.problem("end", beyond, ends, "unreadable time", advice, logs.problems.unreadable)
        timed &= ~beyond
        backward = timed & (end < start)
        advice = "the end is before the start; if the bout ran past midnight, give the end the next day's date"
        rows.problem("end", backward, ends, "end before start", advice, logs.problems.end_before_start)
        rows.flagged("end", timed & (end == start), ends, "zero duration", "kept, adds no time")
        rows.flagged("end", timed & (end - start > DAY), ends, *_LONG)
        return start, end, timed & ~backward

    def _instants(self, rows: _Rows, headings: list[str | None]) -> list[Instants]:
        """Times of several columns, read row by row: which time of the file comes first must not hang on the pieces."""
        columns, each = [rows.piece.column(heading) for heading in headings], len(headings)
        order = np.arange(each * len(rows.piece.rows)).reshape(each, -1).T.ravel()
        text = pc.take(pa.concat_arrays(columns), pa.array(order))
        found = read_times(text, self.study.logs.time_zone, self.has_offset)
        self.has_offset = found.has_offset
        return [
            Instants(found.ms[i::each], found.problem[i::each], found.repair[i::each], found.has_offset)
            for i in range(each)
        ]

    def _time(
        self, rows: _Rows, instants: Instants, heading: str | None, name: str
    ) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
        column = rows.piece.column(heading)
        blank = np.asarray(pc.equal(pc.utf8_trim_whitespace(column), "")) & (instants.problem == UNREADABLE)
        labels = _Cells(column)
        rows.problem(name, blank, labels, f"{name} missing", "a bout without it has no length")
        for problem in {p for p in instants.problem if p is not None}:
            wrong = (instants.problem == problem) & ~blank
            rows.problem(name, wrong, labels, "unreadable time", problem, self.study.logs.problems.unreadable)
        for repair in {r for r in instants.repair if r is not None}:
            rows.note(name, instants.repair == repair, labels, "24:00", repair, "repaired")
        return instants.ms, instants.problem == None  # noqa: E711 - elementwise

    def _duration(self, rows: _Rows, heading: str) -> tuple[NDArray[np.int64], NDArray[np.bool_]]:
        column = pc.utf8_trim_whitespace(rows.piece.column(heading))
        number = np.asarray(pc.match_substring_regex(column, r"^-?\d{1,15}(\.\d+)?$"))
        value = np.asarray(pc.cast(pc.if_else(pa.array(number), column, "0"), pa.float64()))
        length = np.rint(value * _UNIT_MS[self.study.logs.duration_unit])
        blank = np.asarray(pc.equal(column, ""))
        labels, action = _Cells(column), self.study.logs.problems
        rows.problem("duration", blank, labels, "duration missing", "a bout without it has no length")
        advice = "not a plain number, such as 42 or 42.5"
        rows.problem("duration", ~number & ~blank, labels, "unreadable duration", advice, action.unreadable)
        advice = "a duration is not negative"
        rows.problem("duration", number & (length < 0), labels, "end before start", advice, action.end_before_start)
        advice = f"longer than a century; is the unit {self.study.logs.duration_unit!r} right?"
        rows.problem("duration", length > _LONGEST, labels, "unreadable duration", advice, action.unreadable)
        rows.flagged("duration", number & (length == 0), labels, "zero duration", "kept, adds no time")
        fine = number & (length >= 0) & (length <= _LONGEST)
        return np.where(fine, length, 0).astype(np.int64), fine


@dataclass
class _Cells:
    """A column whose cells all differ, such as times: looked at only where something is wrong."""

    column: Any

    def at(self, position: int) -> str:
        return str(self.column[position].as_py())


@dataclass
class _Rows:
    """Problems met in the rows of a piece, gathered until the row's time is known."""

    piece: Piece
    ledger: Ledger
    problems: dict[int, list[Entry]] = field(default_factory=dict)
    notes: list[tuple[int, Entry]] = field(default_factory=list)
    """Repairs and flags, with the position of the row: they are told of rows that are used."""

    def problem(
        self,
        name: str,
        wrong: NDArray[np.bool_],
        labels: Labels | _Cells,
        reason: str,
        advice: str | dict[str, str],
        action: Action = "set_aside",
    ) -> None:
        """These rows cannot be used."""
        for position in np.flatnonzero(wrong).tolist():
            entry = self._entry(position, name, labels, reason, advice, action)
            self.problems.setdefault(position, []).append(entry)

    def flagged(self, name: str, which: NDArray[np.bool_], labels: Labels | _Cells, reason: str, advice: str) -> None:
        """These rows are used, and looked at twice."""
        self.note(name, which, labels, reason, advice, "flagged")

    def repaired(self, name: str, labels: Labels, names: list[str | None]) -> None:
        """Note the rows whose spelling differs from the listed name."""
        changed = [
            found is not None and found not in (text, OUT_OF_SIGHT)
            for text, found in zip(labels.written, names, strict=True)
        ]
        advice = {text: f"read as {found!r}" for text, found in zip(labels.written, names, strict=True)}
        self.note(name, labels.where(changed), labels, "spelling", advice, "repaired")

    def note(
        self,
        name: str,
        which: NDArray[np.bool_],
        labels: Labels | _Cells,
        reason: str,
        advice: str | dict[str, str],
        action: Action,
    ) -> None:
        """A line in the ledger that moves no row."""
        for position in np.flatnonzero(which).tolist():
            self.notes.append((position, self._entry(position, name, labels, reason, advice, action)))

    def settle(self, milliseconds: NDArray[np.int64], unseen: NDArray[np.bool_]) -> NDArray[np.bool_]:
        """Account for every row of the piece; True for those that become visits."""
        for position, entries in sorted(self.problems.items()):
            self.ledger.dispose(entries, int(milliseconds[position]))
        for position, entry in self.notes:
            if position not in self.problems:
                self.ledger.note(entry)
        kept = np.ones(len(self.piece.rows), dtype=bool)
        kept[list(self.problems)] = False
        for action, which in (("used", kept & ~unseen), ("out_of_sight", kept & unseen)):
            self.ledger.count(self.piece.file, action, int(which.sum()), int(milliseconds[which].sum()))  # type: ignore[arg-type]
        return kept

    def _entry(
        self,
        position: int,
        name: str,
        labels: Labels | _Cells,
        reason: str,
        advice: str | dict[str, str],
        action: Action,
    ) -> Entry:
        value = labels.at(position)
        text = advice if isinstance(advice, str) else advice[value]
        shown = value if len(value) <= _SHOWN else value[:_SHOWN] + "..."
        return Entry(self.piece.file, int(self.piece.rows[position]), name, shown, reason, text, action)
