"""Each kernel, cell by cell, against its slow twin."""

from __future__ import annotations

import math

import numpy as np
import pytest
import slow_twins as slow
from generated import Watched, examples, watched
from hypothesis import assume, given
from hypothesis import strategies as st

from niche.dynamics import OUTCOMES, classify, coexistence_window, equilibrium
from niche.indices import core_zones, products
from niche.resampling import percentile, sum_units, unit_weights

CLOSE = {"rtol": 1e-10, "atol": 1e-13, "equal_nan": True}


def _weights(data: Watched, resamples: int, seed: int) -> list[np.ndarray]:
    rng = np.random.default_rng(seed)
    return [unit_weights(len(use), resamples, rng) for use in data.time.values()]


@examples(40)
@given(watched(), st.integers(0, 1000))
def test_products_between_units_under_resampling(data: Watched, seed: int) -> None:
    use = [a.astype(float) for a in data.time.values()]
    weights = _weights(data, 6, seed)
    got = sum_units(weights, use).between()
    for b in range(6):
        expected = slow.products([a.tolist() for a in use], [slow.drawn_units(w[b]) for w in weights])
        np.testing.assert_allclose(got[b], expected, **CLOSE)


@examples(30)
@given(watched(units=(1, 3), most_zones=3), st.integers(0, 1000))
def test_products_between_visits_under_resampling(data: Watched, seed: int) -> None:
    counts = [a.astype(float) for a in data.visits.values()]
    weights = _weights(data, 4, seed)
    got = sum_units(weights, counts, single=True).between()
    for b in range(4):
        expected = slow.visit_products([a.tolist() for a in counts], [slow.drawn_units(w[b]) for w in weights])
        np.testing.assert_allclose(got[b], expected, **CLOSE)


@examples(40)
@given(watched(), st.data())
def test_pooled_products_with_zone_weights(data: Watched, rest: st.DataObject) -> None:
    use = np.stack([a.sum(axis=0) for a in data.time.values()]).astype(float)
    zones = use.shape[1]
    w = np.array(rest.draw(st.lists(st.floats(0.01, 100), min_size=zones, max_size=zones)))
    got = products(use, zone_weights=w)
    p = use / use.sum(axis=1, keepdims=True)
    for s in range(len(use)):
        for t in range(len(use)):
            expected = sum(w[z] * p[s, z] * p[t, z] for z in range(zones))
            assert got[s, t] == pytest.approx(expected, rel=1e-12)


@examples(40)
@given(watched(units=(2, 5)), st.integers(2, 6))
def test_copies_of_one_unit_never_make_a_pair(data: Watched, copies: int) -> None:
    """A resample of one animal alone knows nothing of pairs; copies beside another animal change nothing but weight."""
    for use in data.time.values():
        alone = np.zeros(len(use))
        alone[0] = copies
        assert np.isnan(sum_units([alone], [use.astype(float)]).between()[0, 0])
        two = alone.copy()
        two[1] = 1
        once = np.zeros(len(use))
        once[:2] = 1
        between = [sum_units([w], [use.astype(float)]).between()[0, 0] for w in (two, once)]
        assert between[0] == pytest.approx(between[1], rel=1e-12)


@examples(80)
@given(
    st.lists(
        st.one_of(st.just(math.nan), st.integers(-5, 5).map(float), st.floats(-1e6, 1e6)), min_size=1, max_size=40
    ),
    st.floats(0.01, 0.99),
)
def test_percentile_is_numpys_on_the_defined_draws(values: list[float], confidence: float) -> None:
    draws = np.array([values, values[::-1]]).T  # two cells, to see that axes are kept apart
    draws[:, 1] *= 2
    low, high, undefined = percentile(draws, confidence)
    lost = sum(map(math.isnan, values))
    assert undefined.tolist() == [lost, lost]
    tail = (1 - confidence) / 2
    for cell in range(2):
        if lost == len(values):
            assert np.isnan([low[cell], high[cell]]).all()
            continue
        expected = np.nanquantile(draws[:, cell], [tail, 1 - tail])
        assert [low[cell], high[cell]] == pytest.approx(expected.tolist(), rel=1e-9, abs=1e-2 * 1e-9 * 2e6)


@examples(80)
@given(
    st.one_of(st.lists(st.integers(0, top), min_size=1, max_size=9) for top in (2, 12)),
    st.sampled_from([0.25, 0.5, 0.75, 0.95]),
)
def test_core_zones(amounts: list[int], share: float) -> None:
    got = core_zones(np.array([amounts, amounts[::-1]], dtype=float), share)
    assert got[0].tolist() == slow.core(amounts, share)
    assert got[1].tolist() == slow.core(amounts[::-1], share)


def test_core_of_proportions_is_the_core_of_amounts() -> None:
    for zones in range(2, 40):
        even = np.ones(zones)
        assert (core_zones(even / zones) == core_zones(even)).all(), zones


coefficients = st.one_of(st.sampled_from([0.0, 0.5, 1.0, 2.0]), st.floats(1e-6, 4))
capacities = st.one_of(st.sampled_from([50.0, 100.0, 200.0]), st.floats(1, 1e4))
four_numbers = st.tuples(coefficients, coefficients, capacities, capacities)


@examples(100)
@given(st.lists(four_numbers, min_size=1, max_size=20))
def test_classify(rows: list[tuple[float, float, float, float]]) -> None:
    got = classify(*np.array(rows).T)
    assert [OUTCOMES[i] for i in got] == [slow.outcome(*row) for row in rows]


@examples(60)
@given(four_numbers, st.integers(0, 3))
def test_an_undefined_number_has_no_outcome(numbers: tuple[float, ...], place: int) -> None:
    broken = [math.nan if i == place else x for i, x in enumerate(numbers)]
    assert classify(*broken) == -1
    assert np.isnan(equilibrium(*broken)).all()


@examples(100)
@given(four_numbers)
def test_the_end_is_an_equilibrium_that_no_rare_species_can_enter(numbers: tuple[float, float, float, float]) -> None:
    a, b, k1, k2 = numbers
    case = OUTCOMES[int(classify(a, b, k1, k2))]
    n1, n2 = (float(n) for n in equilibrium(a, b, k1, k2))
    if case in ("priority_effect", "boundary"):
        assert math.isnan(n1)
        assert math.isnan(n2)
        return
    growth_1, growth_2 = (k1 - n1 - a * n2) / k1, (k2 - n2 - b * n1) / k2
    assert n1 >= 0
    assert n2 >= 0
    assert growth_1 == pytest.approx(0, abs=1e-6) if n1 > 0 else growth_1 < 0
    assert growth_2 == pytest.approx(0, abs=1e-6) if n2 > 0 else growth_2 < 0
    assert (n1 > 0, n2 > 0) == {
        "coexistence": (True, True),
        "species_1_excludes": (True, False),
        "species_2_excludes": (False, True),
    }[case]


@examples(100)
@given(four_numbers)
def test_window_and_chessons_rule_agree_with_the_outcome(numbers: tuple[float, float, float, float]) -> None:
    a, b, k1, k2 = numbers
    low, high = (float(x) for x in coexistence_window(a, b))
    for edge in (low, high):  # next to an edge rounding decides
        assume(math.isinf(edge) or abs(k1 / k2 - edge) > 1e-9 * (1 + edge))
    both = slow.outcome(a, b, k1, k2) == "coexistence"
    assert both == (low < k1 / k2 < high)
    if a > 0 and b > 0:
        rho, ratio = math.sqrt(a * b), k1 / k2 * math.sqrt(b / a)
        assert both == (rho < ratio < 1 / rho)
