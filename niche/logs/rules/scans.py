"""Scans: at set moments somebody looked where the animals were; each row is a point, or as many as it counts.

A scan in which nobody was seen is a row without species and animal, or with count 0. It adds no use, but it is effort: it
counts as used, and the zone it names, or all zones where it names none, has been looked at.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs import fields
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Mask, Rows
from niche.logs.rules.counts import counts
from niche.logs.rules.points import (
    CLASH,
    clash_action,
    clash_problem,
    clashes,
    whole_rows,
    without_copies,
    without_copies_across_files,
)
from niche.logs.rules.waiting import (
    ALL_LOGS,
    Waiting,
    as_tuples,
    blank,
    count,
    entry,
    hold,
    no_visits,
    part,
    table_of,
)
from niche.logs.times import TimeReader
from niche.logs.visits import OUT_OF_SIGHT
from niche.logs.visits.table import clock
from niche.study.model import Study

_CLOSE_MS = 60_000
"""Points of one session closer than this call for a word: a bird mostly stays that long."""


@dataclass
class Scans:
    """Gathers all points, for repeats show only across rows."""

    study: Study
    ledger: Ledger
    looked: pd.DataFrame | None = field(default=None, init=False)
    """Every point at which somebody looked, once all rows are read: session, time, zone, empty (nobody seen)."""
    _times: TimeReader = field(init=False)
    _waiting: Waiting = field(default_factory=Waiting, init=False)

    def __post_init__(self) -> None:
        self._times = TimeReader(self.study)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: points wait for each other."""
        fields.check_headings(piece, self.study, ("species", "zone", "time"))
        empty = self._empty(piece)
        placeless = blank(piece, self.study.logs.columns.zone)
        for which, seen, placed in (
            (~empty, True, True),
            (empty & ~placeless, False, True),
            (empty & placeless, False, False),
        ):
            if which.any():
                self._gather(part(piece, which), seen=seen, placed=placed)
        return no_visits()

    def _empty(self, piece: Piece) -> Mask:
        """Rows of scans in which nobody was seen."""
        columns = self.study.logs.columns
        number = piece.column(columns.count).to_pylist()
        none = np.array([text.strip() in ("0", "0.0") for text in number], dtype=bool)
        nobody = blank(piece, columns.species) & blank(piece, columns.animal) & blank(piece, columns.count)
        return none | nobody

    def _gather(self, piece: Piece, *, seen: bool, placed: bool) -> None:
        rows = Rows(piece, self.ledger)
        words = np.full(len(piece.rows), "", dtype=object)
        columns = self.study.logs.columns
        time, _ = self._times.read(rows, "time")
        zone = fields.zone(rows, self.study) if placed else words
        if seen:
            species, number = fields.species(rows, self.study), counts(rows, self.study)
            animal, session = fields.who(rows, self.study)
        else:
            species, animal, number = words, words, np.zeros(len(piece.rows), dtype=np.int64)
            session = words if columns.session is None else fields.plain(rows, columns.session, "session")
        self._waiting.add(
            piece,
            hold(rows),
            species=species,
            animal=animal,
            session=session,
            zone=zone,
            time=time,
            count=number,
            whole=whole_rows(piece),
            seen=np.full(len(piece.rows), seen),
        )

    def finish(self) -> pd.DataFrame:
        """All visits."""
        self._times.finish(self.ledger)
        if not self._waiting:
            return no_visits()
        table = self._waiting.ordered()
        seen = table["seen"].to_numpy(dtype=bool)
        empty = without_copies(table[~seen], self.ledger, ("whole",))
        points = self._single(table[seen]) if seen.any() else table[seen]
        count(self.ledger, empty, "used")
        if len(empty):
            problem = "scans with nobody in them: no use, counted as effort"
            self.ledger.note(Entry(ALL_LOGS, None, "", f"{len(empty)} rows", "empty scan", problem, "flagged"))
        self.looked = self._looked(points, empty)
        self._note_spacing(self.looked)
        unseen = (points["zone"] == OUT_OF_SIGHT).to_numpy()
        count(self.ledger, points[~unseen], "used")
        count(self.ledger, points[unseen], "out_of_sight")
        found = {name: points[name].to_numpy() for name in ("species", "animal", "session", "zone", "file", "row")}
        time = points["time"].to_numpy()
        return table_of({**found, "start": time, "end": time, "amount": points["count"].to_numpy()})

    def _single(self, points: pd.DataFrame) -> pd.DataFrame:
        """Points without repeats, and with each animal in one zone at a time."""
        if self.study.logs.columns.animal is None:
            return without_copies_across_files(points, self.ledger)
        points = without_copies(points, self.ledger, ("species", "animal", "time", "zone"))
        clash = clashes(points, "species", "animal", "time")
        for _, row in as_tuples(points, clash):
            line = entry(row, "time", clock(row.time), CLASH, clash_problem(row.animal), clash_action(self.study))
            self.ledger.dispose([line])
        return points[~clash]

    @staticmethod
    def _looked(points: pd.DataFrame, empty: pd.DataFrame) -> pd.DataFrame:
        names = ["session", "time", "zone"]
        both = pd.concat([points.assign(empty=False), empty.assign(empty=True)], ignore_index=True)
        return both[[*names, "empty"]].sort_values([*names, "empty"], ignore_index=True)

    def _note_spacing(self, looked: pd.DataFrame) -> None:
        """How far apart the points of a session are: points within one stay of an animal repeat each other."""
        gaps = _spacing(looked)
        if not len(gaps):
            return
        close = int((gaps < _CLOSE_MS).sum())
        told = f"points of a session are {np.median(gaps) / 1000:g} s apart (median; least {gaps.min() / 1000:g} s)"
        if close:
            told += f"; {close} follow the one before in less than {_CLOSE_MS // 1000} s"
        problem = f"{told}. Points closer together than an animal stays in a zone are not independent"
        self.ledger.note(Entry(ALL_LOGS, None, "", "", "spacing of scans", problem, "flagged"))


def _spacing(looked: pd.DataFrame) -> NDArray[np.int64]:
    """Milliseconds between the moments at which one session looked."""
    moments = looked[["session", "time"]].drop_duplicates().sort_values(["session", "time"])
    return moments.groupby("session")["time"].diff().dropna().to_numpy(dtype=np.int64)
