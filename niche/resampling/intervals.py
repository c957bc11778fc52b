"""Intervals from resamples. The first axis is the resamples; every other axis is kept."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats

FEWEST_UNITS = 3
"""With fewer units there is no interval: two animals give three different resamples, whatever the number drawn."""

FEW_UNITS = 10
"""With fewer units an interval comes with a warning: percentile intervals are too narrow there."""


class Interval(NamedTuple):
    """Ends of an interval, and how many resamples gave no value at all."""

    low: Floats
    high: Floats
    undefined: NDArray[np.int64]


def percentile(draws: Floats, confidence: float) -> Interval:
    """Percentile interval over the first axis.

    Parameters
    ----------
    draws : array, shape (B, ...)
        The statistic in each resample; NaN where it is undefined. Undefined resamples are left out and counted.
    confidence : float
        Between 0 and 1, for example 0.95.

    Returns
    -------
    Interval
        ``low`` and ``high`` of shape (...), NaN where no resample is defined; linear between order statistics.

    References
    ----------
    Efron, B. & Tibshirani, R. J. (1993) *An Introduction to the Bootstrap*, ch. 13. Chapman & Hall.

    Examples
    --------
    >>> import numpy as np
    >>> percentile(np.arange(101.0), confidence=0.9)
    Interval(low=np.float64(5.0), high=np.float64(95.0), undefined=np.int64(0))
    """
    tail = (1.0 - confidence) / 2.0
    return percentile_at(draws, tail, 1.0 - tail)


def percentile_at(draws: Floats, low: Floats | float, high: Floats | float) -> Interval:
    """Order statistics over the first axis at two levels, which may differ from cell to cell.

    Parameters
    ----------
    draws : array, shape (B, ...)
    low, high : float or array, shape (...)
        Levels between 0 and 1.
    """
    ordered = np.sort(draws, axis=0)  # NaN sorts last
    defined = np.isfinite(ordered).sum(axis=0)
    return Interval(
        _order_statistic(ordered, defined, low),
        _order_statistic(ordered, defined, high),
        np.asarray(draws.shape[0] - defined, dtype=np.int64)[()],
    )


def _order_statistic(ordered: Floats, defined: NDArray[np.intp], level: Floats | float) -> Floats:
    """Quantile of the first ``defined`` values of each sorted column."""
    position = level * np.maximum(defined - 1, 0)
    # An exact order statistic must not become a blend by rounding in the line above.
    nearest = np.rint(position)
    position = np.where(np.abs(position - nearest) < 1e-9, nearest, position)
    below = np.floor(position).astype(np.intp)
    above = np.minimum(below + 1, np.maximum(defined - 1, 0))
    low = np.take_along_axis(ordered, below[None], axis=0)[0]
    high = np.take_along_axis(ordered, above[None], axis=0)[0]
    value = low + (high - low) * (position - below)
    return np.where(defined > 0, value, np.nan)[()]
