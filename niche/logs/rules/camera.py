"""Camera events: each independent event counts, or the animals in it; how long it lasted is never taken for time.

Events of one species at one deployment (of one animal, where it is known) that follow each other within the gap are one:
the first stands for all, or where animals are counted the one with most animals, and the others are set aside as the same
event. The gap runs from the end of an event, where an end is recorded, to the start of the next. The deployment is the
sampling unit.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.errors import StudyError
from niche.logs import fields
from niche.logs.deployments import Deployment, read_deployments
from niche.logs.labels import Labels, Names, key, listing, propose, tidy
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Cells, Mask, Rows
from niche.logs.rules.counts import counts
from niche.logs.rules.gaps import runs
from niche.logs.rules.points import whole_rows, without_copies
from niche.logs.rules.waiting import (
    ALL_LOGS,
    Waiting,
    as_tuples,
    begins,
    blank,
    count,
    entry,
    hold,
    no_visits,
    ordered,
    part,
    table_of,
)
from niche.logs.times import TimeReader
from niche.logs.visits import OUT_OF_SIGHT
from niche.logs.visits.table import clock
from niche.study.model import Study

ANIMAL = "animal"
"""The one kind of event that tells of use."""

_LINE = ("species", "animal", "deployment", "zone")
_VISIT = ("species", "animal", "session", "zone", "file", "row")


@dataclass
class Camera:
    """Gathers all events, and decides which are independent once the last piece has been read."""

    study: Study
    ledger: Ledger
    deployments: dict[str, Deployment] = field(init=False)
    _start: TimeReader = field(init=False)
    _end: TimeReader = field(init=False)
    """A reader of its own: only some events have an end, so that its rows are others."""
    _waiting: Waiting = field(default_factory=Waiting, init=False)

    def __post_init__(self) -> None:
        self._start, self._end = TimeReader(self.study), TimeReader(self.study)
        self.deployments = read_deployments(self.study)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: events wait for each other."""
        columns = self.study.logs.columns
        when = "time" if columns.start is None else "start"
        fields.check_headings(piece, self.study, ("species", "deployment", when))
        if not self.deployments and columns.zone is None:
            raise StudyError(
                "logs.columns.zone: missing. Name it, or a table of deployments: `logs.camera.deployments`."
            )
        piece = self._animals_only(piece)
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        deployment = fields.plain(rows, columns.deployment, "deployment")
        labels = Labels.of(piece.column(columns.animal))
        known = labels.spread(Names.animals(self.study).find(text) for text in labels.written)
        animal = np.where(known == "", deployment, known)
        session = deployment if columns.session is None else fields.plain(rows, columns.session, "session")
        start, timed = self._start.read(rows, when)
        end = self._ends(rows, start, timed)
        number = counts(rows, self.study)
        zone = self._zones(rows, deployment, start, timed) if self.deployments else fields.zone(rows, self.study)
        self._waiting.add(
            piece,
            hold(rows),
            species=species,
            animal=animal,
            deployment=deployment,
            session=session,
            zone=zone,
            start=start,
            end=end,
            count=number,
            whole=whole_rows(piece),
        )
        return no_visits()

    def _animals_only(self, piece: Piece) -> Piece:
        """Set aside blanks, people, vehicles, set-up pictures: they name no species, so nothing else is asked of them."""
        heading = self.study.logs.columns.kind
        if heading is None:
            return piece
        labels = Labels.of(piece.column(heading))
        other = labels.where(key(text) != ANIMAL for text in labels.written)
        self.ledger.come_in(piece.file, int(other.sum()))
        for position in np.flatnonzero(other).tolist():
            row, written = int(piece.rows[position]), labels.at(position)
            problem = f"no animal: only events of kind {ANIMAL!r} tell of use"
            self.ledger.dispose([Entry(piece.file, row, "kind", written, "no animal", problem, "set_aside")])
        return part(piece, ~other)

    def _ends(self, rows: Rows, start: NDArray[np.int64], timed: Mask) -> NDArray[np.int64]:
        """End of each event, or its start where none is recorded."""
        heading = self.study.logs.columns.end
        given = ~blank(rows.piece, heading)
        if not given.any():
            return start
        ends = Rows(part(rows.piece, given), self.ledger)
        ms, fine = self._end.read(ends, "end")
        where = np.flatnonzero(given)
        for position, entries in ends.problems.items():
            rows.problems.setdefault(int(where[position]), []).extend(entries)
        for position, entries in ends.notes.items():
            rows.notes.setdefault(int(where[position]), []).extend(entries)
        end = start.copy()
        end[where[fine]] = ms[fine]
        backward = timed & (end < start)
        advice = "the end is before the start"
        policy = self.study.logs.problems.end_before_start
        rows.problem("end", backward, Cells(rows.piece.column(heading)), "end before start", advice, policy)
        return end

    def _zones(
        self, rows: Rows, deployment: NDArray[np.object_], start: NDArray[np.int64], timed: Mask
    ) -> NDArray[np.object_]:
        """Zone of each event by its deployment; an event outside its deployment's dates tells of a wrong clock."""
        file, policy = self.study.logs.camera.deployments, self.study.logs.problems
        labels = Labels.of(rows.piece.column(self.study.logs.columns.deployment))
        names = [tidy(text) for text in labels.written]
        found = [self.deployments.get(name) for name in names]
        unknown = labels.where(bool(n) and d is None for n, d in zip(names, found, strict=True))
        advice = {t: f"not in {file}; {propose(t, listing(self.deployments))}" for t in labels.written}
        rows.problem("deployment", unknown, labels, "unknown deployment", advice, policy.unknown_zone)
        outside = np.zeros(len(start), dtype=bool)
        for number, place in enumerate(found):
            mine = timed & (labels.index == number)
            if place is not None and place.start_ms is not None:
                outside |= mine & (start < place.start_ms)
            if place is not None and place.end_ms is not None:
                outside |= mine & (start >= place.end_ms)
        problem = f"outside the dates of its deployment in {file}: was the clock reset? Correct the time, or the dates"
        when = "time" if self.study.logs.columns.start is None else "start"
        cells = Cells(rows.piece.column(getattr(self.study.logs.columns, when)))
        rows.problem(when, outside, cells, "outside its deployment", problem, policy.unreadable)
        return labels.spread(None if place is None else place.zone for place in found)

    def finish(self) -> pd.DataFrame:
        """All visits."""
        self._start.finish(self.ledger)
        if not self._waiting:
            return no_visits()
        table = ordered(without_copies(self._waiting.ordered(), self.ledger, ("whole",)), *_LINE, "start", "end")
        start, end = table["start"].to_numpy(), table["end"].to_numpy()
        new, gap = begins(table, *_LINE), np.full(len(table), self.study.logs.camera.gap * 1000)
        first = runs(new, start, end, gap, joins=False)
        self._note_gap(new, start, end)
        used, amount = self._chosen(table, first)
        run = np.cumsum(first) - 1
        head = np.flatnonzero(used)[np.unique(run[used], return_index=True)[1]]
        for position, row in as_tuples(table, ~used):
            other = table.iloc[head[run[position]]]
            problem = (
                f"same event as {other.file}, row {other.row}: less than {self.study.logs.camera.gap:g} s "
                "(`logs.camera.gap`) from it or from one that belongs to it"
            )
            self.ledger.dispose([entry(row, "start", clock(row.start), "same event", problem, "set_aside")])
        unseen = (table["zone"] == OUT_OF_SIGHT).to_numpy()
        count(self.ledger, table[used & ~unseen], "used")
        count(self.ledger, table[used & unseen], "out_of_sight")
        found = {name: table[name].to_numpy()[head] for name in _VISIT}
        return table_of({**found, "start": start[head], "end": start[head], "amount": amount})

    def _chosen(self, table: pd.DataFrame, first: Mask) -> tuple[Mask, NDArray[np.int64]]:
        """Rows that stand for their event, and what each event adds.

        Rows of one moment add up (adults and young in two rows); of several moments the one with most animals counts.
        """
        run = np.cumsum(first) - 1
        if self.study.logs.columns.count is None:
            return first, np.ones(int(first.sum()), dtype=np.int64)
        moment = np.cumsum(first | begins(table, "start")) - 1
        size = np.bincount(moment, weights=table["count"]).astype(np.int64)
        of_run = run[np.unique(moment, return_index=True)[1]]
        order = np.lexsort((np.arange(len(size)), -size, of_run))
        best = order[np.unique(of_run[order], return_index=True)[1]]
        return np.isin(moment, best), size[best]

    def _note_gap(self, new: Mask, start: NDArray[np.int64], end: NDArray[np.int64]) -> None:
        """How many events there would be at half and at twice the gap."""
        seconds = self.study.logs.camera.gap
        told = []
        for times in (0.5, 1.0, 2.0):
            gap = np.full(len(start), seconds * times * 1000)
            told.append(f"{int(runs(new, start, end, gap, joins=False).sum())} at {seconds * times:g} s")
        problem = f"independent events by gap: {told[0]}, {told[1]} (as set), {told[2]}"
        self.ledger.note(Entry(ALL_LOGS, None, "gap", f"{seconds:g} s", "gap", problem, "flagged"))
