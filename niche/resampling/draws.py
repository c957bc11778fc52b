"""Resamples of sampling units as weights, and the sums that they give.

A resample draws the units of a species with replacement, as many as there are; a unit's weight is how often it was
drawn. All resamples of a species are then one matrix product, ``(B, U) @ (U, Z)``, and the point estimate is the same
product with every weight 1.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from niche.indices import products
from niche.indices.products import Floats

Distribution = Literal["log-uniform", "uniform"]


@dataclass(frozen=True)
class Sums:
    """Use summed over weighted units, with the same-unit terms that the between-unit estimate takes away.

    Attributes
    ----------
    use : array, shape (..., S, Z)
        ``Σ_u w_u t_u`` for each species.
    same : array, shape (..., S, Z)
        ``Σ_u w_u² t_u²`` in each zone.
    same_total : array, shape (..., S)
        ``Σ_u w_u² T_u²``.
    """

    use: Floats
    same: Floats
    same_total: Floats

    def pooled(self, zone_weights: Floats | None = None) -> Floats:
        """Textbook product matrix, every unit paired with itself too; shape (..., S, S)."""
        return products(self.use, zone_weights=zone_weights)

    def between(self, zone_weights: Floats | None = None) -> Floats:
        """Product matrix between different units, shape (..., S, S)."""
        same = self.same if zone_weights is None else self.same * zone_weights
        return products(self.use, same.sum(axis=-1), self.same_total, zone_weights)

    def squares(self) -> Floats:
        """Products of different units within each zone, shape (..., S, Z): the estimate of ``p²``."""
        totals = self.use.sum(axis=-1)
        pairs = totals * totals - self.same_total
        with np.errstate(divide="ignore", invalid="ignore"):
            squares = (self.use * self.use - self.same) / pairs[..., None]
        return np.where((pairs > 1e-12 * totals * totals)[..., None], squares, np.nan)


def sum_units(weights: Sequence[Floats], use: Sequence[Floats], *, single: bool = False) -> Sums:
    """Sum the units of each species under given weights.

    Parameters
    ----------
    weights : sequence of S arrays, each (..., U_s)
        How often each unit is drawn; ones for the point estimate.
    use : sequence of S arrays, each (U_s, Z)
        Use of each zone by each unit.
    single : bool
        Take ``use`` as counts in which every count of 1 is an observation of its own (a visit), rather than the whole
        unit being one observation.

    Returns
    -------
    Sums
    """
    summed, same, same_total = [], [], []
    for w, t in zip(weights, use, strict=True):
        summed.append(w @ t)
        squares = w * w
        totals = t.sum(axis=1)
        same.append(squares @ (t if single else t * t))
        same_total.append(squares @ (totals if single else totals * totals))
    return Sums(np.stack(summed, -2), np.stack(same, -2), np.stack(same_total, -1))


def streams(seed: int, count: int) -> list[np.random.Generator]:
    """Independent, reproducible streams of random numbers, one for each species or input."""
    return [np.random.default_rng(child) for child in np.random.SeedSequence(seed).spawn(count)]


def draw_range(low: float, high: float, distribution: Distribution, resamples: int, rng: np.random.Generator) -> Floats:
    """Draws of a quantity known as a range.

    Parameters
    ----------
    low, high : float
        Ends of the range; ``low`` at most ``high``, both above 0.
    distribution : {"log-uniform", "uniform"}
        Log-uniform gives every factor between the ends the same chance, which suits a quantity known to a factor.
    resamples : int
        How many draws.

    Returns
    -------
    array, shape (resamples,)
    """
    position = rng.random(resamples)
    if distribution == "uniform":
        return low + (high - low) * position
    return low * (high / low) ** position
