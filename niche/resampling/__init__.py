"""Draws over sampling units and the intervals that follow. Units are resampled, never visits."""

from niche.resampling.draws import Sums, draw_range, streams, sum_units
from niche.resampling.evidence import Evidence
from niche.resampling.intervals import Interval, percentile
from niche.resampling.methods import INTERVALS
from niche.resampling.units import Strata, unit_weights

__all__ = [
    "INTERVALS",
    "Evidence",
    "Interval",
    "Strata",
    "Sums",
    "draw_range",
    "percentile",
    "streams",
    "sum_units",
    "unit_weights",
]
