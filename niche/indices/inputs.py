"""What an index is computed from, in one piece, so that every index takes the same argument."""

from __future__ import annotations

from dataclasses import dataclass

from niche.indices.products import Floats


@dataclass(frozen=True)
class Inputs:
    """Use of zones in the forms that indices need; every array may carry the same leading axes (a resample is one).

    The pooled textbook value of an index and its estimate come from the same function with other inputs: pooled products
    and ``squares = p²``, or products and squares from different units.

    Attributes
    ----------
    p : array, shape (..., S, Z)
        Proportions of use.
    squares : array, shape (..., S, Z)
        Estimate of ``p²``: the product of two different units in each zone; ``p²`` itself when pooled.
    c : array, shape (..., S, S)
        Product matrix.
    weighted : array, shape (..., S, S), or None
        Product matrix with zones weighted by 1/availability; None without availability.
    visits : array, shape (..., S, S), or None
        Product matrix of counts of visits; None where visits were not counted.
    availability : array, shape (Z,), or None
        Share of the habitat that each zone makes up.
    """

    p: Floats
    squares: Floats
    c: Floats
    weighted: Floats | None = None
    visits: Floats | None = None
    availability: Floats | None = None

    @property
    def zones(self) -> int:
        """Number of zones, unused ones included."""
        return int(self.p.shape[-1])

    @property
    def variance(self) -> Floats:
        """Sampling variance of each proportion, ``p² − squares``, at least 0; 0 when pooled."""
        difference = self.p * self.p - self.squares
        return difference * (difference > 0)
