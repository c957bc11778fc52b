"""Intervals: each method against SciPy, a formula by hand, or a slow obvious twin; and that they keep their promise."""

import numpy as np
import pytest
from scipy import stats

import niche
from niche.resampling import INTERVALS, Evidence, Strata, percentile
from niche.resampling.evidence import jackknife

RNG = np.random.default_rng(7)


def evidence(values, draws=2000, scale="plain", statistic=np.mean, seed=3):
    """Evidence on a statistic of one sample of numbers."""
    values = np.asarray(values, dtype=float)
    rows = np.random.default_rng(seed).integers(0, len(values), (draws, len(values)))
    return Evidence(
        np.asarray(statistic(values)),
        np.array([statistic(values[r]) for r in rows]),
        np.array([statistic(np.delete(values, i)) for i in range(len(values))]),
        np.zeros(len(values), dtype=np.intp),
        np.asarray(len(values)),
        scale,
    )


# SciPy's test of `bootstrap` against R's boot (scipy/stats/tests/test_resampling.py), seen in the source.
BOOT = [10, 12, 12.5, 12.5, 13.9, 15, 21, 22, 23, 34, 50, 81, 89, 121, 134, 213]


def test_jackknife_t_of_a_mean_is_students_interval():
    interval = INTERVALS["jackknife_t"](evidence(BOOT), 0.95)
    expected = stats.t.interval(0.95, len(BOOT) - 1, np.mean(BOOT), stats.sem(BOOT))
    assert (interval.low, interval.high) == pytest.approx(expected, rel=1e-12)


def test_jackknife_t_on_the_log_scale_is_the_interval_of_the_logarithm():
    interval = INTERVALS["jackknife_t"](evidence(BOOT, scale="log"), 0.9)
    logs = np.log([np.mean(np.delete(BOOT, i)) for i in range(len(BOOT))])
    n = len(BOOT)
    error = np.sqrt((n - 1) / n * ((logs - logs.mean()) ** 2).sum())
    expected = np.exp(np.log(np.mean(BOOT)) + np.array(stats.t.interval(0.9, n - 1)) * error)
    assert (interval.low, interval.high) == pytest.approx(expected, rel=1e-12)


def test_strata_add_and_satterthwaite_gives_their_freedom():
    a, b = RNG.normal(0, 1, 7), RNG.normal(0, 3, 12)
    left = np.array(
        [np.delete(a, i).mean() - b.mean() for i in range(7)] + [a.mean() - np.delete(b, i).mean() for i in range(12)]
    )
    both = Evidence(np.asarray(a.mean() - b.mean()), left, left, np.repeat([0, 1], [7, 12]), np.asarray(7), "plain")
    parts = jackknife(both)
    va, vb = a.var(ddof=1) / 7, b.var(ddof=1) / 12
    assert parts.variance == pytest.approx(va + vb, rel=1e-12)
    # Welch's degrees of freedom are Satterthwaite's for a difference of means.
    assert parts.freedom == pytest.approx(stats.ttest_ind(a, b, equal_var=False).df, rel=1e-12)


@pytest.mark.parametrize(("method", "ours"), [("percentile", "percentile"), ("BCa", "bca")])
def test_bootstrap_intervals_agree_with_scipy_on_the_same_draws(method, ours):
    found = evidence(BOOT, draws=5000)
    theirs = stats.bootstrap(
        (np.array(BOOT),),
        np.mean,
        n_resamples=0,
        bootstrap_result=type("Draws", (), {"bootstrap_distribution": found.draws})(),
        method=method,
    ).confidence_interval
    interval = INTERVALS[ours](found, 0.95)
    assert (interval.low, interval.high) == pytest.approx((theirs.low, theirs.high), rel=1e-9)


def test_widened_percentile_moves_the_tails_by_t_and_the_small_sample_factor():
    found = evidence(BOOT)
    n = len(BOOT)
    tail = stats.norm.cdf(np.sqrt(n / (n - 1)) * stats.t.ppf(0.025, n - 1))
    interval = INTERVALS["widened_percentile"](found, 0.95)
    assert (interval.low, interval.high) == pytest.approx(np.quantile(found.draws, [tail, 1 - tail]), rel=1e-12)
    plain = percentile(found.draws, 0.95)
    assert interval.low < plain.low < plain.high < interval.high


@pytest.mark.parametrize("method", INTERVALS)
def test_cells_are_computed_together_as_alone(method):
    """A matrix of cells gives what each cell gives alone."""
    draws, left = RNG.random((300, 2, 3)), RNG.random((9, 2, 3)) + 0.1
    owner = np.repeat([0, 1], [4, 5])
    together = INTERVALS[method](Evidence(left.mean(axis=0), draws, left, owner, np.full((2, 3), 4), "log"), 0.9)
    for cell in np.ndindex(2, 3):
        at = (slice(None), *cell)
        alone = Evidence(left.mean(axis=0)[cell], draws[at], left[at], owner, np.asarray(4), "log")
        for a, b in zip(together, INTERVALS[method](alone, 0.9), strict=True):
            assert a[cell] == pytest.approx(b, nan_ok=True)


def test_an_overlap_of_zero_is_bounded_by_nothing_but_its_range():
    apart = niche.Usage.from_units({"dunlin": [[1, 0]] * 4, "turnstone": [[0, 1]] * 4}, zones=["mud", "mussel bed"])
    pianka = niche.analyse(apart, resamples=50).overlap["pianka"]
    assert (pianka.value[0, 1], pianka.low[0, 1], pianka.high[0, 1]) == (0, 0, 1)


def test_use_of_a_zone_is_bounded_by_how_many_animals_used_it():
    usage = niche.Usage.from_units(
        {"dunlin": [[3, 0, 0], [2, 0, 1], [1, 0, 0], [5, 0, 0]]}, zones=["mud", "sand", "creek"]
    )
    proportion = niche.analyse(usage, resamples=50).use.proportion
    exact = [stats.binomtest(k, 4).proportion_ci(0.95, "exact") for k in (0, 1, 3)]
    assert (proportion.low[0, 1], proportion.high[0, 1]) == pytest.approx((0, exact[0].high))
    # One animal in four used the creek: without it the use is none, and the spread bounds nothing.
    assert (proportion.low[0, 2], proportion.high[0, 2]) == pytest.approx((0, exact[1].high))
    # Three were on mud all the time.
    assert proportion.low[0, 0] == pytest.approx(exact[2].low)


def test_leaving_one_animal_out_is_the_analysis_without_it():
    use = {"dunlin": RNG.random((5, 4)) * [9, 3, 1, 1], "redshank": RNG.random((4, 4)) * [1, 3, 9, 1]}
    zones = list("abcd")
    pianka = niche.analyse(niche.Usage.from_units(use, zones=zones), resamples=20).overlap["pianka"]
    without = []
    for name, table in use.items():
        for i in range(len(table)):
            fewer = {**use, name: np.delete(table, i, axis=0)}
            without.append(
                niche.analyse(niche.Usage.from_units(fewer, zones=zones), resamples=5).overlap["pianka"].value[0, 1]
            )
    assert (pianka.least[0, 1], pianka.most[0, 1]) == pytest.approx((min(without), max(without)), rel=1e-12)
    assert pianka.mover[0, 1] == np.argmax(np.abs(np.array(without) - pianka.value[0, 1]))


def test_sessions_that_hold_two_species_are_drawn_together():
    strata = Strata.of([["w1", "w2", "w3"], ["w3", "w1"], ["w9"]], shared=True)
    first, second, third = strata.draw(200, [np.random.default_rng(i) for i in range(2)])
    assert (first[:, 0] == second[:, 1]).all()
    assert (first[:, 2] == second[:, 0]).all()
    assert (first.sum(axis=1) == 3).all()
    assert (third == 1).all()
    left = np.concatenate([w[1] for _, w in strata.leave_one_out(2)])
    assert left.tolist() == [[1, 0], [1, 1], [0, 1], [1, 1]]


# What the default promises, at a few animals, by a binomial test: seen in 600 made data sets a cell.
@pytest.mark.parametrize("animals", [6, 12])
def test_the_default_interval_keeps_its_promise(animals):
    rng = np.random.default_rng(animals)
    p, q = np.array([0.5, 0.3, 0.1, 0.05, 0.05, 0.0]), np.array([0.1, 0.3, 0.3, 0.2, 0.05, 0.05])
    truth = p @ q / np.sqrt((p @ p) * (q @ q))
    runs, inside = 600, 0
    for _ in range(runs):
        use = {n: rng.multinomial(20, rng.dirichlet(8 * m + 1e-6, animals)) for n, m in (("a", p), ("b", q))}
        pianka = niche.analyse(niche.Usage.from_units(use, zones=list("abcdef")), resamples=1, indices={"pianka"})
        inside += pianka.overlap["pianka"].low[0, 1] <= truth <= pianka.overlap["pianka"].high[0, 1]
    assert stats.binomtest(int(inside), runs, 0.95).pvalue > 0.001, inside / runs


def test_draws_above_the_range_do_not_upset_the_bias_correction():
    """Overlap near 1: many resamples lie above it, and are held to it only when the interval has been made."""
    use = {"a": [[4, 2, 1], [3, 3, 1], [5, 1, 1], [2, 4, 1]], "b": [[4, 3, 1], [3, 2, 2], [5, 2, 0], [3, 3, 1]]}
    usage = niche.Usage.from_units(use, zones=list("xyz"))
    pianka = niche.analyse(usage, resamples=999, interval="bca").overlap["pianka"]
    assert pianka.clipped[0, 1] > 300
    assert pianka.low[0, 1] < 0.98
    assert pianka.high[0, 1] == 1


def test_an_infinite_draw_is_the_largest_and_not_undefined():
    usage = niche.Usage.from_units({"a": [[1, 0], [1, 0], [0, 1]]}, zones=["x", "y"])
    levins = niche.analyse(usage, resamples=999, interval="percentile").breadth["levins"]
    # Two of three drawn alike share a zone; a draw of one of each side shares none: infinitely broad, held to 2 zones.
    assert levins.high[0] == 2
    assert 0 < levins.undefined[0] < 200
