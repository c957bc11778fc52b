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


def shannon(p: Floats, variance: Floats | float = 0.0) -> Floats:
    """Shannon's index ``H′ = −Σ p ln p``, in natural logarithms.

    Parameters
    ----------
    p : array, shape (..., S, Z)
        Proportions of use.
    variance : array, shape (..., S, Z), optional
        Sampling variance of each proportion. ``E[p̂ ln p̂]`` exceeds ``p ln p`` by ``v / 2p`` to second order, so that much
        is added back; never more than ``p / 2`` a zone, for the expansion means nothing beyond.

    Returns
    -------
    array, shape (..., S)
        From 0 (one zone) to ``ln Z`` (even use), in nats. The correction can lead a little above ``ln Z``.

    References
    ----------
    Shannon, C. E. (1948) A mathematical theory of communication. *Bell System Technical Journal* 27, 379–423.

    Examples
    --------
    >>> import numpy as np
    >>> shannon(np.array([[0.5, 0.5], [1.0, 0.0]])).round(4)
    array([0.6931, 0.    ])
    """
    # 0 − x rather than −x: a single zone is 0, never −0.
    return np.asarray(0.0 - (p_log_p(p) - p_log_p_bias(p, variance)).sum(axis=-1))


def p_log_p(p: Floats) -> Floats:
    """``p ln p``, 0 for a zone without use."""
    return p * np.log(p, out=np.zeros_like(p), where=p > 0)


def p_log_p_bias(p: Floats, variance: Floats | float) -> Floats:
    """By how much ``p̂ ln p̂`` is expected to exceed ``p ln p``: ``v / 2p``, at most ``p / 2``."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(p > 0, np.minimum(variance / (2.0 * p), p / 2.0), 0.0)


def hurlbert_breadth(weighted: Floats) -> Floats:
    """Hurlbert's breadth ``B′ = 1 / Σ (p² / a)``, with zones weighted by what is available.

    Parameters
    ----------
    weighted : array, shape (..., S, S)
        Product matrix with zone weights 1/a, ``a`` the share of the habitat that a zone makes up.

    Returns
    -------
    array, shape (..., S)
        From the smallest share (only the rarest zone is used) to 1 (use in proportion to availability).

    References
    ----------
    Hurlbert, S. H. (1978) The measurement of niche overlap and some relatives. *Ecology* 59, 67–77.

    Examples
    --------
    >>> import numpy as np
    >>> from niche.indices.products import products
    >>> hurlbert_breadth(products(np.array([[1.0, 3.0]]), zone_weights=np.array([4.0, 4.0 / 3.0])))
    array([1.])
    """
    return levins(weighted)


def smith(p: Floats, availability: Floats, variance: Floats | float = 0.0) -> Floats:
    """Smith's breadth ``FT = Σ √(p a)``: how alike use and availability are.

    Parameters
    ----------
    p : array, shape (..., S, Z)
    availability : array, shape (Z,)
        Shares that sum to 1.
    variance : array, shape (..., S, Z), optional
        Sampling variance of each proportion; ``E √p̂`` falls short of ``√p`` by ``v / 8 p^1.5`` to second order, at most
        ``√p / 4`` taken.

    Returns
    -------
    array, shape (..., S)
        From the root of the smallest share to 1 (use in proportion to availability).

    References
    ----------
    Smith, E. P. (1982) Niche breadth, resource availability, and inference. *Ecology* 63, 1675–1681.

    Examples
    --------
    >>> import numpy as np
    >>> smith(np.array([[0.25, 0.75]]), np.array([0.25, 0.75]))
    array([1.])
    """
    root = np.sqrt(p)
    with np.errstate(divide="ignore", invalid="ignore"):
        short = np.where(p > 0, np.minimum(variance / (8.0 * p * root), root / 4.0), 0.0)
    return np.asarray(((root + short) * np.sqrt(availability)).sum(axis=-1))
