"""From Usage to every result, point estimate and resamples by the same functions."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Collection, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from niche.analysis.notes import notes_on
from niche.analysis.results import Analysis, Coefficients, Estimate, Options, PairOutcome, Use, Weighting
from niche.dynamics import OUTCOMES, classify, equilibrium
from niche.errors import NicheWarning, ValueRuleError
from niche.indices import BREADTH, OVERLAP, Index, core_zones, macarthur_levins, proportions, within_range
from niche.indices.products import Floats
from niche.resampling import Sums, draw_range, percentile, streams, sum_units, unit_weights
from niche.resampling.draws import Distribution
from niche.resampling.intervals import FEWEST_UNITS
from niche.usage import Usage

Capacity = tuple[float, float, Distribution]
"""K as low, high and how it is distributed between them."""

COEFFICIENTS = "alpha"
"""Name under which the coefficients are asked for among the indices."""

_TILE = 4_000_000
"""Numbers that one tile of resamples may hold; any size gives the same results."""


def analyse(
    usage: Usage,
    *,
    resamples: int = 9999,
    confidence: float = 0.95,
    seed: int = 1,
    weighting: Weighting = "time",
    core: float = 0.5,
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
    options = Options(resamples, confidence, seed, weighting, core)
    usage = usage.with_use()
    _check(options, usage, demand, capacity, indices)
    wanted = _wanted(usage, indices)
    rates = np.array([1.0 if demand is None else demand[name] for name in usage.species])
    material = _Material.of(usage, weighting)
    point = _statistics(material.sums([np.ones(n) for n in usage.unit_counts]), wanted, rates, usage)

    generators = streams(seed, 2 * len(usage.species))
    draws: dict[str, Floats] = {}
    step = max(1, int(tile // (len(usage.species) * (len(usage.zones) + len(usage.species) + 1))))
    for begin in range(0, resamples, step):
        size = min(step, resamples - begin)
        weights = [unit_weights(int(n), size, generators[s]) for s, n in enumerate(usage.unit_counts)]
        for name, values in _statistics(material.sums(weights), wanted, rates, usage).values.items():
            if name not in draws:
                draws[name] = np.empty((resamples, *values.shape[1:]))
            draws[name][begin : begin + size] = values
        if progress is not None:
            progress(begin + size, resamples)

    few = usage.unit_counts < FEWEST_UNITS
    pair_few = few[:, None] | few[None, :]
    breadth: dict[str, Estimate] = {}
    overlap: dict[str, Estimate] = {}
    for family, found, blank in ((BREADTH, breadth, few), (OVERLAP, overlap, pair_few)):
        for name in (n for n in family if n in wanted):
            limits = (family[name].lower, family[name].upper(len(usage.zones)))
            found[name] = _estimate(point.values[name], point.pooled[name], draws[name], confidence, blank, limits)
    coefficients = None
    outcomes: tuple[PairOutcome, ...] = ()
    if COEFFICIENTS in wanted:
        alpha = _estimate(point.values["alpha"], point.pooled["alpha"], draws["alpha"], confidence, pair_few)
        over = np.where(pair_few, 0, (draws["over"] > 0).sum(axis=0))
        coefficients = Coefficients(_with_clipped(alpha, over), rates)
        outcomes = _outcomes(usage, draws["alpha"], capacity or {}, generators[len(usage.species) :], pair_few)
    use = _use(material, point, draws["proportion"], options, few)
    other = _other_weighting(usage, weighting) if "pianka" in overlap else None
    notes = notes_on(usage, options, breadth, overlap, coefficients, capacity or {}, other)
    empty = [name for name, n in zip(usage.species, usage.unit_counts, strict=True) if n == 0]
    if empty:
        warnings.warn(f"No use was recorded for {', '.join(empty)}.", NicheWarning, stacklevel=2)
    return Analysis(usage, options, use, breadth, overlap, coefficients, outcomes, notes)


@dataclass(frozen=True)
class _Material:
    """What is summed over units: weighted time, and visits where they were counted."""

    time: Sequence[Floats]
    visits: Sequence[Floats] | None

    @classmethod
    def of(cls, usage: Usage, weighting: Weighting) -> _Material:
        time = [np.asarray(t, dtype=np.float64) for t in usage.use]
        if weighting == "animal":
            time = [t / t.sum(axis=1, keepdims=True) for t in time]
        visits = None if usage.visits is None else [np.asarray(v, dtype=np.float64) for v in usage.visits]
        return cls(time, visits)

    def sums(self, weights: Sequence[Floats]) -> tuple[Sums, Sums | None]:
        visits = None if self.visits is None else sum_units(weights, self.visits, single=True)
        return sum_units(weights, self.time), visits


@dataclass(frozen=True)
class _Statistics:
    """Every statistic by name, and its pooled value; leading axes as the sums had them."""

    values: dict[str, Floats]
    pooled: dict[str, Floats]


def _statistics(sums: tuple[Sums, Sums | None], wanted: Collection[str], demand: Floats, usage: Usage) -> _Statistics:
    """All statistics of one set of sums: the one place where indices are called, for estimates and resamples alike."""
    time, visits = sums
    zones = len(usage.zones)
    p = proportions(time.use)
    between = time.between()
    single = time.use.ndim == 2  # the point estimate also needs the pooled values
    values, pooled = {"proportion": p}, {}
    textbook = time.pooled() if single else None
    for name, index in {**BREADTH, **OVERLAP}.items():
        if name in wanted:
            basis = {"between": between, "proportions": p, "visits": None if visits is None else visits.between()}
            values[name] = index.function(basis[index.basis], zones)  # type: ignore[arg-type]
            if textbook is not None:
                pooled[name] = values[name] if index.basis != "between" else index.function(textbook, zones)
    if COEFFICIENTS in wanted:
        limited, over = within_range(between)
        values["alpha"], values["over"] = macarthur_levins(limited, demand), over.astype(np.float64)
        if textbook is not None:
            pooled["alpha"] = macarthur_levins(textbook, demand)
    return _Statistics(values, pooled)


def _estimate(
    value: Floats,
    pooled: Floats,
    draws: Floats,
    confidence: float,
    few: np.ndarray[tuple[int, ...], np.dtype[np.bool_]],
    limits: tuple[float, float] = (-np.inf, np.inf),
) -> Estimate:
    """An estimate with its interval; cells that ``few`` marks get none."""
    slack = 1e-9  # rounding alone is no excursion
    clipped = ((draws < limits[0] - slack) | (draws > limits[1] + slack)).sum(axis=0)
    interval = percentile(np.clip(draws, *limits), confidence)
    return Estimate(
        np.clip(value, *limits),
        np.where(few, np.nan, interval.low),
        np.where(few, np.nan, interval.high),
        pooled,
        np.where(few, 0, interval.undefined),
        np.where(few, 0, clipped),
    )


def _with_clipped(estimate: Estimate, clipped: np.ndarray[tuple[int, ...], np.dtype[np.int64]]) -> Estimate:
    return Estimate(estimate.value, estimate.low, estimate.high, estimate.pooled, estimate.undefined, clipped)


def _use(
    material: _Material,
    point: _Statistics,
    draws: Floats,
    options: Options,
    few: np.ndarray[tuple[int, ...], np.dtype[np.bool_]],
) -> Use:
    amount = np.stack([t.sum(axis=0) for t in material.time])
    p = point.values["proportion"]
    member = core_zones(amount, options.core)
    frequency = core_zones(np.nan_to_num(draws), options.core).mean(axis=0)
    held = np.where(amount.sum(axis=1) > 0, np.where(member, np.nan_to_num(p), 0.0).sum(axis=1), np.nan)
    estimate = _estimate(p, p, draws, options.confidence, few[:, None])
    return Use(amount, estimate, member, held, np.where(few[:, None], np.nan, frequency))


def _outcomes(
    usage: Usage,
    alpha: Floats,
    capacity: Mapping[str, Capacity],
    generators: Sequence[np.random.Generator],
    pair_few: np.ndarray[tuple[int, ...], np.dtype[np.bool_]],
) -> tuple[PairOutcome, ...]:
    """Outcome of every pair whose K are known and whose units allow resampling."""
    resamples = alpha.shape[0]
    k = {s: draw_range(*capacity[n], resamples, generators[s]) for s, n in enumerate(usage.species) if n in capacity}
    outcomes = []
    for s in k:
        for t in (t for t in k if t > s and not pair_few[s, t]):
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


def _other_weighting(usage: Usage, weighting: Weighting) -> Floats:
    """Pianka's overlap under the weighting that was not chosen, shape (S, S)."""
    material = _Material.of(usage, "animal" if weighting == "time" else "time")
    sums = material.sums([np.ones(n) for n in usage.unit_counts])
    return np.clip(_statistics(sums, {"pianka"}, np.ones(len(usage.species)), usage).values["pianka"], 0, 1)


def _wanted(usage: Usage, indices: Collection[str] | None) -> set[str]:
    """Names to compute; counts of visits are needed for the index that rests on them."""
    known: dict[str, Index | None] = {**BREADTH, **OVERLAP, COEFFICIENTS: None}
    names = set(known if indices is None else indices)
    if usage.visits is None:
        names -= {name for name, index in known.items() if index is not None and index.basis == "visits"}
    return names


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
    unknown = set(indices or ()) - {*BREADTH, *OVERLAP, COEFFICIENTS}
    if unknown:
        raise ValueRuleError(
            f"no index {sorted(unknown)[0]!r}; there are {', '.join([*BREADTH, *OVERLAP, COEFFICIENTS])}."
        )
