"""Two-species outcomes over resamples of α, β and ranges of K."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from niche.analysis.results import PairOutcome
from niche.dynamics import OUTCOMES, classify, equilibrium
from niche.indices.products import Floats
from niche.resampling import draw_range
from niche.resampling.draws import Distribution
from niche.usage import Usage

Capacity = tuple[float, float, Distribution]
"""K as low, high and how it is distributed between them."""


def pair_outcomes(
    usage: Usage,
    alpha: Floats,
    capacity: Mapping[str, Capacity],
    generators: Sequence[np.random.Generator],
    few: NDArray[np.bool_],
) -> tuple[PairOutcome, ...]:
    """Outcome of every pair whose K are known and whose units allow resampling.

    Parameters
    ----------
    alpha : array, shape (B, S, S)
        Coefficients in each resample.
    capacity : mapping of species name to Capacity
    generators : sequence of S generators
        One for the K of each species.
    few : array of bool, shape (S, S)
        Pairs with too few units.
    """
    resamples = alpha.shape[0]
    k = {s: draw_range(*capacity[n], resamples, generators[s]) for s, n in enumerate(usage.species) if n in capacity}
    outcomes = []
    for s in k:
        for t in (t for t in k if t > s and not few[s, t]):
            pair = (alpha[:, s, t], alpha[:, t, s], k[s], k[t])
            case, (n_1, n_2) = classify(*pair), equilibrium(*pair)
            each = [case == i for i in range(len(OUTCOMES))]
            defined = int((case >= 0).sum())
            outcomes.append(
                PairOutcome(
                    s,
                    t,
                    np.array([m.sum() / defined if defined else np.nan for m in each]),
                    np.array([np.median(n_1[m]) if m.any() else np.nan for m in each]),
                    np.array([np.median(n_2[m]) if m.any() else np.nan for m in each]),
                    resamples,
                    resamples - defined,
                )
            )
    return tuple(outcomes)
