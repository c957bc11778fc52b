"""Arrays and sums that do not mean anything are refused in the program's own words."""

from dataclasses import replace

import numpy as np
import pytest

from niche.errors import ValueRuleError
from niche.usage import Usage, study_availability

ZONES = ["mud", "sand"]


@pytest.mark.parametrize("table", [[["x", 1]], [[1, 2], [3]], [[None, 1]], [[1, {}]], "mud"])
def test_what_is_no_table_of_numbers_is_refused(table):
    with pytest.raises(ValueRuleError, match="use of 'dunlin'"):
        Usage.from_units({"dunlin": table}, zones=ZONES)


def test_counts_for_a_species_without_use_are_refused():
    with pytest.raises(ValueRuleError, match="visits names 'redshank', which use does not"):
        Usage.from_units({"dunlin": [[1, 2]]}, zones=ZONES, visits={"dunlin": [[1, 1]], "redshank": [[1, 1]]})


def test_a_unit_that_is_none_is_refused():
    with pytest.raises(ValueRuleError, match="unit is 'herd'; it must be 'animal' or 'session'"):
        Usage.from_units({"dunlin": [[1, 2]]}, zones=ZONES, unit="herd")


@pytest.mark.parametrize("availability", [[1, 2, 3], 4, [[1, 2], [3, 4]], ["a", "b"]])
def test_availability_of_another_shape_is_refused(availability):
    with pytest.raises(ValueRuleError, match="availability of 'all zones'"):
        Usage.from_units({"dunlin": [[1, 2]]}, zones=ZONES, availability=availability)


def test_the_largest_amounts_still_have_shares(made):
    shares = study_availability(made.study(amounts={"upper sand": 1e308, "upper mud": 1e308, "lower mud": 0}))
    np.testing.assert_allclose(shares, [0.5, 0.5, 0])


def test_usages_over_different_availability_do_not_add():
    usage = Usage.from_units({"dunlin": [[1, 2]]}, zones=ZONES, availability=[1, 1])
    assert (usage + usage).time[0].tolist() == [[2, 4]]
    for other in (replace(usage, availability=None), replace(usage, availability=np.array([0.25, 0.75]))):
        with pytest.raises(ValueRuleError, match="same availability"):
            usage + other


def test_animals_are_told_apart_by_the_whole_of_any_name(made):
    names = ["RW", "RW\x00", "9" * 5000, "9" * 5001, "x" * 100_000]
    visits = made.visits(*(("dunlin", name, "s1", "lower mud", 0, 1) for name in names))
    assert sorted(Usage.from_visits(visits, made.study()).units[0]) == sorted(names)
