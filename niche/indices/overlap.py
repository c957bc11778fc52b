"""Niche overlap: how alike two species' use of the zones is.

Overlap is similarity of use. It is not competition (Colwell & Futuyma 1971; Abrams 1980; Lawlor 1980).

Four look-alikes, all 0 for species that never use the same zone and 1 for equal use:

============== ============================ ==========================================================
index          formula                      tells itself apart by
============== ============================ ==========================================================
pianka         C_st / √(C_ss C_tt)          the cosine; √(α β) at any demand
morisita_horn  2 C_st / (C_ss + C_tt)       at most pianka; lower when breadths differ
morisita       the same on counts of visits takes no visit with itself; visits must be independent
schoener       Σ min(p, q)                  the shared percentage; linear in the proportions
============== ============================ ==========================================================
"""

from __future__ import annotations

import numpy as np

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


def schoener(p: Floats) -> Floats:
    """Schoener's overlap, the shared percentage ``Σ_z min(p_sz, p_tz)``.

    Parameters
    ----------
    p : array, shape (..., S, Z)
        Proportions of use.

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
    shared = np.empty((*p.shape[:-1], species))
    # One species against all the others at a time: the full (S, S, Z) cube would not fit for a large guild.
    for s in range(species):
        shared[..., s, s:] = np.minimum(p[..., s, None, :], p[..., s:, :]).sum(axis=-1)
        shared[..., s:, s] = shared[..., s, s:]
    return shared
