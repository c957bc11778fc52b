"""Visits to Usage: the same whole numbers as plain loops, whole or in pieces."""

from collections import defaultdict
from functools import reduce
from operator import add

import numpy as np
import pytest

from niche.errors import StudyError
from niche.usage import Usage, study_availability


def by_loops(visits, zones, unit):
    """Milliseconds and visits by species, unit and zone, counted one by one."""
    time = defaultdict(lambda: defaultdict(lambda: [0] * len(zones)))
    count = defaultdict(lambda: defaultdict(lambda: [0] * len(zones)))
    for _, visit in visits.iterrows():
        if visit["zone"]:
            place = zones.index(visit["zone"])
            time[visit["species"]][visit[unit]][place] += int(visit["end"]) - int(visit["start"])
            count[visit["species"]][visit[unit]][place] += 1
    return time, count


def same(one, other):
    """Whether two Usages hold the same names and the same numbers."""
    names = ("species", "zones", "units", "unit")
    arrays = [*zip(one.time, other.time, strict=True), *zip(one.visits, other.visits, strict=True)]
    return all(getattr(one, n) == getattr(other, n) for n in names) and all(np.array_equal(a, b) for a, b in arrays)


@pytest.mark.parametrize("unit", ["animal", "session"])
@pytest.mark.parametrize("seed", range(8))
def test_the_tally_equals_plain_loops(made, unit, seed):
    visits = made.random_visits(seed, 120)
    usage = Usage.from_visits(visits, made.study(unit=unit))
    time, count = by_loops(visits, made.zones, unit)
    assert usage.species == ("dunlin", "redshank")
    assert usage.zones == made.zones
    assert usage.unit == unit
    for s, name in enumerate(usage.species):
        labels = sorted(time[name], key=lambda label: (len(label), label))  # s2 before s10
        assert usage.units[s] == tuple(labels)
        assert usage.time[s].dtype == usage.visits[s].dtype == np.int64
        assert usage.time[s].tolist() == [time[name][label] for label in labels]
        assert usage.visits[s].tolist() == [count[name][label] for label in labels]
    assert usage.unit_counts.tolist() == [len(labels) for labels in usage.units]


def test_a_handful_of_visits_by_hand(made):
    visits = made.visits(
        ("dunlin", "RW", "s1", "upper mud", 0, 60),
        ("dunlin", "GY", "s1", "upper mud", 0, 5),
        ("dunlin", "RW", "s2", "lower mud", 60, 100),
        ("dunlin", "RW", "s2", "", 100, 1000),
        ("dunlin", "RW", "s2", "upper mud", 1000, 1001),
        ("dunlin", "NB", "s2", "", 0, 1000),
        ("redshank", "RW", "s3", "upper sand", 0, 7),
    )
    usage = Usage.from_visits(visits, made.study())
    assert usage.units == (("GY", "RW"), ("RW",))
    assert [time.tolist() for time in usage.time] == [[[0, 5, 0], [0, 61, 40]], [[7, 0, 0]]]
    assert [count.tolist() for count in usage.visits] == [[[0, 1, 0], [0, 2, 1]], [[1, 0, 0]]]
    usage = Usage.from_visits(visits, made.study(unit="session"))
    assert usage.units == (("s1", "s2"), ("s3",))
    assert usage.time[0].tolist() == [[0, 65, 0], [0, 1, 40]]


@pytest.mark.parametrize("cut", [1, 2, 3, 7])
@pytest.mark.parametrize("unit", ["animal", "session"])
def test_a_log_tallied_in_pieces_and_added_is_the_log_tallied_whole(made, cut, unit):
    visits = made.random_visits(11, 90)
    study = made.study(unit=unit)
    pieces = [visits.iloc[n::cut] for n in range(cut)]
    assert same(reduce(add, (Usage.from_visits(piece, study) for piece in pieces)), Usage.from_visits(visits, study))


def test_the_order_of_the_rows_changes_nothing(made):
    visits = made.random_visits(5, 90)
    shuffled = visits.sample(frac=1, random_state=1)
    assert same(Usage.from_visits(visits, made.study()), Usage.from_visits(shuffled, made.study()))


def test_zones_of_the_layout_that_nobody_used_count(made):
    usage = Usage.from_visits(made.visits(("dunlin", "RW", "s1", "lower mud", 0, 9)), made.study())
    assert usage.time[0].tolist() == [[0, 0, 9]]


def test_a_listed_species_without_visits_has_no_units(made):
    usage = Usage.from_visits(made.visits(("dunlin", "RW", "s1", "lower mud", 0, 9)), made.study())
    assert usage.species == ("dunlin", "redshank")
    assert usage.units[1] == ()
    assert usage.time[1].shape == usage.visits[1].shape == (0, 3)
    assert usage.unit_counts.tolist() == [1, 0]


def test_the_study_gives_the_order_of_the_species_and_without_a_list_the_alphabet(made):
    visits = made.visits(("redshank", "RW", "s1", "lower mud", 0, 9), ("dunlin", "RW", "s1", "lower mud", 0, 8))
    assert Usage.from_visits(visits, made.study(species=("redshank", "dunlin"))).species == ("redshank", "dunlin")
    usage = Usage.from_visits(visits, made.study(species=()))
    assert usage.species == ("dunlin", "redshank")
    assert [time.tolist() for time in usage.time] == [[[0, 0, 8]], [[0, 0, 9]]]


def test_no_visits_at_all_are_no_use(made):
    usage = Usage.from_visits(made.visits(), made.study())
    assert usage.units == ((), ())
    assert Usage.from_visits(made.visits(("dunlin", "RW", "s1", "", 0, 9)), made.study()).units == ((), ())


def test_a_unit_whose_visits_have_no_length_has_no_use(made):
    visits = made.visits(("dunlin", "RW", "s1", "lower mud", 5, 5), ("dunlin", "GY", "s1", "lower mud", 5, 6))
    usage = Usage.from_visits(visits, made.study())
    assert usage.units[0] == ("GY", "RW")
    assert (usage.time[0].tolist(), usage.visits[0].tolist()) == ([[0, 0, 1], [0, 0, 0]], [[0, 0, 1], [0, 0, 1]])
    used = usage.with_use()
    assert used.units == (("GY",), ())
    assert (used.time[0].tolist(), used.visits[0].tolist()) == ([[0, 0, 1]], [[0, 0, 1]])


def test_numbers_in_names_are_sorted_by_size(made):
    names = ["bird 10", "bird 2", "10", "9", "a", "bird 2b", "", "2.10", "2.9", "08", "8"]
    visits = made.visits(*(("dunlin", name, "s1", "lower mud", 0, 1) for name in names))
    units = Usage.from_visits(visits, made.study()).units[0]
    assert sorted(units) == sorted(names)
    for first, second in (
        ("9", "10"),
        ("bird 2", "bird 10"),
        ("bird 2b", "bird 10"),
        ("2.9", "2.10"),
        ("8", "9"),
        ("08", "9"),
    ):
        assert units.index(first) < units.index(second)


def test_the_unit_session_needs_a_column_for_it(made):
    visits = made.visits(("dunlin", "RW", "s1", "lower mud", 0, 9))
    with pytest.raises(StudyError, match=r"^analysis\.unit is 'session', and logs\.columns names no session column"):
        Usage.from_visits(visits, made.study(unit="session", session=""))
    assert Usage.from_visits(visits, made.study(session="")).units[0] == ("RW",)


def test_animals_are_told_apart_by_the_whole_of_their_names(made):
    names = ["RW", "rw", "RW ", "R", "0", "00", "ä"]
    visits = made.visits(*(("dunlin", name, "s1", "lower mud", 0, number + 1) for number, name in enumerate(names)))
    usage = Usage.from_visits(visits, made.study())
    assert sorted(usage.units[0]) == sorted(names)
    assert {name: row[2] for name, row in zip(usage.units[0], usage.time[0].tolist(), strict=True)} == {
        name: number + 1 for number, name in enumerate(names)
    }


def test_centuries_of_milliseconds_are_added_exactly(made):
    long = 3_000_000_000_001
    visits = made.visits(*(("dunlin", "RW", "s1", "lower mud", 0, long) for _ in range(3000)))
    assert Usage.from_visits(visits, made.study()).time[0][0, 2] == 3000 * long


def test_availability_is_given_as_shares_in_the_order_of_the_layout(made):
    amounts = {"lower mud": 5, "upper sand": 2, "upper mud": 1}
    shares = study_availability(made.study(amounts=amounts))
    np.testing.assert_allclose(shares, [0.25, 0.125, 0.625], rtol=1e-15)
    usage = Usage.from_visits(made.visits(("dunlin", "RW", "s1", "lower mud", 0, 9)), made.study(amounts=amounts))
    np.testing.assert_array_equal(usage.availability, shares)


def test_a_zone_that_is_not_there_has_share_nought(made):
    shares = study_availability(made.study(amounts={"upper sand": 0, "upper mud": 3, "lower mud": 1}))
    np.testing.assert_allclose(shares, [0, 0.75, 0.25], rtol=1e-15)


def test_without_availability_there_are_no_shares(made):
    assert study_availability(made.study()) is None
    assert Usage.from_visits(made.visits(), made.study()).availability is None
