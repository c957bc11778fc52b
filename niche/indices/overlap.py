"""Niche overlap: how alike two species' use of the zones is.

Overlap is similarity of use. It is not competition (Colwell & Futuyma 1971; Abrams 1980; Lawlor 1980).

Look-alikes, all 0 for species that never use the same zone and, but for the last, 1 for equal use:

============== ============================ ==========================================================
index          formula                      tells itself apart by
============== ============================ ==========================================================
pianka         C_st / √(C_ss C_tt)          the cosine; √(α β) at any demand
morisita_horn  2 C_st / (C_ss + C_tt)       at most pianka; lower when breadths differ
morisita       the same on counts of visits takes no visit with itself; visits must be independent
schoener       Σ min(p, q)                  the shared percentage; linear in the proportions
horn           by entropies                 weighs rare zones more than the others do
hurlbert       Σ p q / a                    against availability; not bounded by 1
============== ============================ ==========================================================
"""

from __future__ import annotations

import numpy as np
from scipy.special import ndtr

from niche.indices.breadth import p_log_p, p_log_p_bias
from niche.indices.products import Floats


def _diagonals(c: Floats) -> tuple[Floats, Floats]:
    """``C_ss`` and ``C_tt``, each shaped to meet ``C_st``."""
    own = np.diagonal(c, axis1=-2, axis2=-1)
    return own[..., :, None], own[..., None, :]


def pianka(c: Floats) -> Floats:
    """Pianka's symmetric overlap ``O = C_st / √(C_ss C_tt)``.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix. Symmetric indices use it alone, so pooled and between-animal values come from one function.

    Returns
    -------
    array, shape (..., S, S)
        Symmetric; in [0, 1] for the pooled matrix. A between-animal estimate can pass 1 by sampling noise. NaN where
        a product is undefined or no two different units of a species shared a zone and the pair shared none either.

    References
    ----------
    Pianka, E. R. (1973) The structure of lizard communities. *Annual Review of Ecology and Systematics* 4, 53–74.

    Examples
    --------
    >>> import numpy as np
    >>> pianka(np.array([[0.5, 0.3], [0.3, 0.5]]))
    array([[1. , 0.6],
           [0.6, 1. ]])
    """
    own_s, own_t = _diagonals(c)
    with np.errstate(divide="ignore", invalid="ignore"):
        return c / np.sqrt(own_s * own_t)


def morisita_horn(c: Floats) -> Floats:
    """Morisita–Horn overlap ``2 C_st / (C_ss + C_tt)``, also called simplified Morisita.

    Parameters
    ----------
    c : array, shape (..., S, S)
        Product matrix. From counts of visits without same-visit pairs this is Morisita's (1959) own index.

    Returns
    -------
    array, shape (..., S, S)
        Symmetric; at most `pianka`; in [0, 1] for the pooled matrix.

    References
    ----------
    Horn, H. S. (1966) Measurement of "overlap" in comparative ecological studies. *American Naturalist* 100, 419–424.
    Morisita, M. (1959) Measuring of interspecific association and similarity between communities. *Memoirs of the
    Faculty of Science, Kyushu University, Series E (Biology)* 3, 65–80.

    Examples
    --------
    >>> import numpy as np
    >>> morisita_horn(np.array([[0.5, 0.3], [0.3, 0.7]])).round(3)
    array([[1. , 0.5],
           [0.5, 1. ]])
    """
    own_s, own_t = _diagonals(c)
    with np.errstate(divide="ignore", invalid="ignore"):
        return 2.0 * c / (own_s + own_t)


def schoener(p: Floats, variance: Floats | float = 0.0) -> Floats:
    """Schoener's overlap, the shared percentage ``Σ_z min(p_sz, p_tz) = 1 − ½ Σ_z |p_sz − p_tz|``.

    Parameters
    ----------
    p : array, shape (..., S, Z)
        Proportions of use.
    variance : array, shape (..., S, Z), optional
        Sampling variance of each proportion. Noise makes two proportions look more different than they are; what it is
        expected to add to ``|p_sz − p_tz|`` is taken off (``docs/methods/estimators.md``).

    Returns
    -------
    array, shape (..., S, S)
        Symmetric, in [0, 1].

    References
    ----------
    Schoener, T. W. (1970) Nonsynchronous spatial overlap of lizards in patchy habitats. *Ecology* 51, 408–418.

    Examples
    --------
    >>> import numpy as np
    >>> schoener(np.array([[0.5, 0.5], [0.2, 0.8]]))
    array([[1. , 0.7],
           [0.7, 1. ]])
    """
    species = p.shape[-2]
    noise = np.broadcast_to(np.asarray(variance, dtype=np.float64), p.shape)
    shared = np.empty((*p.shape[:-1], species))
    # One species against all the others at a time: the full (S, S, Z) cube would not fit for a large guild.
    for s in range(species):
        apart = np.abs(p[..., s, None, :] - p[..., s:, :])
        apart -= _noise_in_distance(apart, noise[..., s, None, :] + noise[..., s:, :])
        shared[..., s, s:] = 1.0 - 0.5 * apart.sum(axis=-1)
        shared[..., s, s] = np.where(np.isnan(p[..., s, 0]), np.nan, 1.0)
        shared[..., s:, s] = shared[..., s, s:]
    return shared


def _noise_in_distance(apart: Floats, variance: Floats) -> Floats:
    """What sampling is expected to add to an observed ``|d|`` with the given variance of d.

    The true difference is put at ``δ = √max(d² − v, 0)``; the mean of a folded normal at δ exceeds δ by what is returned,
    never more than ``|d|``.
    """
    if not variance.any():
        return np.zeros_like(apart)
    spread = np.sqrt(variance)
    true = np.sqrt(np.maximum(apart * apart - variance, 0.0))
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(spread > 0, true / spread, np.inf)
        ratio = np.minimum(ratio, 40.0)
        excess = spread * (np.sqrt(2.0 / np.pi) * np.exp(-0.5 * ratio * ratio) - 2.0 * ratio * ndtr(-ratio))
    return np.asarray(np.minimum(excess, apart))


def horn(p: Floats, variance: Floats | float = 0.0) -> Floats:
    """Horn's information overlap R₀, both species weighted equally.

    ``R₀ = [Σ (p + q) ln (p + q) − Σ p ln p − Σ q ln q] / (2 ln 2)``. Horn also gave a form weighted by sample size; watching
    one species longer must not change an overlap, so this one is used.

    Parameters
    ----------
    p : array, shape (..., S, Z)
    variance : array, shape (..., S, Z), optional
        Sampling variance of each proportion; each ``x ln x`` is corrected as in `niche.indices.breadth.shannon`.

    Returns
    -------
    array, shape (..., S, S)
        Symmetric, in [0, 1].

    References
    ----------
    Horn, H. S. (1966) Measurement of "overlap" in comparative ecological studies. *American Naturalist* 100, 419–424.

    Examples
    --------
    >>> import numpy as np
    >>> horn(np.array([[1.0, 0.0], [0.5, 0.5]])).round(4)
    array([[1.    , 0.6887],
           [0.6887, 1.    ]])
    """
    species = p.shape[-2]
    noise = np.broadcast_to(np.asarray(variance, dtype=np.float64), p.shape)
    own = (p_log_p(p) - p_log_p_bias(p, noise)).sum(axis=-1)
    shared = np.empty((*p.shape[:-1], species))
    for s in range(species):
        both = p[..., s, None, :] + p[..., s:, :]
        joint = (p_log_p(both) - p_log_p_bias(both, noise[..., s, None, :] + noise[..., s:, :])).sum(axis=-1)
        shared[..., s, s:] = (joint - own[..., s, None] - own[..., s:]) / (2.0 * np.log(2.0))
        shared[..., s, s] = np.where(np.isnan(own[..., s]), np.nan, 1.0)
        shared[..., s:, s] = shared[..., s, s:]
    return shared


def hurlbert_overlap(weighted: Floats) -> Floats:
    """Hurlbert's L, ``Σ p q / a``: how often two individuals meet, against what use in proportion to availability gives.

    Parameters
    ----------
    weighted : array, shape (..., S, S)
        Product matrix with zone weights 1/a.

    Returns
    -------
    array, shape (..., S, S)
        0 for no shared zone, 1 when one species uses zones in proportion to availability; above 1 when both prefer the
        same zones. Not bounded by 1. The diagonal is a species with itself.

    References
    ----------
    Hurlbert, S. H. (1978) The measurement of niche overlap and some relatives. *Ecology* 59, 67–77.

    Examples
    --------
    >>> import numpy as np
    >>> from niche.indices.products import products
    >>> hurlbert_overlap(products(np.array([[1.0, 0.0], [0.5, 0.5]]), zone_weights=np.array([2.0, 2.0])))
    array([[2., 1.],
           [1., 1.]])
    """
    return weighted
