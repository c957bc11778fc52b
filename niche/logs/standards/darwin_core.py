"""Rows under Darwin Core terms to rows under the columns that the recording rules read."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.clocks import read_times
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.standards import event_date
from niche.logs.standards.delimited import without
from niche.logs.standards.taxa import Taxa
from niche.logs.standards.terms import PRESENCE, SINGLE, ZONE_TERMS, term_of, terms_of
from niche.study.model import Study

_Found = dict[int, list[Entry]]


@dataclass
class DarwinCore:
    """Derives the columns species, animal, session, zone, start, end, time, count and observer, piece by piece.

    The columns of the file stay, under the names of their terms, so that a study may choose one of them instead.
    """

    study: Study
    ledger: Ledger
    _zone: dict[str, str] = field(default_factory=dict, init=False)
    """File to the term that carries its zones."""
    _ids: dict[str, tuple[str, int, int]] = field(default_factory=dict, init=False)
    """``occurrenceID`` to file, row and content of the row that had it first."""

    def piece(self, raw: Piece) -> Piece:
        """The piece with the derived columns; absences and rows that cannot be told are accounted for."""
        columns = {term: raw.columns[heading] for term, heading in terms_of(raw.columns, raw.file).items()}
        # A study may name a column as the file does, namespace and all.
        for heading in raw.columns:
            columns.setdefault(heading, raw.columns[heading])
        cells = {term: column.to_pylist() for term, column in columns.items()}
        size = len(raw.rows)
        found: _Found = {}
        derived: dict[str, list[str]] = {}
        derived["species"] = Taxa(self.study).names(cells, raw, found)
        derived |= self._who(raw, cells, size)
        derived["zone"] = self._zones(raw, cells)
        derived["start"], derived["end"] = self._times(cells, size)
        derived["time"] = derived["start"]
        derived["observer"] = cells.get("recordedBy") or cells.get("observer") or [""] * size
        derived["tag"], derived["antenna"] = derived["animal"], cells.get("locationID") or [""] * size
        derived["count"] = self._counts(raw, cells, size)
        self._presence(raw, cells, derived, found)
        self._repeats(raw, cells, found)
        self._scopes(raw, cells)
        arrays = {name: pa.array(values, type=pa.string()) for name, values in derived.items()}
        return without(Piece(raw.file, raw.rows, {**columns, **arrays}), self.ledger, found, self._length(derived))

    def _who(self, raw: Piece, cells: dict[str, list[str]], size: int) -> dict[str, list[str]]:
        columns, unit = self.study.logs.columns, self.study.analysis.unit
        animal = cells.get("organismID") or cells.get("animal")
        events, parents = cells.get("eventID"), cells.get("parentEventID")
        session = cells.get("session")
        if events or parents:
            # A bout is a child of its watch; an event without a parent is a watch itself.
            session = [p or e for e, p in zip(events or [""] * size, parents or [""] * size, strict=True)]
        if size and animal is None and columns.animal == "animal":
            raise LogError(
                f"{raw.file}: line 1: no heading organismID, so animals are not told apart. Set `logs.columns.animal` to "
                '"" and `analysis.unit` to "session", or name the column of the animal there.'
            )
        if size and session is None and columns.session == "session" and unit == "session":
            raise LogError(
                f"{raw.file}: line 1: no heading eventID or parentEventID, so there are no sessions to resample. Name "
                "their column as `logs.columns.session`."
            )
        animal = animal or session or [""] * size
        return {"animal": animal, "session": session or animal}

    def _zones(self, raw: Piece, cells: dict[str, list[str]]) -> list[str]:
        if self.study.logs.columns.zone != "zone":  # the rule reads the column that the study names
            return [""] * len(raw.rows)
        if not len(raw.rows):
            return []
        if raw.file not in self._zone:
            filled = [term for term in ZONE_TERMS if any(cells.get(term, ()))]
            there = filled or [term for term in (*ZONE_TERMS, "zone") if term in cells]
            if not there:
                raise LogError(
                    f"{raw.file}: line 1: none of the headings {', '.join(ZONE_TERMS)}, so nothing tells the zone. Name the "
                    "column as `logs.columns.zone`."
                )
            self._zone[raw.file] = there[0]
            if len(filled) > 1:
                problem = (
                    f"zones are read from {filled[0]!r}, not from {' or '.join(map(repr, filled[1:]))}; set "
                    f"`logs.columns.zone` to choose"
                )
                self.ledger.note(Entry(raw.file, 1, "zone", filled[0], "zone chosen", problem, "flagged"))
        return cells[self._zone[raw.file]]

    def _times(self, cells: dict[str, list[str]], size: int) -> tuple[list[str], list[str]]:
        nothing = [""] * size
        dates, clock = cells.get("eventDate") or nothing, cells.get("eventTime") or nothing
        values, units = cells.get("sampleSizeValue") or nothing, cells.get("sampleSizeUnit") or nothing
        starts, ends = [], []
        for date, time, value, unit in zip(dates, clock, values, units, strict=True):
            start, end = event_date.split(date, time)
            if not end and value and self.study.logs.rule == "bouts":
                seconds = event_date.sampled_seconds(value, unit)
                if seconds is not None:
                    end = event_date.shift(start, seconds, self.study.logs.time_zone)
            starts.append(start)
            ends.append(end)
        return starts, ends

    def _counts(self, raw: Piece, cells: dict[str, list[str]], size: int) -> list[str]:
        counts = cells.get("individualCount")
        quantities, kinds = cells.get("organismQuantity"), cells.get("organismQuantityType")
        if counts is None and quantities is not None and kinds is not None:
            individuals = ("individual", "individuals")
            counts = [q if k.strip().lower() in individuals else "" for q, k in zip(quantities, kinds, strict=True)]
        counts = counts or [""] * size
        counted = self.study.logs.rule == "scans" and self.study.logs.columns.count == "count"
        if counted and not cells.get("organismID"):
            for position, text in enumerate(counts):
                if not text.strip():
                    problem = "no number of animals given; counted as 1"
                    row = int(raw.rows[position])
                    self.ledger.note(Entry(raw.file, row, "individualCount", "", "count missing", problem, "flagged"))
        return [text.strip() or "1" for text in counts]

    def _presence(self, raw: Piece, cells: dict[str, list[str]], derived: dict[str, list[str]], found: _Found) -> None:
        """Absences: a scan of no animal where scans are counted, else effort, which is not use."""
        for position, text in enumerate(cells.get("occurrenceStatus", ())):
            there = PRESENCE.get("".join(text.split()).lower())
            if there is None:
                problem = "neither present nor absent (or detected, notDetected); write one of the four"
                action: Action = self.study.logs.problems.unreadable
                _add(found, raw, position, "occurrenceStatus", text, "unknown occurrenceStatus", problem, action)
            elif not there and self.study.logs.rule == "scans":
                derived["count"][position] = "0"
            elif not there:
                problem = "the species was looked for and not there: effort, not use"
                _add(found, raw, position, "occurrenceStatus", text, "absence", problem, "set_aside")

    def _repeats(self, raw: Piece, cells: dict[str, list[str]], found: _Found) -> None:
        ids = cells.get("occurrenceID")
        if ids is None:
            return
        contents = zip(*(cells[term] for term in sorted(cells)), strict=True)
        for position, (name, row, content) in enumerate(zip(ids, raw.rows.tolist(), contents, strict=True)):
            if not name:
                continue
            digest = hash(content)  # of 64 bits: all that is kept of the first row, for memory's sake
            file, first, before = self._ids.setdefault(name, (raw.file, row, digest))
            if (file, first) == (raw.file, row):
                continue
            if before == digest:
                problem, action = f"repeats {file}, row {first}, exactly", "set_aside"
            else:
                problem, action = (
                    f"{file}, row {first}, has this id and other cells; an id stands for one record",
                    "stop",
                )
            reason = "exact repeat of an earlier row" if action == "set_aside" else "occurrenceID used twice"
            _add(found, raw, position, "occurrenceID", name, reason, problem, action)  # type: ignore[arg-type]

    def _scopes(self, raw: Piece, cells: dict[str, list[str]]) -> None:
        for position, text in enumerate(cells.get("organismScope", ())):
            if text.strip().lower() not in SINGLE:
                problem = "the organismID is a group of animals; it is resampled as one unit"
                row = int(raw.rows[position])
                self.ledger.note(Entry(raw.file, row, "organismScope", text, "group of animals", problem, "flagged"))

    def _length(self, derived: dict[str, list[str]]) -> Any:
        """Milliseconds of the row at a position, where its start and end can be read."""

        def milliseconds(position: int) -> int:
            start, end = derived["start"][position], derived["end"][position]
            if self.study.logs.measure != "time" or not (start and end):
                return 0
            found = read_times(pa.array([start, end], type=pa.string()), self.study.logs.time_zone)
            fine = all(problem is None for problem in found.problem)
            return max(int(np.diff(found.ms)[0]), 0) if fine else 0

        return milliseconds


def used_terms(study: Study) -> set[str]:
    """Headings that a study in Darwin Core reads: those it names, and the terms that decide something."""
    from niche.logs.standards.terms import READ

    named = {heading for heading in study.logs.columns.model_dump().values() if heading is not None}
    return named | {term_of(heading) for heading in named} | set(READ)


def _add(
    found: _Found, raw: Piece, position: int, name: str, value: str, reason: str, problem: str, action: Action
) -> None:
    entry = Entry(raw.file, int(raw.rows[position]), name, value, reason, problem, action)
    found.setdefault(position, []).append(entry)
