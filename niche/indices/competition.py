"""Competition coefficients that overlap in use implies, under stated assumptions.

They hold only where the zones (or what they offer) are in short supply, demand is as stated, and competition acts
through shared use alone. Overlap by itself shows none of these.
"""

from __future__ import annotations

import numpy as np

from niche.indices.overlap import pianka
from niche.indices.products import Floats


def macarthur_levins(c: Floats, demand: Floats | None = None) -> Floats:
    """Competition coefficients ``α_st = (C_st / C_ss) (d_t / d_s)``: the effect of one individual of t on s.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix.
    demand : array, shape (S,), optional
        Per-capita take of resource of each species, any common unit, above 0. Equal by default.

    Returns
    -------
    array, shape (..., S, S)
        In individuals of s for each individual of t; diagonal 1. ``√(α_st α_ts)`` is Pianka's overlap at any demand.
        NaN where ``C_ss`` is 0 or undefined.

    References
    ----------
    MacArthur, R. & Levins, R. (1967) The limiting similarity, convergence, and divergence of coexisting species.
    *American Naturalist* 101, 377–385.

    Examples
    --------
    >>> import numpy as np
    >>> macarthur_levins(np.array([[0.5, 0.2], [0.2, 0.4]]))
    array([[1. , 0.4],
           [0.5, 1. ]])
    >>> macarthur_levins(np.array([[0.5, 0.2], [0.2, 0.4]]), demand=np.array([1.0, 2.0]))
    array([[1.  , 0.8 ],
           [0.25, 1.  ]])
    """
    own = np.diagonal(c, axis1=-2, axis2=-1)[..., :, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        alpha = np.where(own > 0, c / own, np.nan)
    if demand is not None:
        alpha = alpha * (demand[None, :] / demand[:, None])
    return alpha


def within_range(c: Floats) -> tuple[Floats, NDArrayBool]:
    """Product matrix with every pair's Pianka overlap held at no more than 1.

    The population cannot have an overlap above 1, but a between-animal estimate can by sampling noise; its alphas would
    then multiply to more than 1 and pose as a priority effect. Such a pair is set to complete overlap, both alphas
    scaled down by the same factor.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix.

    Returns
    -------
    limited : array, shape (..., S, S)
        ``C`` with off-diagonal ``C_st`` at most ``√(C_ss C_tt)``; NaN where a species' own product is 0.
    over : array of bool, shape (..., S, S)
        Which pairs were brought back.

    Examples
    --------
    >>> import numpy as np
    >>> limited, over = within_range(np.array([[0.25, 0.3], [0.3, 0.25]]))
    >>> limited[0, 1], over[0, 1]
    (np.float64(0.25), np.True_)
    """
    overlap = pianka(c)
    over = overlap > 1.0
    species = np.arange(c.shape[-1])
    over[..., species, species] = False
    # A species whose units share no zone has an infinite overlap, which no factor brings back: undefined, not 0.
    factor = np.where(np.isinf(overlap), np.nan, np.where(over, overlap, 1.0))
    return c / factor, over & np.isfinite(overlap)


NDArrayBool = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]
