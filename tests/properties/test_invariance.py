"""What must not matter: the unit of time, the order of zones and units, zones nobody used, how resamples are tiled."""

from __future__ import annotations

import numpy as np
from generated import FIELDS, Watched, assert_same, estimates, examples, quick, watched
from hypothesis import given
from hypothesis import strategies as st

import niche

WEIGHTING = st.sampled_from(["time", "animal"])
WITHOUT_DRAWS = ("value", "pooled")


@examples(30)
@given(watched(), st.integers(2, 100_000), WEIGHTING)
def test_unit_of_time(data: Watched, factor: int, weighting: str) -> None:
    """Seconds or milliseconds: everything but the amounts, to the last bit (whole numbers are summed without rounding)."""
    scaled = Watched({name: a * factor for name, a in data.time.items()}, data.visits)
    first, second = quick(data.usage(), weighting=weighting), quick(scaled.usage(), weighting=weighting)
    assert_same(first, second)
    np.testing.assert_array_equal(first.use.core, second.use.core)
    np.testing.assert_allclose(first.use.core_share, second.use.core_share, rtol=1e-12)


@examples(30)
@given(watched(), st.floats(1e-6, 1e6))
def test_unit_of_time_when_it_does_not_divide(data: Watched, factor: float) -> None:
    """Hours in place of seconds: sums are rounded, results are not moved."""
    scaled = Watched({name: a * factor for name, a in data.time.items()}, data.visits)
    assert_same(quick(data.usage()), quick(scaled.usage()))


@examples(30)
@given(watched(), st.randoms(use_true_random=False), WEIGHTING)
def test_order_of_zones(data: Watched, shuffled: object, weighting: str) -> None:
    order = list(range(len(data.zones)))
    shuffled.shuffle(order)  # type: ignore[attr-defined]
    first = quick(data.usage(), weighting=weighting)
    second = quick(data.changed(lambda a: a[:, order]).usage(), weighting=weighting)
    ours, theirs = estimates(first), estimates(second)
    for name in ours:
        for field in FIELDS:
            a, b = getattr(ours[name], field), getattr(theirs[name], field)
            if name == "proportion":
                a = a[:, order]
            np.testing.assert_allclose(a, b, rtol=1e-9, atol=1e-12, err_msg=f"{name}.{field}")
    if weighting == "time":  # whole numbers; otherwise rounding may break a tie
        np.testing.assert_allclose(first.use.core_share, second.use.core_share, rtol=1e-12)


@examples(30)
@given(watched(), st.randoms(use_true_random=False), WEIGHTING)
def test_order_of_units(data: Watched, shuffled: object, weighting: str) -> None:
    """Which animal is written first; draws go by place, so only what does not rest on draws is compared."""
    time, visits = {}, {}
    for name, a in data.time.items():
        order = list(range(len(a)))
        shuffled.shuffle(order)  # type: ignore[attr-defined]
        time[name], visits[name] = a[order], data.visits[name][order]
    other = quick(Watched(time, visits).usage(), weighting=weighting)
    assert_same(quick(data.usage(), weighting=weighting), other, fields=WITHOUT_DRAWS)


@examples(30)
@given(watched(species=(3, 3)), WEIGHTING)
def test_order_of_species(data: Watched, weighting: str) -> None:
    names = list(data.time)[::-1]
    turned = Watched({n: data.time[n] for n in names}, {n: data.visits[n] for n in names})
    ours, theirs = (estimates(quick(d.usage(), weighting=weighting)) for d in (data, turned))
    for name in ours:
        for field in WITHOUT_DRAWS:
            a, b = getattr(ours[name], field), getattr(theirs[name], field)
            a = a[::-1] if a.ndim == 1 or name == "proportion" else a[::-1, ::-1]
            np.testing.assert_allclose(a, b, rtol=1e-9, atol=1e-12, err_msg=f"{name}.{field}")


@examples(30)
@given(watched(), st.integers(1, 4), WEIGHTING)
def test_zones_that_nobody_used(data: Watched, added: int, weighting: str) -> None:
    """Overlaps, coefficients and H′ do not know of them; standardised breadth must."""
    wider = data.changed(lambda a: np.pad(a, ((0, 0), (0, added))))
    first, second = quick(data.usage(), weighting=weighting), quick(wider.usage(), weighting=weighting)
    ours, theirs = estimates(first), estimates(second)
    for name in ours.keys() - {"proportion", "levins", "levins_standardized", "shannon"}:
        for field in FIELDS:
            a, b = getattr(ours[name], field), getattr(theirs[name], field)
            np.testing.assert_allclose(a, b, rtol=1e-9, atol=1e-12, err_msg=f"{name}.{field}")
    zones = len(data.zones)
    before, after = first.breadth, second.breadth
    np.testing.assert_allclose(before["levins"].pooled, after["levins"].pooled, rtol=1e-12)
    # With more zones an estimate may stand higher before it is held to the range.
    np.testing.assert_allclose(before["levins"].value, np.minimum(after["levins"].value, zones), rtol=1e-9)
    np.testing.assert_allclose(before["shannon"].pooled, after["shannon"].pooled, rtol=1e-12)
    np.testing.assert_allclose(before["shannon"].value, np.minimum(after["shannon"].value, np.log(zones)), atol=1e-9)
    np.testing.assert_allclose(
        before["levins_standardized"].pooled * (zones - 1),
        after["levins_standardized"].pooled * (zones + added - 1),
        rtol=1e-9,
        atol=1e-12,
    )
    np.testing.assert_array_equal(first.use.core, second.use.core[:, :zones])
    assert not second.use.core[:, zones:].any()


@examples(30)
@given(watched(), st.integers(0, 5), WEIGHTING)
def test_units_without_use(data: Watched, place: int, weighting: str) -> None:
    """An animal that was never in a zone tells nothing of zones, and is no unit of a resample."""
    more = data.changed(lambda a: np.insert(a, min(place, len(a)), 0, axis=0))
    first, second = quick(data.usage(), weighting=weighting), quick(more.usage(), weighting=weighting)
    assert_same(first, second, exactly=True)
    assert first.table("overlap")["units_1"].tolist() == second.table("overlap")["units_1"].tolist()


@examples(30)
@given(watched(), st.integers(1, 400), WEIGHTING)
def test_tile_of_resamples(data: Watched, tile: int, weighting: str) -> None:
    """However few resamples a block holds, the same results to the last bit."""
    whole, tiled = quick(data.usage(), weighting=weighting), quick(data.usage(), weighting=weighting, tile=tile)
    assert_same(whole, tiled, exactly=weighting == "time")
    np.testing.assert_array_equal(whole.use.core_frequency, tiled.use.core_frequency)


@examples(20)
@given(watched(), st.integers(0, 1000))
def test_equal_seeds_give_equal_results(data: Watched, seed: int) -> None:
    assert_same(quick(data.usage(), seed=seed), quick(data.usage(), seed=seed), exactly=True)


@examples(20)
@given(watched(species=(3, 3)), st.sampled_from(["pianka", "levins", "schoener", "morisita", "alpha"]))
def test_asking_for_one_index_gives_the_same_as_asking_for_all(data: Watched, name: str) -> None:
    every, one = quick(data.usage()), quick(data.usage(), indices={name})
    if name == "alpha":
        assert one.coefficients is not None
        found = one.coefficients.alpha
    else:
        found = {**one.breadth, **one.overlap}[name]
        assert list({**one.breadth, **one.overlap}) == [name]
    for field in FIELDS:
        np.testing.assert_array_equal(getattr(found, field), getattr(estimates(every)[name], field), err_msg=field)


def _pieces(data: Watched, parts: int, rng: np.random.Generator) -> list[niche.Usage]:
    """Each cell's time and visits dealt out at random over the parts."""
    dealt = [Watched({}, {}) for _ in range(parts)]
    for field in ("time", "visits"):
        for name, whole in getattr(data, field).items():
            shares = rng.multinomial(whole, np.full(parts, 1 / parts))
            for part, piece in enumerate(dealt):
                getattr(piece, field)[name] = shares[..., part]
    return [
        niche.Usage(
            tuple(piece.time),
            tuple(data.zones),
            tuple(tuple(str(u + 1) for u in range(len(a))) for a in piece.time.values()),
            tuple(piece.time.values()),
            tuple(piece.visits.values()),
        )
        for piece in dealt
    ]


@examples(30)
@given(watched(), st.integers(2, 5), st.integers(0, 1000))
def test_a_usage_is_the_sum_of_its_pieces(data: Watched, parts: int, seed: int) -> None:
    rng = np.random.default_rng(seed)
    pieces = _pieces(data, parts, rng)
    total = pieces[0]
    for piece in pieces[1:]:
        total = total + piece
    whole = data.usage()
    assert (total.species, total.zones, total.units) == (whole.species, whole.zones, whole.units)
    for field in ("time", "visits"):
        for a, b in zip(getattr(total, field), getattr(whole, field), strict=True):
            np.testing.assert_array_equal(a, b)
            assert a.dtype.kind == "i"
    assert_same(quick(total), quick(whole), exactly=True)


@examples(30)
@given(watched(units=(2, 5)), st.data())
def test_units_in_different_pieces(data: Watched, rest: st.DataObject) -> None:
    """A piece holds some of the animals only; one animal may be in both."""
    whole = data.usage()
    masks = [
        rest.draw(st.lists(st.sampled_from([(1, 0), (0, 1), (1, 1)]), min_size=n, max_size=n))
        for n in whole.unit_counts.tolist()
    ]
    halves = []
    for half in (0, 1):
        keep = [[i for i, where in enumerate(mask) if where[half]] for mask in masks]
        halves.append(
            niche.Usage(
                whole.species,
                whole.zones,
                tuple(tuple(names[i] for i in k) for names, k in zip(whole.units, keep, strict=True)),
                tuple(a[k] for a, k in zip(whole.time, keep, strict=True)),
                None,
            )
        )
    total = halves[0] + halves[1]
    assert total.units == whole.units
    for a, b, mask in zip(total.time, whole.time, masks, strict=True):
        np.testing.assert_array_equal(a, b * np.array([sum(where) for where in mask])[:, None])


def test_adding_nothing_keeps_the_order_of_many_units() -> None:
    """Units without names stand as 1, 2, …, 12; sorted as text, 10 would come before 2 and meet other draws."""
    rng = np.random.default_rng(3)
    usage = niche.Usage.from_units({"dunlin": rng.integers(1, 9, (12, 3))}, zones=["a", "b", "c"])
    nothing = niche.Usage(usage.species, usage.zones, ((),), (np.zeros((0, 3)),))
    assert (usage + nothing).units == usage.units
