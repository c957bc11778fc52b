"""Usage from arrays: what is kept, and each way in which arrays do not fit."""

import numpy as np
import pytest

from niche.errors import NicheError, ValueRuleError
from niche.usage import Usage

ZONES = ["mud", "sand"]
GOOD = {"dunlin": [[3, 1], [0, 2]], "redshank": [[1, 1]]}


def test_amounts_are_kept_with_units_counted_from_one():
    usage = Usage.from_units(GOOD, zones=ZONES)
    assert usage.species == ("dunlin", "redshank")
    assert usage.zones == ("mud", "sand")
    assert usage.units == (("1", "2"), ("1",))
    assert [time.tolist() for time in usage.time] == [[[3, 1], [0, 2]], [[1, 1]]]
    assert (usage.visits, usage.availability, usage.unit) == (None, None, "animal")
    assert usage.unit_counts.tolist() == [2, 1]


def test_a_unit_without_use_is_kept_and_can_be_left_out_while_the_others_keep_their_number():
    counts = {"dunlin": [[9, 9], [1, 0], [0, 0], [0, 2]]}
    usage = Usage.from_units({"dunlin": [[0, 0], [1, 0], [0, 0], [0, 4]]}, zones=ZONES, visits=counts)
    assert usage.units == (("1", "2", "3", "4"),)
    assert usage.visits[0].tolist() == counts["dunlin"]
    used = usage.with_use()
    assert used.units == (("2", "4"),)
    assert used.time[0].tolist() == [[1, 0], [0, 4]]
    assert used.visits[0].tolist() == [[1, 0], [0, 2]]
    assert Usage.from_units({"dunlin": [[0, 0], [1, 0]]}, zones=ZONES).with_use().visits is None


def test_leaving_out_units_changes_nothing_else():
    usage = Usage.from_units(GOOD, zones=ZONES, unit="session", availability=[1, 3])
    used = usage.with_use()
    assert (used.species, used.zones, used.units, used.unit) == (usage.species, usage.zones, usage.units, "session")
    np.testing.assert_array_equal(used.availability, [0.25, 0.75])


def test_a_species_without_units_may_be_there():
    usage = Usage.from_units({"dunlin": np.zeros((0, 2)), "redshank": [[1, 2]]}, zones=ZONES)
    assert usage.unit_counts.tolist() == [0, 1]


def test_arrays_of_the_caller_are_not_shared():
    given = np.array([[3.0, 1.0]])
    usage = Usage.from_units({"dunlin": given}, zones=ZONES)
    given[:] = 0
    assert usage.time[0].tolist() == [[3, 1]]


def test_availability_becomes_shares():
    usage = Usage.from_units(GOOD, zones=ZONES, availability=[3, 1])
    np.testing.assert_allclose(usage.availability, [0.75, 0.25], rtol=1e-15)


def test_the_unit_is_kept():
    assert Usage.from_units(GOOD, zones=ZONES, unit="session").unit == "session"


@pytest.mark.parametrize(
    ("keys", "passages"),
    [
        ({"zones": ["mud", "mud"]}, ["zones are ['mud', 'mud']", "a name of its own"]),
        ({"use": {}}, ["use names no species", "at least one"]),
        ({"use": {"dunlin": [1, 2]}}, ["use of 'dunlin' has shape (2,)", "must be (units, 2)"]),
        ({"use": {"dunlin": [[[1, 2]]]}}, ["use of 'dunlin' has shape (1, 1, 2)", "must be (units, 2)"]),
        ({"use": {"dunlin": [[1, 2, 3]]}}, ["use of 'dunlin' has shape (1, 3)", "must be (units, 2)"]),
        ({"use": {"dunlin": [[1], [2]]}}, ["use of 'dunlin' has shape (2, 1)", "must be (units, 2)"]),
        ({"use": {"dunlin": 4}}, ["use of 'dunlin' has shape ()", "must be (units, 2)"]),
        ({"use": {"dunlin": [[1, -2]]}}, ["use of 'dunlin' holds -2.0", "finite and at least 0"]),
        ({"use": {"dunlin": [[1, np.nan]]}}, ["use of 'dunlin' holds nan", "finite and at least 0"]),
        ({"use": {"dunlin": [[1, np.inf]]}}, ["use of 'dunlin' holds inf", "finite and at least 0"]),
        ({"use": {"dunlin": [[1, 2]], "redshank": [[1, -1]]}}, ["use of 'redshank' holds -1.0"]),
        ({"visits": {"dunlin": [[1, 1], [0, 1]]}}, ["visits has no counts for 'redshank'", "every species or for none"]),
        ({"visits": {"dunlin": [[1, 1]], "redshank": [[1, 1]]}}, ["visits of 'dunlin' has shape (1, 2); use has (2, 2)"]),
        ({"visits": {"dunlin": [[1, -1], [0, 1]], "redshank": [[1, 1]]}}, ["visits of 'dunlin' holds -1.0"]),
        ({"availability": [1, 2, 3]}, ["availability", "(1, 3)", "2)"]),
        ({"availability": [1, -1]}, ["availability", "holds -1.0", "at least 0"]),
        ({"availability": [np.nan, 1]}, ["availability", "holds nan"]),
        ({"availability": [0, 0]}, ["availability adds up to 0", "at least one zone"]),
    ],
)  # fmt: skip
def test_arrays_that_do_not_fit_are_refused_with_what_was_given_and_the_rule(keys, passages):
    with pytest.raises(ValueRuleError) as caught:
        Usage.from_units(**{"use": GOOD, "zones": ZONES, **keys})
    assert isinstance(caught.value, NicheError)
    for passage in passages:
        assert passage in str(caught.value)
