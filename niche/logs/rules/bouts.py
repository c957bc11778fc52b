"""Bouts: one row is one stay of one animal in one zone, from its start to its end or over its duration."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from niche.logs import fields
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Rows
from niche.logs.rules.spans import Spans
from niche.logs.visits import OUT_OF_SIGHT, visits_table
from niche.study.model import Study


@dataclass
class Bouts:
    """Reads pieces in the order of the logs; every bout is complete in its row, so nothing waits for later rows."""

    study: Study
    ledger: Ledger
    _spans: Spans = field(init=False)

    def __post_init__(self) -> None:
        self._spans = Spans(self.study)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """Visits of one piece."""
        fields.check_headings(piece, self.study, ("species", "zone", "start"))
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        animal, session = fields.who(rows, self.study)
        start, end, timed = self._spans.read(rows)
        zone = fields.zone(rows, self.study)
        kept = rows.settle(np.where(timed, end - start, 0), zone == OUT_OF_SIGHT)
        return visits_table(species, animal, session, zone, start, end, piece.file, piece.rows, kept)

    def finish(self) -> pd.DataFrame | None:
        """No visit waits; what whole files show is noted."""
        self._spans.finish(self.ledger)
        return None
