"""Which units are drawn together, and the weights of resamples and of leaving one unit out.

Units of one species are drawn among themselves. Where a unit holds several species, as a watch of a mixed flock does when
sessions are the units, its parts are drawn together: all units of those species form one stratum.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats


def unit_weights(units: int, resamples: int, rng: np.random.Generator) -> Floats:
    """Weights of ``resamples`` draws of ``units`` units with replacement.

    Returns
    -------
    array, shape (resamples, units)
        Whole numbers from 0; each row sums to ``units``. No columns where there is no unit.
    """
    if units == 0:
        return np.zeros((resamples, 0))
    return rng.multinomial(units, np.full(units, 1.0 / units), size=resamples).astype(np.float64)


@dataclass(frozen=True)
class Strata:
    """Units as they are drawn.

    Attributes
    ----------
    sizes : tuple of int
        Number of different units in each stratum.
    stratum : tuple of S int
        Stratum of each species.
    place : tuple of S integer arrays, each (U_s,)
        Position in its stratum of each unit of a species.
    """

    sizes: tuple[int, ...]
    stratum: tuple[int, ...]
    place: tuple[NDArray[np.intp], ...]

    @classmethod
    def of(cls, units: Sequence[Sequence[str]], *, shared: bool) -> Strata:
        """Strata of units by name.

        Parameters
        ----------
        units : sequence of S sequences of str
            Names of the units of each species.
        shared : bool
            Whether one name in two species means one unit, as for sessions; animals are never shared.

        Examples
        --------
        >>> Strata.of([["w1", "w2"], ["w2", "w3"], ["w4"]], shared=True).sizes
        (3, 1)
        >>> Strata.of([["1", "2"], ["1", "2"]], shared=False).sizes
        (2, 2)
        """
        group = list(range(len(units)))
        if shared:
            first: dict[str, int] = {}
            for s, names in enumerate(units):
                for name in names:
                    joined = group[first.setdefault(name, s)]
                    if joined != group[s]:
                        group = [min(joined, group[s]) if g in (joined, group[s]) else g for g in group]
        order = {g: i for i, g in enumerate(dict.fromkeys(group))}
        names_of: list[dict[str, int]] = [{} for _ in order]
        place = []
        for s, names in enumerate(units):
            known = names_of[order[group[s]]]
            place.append(np.array([known.setdefault(name, len(known)) for name in names], dtype=np.intp))
        return cls(tuple(len(known) for known in names_of), tuple(order[g] for g in group), tuple(place))

    def draw(self, resamples: int, generators: Sequence[np.random.Generator]) -> list[Floats]:
        """Weights of resamples for each species, shape (B, U_s): how often each unit was drawn.

        One generator a stratum. Every stratum's units are drawn with replacement, as many as there are.
        """
        drawn = [unit_weights(n, resamples, rng) for n, rng in zip(self.sizes, generators, strict=True)]
        return [drawn[g][:, place] for g, place in zip(self.stratum, self.place, strict=True)]

    @property
    def owner(self) -> NDArray[np.intp]:
        """Stratum of each unit that can be left out, shape (N,)."""
        return np.repeat(np.arange(len(self.sizes)), self.sizes)

    def leave_one_out(self, block: int) -> Iterator[tuple[slice, list[Floats]]]:
        """Weights with one unit left out at a time, for each species, in blocks of at most ``block`` units.

        Yields
        ------
        rows : slice
            Which left-out units these are, in the order of `owner`.
        weights : list of S arrays, each (n, U_s)
        """
        start = np.concatenate([[0], np.cumsum(self.sizes)])
        for begin in range(0, int(start[-1]), block):
            rows = np.arange(begin, min(begin + block, int(start[-1])))
            weights = []
            for g, place in zip(self.stratum, self.place, strict=True):
                weights.append((rows[:, None] != start[g] + place[None, :]).astype(np.float64))
            yield slice(int(rows[0]), int(rows[-1]) + 1), weights
