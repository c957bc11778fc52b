"""Ways to an interval, each from the same `Evidence`, each for all cells at once. `INTERVALS` names them.

``jackknife_t`` is the default: in the coverage study (``docs/coverage.md``) it keeps its promise from six units on, and it
needs no resamples.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy.special import ndtr, ndtri, stdtrit

from niche.indices.products import Floats
from niche.resampling.evidence import Evidence, jackknife
from niche.resampling.intervals import Interval, percentile, percentile_at


def jackknife_t(evidence: Evidence, confidence: float) -> Interval:
    """Student's t interval about the estimate on the statistic's scale, with the leave-one-out variance.

    Assumes that the estimate is near symmetric on its scale. Good with few units; where the estimate stands at the edge
    of the scale (an overlap of 0) nothing observed bounds it, and the interval runs to the end of the range.

    Parameters
    ----------
    evidence : Evidence
    confidence : float

    Returns
    -------
    Interval
        ``undefined`` counts left-out values without a value.
    """
    parts = jackknife(evidence)
    with np.errstate(invalid="ignore", over="ignore"):
        reach = stdtrit(parts.freedom, 0.5 + confidence / 2.0) * np.sqrt(parts.variance)
        centre = evidence.forward(evidence.estimate)
        low, high = evidence.back(centre - reach), evidence.back(centre + reach)
    undefined = np.isnan(evidence.left_out).sum(axis=0)
    low = np.where(np.isneginf(centre), evidence.estimate, low)
    high = np.where(np.isneginf(centre), np.inf, np.where(np.isposinf(centre), evidence.estimate, high))
    return Interval(np.where(np.isposinf(centre), -np.inf, low), high, undefined)


def percentile_interval(evidence: Evidence, confidence: float) -> Interval:
    """Percentile interval: the middle of the resamples. Too narrow with few units."""
    return percentile(evidence.draws, confidence)


def widened_percentile(evidence: Evidence, confidence: float) -> Interval:
    """Percentile interval with tails moved outwards for few units, by Student's t and ``√(n/(n−1))``.

    References
    ----------
    Hesterberg, T. C. (2015) What teachers should know about the bootstrap. *American Statistician* 69, 371–386 (the
    rule as remembered).
    """
    n = np.maximum(evidence.units, 2).astype(np.float64)
    tail = ndtr(np.sqrt(n / (n - 1.0)) * stdtrit(n - 1.0, 0.5 - confidence / 2.0))
    return percentile_at(evidence.draws, tail, 1.0 - tail)


def bca(evidence: Evidence, confidence: float) -> Interval:
    """Bias-corrected and accelerated percentile interval; the acceleration is each cell's own.

    References
    ----------
    Efron, B. (1987) Better bootstrap confidence intervals. *Journal of the American Statistical Association* 82, 171–185.
    """
    draws = evidence.draws
    defined = np.maximum(np.isfinite(draws).sum(axis=0), 1)
    with np.errstate(invalid="ignore"):
        below = ((draws < evidence.estimate).sum(axis=0) + (draws <= evidence.estimate).sum(axis=0)) / (2.0 * defined)
    bias = ndtri(np.clip(below, 0.5 / defined, 1.0 - 0.5 / defined))
    acceleration = _acceleration(evidence)
    levels = []
    for z in (ndtri(0.5 - confidence / 2.0), ndtri(0.5 + confidence / 2.0)):
        with np.errstate(divide="ignore", invalid="ignore"):
            levels.append(ndtr(bias + (bias + z) / (1.0 - acceleration * (bias + z))))
    return percentile_at(draws, *levels)


def _acceleration(evidence: Evidence) -> Floats:
    """Acceleration from left-out values: a sixth of the skewness of the units' influence, strata of any size."""
    cube = square = np.zeros(evidence.estimate.shape)
    plain = Evidence(
        evidence.estimate, evidence.draws, evidence.left_out, evidence.owner, evidence.units, scale="plain"
    )
    deviations = jackknife(plain).deviations
    for stratum in np.unique(evidence.owner):
        mine = evidence.owner == stratum
        n = mine.sum()
        influence = (n - 1) * deviations[mine]
        cube = cube + (influence**3).sum(axis=0) / n**3
        square = square + (influence**2).sum(axis=0) / n**2
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.nan_to_num(cube / (6.0 * square**1.5), nan=0.0, posinf=0.0, neginf=0.0))


INTERVALS: dict[str, Callable[[Evidence, float], Interval]] = {
    "jackknife_t": jackknife_t,
    "percentile": percentile_interval,
    "widened_percentile": widened_percentile,
    "bca": bca,
}
"""Names that the setting ``analysis.interval`` takes."""
