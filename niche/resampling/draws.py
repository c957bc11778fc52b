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
    same_product, same_total : array, shape (..., S)
        ``Σ_u w_u² <t_u, t_u>`` and ``Σ_u w_u² T_u²``.
    """

    use: Floats
    same_product: Floats
    same_total: Floats

    def pooled(self) -> Floats:
        """Textbook product matrix, every unit paired with itself too; shape (..., S, S)."""
        return products(self.use)

    def between(self) -> Floats:
        """Product matrix between different units, shape (..., S, S)."""
        return products(self.use, self.same_product, self.same_total)


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
    summed, same_product, same_total = [], [], []
    for w, t in zip(weights, use, strict=True):
        summed.append(w @ t)
        squares = w * w
        totals = t.sum(axis=1)
        same_product.append(squares @ (totals if single else np.einsum("uz,uz->u", t, t)))
        same_total.append(squares @ (totals if single else totals * totals))
    return Sums(np.stack(summed, -2), np.stack(same_product, -1), np.stack(same_total, -1))


def streams(seed: int, count: int) -> list[np.random.Generator]:
    """Independent, reproducible streams of random numbers, one for each species or input."""
    return [np.random.default_rng(child) for child in np.random.SeedSequence(seed).spawn(count)]


def unit_weights(units: int, resamples: int, rng: np.random.Generator) -> Floats:
    """Weights of ``resamples`` draws of ``units`` units with replacement.

    Returns
    -------
    array, shape (resamples, units)
        Whole numbers from 0; each row sums to ``units``. No columns where a species has no unit.
    """
    if units == 0:
        return np.zeros((resamples, 0))
    return rng.multinomial(units, np.full(units, 1.0 / units), size=resamples).astype(np.float64)


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
