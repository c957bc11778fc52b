"""Niche breadth: how evenly one species spreads its use over the zones.

Zones that are available but unused count: a breadth is only comparable between species that had the same zones.
"""

from __future__ import annotations

import numpy as np

from niche.indices.products import Floats


def levins(c: Floats) -> Floats:
    """Levins' breadth ``B = 1 / Σ p²``.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix (`niche.indices.products`).

    Returns
    -------
    array, shape (..., S)
        From 1 (one zone only) to the number of zones (even use). Infinite where no two different units ever shared a
        zone; NaN where the product is undefined.

    References
    ----------
    Levins, R. (1968) *Evolution in Changing Environments*. Princeton University Press.

    Examples
    --------
    >>> import numpy as np
    >>> levins(np.array([[0.5, 0.1], [0.1, 1.0]]))
    array([2., 1.])
    """
    with np.errstate(divide="ignore"):
        return 1.0 / np.diagonal(c, axis1=-2, axis2=-1)


def levins_standardized(c: Floats, zones: int) -> Floats:
    """Levins' breadth on a scale from 0 to 1, ``B_A = (B − 1) / (n − 1)``.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix.
    zones : int
        Number of zones that could be used, unused ones included.

    Returns
    -------
    array, shape (..., S)
        0 for a single zone, 1 for even use of all. NaN when there is one zone only (0/0).

    References
    ----------
    Hurlbert, S. H. (1978) The measurement of niche overlap and some relatives. *Ecology* 59, 67–77.

    Examples
    --------
    >>> import numpy as np
    >>> levins_standardized(np.array([[0.5]]), zones=3)
    array([0.5])
    """
    if zones < 2:
        return np.full(c.shape[:-1], np.nan)
    return (levins(c) - 1.0) / (zones - 1)


def shannon(p: Floats) -> Floats:
    """Shannon's index ``H′ = −Σ p ln p``, in natural logarithms.

    Parameters
    ----------
    p : array, shape (..., S, Z)
        Proportions of use.

    Returns
    -------
    array, shape (..., S)
        From 0 (one zone) to ``ln Z`` (even use), in nats.

    References
    ----------
    Shannon, C. E. (1948) A mathematical theory of communication. *Bell System Technical Journal* 27, 379–423.

    Examples
    --------
    >>> import numpy as np
    >>> shannon(np.array([[0.5, 0.5], [1.0, 0.0]])).round(4)
    array([0.6931, 0.    ])
    """
    logarithm = np.log(p, out=np.zeros_like(p), where=p > 0)
    # 0 − x rather than −x: a single zone is 0, never −0.
    return np.asarray(0.0 - (p * logarithm).sum(axis=-1))
