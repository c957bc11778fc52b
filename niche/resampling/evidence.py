"""What an interval can rest on: the estimate, its resamples, and its values with one unit left out.

All three come from the same functions with another leading axis, so every method serves every statistic, all species and
all pairs at once.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats

Scale = Literal["plain", "log", "logit"]
"""Scale on which a statistic's sampling is closest to symmetric: as it is, ratios by logarithm, shares by logit."""

_FORWARD: dict[str, Callable[[Floats], Floats]] = {
    "plain": lambda x: x,
    "log": np.log,
    "logit": lambda x: np.log(x) - np.log1p(-x),
}
_BACK: dict[str, Callable[[Floats], Floats]] = {
    "plain": lambda y: y,
    "log": np.exp,
    "logit": lambda y: 1.0 / (1.0 + np.exp(-y)),
}


@dataclass(frozen=True)
class Evidence:
    """Values of one statistic.

    Attributes
    ----------
    estimate : array, shape (...)
    draws : array, shape (B, ...)
        The statistic in each resample.
    left_out : array, shape (N, ...)
        The statistic with one unit left out.
    owner : array of int, shape (N,)
        Which stratum (species) each left-out unit belongs to.
    units : array, shape (...)
        Fewest units that a cell rests on.
    scale : {"plain", "log", "logit"}
    """

    estimate: Floats
    draws: Floats
    left_out: Floats
    owner: NDArray[np.intp]
    units: NDArray[np.int64]
    scale: Scale

    def forward(self, values: Floats) -> Floats:
        """Values on the scale of the statistic; what has no place there becomes infinite or NaN."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return _FORWARD[self.scale](values)

    def back(self, values: Floats) -> Floats:
        """Values back from the scale of the statistic."""
        with np.errstate(over="ignore"):
            return _BACK[self.scale](values)


@dataclass(frozen=True)
class Jackknife:
    """Variance of a statistic on its scale from leaving out each unit in turn, and its degrees of freedom.

    ``variance`` and ``freedom`` have the shape of the statistic. Each stratum adds ``(n−1)/n Σ (θ_(i) − mean)²``; strata
    are independent, so their parts add, and Satterthwaite's rule gives the degrees of freedom of the sum.
    """

    variance: Floats
    freedom: Floats
    deviations: Floats
    """``mean − θ_(i)`` on the scale, shape (N, ...): large where a unit pulls the estimate up."""


def jackknife(evidence: Evidence) -> Jackknife:
    """Leave-one-out variance, stratum by stratum.

    References
    ----------
    Efron, B. & Tibshirani, R. J. (1993) *An Introduction to the Bootstrap*, ch. 11. Chapman & Hall.
    Satterthwaite, F. E. (1946) An approximate distribution of estimates of variance components. *Biometrics Bulletin* 2,
    110–114.
    """
    values = evidence.forward(evidence.left_out)
    cells = values.shape[1:]
    variance, weight = np.zeros(cells), np.zeros(cells)
    deviations = np.zeros_like(values)
    for stratum in np.unique(evidence.owner):
        mine = evidence.owner == stratum
        group = values[mine]
        defined = np.isfinite(group)
        n = defined.sum(axis=0)
        with np.errstate(invalid="ignore", divide="ignore"):
            mean = np.where(defined, group, 0.0).sum(axis=0) / n
            deviation = np.where(defined, mean - group, 0.0)
            part = (n - 1) / n * (deviation**2).sum(axis=0)
        # One left-out value at the very edge of the scale (an overlap of 0) says that all hangs on one unit.
        part = np.where(np.isinf(group).any(axis=0), np.inf, np.nan_to_num(part, nan=0.0, posinf=np.inf))
        variance += part
        with np.errstate(invalid="ignore", divide="ignore"):
            weight += np.where(part > 0, part**2 / np.maximum(n - 1, 1), 0.0)
        deviations[mine] = deviation
    with np.errstate(invalid="ignore", divide="ignore"):
        freedom = np.where(weight > 0, variance**2 / weight, np.inf)
    return Jackknife(variance, np.where(np.isfinite(variance), freedom, 1.0), deviations)
