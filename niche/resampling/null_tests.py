"""Observed overlap against random guilds: mean and variance over the pairs, and each pair by itself."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from niche.errors import ValueRuleError
from niche.indices.catalogue import OVERLAP, Index
from niche.indices.inputs import Inputs
from niche.indices.products import Floats, proportions
from niche.resampling.draws import Sums, streams, sum_units
from niche.resampling.intervals import percentile
from niche.resampling.null_models import RANDOMISATIONS, moved, new_places, new_shares, reassigned
from niche.resampling.permuted import holm, symmetric, tails

Estimator = Literal["between", "pooled"]

_TILE = 4_000_000
"""Numbers that one block of draws may hold; any size gives the same results."""

_COLUMNS = 256
"""Pairs whose draws are summed up at a time, so that temporary arrays stay small in a large guild."""


@dataclass(frozen=True)
class NullTest:
    """One quantity observed, and its distribution under the null; all arrays of one shape (...).

    Attributes
    ----------
    observed, null_mean, null_sd : array
    low, high : array
        Ends of the middle ``confidence`` of the null, not an interval for the observed value.
    effect : array
        Standardised effect, ``(observed − null_mean) / null_sd``; NaN where the null does not vary.
    p_lower, p_upper, p : array
        Probability of a value as low, as high, as far out (two-sided), by ``(b + 1) / (m + 1)``.
    undefined : array of int
        Draws without a value; left out.
    """

    observed: Floats
    null_mean: Floats
    null_sd: Floats
    low: Floats
    high: Floats
    effect: Floats
    p_lower: Floats
    p_upper: Floats
    p: Floats
    undefined: NDArray[np.int64]


@dataclass(frozen=True)
class NullModel:
    """A guild against one randomisation.

    Attributes
    ----------
    index, randomisation : str
        Names in `niche.indices.OVERLAP` and `RANDOMISATIONS`.
    estimator : {"between", "pooled"}
    draws, seed : int
    confidence : float
    mean, variance : NullTest, shape ()
        Mean overlap of the pairs with a value, and their variance (divided by one less than their number).
    pairs : NullTest, shape (S, S)
        Symmetric, NaN on the diagonal.
    p_holm : array, shape (S, S)
        Two-sided p of the pairs, adjusted for their number.
    """

    index: str
    randomisation: str
    estimator: Estimator
    draws: int
    seed: int
    confidence: float
    mean: NullTest
    variance: NullTest
    pairs: NullTest
    p_holm: Floats


def null_model(
    use: Sequence[Floats],
    randomisation: str,
    *,
    index: str = "pianka",
    estimator: Estimator = "between",
    availability: Floats | None = None,
    draws: int = 999,
    seed: int = 1,
    confidence: float = 0.95,
    tile: int = _TILE,
) -> NullModel:
    """Test whether overlap in a guild is lower or higher than chance gives.

    Parameters
    ----------
    use : sequence of S arrays, each (U_s, Z)
        Time or counts by animal and zone, each at least 0, every animal with some use; counts of visits for ``morisita``.
        A species known by its proportions alone is one row, with ``estimator="pooled"``.
    randomisation : str
        Name in `RANDOMISATIONS`.
    index : str
        Name in `niche.indices.OVERLAP`.
    estimator : {"between", "pooled"}
        Products between different animals, or the textbook value. RA1 and RA2 draw shares without animals: the null is
        then of exact shares under either.
    availability : array, shape (Z,), optional
        Share of the habitat that each zone makes up, above 0; weighs the draws, and serves indices that need it.
    draws, seed : int
    confidence : float
    tile : int
        Numbers that a block of draws may hold; changes memory, never results.

    Returns
    -------
    NullModel
        Values are held to the range of the index, as in the table of overlaps. Memory: 8 bytes a pair and draw.

    Raises
    ------
    ValueRuleError
        An unknown name, fewer than two species, availability missing or not above 0, or a question that the data cannot
        put.

    References
    ----------
    Lawlor, L. R. (1980) Structure and stability in natural and randomly constructed competitive communities. *American
    Naturalist* 116, 394–408.
    Winemiller, K. O. & Pianka, E. R. (1990) Organization in natural assemblages of desert lizards and tropical fishes.
    *Ecological Monographs* 60, 27–55.

    Examples
    --------
    >>> import numpy as np
    >>> use = [np.array([[8.0, 1, 0, 0]]), np.array([[0.0, 1, 9, 0]]), np.array([[0.0, 0, 2, 8]])]
    >>> result = null_model(use, "ra3", estimator="pooled", draws=999)
    >>> bool(result.mean.observed < result.mean.null_mean)
    True
    """
    chosen = _checked(use, randomisation, index, availability)
    single = chosen.needs == "visits"
    shares = None if availability is None else availability / availability.sum()

    def overlap(sums: Sums, *, exact: bool) -> Floats:
        """Overlaps of the pairs, shape (..., pairs), held to the range of the index."""
        between = estimator == "between" and not exact
        value = chosen.function(_inputs(sums, shares, between=between, single=single))
        value = np.where(np.isfinite(value), np.clip(value, chosen.lower, chosen.upper(sums.use.shape[-1])), np.nan)
        rows, columns = np.triu_indices(len(use), 1)
        return np.asarray(value[..., rows, columns])

    observed = overlap(sum_units([np.ones(len(t)) for t in use], use, single=single), exact=False)
    draw = _draw(use, randomisation, shares, seed, single=single)
    width = len(use) * (use[0].shape[1] + len(use) + (sum(map(len, use)) if randomisation == "animals" else 0))
    step = max(1, tile // width)
    values = np.empty((len(observed), draws))
    for begin in range(0, draws, step):
        end = min(begin + step, draws)
        values[:, begin:end] = overlap(draw(end - begin), exact=randomisation in ("ra1", "ra2")).T

    there = np.isfinite(observed)
    pairs = _pairs(observed, values, confidence, len(use))
    return NullModel(
        index,
        randomisation,
        estimator,
        draws,
        seed,
        confidence,
        mean=_summary(_mean(observed[there]), _mean(values[there].T), confidence),
        variance=_summary(_variance(observed[there]), _variance(values[there].T), confidence),
        pairs=pairs,
        p_holm=symmetric(holm(pairs.p[np.triu_indices(len(use), 1)]), len(use)),
    )


def _checked(use: Sequence[Floats], randomisation: str, index: str, availability: Floats | None) -> Index:
    if randomisation not in RANDOMISATIONS:
        raise ValueRuleError(f"randomisation is {randomisation!r}; choose from {', '.join(RANDOMISATIONS)}.")
    if index not in OVERLAP:
        raise ValueRuleError(f"index is {index!r}; choose from {', '.join(OVERLAP)}.")
    if len(use) < 2:
        raise ValueRuleError(f"a null model of overlap needs two species or more; {len(use)} given.")
    if any(len(t) == 0 or (t.sum(axis=1) <= 0).any() for t in use):
        raise ValueRuleError("a species or an animal has no use of any zone; leave it out.")
    chosen = OVERLAP[index]
    if chosen.needs == "availability" and availability is None:
        raise ValueRuleError(f"{index} needs the availability of the zones; give it.")
    if availability is not None and (availability.shape != (use[0].shape[1],) or not (availability > 0).all()):
        raise ValueRuleError(f"availability is {availability}; it needs a number above 0 for each zone.")
    if chosen.needs == "visits" and (randomisation in ("ra1", "ra2") or availability is not None):
        raise ValueRuleError(f"{index} is taken from whole counts, which {randomisation} with these options cannot draw.")
    if randomisation == "animals" and all(len(t) == 1 for t in use):
        raise ValueRuleError("animals are reassigned only where a species has two or more; every species has one.")
    return chosen


def _draw(
    use: Sequence[Floats], randomisation: str, availability: Floats | None, seed: int, *, single: bool
) -> Callable[[int], Sums]:
    """A function that gives the next so many random guilds; pieces of any size join to the same draws."""
    *own, shared = streams(seed, len(use) + 1)
    if randomisation == "animals":
        everyone = np.concatenate(use)
        sizes = [len(t) for t in use]
        return lambda size: sum_units(reassigned(sizes, size, shared), [everyone] * len(use), single=single)
    used = np.stack([t.sum(axis=0) > 0 for t in use])
    free = np.ones_like(used) if randomisation in ("ra1", "ra3") else used
    if randomisation in ("ra1", "ra2"):
        weight = 1.0 if availability is None else availability

        def shares(size: int) -> Sums:
            drawn = new_shares(free, size, own) * weight
            return Sums(drawn, np.zeros_like(drawn), np.zeros(drawn.shape[:-1]))

        return shares

    def places(size: int) -> Sums:
        parts = [
            moved(t, new_places(may, size, rng), availability, single=single)
            for t, may, rng in zip(use, free, own, strict=True)
        ]
        return Sums(
            np.concatenate([part.use for part in parts], axis=-2),
            np.concatenate([part.same for part in parts], axis=-2),
            np.concatenate([part.same_total for part in parts], axis=-1),
        )

    return places


def _inputs(sums: Sums, availability: Floats | None, *, between: bool, single: bool) -> Inputs:
    """What an index is computed from. Counts of visits take no visit with itself, whichever the estimator."""
    p = proportions(sums.use)
    product = sums.between if between else sums.pooled
    return Inputs(
        p=p,
        squares=sums.squares() if between else p * p,
        c=product(),
        weighted=None if availability is None else product(1.0 / availability),
        visits=sums.between() if single else None,
        availability=availability,
    )


def _mean(pairs: Floats) -> Floats:
    return pairs.mean(axis=-1) if pairs.shape[-1] else np.full(pairs.shape[:-1], np.nan)


def _variance(pairs: Floats) -> Floats:
    return pairs.var(axis=-1, ddof=1) if pairs.shape[-1] > 1 else np.full(pairs.shape[:-1], np.nan)


def _summary(observed: Floats, draws: Floats, confidence: float) -> NullTest:
    """Observed (...) against draws (..., B)."""
    observed = np.asarray(observed)
    defined = np.isfinite(draws)
    m = np.maximum(defined.sum(axis=-1), 1)
    mean = np.where(defined, draws, 0.0).sum(axis=-1) / m
    sd = np.sqrt((np.where(defined, draws - mean[..., None], 0.0) ** 2).sum(axis=-1) / np.maximum(m - 1, 1))
    mean, sd = (np.where(defined.any(axis=-1), x, np.nan)[()] for x in (mean, sd))
    middle = percentile(np.moveaxis(draws, -1, 0), confidence)
    tail = tails(observed, draws)
    # A null that does not vary shows spread by rounding alone.
    with np.errstate(divide="ignore", invalid="ignore"):
        effect = np.where(sd > 1e-12 * np.maximum(1.0, np.abs(mean)), (observed - mean) / sd, np.nan)[()]
    return NullTest(observed[()], mean, sd, middle.low, middle.high, effect, *tail)


def _pairs(observed: Floats, values: Floats, confidence: float, species: int) -> NullTest:
    """Each pair by itself, in blocks, as symmetric matrices."""
    parts = [
        _summary(observed[i : i + _COLUMNS], values[i : i + _COLUMNS], confidence)
        for i in range(0, len(observed), _COLUMNS)
    ]
    gathered = {
        name: symmetric(np.concatenate([getattr(part, name) for part in parts]), species)
        for name in NullTest.__dataclass_fields__
    }
    undefined = np.nan_to_num(gathered.pop("undefined"), nan=0.0).astype(np.int64)
    return NullTest(**gathered, undefined=undefined)
