"""Which points belong together because no longer gap lies between them: reads of a tag, events at a camera."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from niche.logs.rows import Mask


def runs(new: Mask, start: NDArray[np.int64], end: NDArray[np.int64], gap: NDArray[np.float64], joins: bool) -> Mask:
    """First points of runs, among points sorted by line and start.

    Parameters
    ----------
    new : array of bool, shape (n,)
        Points that begin a line of their own (another animal, another zone, another deployment).
    start, end : arrays of int64, shape (n,)
        Milliseconds; equal where a point has no length.
    gap : array, shape (n,)
        Milliseconds; the gap after each point.
    joins : bool
        Whether a point exactly the gap away still belongs to the run.

    Returns
    -------
    array of bool, shape (n,)
    """
    reached = _running_maximum(new, end)
    first = new.copy()
    apart = start[1:] - reached[:-1]
    first[1:] |= apart > gap[:-1] if joins else apart >= gap[:-1]
    return first


def _running_maximum(new: Mask, value: NDArray[np.int64]) -> NDArray[np.int64]:
    """Largest value so far on each line: ranks are lifted line by line, so that one pass does for all lines."""
    distinct, rank = np.unique(value, return_inverse=True)
    line = np.cumsum(new) - 1
    lifted = np.maximum.accumulate(line * len(distinct) + rank)
    return np.asarray(distinct[lifted - line * len(distinct)])
