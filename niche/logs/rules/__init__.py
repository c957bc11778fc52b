"""Recording rules: one module a rule, each saying what one row is worth and ending in visits."""

from __future__ import annotations

from collections.abc import Callable
from typing import Protocol

import pandas as pd

from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.rules.bouts import Bouts
from niche.logs.rules.camera import Camera
from niche.logs.rules.one_zero import OneZero
from niche.logs.rules.reads import Reads
from niche.logs.rules.scans import Scans
from niche.logs.rules.switches import Switches
from niche.logs.rules.tallies import Tallies
from niche.study.model import Study


class Rule(Protocol):
    """Turns pieces of the logs, in order, into visits, and accounts for every row in the ledger."""

    def visits(self, piece: Piece) -> pd.DataFrame:
        """Visits that are complete once this piece has been read."""
        ...

    def finish(self) -> pd.DataFrame | None:
        """Visits that waited for later rows, after the last piece."""
        ...


RULES: dict[str, Callable[[Study, Ledger], Rule]] = {
    "bouts": Bouts,
    "switches": Switches,
    "scans": Scans,
    "reads": Reads,
    "camera": Camera,
    "tallies": Tallies,
    "one_zero": OneZero,
}
"""What a study's ``logs.rule`` names."""
