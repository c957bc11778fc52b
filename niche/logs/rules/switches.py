"""Switches: a row says that an animal enters a zone; it stays there until its next row or the end of the session.

Rows of one animal in one session make a line of time. A row whose zone or species cannot be used still ends the stay
before it, and the time until the next row is set aside with it: leaving such a row out would give its time to the wrong
zone. The last row of a session lasts until the end that the sessions table records; without one its length is not known.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs import fields
from niche.logs.labels import Labels, tidy
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Mask, Rows
from niche.logs.rules.points import CLASH, clash_action, clash_problem, clashes, without_copies
from niche.logs.rules.waiting import (
    Waiting,
    as_tuples,
    as_written,
    begins,
    count,
    entry,
    hold,
    no_visits,
    ordered,
    problems_of,
    table_of,
)
from niche.logs.sessions import Session, read_sessions
from niche.logs.times import TimeReader
from niche.logs.visits import OUT_OF_SIGHT
from niche.logs.visits.table import clock
from niche.study.model import Study

_LINE = ("species", "animal", "session", "observer")
"""What rows of one line of time share. Two observers of one animal keep two lines, to be compared as two logs are."""

_PLACE = _LINE[1:]
_NEVER = 2**62
_HOUR = 3_600_000


@dataclass
class Switches:
    """Gathers all rows, and builds the stays once the last piece has been read."""

    study: Study
    ledger: Ledger
    _times: TimeReader = field(init=False)
    _sessions: dict[str, Session] = field(init=False)
    _waiting: Waiting = field(default_factory=Waiting, init=False)

    def __post_init__(self) -> None:
        self._times = TimeReader(self.study)
        self._sessions = read_sessions(self.study)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: a row's worth is known when all rows are."""
        fields.check_headings(piece, self.study, ("species", "session", "zone", "time"))
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        animal, session = fields.who(rows, self.study)
        time, _ = self._times.read(rows, "time")
        zone = fields.zone(rows, self.study)
        placed = hold(rows, wait_for=("species", "zone"))
        observers = Labels.of(piece.column(self.study.logs.columns.observer))
        self._waiting.add(
            piece,
            placed,
            observer=observers.spread(tidy(text) for text in observers.written),
            species=species,
            animal=animal,
            session=session,
            zone=as_written(zone, piece.column(self.study.logs.columns.zone)),
            time=time,
            problems=problems_of(rows),
        )
        return no_visits()

    def finish(self) -> pd.DataFrame:
        """All visits."""
        self._times.finish(self.ledger)
        if not self._waiting:
            return no_visits()
        table = self._with_species(self._waiting.ordered())
        table = ordered(without_copies(table, self.ledger, (*_LINE, "time", "zone")), *_LINE, "time")
        problems = table.pop("problems").to_numpy(dtype=object, copy=True)
        start, known_end = self._of_sessions(table)
        time = table["time"].to_numpy()
        after, open_end = self._next(table)
        end = np.minimum(after, known_end)
        open_end &= known_end == _NEVER
        length = np.where(open_end, 0, np.maximum(end - time, 0))

        self._outside(table, problems, (time < start) | (time > known_end))
        self._clashing(table, problems)
        self._too_long(table, problems, length)
        self._open(table, problems, open_end)
        return self._settle(table, problems, time, length)

    def _with_species(self, table: pd.DataFrame) -> pd.DataFrame:
        """Rows of unknown species take that of the other rows of their animal and session, so as to have a place in time.

        They stay unused. Where the others tell of several species, or there are none, the row has no place.
        """
        lost = np.array([any(e.field == "species" for e in found or ()) for found in table["problems"]], dtype=bool)
        if not lost.any():
            return table
        known = table[~lost].drop_duplicates(list(_LINE)).groupby(list(_PLACE))["species"].agg(list).to_dict()
        column = table["species"].to_numpy(dtype=object, copy=True)
        for position, row in as_tuples(table, lost):
            candidates = known.get((row.animal, row.session, row.observer), [])
            column[position] = candidates[0] if len(candidates) == 1 else None
        table = table.assign(species=column)
        placeless = np.array([species is None for species in column], dtype=bool)
        for _, row in as_tuples(table, placeless):
            self.ledger.dispose(row.problems)
        return table[~placeless].reset_index(drop=True)

    def _of_sessions(self, table: pd.DataFrame) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
        """Recorded start and end of each row's session; never, where it is not recorded."""
        names = table["session"].to_numpy()
        found = [self._sessions.get(name) for name in names]
        start = [-_NEVER if session is None else session.start_ms for session in found]
        end = [_NEVER if session is None or session.end_ms is None else session.end_ms for session in found]
        return np.array(start, dtype=np.int64), np.array(end, dtype=np.int64)

    @staticmethod
    def _next(table: pd.DataFrame) -> tuple[NDArray[np.int64], Mask]:
        """Time of the next row on the same line of time, and which rows have none."""
        first = begins(table, *_LINE)
        last = np.append(first[1:], True)
        after = np.append(table["time"].to_numpy()[1:], 0)
        return np.where(last, _NEVER, after), last

    def _outside(self, table: pd.DataFrame, problems: NDArray[np.object_], which: Mask) -> None:
        file = self.study.logs.sessions.file if self.study.logs.sessions else ""
        for position, row in as_tuples(table, which):
            session = self._sessions[row.session]
            until = "an end not recorded" if session.end_ms is None else clock(session.end_ms)
            problem = (
                f"outside session {row.session!r}, which {file} has from {clock(session.start_ms)} to {until}; correct "
                "the time here or there"
            )
            action = self.study.logs.problems.end_before_start
            _add(problems, position, entry(row, "time", clock(row.time), "outside its session", problem, action))

    def _clashing(self, table: pd.DataFrame, problems: NDArray[np.object_]) -> None:
        for position, row in as_tuples(table, clashes(table, *_LINE, "time")):
            line = entry(row, "time", clock(row.time), CLASH, clash_problem(row.animal), clash_action(self.study))
            _add(problems, position, line)

    def _too_long(self, table: pd.DataFrame, problems: NDArray[np.object_], length: NDArray[np.int64]) -> None:
        hours = self.study.logs.clock.longest_bout
        for position, row in as_tuples(table, length > hours * _HOUR):
            problem = (
                f"until the next row of its session, or its end, {length[position] / _HOUR:.1f} h pass, more than "
                f"`logs.clock.longest_bout` ({hours:g} h); is a session name used twice, or a date wrong?"
            )
            action = self.study.logs.problems.end_before_start
            _add(problems, position, entry(row, "time", clock(row.time), "stay too long", problem, action))

    def _open(self, table: pd.DataFrame, problems: NDArray[np.object_], open_end: Mask) -> None:
        """The last state of a session without an end; out of sight it needs none."""
        seen = (table["zone"] != OUT_OF_SIGHT).to_numpy()
        for position, row in as_tuples(table, open_end & seen):
            sessions = self.study.logs.sessions
            if sessions is None:
                remedy = "name a table of sessions with their ends under `logs.sessions.file`"
            elif row.session in self._sessions:
                remedy = f"give session {row.session!r} an end in {sessions.file}"
            else:
                remedy = f"session {row.session!r} is not in {sessions.file}"
            problem = f"the last row of {row.animal} in session {row.session!r}, and no end of the session; {remedy}"
            action = self.study.logs.problems.last_state_open
            _add(problems, position, entry(row, "zone", row.zone, "last state has no end", problem, action))

    def _settle(
        self, table: pd.DataFrame, problems: NDArray[np.object_], time: NDArray[np.int64], length: NDArray[np.int64]
    ) -> pd.DataFrame:
        fine = np.array([found is None for found in problems], dtype=bool)
        unseen = (table["zone"] == OUT_OF_SIGHT).to_numpy()
        for file, ms in pd.Series(length).groupby(table["file"].to_numpy()):
            self.ledger.come_in(str(file), 0, int(ms.sum()))
        for position in np.flatnonzero(~fine).tolist():
            self.ledger.dispose(problems[position], int(length[position]))
        count(self.ledger, table[fine & ~unseen], "used", length[fine & ~unseen])
        count(self.ledger, table[fine & unseen], "out_of_sight", length[fine & unseen])
        for _, row in as_tuples(table, fine & ~unseen & (length == 0)):
            problem = "the session ends at this moment: kept, adds no time"
            self.ledger.note(entry(row, "time", clock(row.time), "zero duration", problem, "flagged"))
        found = {name: table[name].to_numpy() for name in ("species", "animal", "session", "zone", "file", "row")}
        return table_of({**found, "start": time, "end": time + length})[fine]


def _add(problems: NDArray[np.object_], position: int, line: Entry) -> None:
    problems[position] = [*(problems[position] or []), line]
