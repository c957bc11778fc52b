"""The product matrix ``C_st = Σ_z p_sz p_tz``, from which nearly every index follows.

Three estimates of it differ only in which pairs of observations they let in:

``pooled``
    every pair, each unit with itself included: the textbook value. Too large on the diagonal when few units were
    watched, so breadth and overlap come out too low.
``between``
    pairs of *different* units (``docs/methods/between_animals.md``). Needs two or more units a species.
``visits``
    pairs of different visits, each visit one observation: Morisita's (1959) count index.

All three are `products` with other same-observation terms, and all broadcast over leading axes, so that a resample is
nothing but one more axis.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


def products(
    use: Floats,
    same_product: Floats | float = 0.0,
    same_total: Floats | float = 0.0,
    zone_weights: Floats | None = None,
) -> Floats:
    """Products of proportional use for every pair of species.

    Parameters
    ----------
    use : array, shape (..., S, Z)
        Use of each zone by each species, summed over its units: time or counts, any unit, each at least 0.
    same_product, same_total : array, shape (..., S), optional
        What to take off the diagonal so that no observation is paired with itself: ``Σ_u w_u² <t_u, t_u>`` from the
        products and ``Σ_u w_u² T_u²`` from the totals, with ``w_u`` how often unit ``u`` was drawn. Zero, the default,
        gives the pooled matrix.
    zone_weights : array, shape (Z,), optional
        Weight of each zone in the sum, for example its productivity; one for each zone by default.

    Returns
    -------
    array, shape (..., S, S)
        ``C``, symmetric, in [0, 1] for unit weights. NaN where a species has no use, or no two different observations.

    Notes
    -----
    ``Σ_{u≠v} <t_u, t_v> = |Σ_u t_u|² − Σ_u |t_u|²``, so no loop over pairs of units is needed. Weights enter squared in
    the second term, so that copies of one unit in a resample never count as a pair.

    Examples
    --------
    >>> import numpy as np
    >>> products(np.array([[1.0, 1.0], [2.0, 0.0]]))
    array([[0.5, 0.5],
           [0.5, 1. ]])
    """
    weighted = use if zone_weights is None else use * zone_weights
    numerator = weighted @ np.swapaxes(use, -1, -2)
    totals = use.sum(axis=-1)
    denominator = totals[..., :, None] * totals[..., None, :]
    diagonal = np.arange(use.shape[-2])
    scale = denominator[..., diagonal, diagonal]
    # A difference of two large sums that should be nothing is left as rounding noise of either sign; call it nothing.
    numerator[..., diagonal, diagonal] = _clean(numerator[..., diagonal, diagonal] - same_product, scale)
    denominator[..., diagonal, diagonal] = _clean(scale - same_total, scale)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(denominator > 0, numerator / denominator, np.nan)


def _clean(difference: Floats, scale: Floats) -> Floats:
    """Set to zero what is below the rounding error of ``scale``."""
    return np.where(difference > 1e-12 * scale, difference, 0.0)


def proportions(use: Floats) -> Floats:
    """Proportion of each species' use that falls in each zone.

    Parameters
    ----------
    use : array, shape (..., S, Z)
        Time or counts, each at least 0.

    Returns
    -------
    array, shape (..., S, Z)
        Each row sums to 1; NaN in the row of a species without use.
    """
    totals = use.sum(axis=-1, keepdims=True)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(totals > 0, use / totals, np.nan)
