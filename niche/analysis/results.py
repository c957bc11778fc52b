"""Results: frozen, plain arrays, every interval with what it rests on."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats
from niche.resampling import Strata
from niche.usage import Usage

if TYPE_CHECKING:
    import pandas as pd

Weighting = Literal["time", "animal"]


@dataclass(frozen=True)
class Options:
    """How an analysis was made: enough, with the Usage, to make it again."""

    resamples: int = 9999
    confidence: float = 0.95
    seed: int = 1
    weighting: Weighting = "time"
    core: float = 0.5
    interval: str = "jackknife_t"


@dataclass(frozen=True)
class Estimate:
    """A result with its interval; every field has the same shape.

    Attributes
    ----------
    value : array
        The estimate, held to the range that the population value can have.
    low, high : array
        Interval by the method of the options; NaN with fewer than 3 units.
    pooled : array
        The textbook value from pooled use, to compare with the literature.
    undefined : array of int
        Resamples that gave no value, left out of the interval.
    clipped : array of int
        Resamples in which sampling noise led outside the possible range, counted at its edge.
    least, most : array
        Range of the value with one unit left out at a time; NaN with fewer than 2 units.
    mover : array of int
        Which unit moves the value most when it is left out, as a position among `Analysis.strata`'s units; -1 for none.
    """

    value: Floats
    low: Floats
    high: Floats
    pooled: Floats
    undefined: NDArray[np.int64]
    clipped: NDArray[np.int64]
    least: Floats
    most: Floats
    mover: NDArray[np.int64]


@dataclass(frozen=True)
class Use:
    """Use of zones: shapes (S, Z), and (S,) for ``core_share``.

    ``core`` marks the fewest zones that hold at least the share set in the options; ``core_share`` is what they hold
    really; ``core_frequency`` in what share of resamples a zone was in the core (NaN with fewer than 3 units).
    """

    amount: Floats
    proportion: Estimate
    core: NDArray[np.bool_]
    core_share: Floats
    core_frequency: Floats


@dataclass(frozen=True)
class Coefficients:
    """Competition coefficients that the overlap implies at the given demand.

    ``alpha[i, j]`` is the effect of one individual of j on i, in individuals of i; ``demand`` has shape (S,).
    """

    alpha: Estimate
    demand: Floats


@dataclass(frozen=True)
class PairOutcome:
    """Two-species outcome over resamples and ranges of K.

    ``share``, ``n_1`` and ``n_2`` follow the order of `niche.dynamics.OUTCOMES`: the share of the defined draws that end
    so, and the median numbers among them (NaN where the end depends on the start).
    """

    species_1: int
    species_2: int
    share: Floats
    n_1: Floats
    n_2: Floats
    draws: int
    undefined: int


@dataclass(frozen=True)
class Analysis:
    """All results of one Usage under one set of options.

    ``breadth`` holds arrays of shape (S,), ``overlap`` of shape (S, S), by name of the index; ``notes`` are sentences on
    what a reader should know before using the numbers.
    """

    usage: Usage
    options: Options
    strata: Strata
    use: Use
    breadth: dict[str, Estimate]
    overlap: dict[str, Estimate]
    coefficients: Coefficients | None
    outcomes: tuple[PairOutcome, ...]
    notes: tuple[str, ...]

    def table(self, name: str) -> pd.DataFrame:
        """One result as a tidy table: ``usage``, ``breadth``, ``overlap``, ``coefficients``, ``outcome`` or ``draws``.

        Raises
        ------
        ValueRuleError
            There is no table of that name.
        """
        from niche.tables import table

        return table(self, name)
