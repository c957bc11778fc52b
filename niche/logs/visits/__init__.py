"""The visits table, and what can only be seen across rows.

Exact repeats, one animal in two places at once, two observers with one animal, names that several sites share, names that
are nearly alike.
"""

from niche.logs.visits.across import compared
from niche.logs.visits.beside import Beside
from niche.logs.visits.overlaps import without_overlaps
from niche.logs.visits.repeats import without_repeats
from niche.logs.visits.table import COLUMNS, KEY, OUT_OF_SIGHT, visits_table

__all__ = [
    "COLUMNS",
    "KEY",
    "OUT_OF_SIGHT",
    "Beside",
    "compared",
    "visits_table",
    "without_overlaps",
    "without_repeats",
]
