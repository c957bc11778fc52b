"""Core zones: the few zones that hold most of the use. A display convention, common practice, not a biological limit."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats


def core_zones(use: Floats, share: float = 0.5) -> NDArray[np.bool_]:
    """Fewest zones, most used first, until at least ``share`` of the use is inside.

    Parameters
    ----------
    use : array, shape (..., S, Z)
        Time or counts, each at least 0. Ties are broken by the declared order of the zones.
    share : float
        Between 0 and 1.

    Returns
    -------
    array of bool, shape (..., S, Z)
        False throughout for a species without use. What the core really holds is usually more than ``share``.

    Examples
    --------
    >>> import numpy as np
    >>> core_zones(np.array([[10, 40, 20, 30]]))
    array([[False,  True, False,  True]])
    """
    order = np.argsort(-use, axis=-1, kind="stable")
    descending = np.take_along_axis(use, order, axis=-1)
    before = np.cumsum(descending, axis=-1) - descending
    # A share that is reached exactly must not be missed by rounding, as it would be among proportions.
    inside = (before < (1.0 - 1e-12) * share * use.sum(axis=-1, keepdims=True)) & (descending > 0)
    member = np.empty(use.shape, dtype=bool)
    np.put_along_axis(member, order, inside, axis=-1)
    return member
