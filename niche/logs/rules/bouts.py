"""Bouts: one row is one stay of one animal in one zone, from its start to its end or over its duration."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs import fields
from niche.logs.labels import Labels
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Mask, Rows
from niche.logs.visits import OUT_OF_SIGHT, visits_table
from niche.study.model import Study


@dataclass
class Bouts:
    """Reads pieces in the order of the logs; every bout is complete in its row, so nothing waits for later rows."""

    study: Study
    ledger: Ledger
    _file: str = field(default="", init=False)
    _has_offset: bool | None = field(default=None, init=False)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """Visits of one piece."""
        fields.check_headings(piece, self.study, ("species", "zone", "start"))
        if piece.file != self._file:
            self._file, self._has_offset = piece.file, None
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        animal, session = fields.who(rows, self.study)
        start, end, timed = self._times(rows)
        zone = fields.zone(rows, self.study)
        kept = rows.settle(np.where(timed, end - start, 0), zone == OUT_OF_SIGHT)
        return visits_table(species, animal, session, zone, start, end, piece.file, piece.rows, kept)

    def finish(self) -> pd.DataFrame | None:
        """No visit waits."""
        return None

    def _times(self, rows: Rows) -> tuple[NDArray[np.int64], NDArray[np.int64], Mask]:
        """Start, end, and whether both could be read and are in order."""
        logs = self.study.logs
        start, readable = self._instant(rows, logs.columns.start, "start")
        if logs.columns.duration is not None:
            length, fine = fields.duration(rows, self.study, logs.columns.duration)
            return start, start + length, readable & fine
        end, fine = self._instant(rows, logs.columns.end, "end")
        timed = readable & fine
        ends = Labels.of(rows.piece.column(logs.columns.end))
        backward = timed & (end < start)
        advice = "the end is before the start; if the bout ran past midnight, give the end the next day's date"
        rows.problem("end", backward, ends, "end before start", advice, logs.problems.end_before_start)
        rows.flag("end", timed & (end == start), ends, "zero duration", "kept, adds no time")
        return start, end, timed & ~backward

    def _instant(self, rows: Rows, heading: str | None, name: str) -> tuple[NDArray[np.int64], Mask]:
        ms, fine, self._has_offset = fields.instant(rows, self.study, heading, name, self._has_offset)
        return ms, fine
