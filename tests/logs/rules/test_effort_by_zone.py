"""Effort by zone as far as a log tells, for the three kinds of zero."""

import math

import pytest

from niche.logs.effort_by_zone import COLUMNS, effort_by_zone

WITH_COUNT = 'animal = ""\nsession = "session"\ntime = "time"\ncount = "count"'


def values(table):
    assert tuple(table.columns) == COLUMNS
    return [(z, looked, None if math.isnan(e) else e, u) for z, looked, e, u, _ in table.itertuples(index=False)]


@pytest.fixture
def effort(bench):
    def of(rule, columns, logs, header, log, **files):
        study = bench.study(rule, columns, logs, **files)
        return effort_by_zone(study, bench.run(study, header, log).rule)

    return of


def test_scans_of_all_zones_count_for_every_zone(effort, clock):
    log = [["dunlin", "s1", "mud", clock(0), 2], ["dunlin", "s1", "sand", clock(0), 2], ["", "s1", "", clock(9), 0]]
    found = effort("scans", WITH_COUNT, "", "species,session,zone,time,count", log)
    assert values(found) == [(zone, True, 2.0, "scans") for zone in ("mud", "sand", "mussel bed")]


def test_scans_zone_by_zone_count_where_they_looked(effort, clock):
    log = [
        ["dunlin", "s1", "mud", clock(0), 2],
        ["redshank", "s1", "mud", clock(0), 2],
        ["", "s1", "sand", clock(0), ""],
    ]
    log += [["", "s1", "mud", clock(9), ""]]
    found = effort("scans", WITH_COUNT, "", "species,session,zone,time,count", log)
    assert values(found) == [
        ("mud", True, 2.0, "scans"),
        ("sand", True, 1.0, "scans"),
        ("mussel bed", False, 0.0, "scans"),
    ]


def test_cameras_stood_where_the_table_says(effort):
    table = "deployment,zone,start,end\nC1,mud,2026-09-02,2026-09-02\n"
    table += "C2,mud,2026-09-02 12:00,2026-09-02 13:00\nC3,sand,2026-09-02,\n"
    columns = 'deployment = "deployment"\ntime = "time"'
    camera = 'camera = { deployments = "deployments.csv" }'
    found = effort("camera", columns, camera, "deployment,time,species", [], deployments=table)
    assert values(found) == [("mud", True, 90_000.0, "s"), ("sand", True, None, "s"), ("mussel bed", False, 0.0, "s")]


def test_antennas_were_there_from_first_to_last_read_at_least(effort, clock):
    columns = 'time = "time"\ntag = "tag"\nantenna = "reader"'
    reads = '[logs.reads]\ngap = 9\nzones = { R1 = "mud", R2 = "sand" }'
    log = [["dunlin", tag, "R1", clock(minute)] for tag, minute in (("T1", 3), ("T2", 0), ("T3", 60))]
    found = effort("reads", columns, reads, "species,tag,reader,time", log)
    assert values(found) == [("mud", True, 3600.0, "s"), ("sand", True, None, "s"), ("mussel bed", False, 0.0, "s")]


def test_a_tally_sheet_looked_where_it_has_columns(effort):
    found = effort("tallies", "", 'tallies = { unit = "s" }', "species,animal,mud,sand", [["dunlin", "RW", 5, 0]])
    assert values(found) == [("mud", True, None, "s"), ("sand", True, None, "s"), ("mussel bed", False, 0.0, "s")]


def test_following_animals_tells_nothing(effort, clock):
    columns = 'session = "session"\ntime = "time"'
    log = [["dunlin", "RW", "s1", "mud", clock(0)]]
    assert effort("switches", columns, "", "species,animal,session,zone,time", log) is None
