"""Relative demand: which basis is taken when none is set, and the number that comes of it."""

from pathlib import Path

import pytest

from niche.study import study_from_text


def study(texts, *pairs):
    return study_from_text(texts.changed(*pairs), Path("study.toml"))


def test_body_mass_is_taken_to_the_exponent(texts):
    found = study(texts)
    assert found.demand_basis() == "body_mass"
    assert found.demand_of("dunlin") == pytest.approx(48**0.75, rel=1e-15)
    assert found.demand_of("redshank") == pytest.approx(125**0.75, rel=1e-15)


def test_the_exponent_can_be_set(texts):
    assert study(texts, ("seed = 7", "mass_exponent = 0.5")).demand_of("redshank") == pytest.approx(125**0.5, rel=1e-15)


def test_intake_goes_before_body_mass_where_every_species_has_it(texts):
    both = (("body_mass = 48", "body_mass = 48\nintake = 2"), ("body_mass = 125", "body_mass = 125\nintake = 5"))
    assert study(texts, *both).demand_basis() == "intake"
    assert study(texts, *both).demand_of("redshank") == 5
    assert study(texts, both[0]).demand_basis() == "body_mass"


def test_without_a_common_basis_demands_are_equal(texts):
    found = study(texts, ("body_mass = 125\n", ""))
    assert found.demand_basis() == "equal"
    assert found.demand_of("dunlin") == found.demand_of("redshank") == 1


def test_equal_can_be_asked_for(texts):
    found = study(texts, ("seed = 7", 'demand = "equal"'))
    assert found.demand_basis() == "equal"
    assert found.demand_of("dunlin") == 1


def test_what_is_set_is_taken_even_where_a_better_basis_is_there(texts):
    both = (("body_mass = 48", "body_mass = 48\nintake = 2"), ("body_mass = 125", "body_mass = 125\nintake = 5"))
    found = study(texts, *both, ("seed = 7", 'demand = "body_mass"'))
    assert found.demand_of("dunlin") == pytest.approx(48**0.75, rel=1e-15)


def test_a_species_that_is_not_listed_has_demand_one(texts):
    assert study(texts).demand_of("turnstone") == 1
