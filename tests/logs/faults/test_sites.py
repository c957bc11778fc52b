"""Several sites in one log: shared zone labels, shared animal names."""

from __future__ import annotations

import pytest

HEADER = "species,animal,session,zone,start,end,site"
COLUMNS = 'site = "site"'


def at(flat, start, end, site, **keys):
    return flat.bout(start, end, site, **keys)


def test_a_zone_label_at_two_sites_is_asked_about_once(flat):
    rows = [
        at(flat, "08:00", "08:10:30", "north"),
        at(flat, "09:00", "09:10:30", "south", animal="GY"),
        at(flat, "10:00", "10:10:30", "south", animal="GY", zone="lower mud"),
        at(flat, "11:00", "11:10:30", "north", zone="lower mud"),
    ]
    log = flat.read(rows, header=HEADER, columns=COLUMNS)
    assert flat.told(log) == [("a.csv", 3, "start", "one zone label at several sites", "stop")]
    problem = flat.problem(log, 3)
    assert "'upper mud' stands at the sites 'north', 'south'" in problem
    assert "'upper mud', 'lower mud'" in problem
    assert "`zones.same_across_sites` to true" in problem
    log = flat.read(rows, header=HEADER, columns=COLUMNS, zones="same_across_sites = true")
    assert flat.told(log) == []


def test_zones_of_each_site_are_listed_with_it(flat):
    rows = [
        at(flat, "08:00", "08:10:30", "North"),
        at(flat, "09:00", "09:10:30", "south", animal="GY"),
        at(flat, "10:00", "10:10:30", "south", animal="GY", zone="out of sight"),
        at(flat, "11:00", "11:10:30", "south", animal="GY", zone=""),
        at(flat, "12:00", "12:10:30", "south", animal="GY", zone="lower mud"),
    ]
    layout = '[["north: upper mud", "south: upper mud"], ["", ""], ["", ""]]'
    log = flat.read(rows, header=HEADER, columns=COLUMNS, zones="same_across_sites = false", layout=layout)
    assert log.visits["zone"].tolist() == ["north: upper mud", "south: upper mud", "", ""]
    assert flat.told(log)[0] == ("a.csv", 2, "zone", "spelling", "repaired")
    (stop,) = log.ledger.stops
    assert (stop.row, stop.value) == (6, "south: lower mud")


def test_no_question_where_sites_share_nothing(flat):
    rows = [
        at(flat, "08:00", "08:10:30", "north"),
        at(flat, "09:00", "09:10:30", "south", animal="GY", zone="lower mud"),
    ]
    assert flat.told(flat.read(rows, header=HEADER, columns=COLUMNS)) == []


def reused(flat):
    return [
        at(flat, "08:00", "08:30:30", "north"),
        at(flat, "08:20", "08:40:30", "south"),
        at(flat, "10:00", "10:10:30", "north"),
        at(flat, "10:00", "10:10:30", "north", animal="GY"),
    ]


KEYS = {"header": HEADER, "columns": COLUMNS, "zones": "same_across_sites = true"}


def test_an_animal_at_two_sites_over_the_same_days_stops_the_work_once(flat):
    log = flat.read(reused(flat), **KEYS)
    assert flat.told(log) == [("a.csv", 3, "start", "one animal name at several sites", "stop")]
    problem = flat.problem(log, 3)
    assert "'RW' stands at the sites 'north', 'south' over the same days" in problem
    assert '`logs.problems.reused_animals` to "keep_apart_by_site"' in problem
    assert '"same_animal"' in problem


def test_kept_apart_by_site(flat):
    log = flat.read(reused(flat), **KEYS, problems='reused_animals = "keep_apart_by_site"')
    assert log.visits["animal"].tolist() == ["RW (north)", "RW (south)", "RW (north)", "GY"]
    assert flat.told(log) == [("a.csv", row, "animal", "kept apart by site", "repaired") for row in (2, 3)]
    log.require_usable()


def test_the_same_animal_cannot_be_at_two_sites_at_once(flat):
    log = flat.read(reused(flat), **KEYS, problems='reused_animals = "same_animal"')
    assert flat.told(log) == [("a.csv", 3, "start", "overlaps another bout of the same animal", "stop")]


def test_one_site_after_the_other_is_flagged(flat):
    rows = [at(flat, "08:00", "08:30:30", "north"), at(flat, "09:20", "09:40:30", "south")]
    log = flat.read(rows, **KEYS)
    assert flat.told(log) == [("a.csv", 3, "animal", "one animal name at several sites", "flagged")]


@pytest.mark.parametrize("species", ["redshank"])
def test_names_of_two_species_are_two_animals(flat, species):
    rows = [at(flat, "08:00", "08:30:30", "north"), at(flat, "08:20", "08:40:30", "south", species=species)]
    assert flat.told(flat.read(rows, **KEYS)) == []
