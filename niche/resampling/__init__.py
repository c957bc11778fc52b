"""Draws over sampling units and the intervals that follow. Units are resampled, never visits."""

from niche.resampling.draws import Sums, draw_range, streams, sum_units, unit_weights
from niche.resampling.intervals import Interval, percentile

__all__ = ["Interval", "Sums", "draw_range", "percentile", "streams", "sum_units", "unit_weights"]
