"""One-zero: which zones were used at all in each interval; a tick is an occurrence, never time.

How often a zone is ticked grows with the length of the interval and not only with the time spent there (Brereton, J. E.,
Tuke, J. & Fernandez, E. J. 2022, A simulated comparison of behavioural observation sampling methods. *Scientific Reports*
12, 3096), so no proportion of use can be taken from it. Each row is one zone ticked in one interval for one animal.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
import pandas as pd

from niche.logs import fields
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Rows
from niche.logs.rules.points import without_copies
from niche.logs.rules.waiting import Waiting, count, hold, no_visits, table_of
from niche.logs.times import TimeReader
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

REFUSAL = (
    "One-zero records tell in how many intervals a zone was used, not for how long: ticks overstate short stays, so use, "
    "breadth and overlap cannot be taken from them. `niche check` reads and counts them. For use of zones, log bouts, "
    "switches or scans."
)

_TICK = ("species", "animal", "session", "start", "zone")


@dataclass
class OneZero:
    """Gathers all ticks: a zone is ticked once in an interval."""

    study: Study
    ledger: Ledger
    _times: TimeReader = field(init=False)
    _waiting: Waiting = field(default_factory=Waiting, init=False)

    def __post_init__(self) -> None:
        self._times = TimeReader(self.study)

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: ticks wait for each other."""
        fields.check_headings(piece, self.study, ("species", "zone", "time"))
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        animal, session = fields.who(rows, self.study)
        start, _ = self._times.read(rows, "time")
        zone = fields.zone(rows, self.study)
        self._waiting.add(piece, hold(rows), species=species, animal=animal, session=session, zone=zone, start=start)
        return no_visits()

    def finish(self) -> pd.DataFrame:
        """All ticks, as visits that add one occurrence each."""
        self._times.finish(self.ledger)
        if not self._waiting:
            return no_visits()
        table = without_copies(self._waiting.ordered(), self.ledger, _TICK)
        unseen = (table["zone"] == OUT_OF_SIGHT).to_numpy()
        count(self.ledger, table[~unseen], "used")
        count(self.ledger, table[unseen], "out_of_sight")
        found = {name: table[name].to_numpy() for name in (*_TICK, "file", "row")}
        return table_of({**found, "end": found["start"], "amount": np.ones(len(table), dtype=np.int64)})
