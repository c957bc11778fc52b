"""Every statistic of one set of weights: the one place where indices are called, for estimates and resamples alike."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import dataclass

import numpy as np

from niche.analysis.results import Weighting
from niche.indices import BREADTH, OVERLAP, Inputs, macarthur_levins, proportions, within_range
from niche.indices.catalogue import Index
from niche.indices.products import Floats
from niche.resampling import Sums, sum_units
from niche.usage import Usage

ALPHA = "alpha"
"""Name under which the coefficients are asked for among the indices."""

INDICES: dict[str, Index] = {
    **{f"breadth.{n}": i for n, i in BREADTH.items()},
    **{f"overlap.{n}": i for n, i in OVERLAP.items()},
}
"""Every index under its family and name, for `hurlbert` is one of each."""


@dataclass(frozen=True)
class Material:
    """What is summed over units: weighted time, visits where they were counted, and availability where it is known."""

    time: Sequence[Floats]
    visits: Sequence[Floats] | None
    availability: Floats | None

    @classmethod
    def of(cls, usage: Usage, weighting: Weighting) -> Material:
        """Material of a Usage whose units all have use."""
        time = [np.asarray(t, dtype=np.float64) for t in usage.use]
        if weighting == "animal":
            time = [t / t.sum(axis=1, keepdims=True) for t in time]
        visits = None if usage.visits is None else [np.asarray(v, dtype=np.float64) for v in usage.visits]
        return cls(time, visits, usage.availability)

    def known(self) -> set[str]:
        """What indices may need and find here."""
        found = {"use"}
        if self.visits is not None:
            found.add("visits")
        # A zone that is used though nothing of it is available breaks the weights.
        if self.availability is not None and (self.availability > 0).all():
            found.add("availability")
        return found

    def statistics(self, weights: Sequence[Floats], wanted: Collection[str], demand: Floats) -> dict[str, Floats]:
        """Statistics by name under the weights of units.

        Parameters
        ----------
        weights : sequence of S arrays, each (..., U_s)
        wanted : collection of str
            Keys of `INDICES`, and `ALPHA`.
        demand : array, shape (S,)

        Returns
        -------
        dict
            Indices as `Index.function` gives them; ``proportion`` (..., S, Z); with `ALPHA` also ``over`` (..., S, S), 1
            where noise had led above complete overlap.
        """
        sums = sum_units(weights, self.time)
        visits = None if self.visits is None else sum_units(weights, self.visits, single=True)
        return self._compute(self._inputs(sums, visits, pooled=False), wanted, demand)

    def pooled(self, wanted: Collection[str], demand: Floats) -> dict[str, Floats]:
        """Textbook values: every unit once, and paired with itself too."""
        ones = [np.ones(len(t)) for t in self.time]
        visits = None if self.visits is None else sum_units(ones, self.visits, single=True)
        return self._compute(self._inputs(sum_units(ones, self.time), visits, pooled=True), wanted, demand)

    def _inputs(self, sums: Sums, visits: Sums | None, *, pooled: bool) -> Inputs:
        p = proportions(sums.use)
        rarity = 1.0 / self.availability if self.availability is not None and "availability" in self.known() else None
        product = sums.pooled if pooled else sums.between
        return Inputs(
            p=p,
            squares=p * p if pooled else sums.squares(),
            c=product(),
            weighted=None if rarity is None else product(rarity),
            visits=None if visits is None else visits.between(),
            availability=self.availability,
        )

    @staticmethod
    def _compute(inputs: Inputs, wanted: Collection[str], demand: Floats) -> dict[str, Floats]:
        values = {name: index.function(inputs) for name, index in INDICES.items() if name in wanted}
        values["proportion"] = inputs.p
        if ALPHA in wanted:
            limited, over = within_range(inputs.c)
            values[ALPHA], values["over"] = macarthur_levins(limited, demand), over.astype(np.float64)
        return values
