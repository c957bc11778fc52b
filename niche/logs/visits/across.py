"""All comparisons of rows with each other, in an order in which no finding hides another."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Ledger
from niche.logs.visits.alike import flag_alike
from niche.logs.visits.beside import Beside
from niche.logs.visits.observers import one_observer
from niche.logs.visits.overlaps import without_overlaps
from niche.logs.visits.repeats import without_repeats
from niche.logs.visits.sites import shared_animals, shared_zones
from niche.logs.visits.table import COLUMNS, codes
from niche.study.model import Study
from niche.study.names import key, listing

_STAYS = ("bouts", "switches", "reads")
"""Rules whose visits have a length; the others compare their rows themselves, for points may be equal and both right."""


def compared(visits: pd.DataFrame, study: Study, ledger: Ledger, beside: Beside) -> pd.DataFrame:
    """Visits after every comparison across rows; what does not stand is accounted for in the ledger."""
    if visits.empty:
        return visits
    visits = beside.attach(visits.reset_index(drop=True))
    if study.logs.columns.animal is not None:
        flag_alike(visits, ledger, "animal", "animals")
    if not study.species:
        flag_alike(visits, ledger, "species", "species")
    stays = study.logs.rule in _STAYS
    if stays:
        visits = without_repeats(visits, ledger)
    if "site" in visits:
        visits = shared_zones(visits, study, ledger)
        visits, who = shared_animals(visits, study, ledger)
    else:
        who = codes(visits, "species", "animal")
    if stays:
        who = _nameless_apart(visits, study, who)
        if "observer" in visits:
            visits, who = one_observer(visits, who, ledger, study.logs.observer, study.logs.problems.two_observers)
        visits = without_overlaps(visits, ledger, study.logs.problems.overlap, who)
    return visits[COLUMNS]


def _nameless_apart(visits: pd.DataFrame, study: Study, who: NDArray[np.int64]) -> NDArray[np.int64]:
    """Each visit of an animal without a name gets an animal of its own: two such may well be in two places at once."""
    if study.logs.columns.animal is None or study.analysis.unit != "session":
        return who
    nameless = listing(study.logs.nameless)
    number, names = pd.factorize(visits["animal"])
    without = np.array([key(str(name)) in nameless for name in names], dtype=bool)[number]
    return np.where(without, int(who.max(initial=0)) + 1 + np.arange(len(who)), who)
