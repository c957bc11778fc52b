"""Random guilds: what would overlap be if some part of the use of zones were left to chance?

Lawlor (1980) randomised the use of each resource by each species in four ways, which differ in what they keep. Where
availability is given, it is the preference behind the use (electivity, use divided by availability) that is left to chance,
and what is available weighs every draw again.

Where animals are known, a randomisation that moves values moves them for all animals of a species alike: each animal stays
whole, and what animals of one species have in common stays too. A fifth randomisation asks another question: it keeps every
animal as it is and reassigns animals to species. ``docs/methods/null_models.md`` says when to use which.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from niche.indices.products import Floats
from niche.resampling.draws import Sums, sum_units

_LAWLOR = "Lawlor 1980"


@dataclass(frozen=True)
class Randomisation:
    """One way to leave use to chance.

    Attributes
    ----------
    title : str
    keeps : str
        What stays as it was observed.
    chance : str
        What is left to chance.
    source : str
    """

    title: str
    keeps: str
    chance: str
    source: str = _LAWLOR


RANDOMISATIONS: dict[str, Randomisation] = {
    "ra1": Randomisation(
        "RA1: all values new",
        "the number of species and of zones",
        "how much of each zone a species uses: any share is as likely as any other, so niches come out broad",
    ),
    "ra2": Randomisation(
        "RA2: new values in the zones used",
        "which zones each species uses and which it does not",
        "how much of each zone it uses, among those it uses",
    ),
    "ra3": Randomisation(
        "RA3: values moved over all zones",
        "the shares of each species, and so its breadth",
        "which zone has which share",
    ),
    "ra4": Randomisation(
        "RA4: values moved among the zones used",
        "which zones each species uses, the shares, and so its breadth",
        "which of the zones used has which share",
    ),
    "animals": Randomisation(
        "animals reassigned to species",
        "the use of every animal, and how many animals each species has",
        "which species an animal belongs to",
        "permutation of group labels; Fisher 1935",
    ),
}
"""Names that the setting takes; what each keeps fixed."""


def new_shares(used: NDArray[np.bool_], size: int, generators: Sequence[np.random.Generator]) -> Floats:
    """Uniform values where ``used``, 0 elsewhere: the draws of RA1 (all used) and RA2.

    Parameters
    ----------
    used : array of bool, shape (S, Z)
    size : int
        How many draws, ``B``.
    generators : sequence of S generators

    Returns
    -------
    array, shape (B, S, Z)
        Not scaled to sum to 1; in [0, 1).
    """
    zones = used.shape[-1]
    return np.stack([rng.random((size, zones)) for rng in generators], axis=-2) * used


def new_places(movable: NDArray[np.bool_], size: int, rng: np.random.Generator) -> NDArray[np.intp]:
    """Random orders of the movable zones; the others stay in place: the draws of RA3 (all movable) and RA4.

    Parameters
    ----------
    movable : array of bool, shape (Z,)
    size : int
    rng : Generator

    Returns
    -------
    array of int, shape (B, Z)
        From which zone the value of each zone comes.

    Examples
    --------
    >>> import numpy as np
    >>> new_places(np.array([True, False, True]), 2, np.random.default_rng(1))[:, 1]
    array([1, 1])
    """
    zones = len(movable)
    # Zones that stay sort behind those that move, each in its own place there.
    keys = np.where(movable, rng.random((size, zones)), 2.0 + np.arange(zones))
    order = np.empty((size, zones), dtype=np.intp)
    order[:, np.argsort(~movable, kind="stable")] = np.argsort(keys, axis=-1, kind="stable")
    return order


def moved(use: Floats, order: NDArray[np.intp], availability: Floats | None = None, *, single: bool = False) -> Sums:
    """Sums of one species whose animals all had their zones moved in the same way.

    Parameters
    ----------
    use : array, shape (U, Z)
        Use of each zone by each animal.
    order : array of int, shape (B, Z)
        From which zone the value of each zone comes.
    availability : array, shape (Z,), optional
        If given, use divided by availability is moved, and weighted by availability where it arrives.
    single : bool
        As in `niche.resampling.draws.sum_units`: every count of 1 an observation of its own.

    Returns
    -------
    Sums
        With leading axis ``B`` and one species.
    """
    here = sum_units([np.ones(len(use))], [use], single=single)
    total, same = here.use[0][order], here.same[0][order]
    same_total = np.broadcast_to(here.same_total, (len(order), 1))
    if availability is not None:
        factor = availability / availability[order]
        total, same = factor * total, factor**2 * same
        arrives = np.empty_like(factor)
        np.put_along_axis(arrives, order, factor, axis=-1)  # the factor by the zone that a value leaves
        same_total = ((arrives @ use.T) ** 2).sum(axis=-1, keepdims=True)
    return Sums(total[:, None, :], same[:, None, :], same_total)


def reassigned(sizes: Sequence[int], size: int, rng: np.random.Generator) -> list[Floats]:
    """Weights that give each animal at random to one species; every species keeps its number of animals.

    Parameters
    ----------
    sizes : sequence of S int
        Number of animals of each species.
    size : int
    rng : Generator

    Returns
    -------
    list of S arrays, each (B, U), U the number of animals in all
        1 where the animal is the species', 0 elsewhere.
    """
    animals = sum(sizes)
    rank = np.argsort(rng.random((size, animals)), axis=-1, kind="stable")
    ends = np.cumsum(sizes)
    return [((rank >= end - n) & (rank < end)).astype(np.float64) for n, end in zip(sizes, ends, strict=True)]
