"""Usages add, unit by unit."""

from dataclasses import replace
from itertools import permutations

import numpy as np
import pytest

from niche.errors import ValueRuleError
from niche.usage import Usage


def usage(units, time, visits=None, **keys):
    return Usage(
        ("dunlin",), ("mud", "sand"), (units,), (np.array(time, dtype=np.int64).reshape(-1, 2),),
        None if visits is None else (np.array(visits, dtype=np.int64).reshape(-1, 2),), **keys,
    )  # fmt: skip


FIRST = usage(("GY", "RW"), [[1, 2], [3, 4]], [[1, 1], [2, 2]])
SECOND = usage(("AA", "RW"), [[10, 0], [0, 20]], [[1, 0], [0, 3]])


def test_units_of_the_same_name_are_added_and_the_others_stand_beside_them():
    both = FIRST + SECOND
    assert both.units == (("AA", "GY", "RW"),)
    assert both.time[0].tolist() == [[10, 0], [1, 2], [3, 24]]
    assert both.visits[0].tolist() == [[1, 0], [1, 1], [2, 5]]
    assert both.time[0].dtype == np.int64


def test_the_parts_are_left_as_they_were():
    before = FIRST.time[0].copy()
    assert (FIRST + SECOND).time[0] is not FIRST.time[0]
    np.testing.assert_array_equal(FIRST.time[0], before)


def test_nothing_added_changes_nothing():
    both = FIRST + usage((), [], [])
    assert both.units == FIRST.units
    np.testing.assert_array_equal(both.time[0], FIRST.time[0])
    np.testing.assert_array_equal((usage((), [], []) + FIRST).visits[0], FIRST.visits[0])


def test_the_order_of_adding_changes_nothing():
    third = usage(("GY",), [[100, 100]], [[1, 1]])
    sums = [a + b + c for a, b, c in permutations((FIRST, SECOND, third))]
    assert {total.units for total in sums} == {(("AA", "GY", "RW"),)}
    assert all(np.array_equal(total.time[0], [[10, 0], [101, 102], [3, 24]]) for total in sums)


def test_without_counts_of_visits_times_alone_are_added():
    both = usage(("RW",), [[1, 2]]) + usage(("RW",), [[3, 4]])
    assert both.visits is None
    assert both.time[0].tolist() == [[4, 6]]


def test_amounts_with_fractions_stay_fractions():
    halves = Usage.from_units({"dunlin": [[0.5, 0.25]]}, zones=["mud", "sand"])
    assert (halves + halves).time[0].tolist() == [[1.0, 0.5]]


def test_unit_and_availability_are_kept():
    shares = np.array([0.5, 0.5])
    given = replace(FIRST, unit="session", availability=shares)
    both = given + given
    assert both.unit == "session"
    np.testing.assert_array_equal(both.availability, shares)


@pytest.mark.parametrize(
    "other",
    [
        replace(FIRST, species=("redshank",)),
        replace(FIRST, zones=("sand", "mud")),
        replace(FIRST, unit="session"),
    ],
    ids=["species", "zones", "unit"],
)
def test_usages_over_different_things_do_not_add(other):
    with pytest.raises(ValueRuleError, match="same species, zones and unit"):
        FIRST + other


def test_a_usage_with_and_one_without_visits_do_not_add():
    with pytest.raises(ValueRuleError, match="both or neither count visits"):
        FIRST + usage(("RW",), [[1, 2]])
