"""Scans: points, counts, empty scans as effort; repeats only where they must be (faults 22, 42)."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.usage import Usage

NAMED = "species,animal,session,zone,time"
COUNTED = "species,session,zone,time,count"
WITH_COUNT = 'animal = ""\nsession = "session"\ntime = "time"\ncount = "count"'
WITHOUT = 'animal = ""\nsession = "session"\ntime = "time"'
ANIMALS = 'session = "session"\ntime = "time"'


@pytest.fixture
def counted(bench):
    def run(*logs, problems="", **keys):
        return bench.run(bench.study("scans", WITH_COUNT, problems=problems), COUNTED, *logs, **keys)

    return run


@pytest.fixture
def named(bench):
    def run(*logs, problems="", **keys):
        return bench.run(bench.study("scans", ANIMALS, problems=problems), NAMED, *logs, **keys)

    return run


def test_a_row_adds_its_count_at_one_moment(counted, clock, eight):
    found = counted([["dunlin", "s1", "mud", clock(0), 7], ["redshank", "s1", "sand", clock(0), "2.0"]])
    assert found.stays() == [("s1", "mud", eight, eight, 7), ("s1", "sand", eight, eight, 2)]
    assert found.ledger.milliseconds_read == 0


def test_a_count_weights_but_stays_one_unit(bench, clock):
    study = bench.study("scans", WITH_COUNT, analysis='unit = "session"')
    log = bench.read(study, COUNTED, [["dunlin", "s1", "mud", clock(0), 40], ["dunlin", "s2", "sand", clock(9), 1]])
    usage = Usage.from_visits(log.visits, study)
    assert usage.units[0] == ("s1", "s2")
    assert usage.time[0].tolist() == [[40, 0, 0], [0, 1, 0]]


def test_empty_scans_are_effort_and_no_visit(counted, clock):
    found = counted(
        [
            ["dunlin", "s1", "mud", clock(0), 3],
            ["", "s1", "sand", clock(0), ""],
            ["", "s1", "", clock(60), ""],
            ["dunlin", "s1", "mussel bed", clock(60), 0],
        ]
    )
    assert found.rows() == {"used": 4}
    assert len(found.visits) == 1
    assert found.note("empty scan").value == "3 rows"
    assert found.rule.looked["empty"].tolist() == [False, True, True, True]
    assert found.rule.looked["zone"].tolist() == ["mud", "sand", "", "mussel bed"]


def test_empty_scan_without_a_time_is_not_effort(counted):
    found = counted([["", "s1", "mud", "", ""]])
    assert found.lines() == [(2, "time", "", "time missing", "set_aside")]


def test_empty_scan_of_an_unknown_zone_stops(counted, clock):
    found = counted([["", "s1", "mudd", clock(0), 0]])
    assert found.lines("stop") == [(2, "zone", "mudd", "unknown zone", "stop")]


@pytest.mark.parametrize(
    ("text", "reason"), [("", "count missing"), ("-1", "unreadable count"), ("2.5", "unreadable count")]
)
def test_counts_that_are_none_stop(counted, clock, text, reason):
    found = counted([["dunlin", "s1", "mud", clock(0), text]])
    assert found.lines() == [(2, "count", text, reason, "stop")]
    aside = counted([["dunlin", "s1", "mud", clock(0), text]], problems='unreadable = "set_aside"')
    assert aside.rows() == {"set_aside": 1}


def test_equal_rows_of_animals_without_names_are_animals(bench, clock):
    study = bench.study("scans", WITHOUT, analysis='unit = "session"')
    log = [["dunlin", "s1", "mud", clock(0)]] * 3
    found = bench.run(study, "species,session,zone,time", log)
    assert found.rows() == {"used": 3}
    assert found.note("equal rows kept").value == "2 rows"
    assert len(bench.read(study, "species,session,zone,time", log).visits) == 3


def test_the_same_scan_in_two_files_counts_once(bench, clock):
    study = bench.study("scans", WITHOUT)
    mud, sand = ["dunlin", "s1", "mud", clock(0)], ["dunlin", "s1", "sand", clock(0)]
    found = bench.run(study, "species,session,zone,time", [mud], [sand, mud, mud])
    assert found.what("zone") == [("mud",), ("mud",), ("sand",)]
    assert found.problem(2) == "all cells as in b.csv, row 3: the same record in two files"


def test_a_named_animal_is_counted_once_a_moment(named, clock):
    log = [["dunlin", "RW", "s1", "mud", clock(0)], ["dunlin", "RW", "s1", "mud", clock(0)]]
    found = named(log)
    assert found.lines("set_aside") == [(3, "", "", "exact repeat of an earlier row", "set_aside")]
    assert found.problem(3, "exact repeat of an earlier row") == "repeats a.csv, row 2, exactly"


def test_a_named_animal_in_two_zones_at_one_moment_stops(named, clock):
    log = [["dunlin", "RW", "s1", "mud", clock(0)], ["dunlin", "RW", "s1", "sand", clock(0)]]
    assert named(log).rows() == {"stop": 2}
    found = named([*log, ["dunlin", "BO", "s1", "sand", clock(0)]], problems='overlap = "set_aside"')
    assert found.rows() == {"used": 1, "set_aside": 2}
    assert found.lines("set_aside", row=2)[0][3] == "in two zones at one moment"


def test_out_of_sight_points_have_their_own_account(named, clock):
    found = named([["dunlin", "RW", "s1", "out of sight", clock(0)], ["dunlin", "RW", "s1", "mud", clock(2)]])
    assert found.rows() == {"used": 1, "out_of_sight": 1}


def test_spacing_is_told_and_close_points_are_counted(named, clock):
    log = [["dunlin", "RW", "s1", "mud", clock(0, seconds=s)] for s in (0, 30, 150)]
    told = named(log).note("spacing of scans").problem
    assert told.startswith(
        "points of a session are 75 s apart (median; least 30 s); 1 follow the one before in less than 60 s"
    )
    apart = named([["dunlin", "RW", "s1", "mud", clock(m)] for m in (0, 10)]).note("spacing of scans").problem
    assert "less than 60 s" not in apart


@settings(max_examples=15, deadline=None)
@given(data=st.data())
def test_order_and_pieces_change_nothing(bench, clock, data):
    study = bench.study("scans", WITH_COUNT)
    one = st.tuples(
        st.sampled_from(["dunlin", "redshank", ""]),
        st.sampled_from(["s1", "s2"]),
        st.sampled_from(["mud", "sand", "", "out of sight"]),
        st.integers(0, 5),
        st.sampled_from(["", "0", "1", "4"]),
    )
    log = [[s, w, z, clock(m), n] for s, w, z, m, n in data.draw(st.lists(one, min_size=1, max_size=12))]
    first = bench.run(study, COUNTED, log)
    expected = [(z.replace("out of sight", ""), int(n)) for s, _, z, _, n in log if s and n in ("1", "4")]
    assert first.what("zone", "amount") == sorted(expected)
    order = data.draw(st.permutations(range(len(log))))
    again = bench.run(
        study, COUNTED, [log[i] for i in order], cut=data.draw(st.integers(1, 4)), rows=np.array(order) + 2
    )
    assert again.visits.equals(first.visits)
    assert again.ledger.sums() == first.ledger.sums()
    assert again.rule.looked is None or again.rule.looked.equals(first.rule.looked)
