"""From Usage to every result, point estimate and resamples by the same functions."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Collection, Mapping
from dataclasses import replace

import numpy as np
from scipy.special import betaincinv

from niche.analysis.estimates import Estimator
from niche.analysis.evidence import gather
from niche.analysis.notes import notes_on
from niche.analysis.outcomes import Capacity, pair_outcomes
from niche.analysis.results import Analysis, Coefficients, Estimate, Options, PairOutcome, Use, Weighting
from niche.analysis.statistics import ALPHA, INDICES, Material
from niche.errors import NicheWarning, ValueRuleError
from niche.indices import core_zones
from niche.indices.products import Floats
from niche.resampling import INTERVALS, Strata, streams
from niche.resampling.intervals import FEWEST_UNITS
from niche.usage import Usage

_TILE = 4_000_000
"""Numbers that one block of resamples may hold; any size gives the same results."""


def analyse(
    usage: Usage,
    *,
    resamples: int = 9999,
    confidence: float = 0.95,
    seed: int = 1,
    weighting: Weighting = "time",
    core: float = 0.5,
    interval: str = "jackknife_t",
    demand: Mapping[str, float] | None = None,
    capacity: Mapping[str, Capacity] | None = None,
    indices: Collection[str] | None = None,
    progress: Callable[[int, int], None] | None = None,
    tile: int = _TILE,
) -> Analysis:
    """Compute use, breadth, overlap, competition coefficients and two-species outcomes, with intervals.

    Parameters
    ----------
    usage : Usage
    resamples : int
        Resamples of the sampling units of each species, at least 1.
    confidence : float
        Between 0 and 1.
    seed : int
        Start of the random numbers; equal seeds give equal results.
    weighting : {"time", "animal"}
        Whether a second or a unit counts once: pool the time of the units, or the proportions of each.
    core : float
        Share of use that core zones hold at least.
    interval : {"jackknife_t", "percentile", "widened_percentile", "bca"}
        How intervals are made (`niche.resampling.methods`).
    demand : mapping of species name to float, optional
        Per-capita take of resource, any common unit, above 0. Equal by default.
    capacity : mapping of species name to (low, high, distribution), optional
        Carrying capacities. Pairs in which both species have one get an outcome.
    indices : collection of str, optional
        Names from `niche.indices.BREADTH` and `OVERLAP`, and ``"alpha"``; all by default.
    progress : callable, optional
        Called with resamples done and resamples in all.
    tile : int
        How many numbers a block of resamples may hold; changes memory, never results.

    Returns
    -------
    Analysis

    Raises
    ------
    ValueRuleError
        An option breaks its rule.

    Warns
    -----
    NicheWarning
        A species has no use at all; its cells are NaN.

    Examples
    --------
    >>> usage = Usage.from_units({"dunlin": [[3, 1], [2, 2], [4, 0]], "redshank": [[1, 1], [1, 3], [2, 2]]},
    ...                          zones=["mud", "sand"])
    >>> result = analyse(usage, resamples=200)
    >>> result.overlap["pianka"].pooled[0, 1].round(4)
    np.float64(0.7894)
    """
    options = Options(resamples, confidence, seed, weighting, core, interval)
    usage = usage.with_use()
    _check(options, usage, demand, capacity, indices)
    rates = np.array([1.0 if demand is None else demand[name] for name in usage.species])
    material = Material.of(usage, weighting)
    wanted = _wanted(indices, material.known())
    strata = Strata.of(usage.units, shared=usage.unit == "session")
    generators = streams(seed, 2 * len(usage.species))

    point = material.statistics([np.ones(n) for n in usage.unit_counts], wanted, rates)
    pooled = material.pooled(wanted, rates)
    if usage.placed:  # products between deployments would tell where people put them
        point = pooled
    draws, left_out = gather(
        material, strata, wanted, rates, resamples, generators[: len(strata.sizes)], progress, tile
    )

    estimator = Estimator(usage, options, strata.owner)
    breadth: dict[str, Estimate] = {}
    overlap: dict[str, Estimate] = {}
    for key in (key for key in INDICES if key in wanted):
        index, (family, name) = INDICES[key], key.split(".")
        (breadth if family == "breadth" else overlap)[name] = estimator.estimate(
            point[key],
            pooled[key],
            draws[key],
            left_out[key],
            estimator.units(point[key].ndim),
            index.scale,
            (index.lower, index.upper(len(usage.zones))),
        )
    coefficients = None
    outcomes: tuple[PairOutcome, ...] = ()
    if ALPHA in wanted:
        pairs = estimator.units(2)
        values = (point[ALPHA], pooled[ALPHA], draws[ALPHA], left_out[ALPHA])
        alpha = estimator.estimate(*values, pairs, "log")
        few = pairs < FEWEST_UNITS
        over = np.where(few, 0, (draws["over"] > 0).sum(axis=0))
        coefficients = Coefficients(replace(alpha, clipped=over), rates)
        outcomes = pair_outcomes(usage, draws[ALPHA], capacity or {}, generators[len(usage.species) :], few)
    values = (point["proportion"], pooled["proportion"], draws["proportion"], left_out["proportion"])
    proportion = estimator.estimate(*values, estimator.units(1)[:, None], "logit", (0.0, 1.0))
    proportion = _bounded_by_users(proportion, usage, confidence)
    use = _use(material, proportion, draws["proportion"], options, usage)
    other = _other_weighting(usage, weighting) if "pianka" in overlap else None
    notes = notes_on(usage, options, breadth, overlap, coefficients, capacity or {}, other)
    empty = [name for name, n in zip(usage.species, usage.unit_counts, strict=True) if n == 0]
    if empty:
        warnings.warn(f"No use was recorded for {', '.join(empty)}.", NicheWarning, stacklevel=2)
    return Analysis(usage, options, strata, use, breadth, overlap, coefficients, outcomes, notes)


def _bounded_by_users(proportion: Estimate, usage: Usage, confidence: float) -> Estimate:
    """Ends no further out than the number of units that used a zone allows.

    Mean use of a zone cannot exceed the share of all units that use it, and that share has an exact binomial limit
    (Clopper & Pearson 1934) from k of n units watched. It matters where few units used a zone, or none, and the spread
    between units tells little or nothing; likewise from below where units used nothing else.
    """
    n = usage.unit_counts[:, None]
    some = np.stack([(t > 0).sum(axis=0) for t in usage.time])
    only = np.stack([(t == t.sum(axis=1, keepdims=True)).sum(axis=0) for t in usage.time])
    tail = (1.0 - confidence) / 2.0
    most = np.where(some < n, betaincinv(some + 1, np.maximum(n - some, 1), 1.0 - tail), 1.0)
    least = np.where(only > 0, betaincinv(np.maximum(only, 1), n - only + 1, tail), 0.0)
    return replace(proportion, low=np.maximum(proportion.low, least), high=np.minimum(proportion.high, most))


def _use(material: Material, proportion: Estimate, draws: Floats, options: Options, usage: Usage) -> Use:
    """Use of zones with its core, and how sure the core is."""
    amount = np.stack([t.sum(axis=0) for t in material.time])
    member = core_zones(amount, options.core)
    frequency = core_zones(np.nan_to_num(draws), options.core).mean(axis=0)
    held = np.where(member, np.nan_to_num(proportion.value), 0.0).sum(axis=1)
    few = (usage.unit_counts < FEWEST_UNITS) | usage.placed
    return Use(
        amount,
        proportion,
        member,
        np.where(amount.sum(axis=1) > 0, held, np.nan),
        np.where(few[:, None], np.nan, frequency),
    )


def _other_weighting(usage: Usage, weighting: Weighting) -> Floats:
    """Pianka's overlap under the weighting that was not chosen, shape (S, S)."""
    material = Material.of(usage, "animal" if weighting == "time" else "time")
    ones = [np.ones(n) for n in usage.unit_counts]
    return np.clip(material.statistics(ones, {"overlap.pianka"}, np.ones(len(usage.species)))["overlap.pianka"], 0, 1)


def _wanted(indices: Collection[str] | None, known: set[str]) -> set[str]:
    """Keys to compute of those asked for by name, less those for which something is not known."""
    asked = {key for key in INDICES if indices is None or key.split(".")[1] in indices}
    wanted = {key for key in asked if INDICES[key].needs in known}
    return wanted | ({ALPHA} if indices is None or ALPHA in indices else set())


def _check(
    options: Options,
    usage: Usage,
    demand: Mapping[str, float] | None,
    capacity: Mapping[str, Capacity] | None,
    indices: Collection[str] | None,
) -> None:
    if options.resamples < 1:
        raise ValueRuleError(f"resamples is {options.resamples}; it must be at least 1.")
    for name, value in (("confidence", options.confidence), ("core", options.core)):
        if not 0 < value < 1:
            raise ValueRuleError(f"{name} is {value}; it must lie between 0 and 1.")
    if options.seed < 0:
        raise ValueRuleError(f"seed is {options.seed}; it must be at least 0.")
    if options.weighting not in ("time", "animal"):
        raise ValueRuleError(f"weighting is {options.weighting!r}; it must be 'time' or 'animal'.")
    for species in usage.species if demand is not None else ():
        if species not in demand:  # type: ignore[operator]
            raise ValueRuleError(f"demand has no value for {species!r}; give one for every species or for none.")
        if not 0 < demand[species] < np.inf:  # type: ignore[index]
            raise ValueRuleError(f"demand of {species!r} is {demand[species]}; it must be above 0.")  # type: ignore[index]
    for species, (low, high, _) in (capacity or {}).items():
        if not 0 < low <= high < np.inf:
            raise ValueRuleError(f"capacity of {species!r} is {low} to {high}; it must be above 0, low before high.")
    names = [*dict.fromkeys(key.split(".")[1] for key in INDICES), ALPHA]
    unknown = set(indices or ()) - set(names)
    if unknown:
        raise ValueRuleError(f"no index {sorted(unknown)[0]!r}; there are {', '.join(names)}.")
    if options.interval not in INTERVALS:
        raise ValueRuleError(f"interval is {options.interval!r}; it must be one of {', '.join(INTERVALS)}.")
