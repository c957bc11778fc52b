"""Reads: a tag was read at an antenna, a receiver or inside a zone; reads close in time make a visit.

Reads of one animal are put in order of time. A visit is a row of reads in one zone, each no later after the one before
than the gap; it lasts from its first to its last read. A read in another zone ends it, and so does a row that has a time
but no zone that can be used. How long the gap is decides the result, so the time at half and at twice the gap is noted.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.errors import StudyError
from niche.logs import fields
from niche.logs.labels import Labels, key, listing, propose, tidy
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Rows
from niche.logs.rules.gaps import runs
from niche.logs.rules.points import CLASH, clash_action, clash_problem, clashes, without_copies
from niche.logs.rules.waiting import (
    ALL_LOGS,
    Waiting,
    as_tuples,
    as_written,
    begins,
    count,
    entry,
    hold,
    no_visits,
    ordered,
    part,
    table_of,
)
from niche.logs.rules.wearers import animal_of_tag
from niche.logs.tags import TagTable, read_tags
from niche.logs.times import TimeReader
from niche.logs.visits import OUT_OF_SIGHT
from niche.logs.visits.table import clock
from niche.logs.zone_names import zones_by_key
from niche.study.log_model import Reads as Rule
from niche.study.model import Study


@dataclass
class Reads:
    """Gathers all reads, and builds the visits once the last piece has been read."""

    study: Study
    ledger: Ledger
    spans: dict[str, tuple[int, int]] = field(default_factory=dict, init=False)
    """First and last read in each zone, of any tag, in milliseconds: what is known of an antenna's effort."""
    _times: TimeReader = field(init=False)
    _tags: TagTable | None = field(init=False)
    zones: dict[str, str] = field(init=False)
    """Zone by antenna, as the study maps them; empty where the log has a zone column."""
    _waiting: Waiting = field(default_factory=Waiting, init=False)

    def __post_init__(self) -> None:
        self._times = TimeReader(self.study)
        self._tags = read_tags(self.study)
        self.zones = _antenna_zones(self.study)

    @property
    def _rule(self) -> Rule:
        rule = self.study.logs.reads
        if rule is None:
            raise StudyError("logs.reads.gap: missing. It gives the seconds without a read that end a visit.")
        return rule

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: reads wait for each other."""
        columns = self.study.logs.columns
        who = "tag" if self._tags is not None or columns.animal is None else "animal"
        where = "antenna" if self.zones or columns.zone is None else "zone"
        fields.check_headings(piece, self.study, ("time", who, where, *(() if self._tags else ("species",))))
        if where == "antenna" and not self.zones:
            raise StudyError("logs.reads.zones: missing. Give the zone of each antenna, or name a zone column.")
        piece = self._without_test_tags(piece)
        rows = Rows(piece, self.ledger)
        time, timed = self._times.read(rows, "time")
        if self._tags is not None:
            species, animal = animal_of_tag(rows, self.study, self._tags, time, timed)
        else:
            species = fields.species(rows, self.study)
            animal = fields.who(rows, self.study)[0] if who == "animal" else fields.plain(rows, columns.tag, "tag")
        session = fields.plain(rows, columns.session, "session") if columns.session else animal
        zone, antenna = self._place(rows)
        placed = hold(rows, wait_for=("zone", "antenna"))
        fine = rows.usable()
        for position in np.flatnonzero(placed & ~fine).tolist():
            self.ledger.dispose(rows.problems[position])  # stays in the line of time, where it ends the visit before it
        self._waiting.add(
            piece,
            placed,
            species=species,
            animal=animal,
            session=session,
            zone=as_written(zone, piece.column(getattr(columns, where))),
            antenna=antenna,
            time=time,
            usable=fine,
        )
        return no_visits()

    def _without_test_tags(self, piece: Piece) -> Piece:
        """Set test tags aside before anything is asked of them: they are in no tag table and on no animal."""
        heading = self.study.logs.columns.tag
        test = {key(tag) for tag in self._rule.test_tags}
        if not test or heading is None:
            return piece
        labels = Labels.of(piece.column(heading))
        which = labels.where(key(text) in test for text in labels.written)
        self.ledger.come_in(piece.file, int(which.sum()))
        for position in np.flatnonzero(which).tolist():
            problem = "listed under `logs.reads.test_tags`"
            row = int(piece.rows[position])
            line = Entry(piece.file, row, "tag", labels.at(position), "test tag", problem, "set_aside")
            self.ledger.dispose([line])
        return part(piece, ~which)

    def _place(self, rows: Rows) -> tuple[NDArray[np.object_], NDArray[np.object_]]:
        """Zone and antenna of each read."""
        columns = self.study.logs.columns
        antenna = fields.plain(rows, columns.antenna, "antenna")
        if not self.zones:
            return fields.zone(rows, self.study), antenna
        labels = Labels.of(rows.piece.column(columns.antenna))
        found = [self.zones.get(key(text)) for text in labels.written]
        unknown = labels.where(z is None and key(t) != "" for t, z in zip(labels.written, found, strict=True))
        names = listing(self._rule.zones)
        advice = {t: f"no zone for this antenna under `logs.reads.zones`; {propose(t, names)}" for t in labels.written}
        rows.problem("antenna", unknown, labels, "unknown antenna", advice, self.study.logs.problems.unknown_zone)
        return labels.spread(found), antenna

    def finish(self) -> pd.DataFrame:
        """All visits."""
        self._times.finish(self.ledger)
        if not self._waiting:
            return no_visits()
        table = self._waiting.ordered()
        self._note_spans(table)
        usable = table["usable"].to_numpy(dtype=bool)
        single = without_copies(table[usable], self.ledger, ("species", "animal", "antenna", "zone", "time"))
        table = ordered(pd.concat([single, table[~usable]], ignore_index=True), "species", "animal", "time", "zone")
        usable = table["usable"].to_numpy(dtype=bool).copy()
        clash = clashes(table, "species", "animal", "time") & usable
        for _, row in as_tuples(table, clash):
            action = clash_action(self.study)
            line = entry(row, "time", clock(row.time), CLASH, clash_problem(row.animal), action)
            self.ledger.dispose([line])
        usable &= ~clash
        return self._build(table, usable)

    def _build(self, table: pd.DataFrame, usable: NDArray[np.bool_]) -> pd.DataFrame:
        """Visits of a table in order of animal and time."""
        time, gap = table["time"].to_numpy(), self._gaps(table["antenna"].to_numpy())
        new = begins(table, "species", "animal", "session", "zone")
        new |= ~usable
        new[1:] |= ~usable[:-1]
        first = runs(new, time, time, gap, joins=True)
        self._note_gap(table, usable, new, gap)
        start = np.flatnonzero(first)
        end = np.append(start[1:], len(table)) - 1
        size = end - start + 1
        lone = (size == 1) & usable[start]
        if self._rule.lone == "set_aside":
            self._set_lone_aside(table, start[lone], gap)
            usable = usable.copy()
            usable[start[lone]] = False
        length = np.zeros(len(table), dtype=np.int64)
        length[start] = time[end] - time[start]
        for file, ms in pd.Series(length).groupby(table["file"].to_numpy()):
            self.ledger.come_in(str(file), 0, int(ms.sum()))
        unseen = (table["zone"] == OUT_OF_SIGHT).to_numpy()
        count(self.ledger, table[usable & ~unseen], "used", length[usable & ~unseen])
        count(self.ledger, table[usable & unseen], "out_of_sight", length[usable & unseen])
        names = ("species", "animal", "session", "zone", "file", "row")
        found = {name: table[name].to_numpy()[start] for name in names}
        return table_of({**found, "start": time[start], "end": time[end]})[usable[start]]

    def _set_lone_aside(self, table: pd.DataFrame, where: NDArray[np.int64], gap: NDArray[np.float64]) -> None:
        which = np.zeros(len(table), dtype=bool)
        which[where] = True
        for position, row in as_tuples(table, which):
            problem = (
                f"no other read of {row.animal} in {row.zone!r} within {gap[position] / 1000:g} s; one read alone may be "
                'false. To count it as a visit without time, set `logs.reads.lone` to "keep"'
            )
            self.ledger.dispose([entry(row, "time", clock(row.time), "lone read", problem, "set_aside")])

    def _gaps(self, antenna: NDArray[np.object_]) -> NDArray[np.float64]:
        """The gap after each read, in milliseconds."""
        own = {key(name): seconds for name, seconds in self._rule.gaps.items()}
        labels, index = np.unique(antenna.astype(str), return_inverse=True)
        read = {key(label) for label in labels.tolist()}
        for name in self._rule.gaps:
            if key(name) not in read:
                problem = f"`logs.reads.gaps` gives {name!r} a gap, and no read is from an antenna of that name"
                self.ledger.note(Entry(ALL_LOGS, None, "antenna", name, "antenna without reads", problem, "flagged"))
        return np.array([own.get(key(label), self._rule.gap) * 1000.0 for label in labels.tolist()])[index]

    def _note_gap(
        self, table: pd.DataFrame, usable: NDArray[np.bool_], new: NDArray[np.bool_], gap: NDArray[np.float64]
    ) -> None:
        """How much time and how many visits of two reads or more there would be at half and at twice the gap."""
        time = table["time"].to_numpy()
        told = []
        for times in (0.5, 1.0, 2.0):
            first = runs(new, time, time, gap * times, joins=True)
            start = np.flatnonzero(first)
            last = np.append(start[1:], len(table)) - 1
            many = (last > start) & usable[start]
            seconds = int((time[last] - time[start])[many].sum()) / 1000
            told.append(f"{seconds:.0f} s in {int(many.sum())} visits at {self._rule.gap * times:g} s")
        problem = f"time by gap, lone reads apart: {told[0]}, {told[1]} (as set), {told[2]}"
        value = f"{self._rule.gap:g} s" + (" and others by antenna" if self._rule.gaps else "")
        self.ledger.note(Entry(ALL_LOGS, None, "gap", value, "gap", problem, "flagged"))

    def _note_spans(self, table: pd.DataFrame) -> None:
        fine = table[table["usable"]]
        for zone, time in fine.groupby("zone")["time"]:
            if zone != OUT_OF_SIGHT:
                self.spans[str(zone)] = (int(time.min()), int(time.max()))


def _antenna_zones(study: Study) -> dict[str, str]:
    """Zone by antenna, as `logs.reads.zones` gives it, by listed names.

    Raises
    ------
    StudyError
        It names a zone that the study does not list, or `logs.reads.gaps` an antenna that is not among them.
    """
    rule = study.logs.reads
    if rule is None:
        return {}
    known = zones_by_key(study)
    found = {}
    for antenna, zone in rule.zones.items():
        if key(zone) not in known:
            advice = propose(zone, listing(study.zones.names))
            raise StudyError(f"logs.reads.zones: antenna {antenna!r} is in {zone!r}, which is no zone; {advice}")
        found[key(antenna)] = known[key(zone)]
    for antenna in rule.gaps:
        if found and key(antenna) not in found:
            raise StudyError(f"logs.reads.gaps: no antenna {tidy(antenna)!r} under `logs.reads.zones`.")
    return found
