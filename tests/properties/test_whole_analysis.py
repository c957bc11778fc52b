"""`analyse` as a whole against the slow twins, resample by resample on the same draws."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

import numpy as np
import slow_twins as slow
from generated import Watched, estimates, examples, watched
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.stats import binomtest

import niche
from niche.dynamics import OUTCOMES
from niche.resampling import streams, unit_weights

RESAMPLES, CONFIDENCE = 12, 0.8
Draw = list[list[int]]


class Twin:
    """All indices of one set of drawn units."""

    def __init__(self, data: Watched, drawn: Draw, demand: Sequence[float], weighting: str) -> None:
        time = [a.tolist() for a in data.time.values()]
        if weighting == "animal":
            time = [[[x / sum(row) for x in row] for row in table] for table in time]
        self.zones, self.demand, self.species = len(data.zones), demand, range(len(time))
        self.c = slow.products(time, drawn)
        self.v = slow.visit_products([a.tolist() for a in data.visits.values()], drawn)
        self.p = [slow.proportions(table, units) for table, units in zip(time, drawn, strict=True)]
        self.noise = [slow.variances(table, units) for table, units in zip(time, drawn, strict=True)]

    def raw(self, name: str) -> list[float]:
        """An index of all species or pairs, row by row, before it is held to its range."""
        one: dict[str, Callable[[int], float]] = {
            "levins": lambda s: slow.levins(self.c, s),
            "levins_standardized": lambda s: slow.levins_standardized(self.c, s, self.zones),
            "shannon": lambda s: slow.shannon(self.p[s], self.noise[s]),
        }
        two: dict[str, Callable[[int, int], float]] = {
            "pianka": lambda s, t: slow.pianka(self.c, s, t),
            "morisita_horn": lambda s, t: slow.morisita_horn(self.c, s, t),
            "morisita": lambda s, t: slow.morisita_horn(self.v, s, t),
            "schoener": lambda s, t: slow.schoener(self.p[s], self.p[t], self.noise[s], self.noise[t], s == t),
            "horn": lambda s, t: slow.horn(self.p[s], self.p[t], self.noise[s], self.noise[t], s == t),
            "alpha": lambda s, t: slow.alpha(self.c, s, t, self.demand[s], self.demand[t]),
        }
        if name == "proportion":
            return [x for row in self.p for x in row]
        if name in one:
            return [one[name](s) for s in self.species]
        return [two[name](s, t) for s in self.species for t in self.species]

    def limits(self, name: str) -> tuple[float, float]:
        most = {"levins": float(self.zones), "shannon": math.log(self.zones), "proportion": math.inf, "alpha": math.inf}
        return (1.0 if name == "levins" else 0.0), most.get(name, 1.0)


def _drawn(data: Watched, seed: int) -> list[Draw]:
    """The draws that `analyse` makes at this seed."""
    tables = list(data.time.values())
    generators = streams(seed, 2 * len(tables))
    weights = [unit_weights(len(t), RESAMPLES, g) for t, g in zip(tables, generators, strict=False)]
    return [[slow.drawn_units(w[b]) for w in weights] for b in range(RESAMPLES)]


@examples(40)
@given(watched(units=(1, 4), most_zones=4), st.sampled_from(["time", "animal"]), st.integers(0, 99), st.data())
def test_every_estimate_and_interval(data: Watched, weighting: str, seed: int, rest: st.DataObject) -> None:
    names = list(data.time)
    demand = {name: rest.draw(st.floats(0.1, 10)) for name in names}
    rates = list(demand.values())
    point = Twin(data, [list(range(len(t))) for t in data.time.values()], rates, weighting)
    twins = [Twin(data, drawn, rates, weighting) for drawn in _drawn(data, seed)]
    analysis = niche.analyse(
        data.usage(),
        resamples=RESAMPLES,
        confidence=CONFIDENCE,
        seed=seed,
        weighting=weighting,
        interval="percentile",
        demand=demand,  # type: ignore[arg-type]
    )
    units = [len(t) for t in data.time.values()]
    for name, estimate in estimates(analysis).items():
        low, high = point.limits(name)
        value = [slow.clipped(x, low, high) for x in point.raw(name)]
        np.testing.assert_allclose(estimate.value.ravel(), value, rtol=1e-9, atol=1e-12, err_msg=name)
        # Held to the range only after the ends have been taken; an infinite draw is the largest of all.
        draws = np.clip(np.array([twin.raw(name) for twin in twins]), -1e300, 1e300)
        for cell, column in enumerate(draws.T):
            s, t = _species_of(name, cell, len(names), len(data.zones))
            got = [np.ravel(getattr(estimate, end))[cell] for end in ("low", "high")]
            defined = column[~np.isnan(column)]
            if min(units[s], units[t]) < 3 or not len(defined):
                assert np.isnan(got).all(), name
            else:
                ends = np.quantile(defined, [(1 - CONFIDENCE) / 2, (1 + CONFIDENCE) / 2]).clip(low, high)
                if (
                    name == "proportion"
                ):  # held by the exact binomial limits of the units that used the zone, or it alone
                    rows, zone = [*data.time.values()][s], cell % len(data.zones)
                    users, alone = (rows[:, zone] > 0).sum(), (rows[:, zone] == rows.sum(axis=1)).sum()
                    most, least = (
                        binomtest(int(k), units[s]).proportion_ci(CONFIDENCE, "exact") for k in (users, alone)
                    )
                    ends = [max(ends[0], least.low), min(ends[1], most.high)]
                np.testing.assert_allclose(got, ends, rtol=1e-9, atol=1e-12, err_msg=name)
            lost = 0 if min(units[s], units[t]) < 3 else int(np.isnan(column).sum())
            assert np.ravel(estimate.undefined)[cell] == lost, name
            if min(units[s], units[t]) < 3 or (name == "alpha" and s == t):
                assert np.ravel(estimate.clipped)[cell] == 0, name
                continue
            # Alphas have no upper limit of their own: counted are the draws whose overlap could be brought back.
            raw = [twin.raw("pianka" if name == "alpha" else name)[cell] for twin in twins]
            raw = [x for x in raw if name != "alpha" or math.isfinite(x)]
            top = 1.0 if name == "alpha" else high
            outside = [sum(x > top + slack or x < low - slack for x in raw) for slack in (1e-9, -1e-12)]
            assert outside[0] <= np.ravel(estimate.clipped)[cell] <= outside[name == "alpha"], name


def _species_of(name: str, cell: int, species: int, zones: int) -> tuple[int, int]:
    """Which species a cell of a flattened result belongs to."""
    if name == "proportion":
        return cell // zones, cell // zones
    if name in ("levins", "levins_standardized", "shannon"):
        return cell, cell
    return divmod(cell, species)


@examples(40)
@given(watched(units=(1, 4), most_zones=4), st.integers(0, 99))
def test_pooled_values_pair_each_unit_with_itself_too(data: Watched, seed: int) -> None:
    """The pooled value is that of one unit that used all the time alone, written out from proportions."""
    analysis = niche.analyse(data.usage(), resamples=1, seed=seed)
    p = [slow.proportions(a.tolist(), range(len(a))) for a in data.time.values()]
    c = [[sum(x * y for x, y in zip(a, b, strict=True)) for b in p] for a in p]
    for s in range(len(p)):
        assert math.isclose(analysis.breadth["levins"].pooled[s], slow.levins(c, s), rel_tol=1e-12)
        for t in range(len(p)):
            for name, index in (("pianka", slow.pianka), ("morisita_horn", slow.morisita_horn)):
                assert math.isclose(analysis.overlap[name].pooled[s, t], index(c, s, t), rel_tol=1e-12), name
            alpha = estimates(analysis)["alpha"].pooled[s, t]
            assert math.isclose(alpha, c[s][t] / c[s][s], rel_tol=1e-12)


@examples(30)
@given(watched(species=(2, 2), units=(3, 4), most_zones=4), st.integers(0, 99), st.data())
def test_outcomes(data: Watched, seed: int, rest: st.DataObject) -> None:
    """Shares and medians of the outcomes, draw by draw; K drawn from its own streams."""
    capacity = {}
    for name in data.time:
        low = rest.draw(st.floats(10, 100))
        capacity[name] = (low, low * rest.draw(st.floats(1, 3)), rest.draw(st.sampled_from(["uniform", "log-uniform"])))
    twins = [Twin(data, drawn, [1.0, 1.0], "time") for drawn in _drawn(data, seed)]
    k1, k2 = (_capacities(*capacity[name], rng) for name, rng in zip(data.time, streams(seed, 4)[2:], strict=True))
    ends: dict[str, list[tuple[float, float]]] = {name: [] for name in OUTCOMES}
    undefined = 0
    for b, twin in enumerate(twins):
        _, alpha, beta, _ = twin.raw("alpha")
        if math.isnan(alpha) or math.isnan(beta):
            undefined += 1
            continue
        case = slow.outcome(alpha, beta, k1[b], k2[b])
        # Complete overlap makes αβ exactly 1 in the twin and 1 to rounding in the kernel, or the other way round.
        assume(min(abs(alpha * k2[b] / k1[b] - 1), abs(beta * k1[b] / k2[b] - 1)) > 1e-9)
        ends[case].append(_end(case, alpha, beta, k1[b], k2[b]))
    (pair,) = niche.analyse(data.usage(), resamples=RESAMPLES, seed=seed, capacity=capacity).outcomes
    assert (pair.undefined, pair.draws) == (undefined, RESAMPLES)
    for i, name in enumerate(OUTCOMES):
        if undefined == RESAMPLES:
            assert math.isnan(pair.share[i])
            continue
        assert pair.share[i] == len(ends[name]) / (RESAMPLES - undefined)
        medians = np.median(ends[name], axis=0) if ends[name] else (math.nan, math.nan)
        np.testing.assert_allclose([pair.n_1[i], pair.n_2[i]], medians, rtol=1e-6)


def _capacities(low: float, high: float, distribution: str, rng: np.random.Generator) -> list[float]:
    """K in each resample: evenly between the ends, or evenly between their logarithms."""
    places = [float(x) for x in rng.random(RESAMPLES)]
    if distribution == "uniform":
        return [low + place * (high - low) for place in places]
    return [math.exp(math.log(low) + place * (math.log(high) - math.log(low))) for place in places]


def _end(case: str, alpha: float, beta: float, k1: float, k2: float) -> tuple[float, float]:
    """Numbers at the end: where each species stops growing, by elimination."""
    if case == "coexistence":
        n2 = (k2 - beta * k1) / (1 - alpha * beta)
        return k1 - alpha * n2, n2
    return {"species_1_excludes": (k1, 0.0), "species_2_excludes": (0.0, k2)}.get(case, (math.nan, math.nan))


@examples(60)
@given(watched(), st.integers(0, 99), st.floats(0.1, 10))
def test_no_draw_of_use_alone_gives_a_priority_effect(data: Watched, seed: int, demand: float) -> None:
    """α β ≤ 1 in the estimate; overlaps that noise took above 1 are set to 1."""
    analysis = niche.analyse(
        data.usage(), resamples=RESAMPLES, seed=seed, demand={n: demand**i for i, n in enumerate(data.time)}
    )
    alpha = estimates(analysis)["alpha"].value
    both = alpha * alpha.T
    assert (both[~np.isnan(both)] <= 1 + 1e-12).all()
    overlap = analysis.overlap["pianka"].value
    known = ~np.isnan(both)
    np.testing.assert_allclose(np.sqrt(both[known]), overlap[known], rtol=1e-9, atol=1e-12)


def _two_species_one_sided() -> niche.Analysis:
    """Animals of the first species never meet one another; animals of the second use all their zones."""
    use = {"dunlin": [[1, 0, 0], [0, 1, 0], [0, 0, 1]], "redshank": [[1, 1, 1], [1, 1, 1], [1, 1, 1]]}
    return niche.analyse(niche.Usage.from_units(use, zones=["a", "b", "c"]), resamples=50)


def test_overlap_where_one_species_shares_nothing_among_its_own() -> None:
    """C₁₁ is 0 and C₁₂ is not: the overlap is infinite before it is held to its range."""
    assert _two_species_one_sided().overlap["pianka"].value[0, 1] == 1.0


def test_complete_overlap_is_no_absence_of_effect() -> None:
    beta = estimates(_two_species_one_sided())["alpha"].value[1, 0]
    assert np.isnan(beta)


def test_zones_used_alike_by_every_animal_are_core_in_every_resample_or_in_none() -> None:
    even = np.ones((3, 12))
    use = niche.analyse(niche.Usage.from_units({"dunlin": even}, zones=[str(z) for z in range(12)]), resamples=20).use
    np.testing.assert_array_equal(use.core_frequency, use.core)
