"""What any test by random draws needs: tail probabilities that count the data as one draw, and Holm's adjustment."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats

_TIE = 1e-10
"""Equal values that were summed in another order differ by rounding; they are ties."""


class Tails(NamedTuple):
    """Probabilities of a value as low, as high, and as far out as the one observed, and how many draws gave no value."""

    lower: Floats
    upper: Floats
    two_sided: Floats
    undefined: NDArray[np.int64]


def tails(observed: Floats, draws: Floats) -> Tails:
    """Tail probabilities by ``(b + 1) / (m + 1)``: the data themselves are one of the arrangements.

    Parameters
    ----------
    observed : array, shape (...)
    draws : array, shape (..., B)
        Values under the null; those that are not finite are left out and counted.

    Returns
    -------
    Tails
        Each of shape (...). ``two_sided`` is twice the smaller tail, at most 1. NaN where nothing was observed or no draw
        is defined. Never 0: ``m`` draws cannot show a probability below ``1 / (m + 1)``.

    References
    ----------
    Davison, A. C. & Hinkley, D. V. (1997) *Bootstrap Methods and their Application*, ch. 4. Cambridge University Press.

    Examples
    --------
    >>> import numpy as np
    >>> tails(np.array(0.1), np.array([0.1, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9])).two_sided
    np.float64(0.5)
    """
    defined = np.isfinite(draws)
    m = defined.sum(axis=-1)
    slack = _TIE * np.maximum(1.0, np.abs(observed))
    with np.errstate(invalid="ignore"):
        at_most = (defined & (draws <= (observed + slack)[..., None])).sum(axis=-1)
        at_least = (defined & (draws >= (observed - slack)[..., None])).sum(axis=-1)
    known = np.isfinite(observed) & (m > 0)
    lower = np.where(known, (at_most + 1.0) / (m + 1.0), np.nan)[()]
    upper = np.where(known, (at_least + 1.0) / (m + 1.0), np.nan)[()]
    undefined = np.asarray(draws.shape[-1] - m, dtype=np.int64)[()]
    return Tails(lower, upper, np.minimum(1.0, 2.0 * np.minimum(lower, upper)), undefined)


def holm(p: Floats) -> Floats:
    """Holm's adjustment of a family of tests.

    Parameters
    ----------
    p : array of any shape
        One value a test; NaN is no test.

    Returns
    -------
    array of the same shape
        Judged at level ``a``, the chance of any false finding in the family is at most ``a``, however the tests hang
        together.

    References
    ----------
    Holm, S. (1979) A simple sequentially rejective multiple test procedure. *Scandinavian Journal of Statistics* 6, 65–70.

    Examples
    --------
    >>> import numpy as np
    >>> holm(np.array([0.01, 0.04, 0.03])).round(2)
    array([0.03, 0.06, 0.06])
    """
    flat = np.asarray(p, dtype=np.float64).ravel()
    tested = np.flatnonzero(~np.isnan(flat))
    ordered = tested[np.argsort(flat[tested], kind="stable")]
    steps = flat[ordered] * np.arange(len(ordered), 0, -1)
    adjusted = np.full(flat.shape, np.nan)
    adjusted[ordered] = np.minimum(1.0, np.maximum.accumulate(steps))
    return adjusted.reshape(np.shape(p))


def symmetric(values: Floats, size: int) -> Floats:
    """Values of the pairs ``s < t``, in the order of `numpy.triu_indices`, as a symmetric matrix with NaN on the diagonal.

    Examples
    --------
    >>> import numpy as np
    >>> symmetric(np.array([1.0, 2.0, 3.0]), 3)
    array([[nan,  1.,  2.],
           [ 1., nan,  3.],
           [ 2.,  3., nan]])
    """
    matrix = np.full((size, size), np.nan)
    matrix[np.triu_indices(size, 1)] = values
    matrix.T[np.triu_indices(size, 1)] = values
    return matrix
