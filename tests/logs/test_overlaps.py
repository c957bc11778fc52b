"""One animal in two places at once, and rows entered twice."""

from itertools import pairwise

import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.errors import LogError
from niche.logs.ledger import Ledger
from niche.logs.visits import COLUMNS, without_overlaps, without_repeats


def test_bouts_that_touch_do_not_overlap(field):
    log = field.read([field.bout("08:00", "08:10"), field.bout("08:10", "08:20"), field.bout("07:50", "08:00")])
    assert field.rows(log) == {"used": 3}


def test_a_second_shared_is_an_overlap_and_both_places_are_named(field):
    log = field.read([field.bout("08:00", "08:10:01"), field.bout("08:10", "08:20", zone="sand")])
    ((row, name, value, reason, action),) = field.entries(log)
    assert (row, name, action) == (3, "start", "stop")
    assert value == "2026-09-03T06:10:00Z to 2026-09-03T06:20:00Z"
    assert reason == "overlaps another bout of the same animal"
    problem = field.problem(log, 3)
    assert "RW" in problem
    assert "'mud' until 2026-09-03T06:10:01Z (a.csv, row 2)" in problem
    assert "`logs.problems.overlap`" in problem
    with pytest.raises(LogError, match=r"a\.csv, row 3"):
        log.require_usable()


def test_a_bout_inside_a_long_one_is_found_though_the_row_before_is_clear_of_it(field):
    log = field.read(
        [
            field.bout("08:00", "09:00"),
            field.bout("08:05", "08:10"),
            field.bout("08:20", "08:25"),
            field.bout("09:00", "09:10"),
        ]
    )
    assert [entry[0] for entry in field.entries(log)] == [3, 4]
    assert all("(a.csv, row 2)" in e.problem for e in log.ledger.entries)
    assert field.rows(log) == {"used": 2, "stop": 2}


@pytest.mark.parametrize("same", ["start", "end", "both"])
def test_bouts_that_begin_or_end_together_overlap(field, same):
    second = {"start": ("08:00", "08:20"), "end": ("08:05", "08:10"), "both": ("08:00", "08:10")}[same]
    log = field.read([field.bout("08:00", "08:10"), field.bout(*second, zone="sand")])
    assert field.rows(log) == {"used": 1, "stop": 1}


@pytest.mark.parametrize("other", [{"animal": "GY"}, {"species": "redshank"}])
def test_two_animals_may_be_anywhere_at_once(field, other):
    log = field.read([field.bout("08:00", "09:00"), field.bout("08:05", "08:10", **other)])
    assert field.rows(log) == {"used": 2}


def test_another_session_or_another_file_does_not_excuse_an_overlap(field):
    log = field.read([field.bout("08:00", "09:00")], [field.bout("08:05", "08:10", session="s2")])
    assert [(e.file, e.row) for e in log.ledger.entries] == [("b.csv", 2)]
    assert "(a.csv, row 2)" in log.ledger.entries[0].problem


def test_out_of_sight_is_a_place_too(field):
    log = field.read([field.bout("08:00", "08:10", zone="out of sight"), field.bout("08:05", "08:10")])
    assert field.rows(log) == {"out_of_sight": 1, "stop": 1}
    assert "'out of sight' until" in field.problem(log, 3)
    log = field.read([field.bout("08:00", "08:10"), field.bout("08:05", "08:10", zone="not seen")])
    assert field.rows(log) == {"used": 1, "stop": 1}


def test_a_bout_without_length_inside_another_is_no_overlap(field):
    log = field.read([field.bout("08:00", "09:00"), field.bout("08:05", "08:05", zone="sand")])
    assert field.rows(log) == {"used": 2}


def test_rows_need_not_stand_in_order(field):
    log = field.read([field.bout("08:30", "08:40"), field.bout("08:00", "08:10"), field.bout("08:09", "08:20")])
    assert [entry[0] for entry in field.entries(log)] == [4]


def test_set_aside_keeps_the_earlier_bout_and_the_time_of_both_is_told(field):
    log = field.read([field.bout("08:00", "08:10"), field.bout("08:05", "08:20")], problems='overlap = "set_aside"')
    assert field.rows(log) == {"used": 1, "set_aside": 1}
    assert log.ledger.milliseconds == {"used": 600_000, "set_aside": 900_000, "out_of_sight": 0} or (
        +log.ledger.milliseconds == {"used": 600_000, "set_aside": 900_000}
    )
    log.require_usable()


def test_an_exact_repeat_is_set_aside_whatever_the_policy_and_names_the_first(field):
    log = field.read(
        [field.bout(), field.bout("08:10", "08:20"), field.bout(), field.bout()],
        [field.bout(), field.bout("08:20", "08:30")],
    )
    found = [(e.file, e.row, e.problem, e.action) for e in log.ledger.entries]
    assert found == [
        ("a.csv", 4, "repeats a.csv, row 2, exactly", "set_aside"),
        ("a.csv", 5, "repeats a.csv, row 2, exactly", "set_aside"),
        ("b.csv", 2, "repeats a.csv, row 2, exactly", "set_aside"),
    ]
    assert field.rows(log) == {"used": 3, "set_aside": 3}
    assert log.ledger.reasons["set_aside", "exact repeat of an earlier row"] == 3


def test_a_repeat_may_be_spelled_another_way(field):
    first, again = (
        field.bout(),
        field.bout("2026-09-03T06:00:00.000Z", "2026-09-03 08:10+0200", zone=" MUD", species="Dunlin"),
    )
    log = field.read([first, again])
    assert field.rows(log) == {"used": 1, "set_aside": 1}


def test_a_repeat_out_of_sight_leaves_the_out_of_sight_account(field):
    log = field.read([field.bout(zone="out of sight"), field.bout(zone="")])
    assert field.rows(log) == {"out_of_sight": 1, "set_aside": 1}
    assert log.ledger.milliseconds["out_of_sight"] == 600_000


@pytest.mark.parametrize(
    "other", [{"zone": "sand"}, {"animal": "GY"}, {"species": "redshank"}, {"end": "08:11"}, {"session": "s2"}]
)
def test_a_row_that_differs_in_anything_is_no_repeat(field, other):
    log = field.read([field.bout(), field.bout(**other)])
    assert "exact repeat of an earlier row" not in {entry[3] for entry in field.entries(log)}


def table(bouts):
    rows = [
        ("dunlin", animal, "s", "mud", start, start + length, length, "a.csv", n)
        for n, (animal, start, length) in enumerate(bouts, 2)
    ]
    return pd.DataFrame(rows, columns=COLUMNS).astype(
        {"start": np.int64, "end": np.int64, "amount": np.int64, "row": np.int64}
    )


bouts = st.lists(st.tuples(st.sampled_from("AB"), st.integers(0, 60), st.integers(0, 20)), max_size=25)


@settings(max_examples=60, deadline=None)
@given(bouts)
def test_what_is_left_never_overlaps_and_what_is_taken_out_did(found):
    visits = table(found)
    ledger = Ledger()
    ledger.come_in("a.csv", len(visits), int((visits["end"] - visits["start"]).sum()))
    ledger.count("a.csv", "used", len(visits), int((visits["end"] - visits["start"]).sum()))
    left = without_overlaps(without_repeats(visits, ledger), ledger, "set_aside")
    ledger.close()
    for _, mine in left[left["end"] > left["start"]].groupby("animal"):
        ordered = mine.sort_values("start")
        assert all(a <= b for a, b in pairwise(np.ravel(ordered[["start", "end"]].to_numpy()).tolist()))
    for entry in ledger.entries:
        row = visits[visits["row"] == entry.row].iloc[0]
        others = visits[(visits["animal"] == row["animal"]) & (visits["row"] != row["row"])]
        assert (
            (others["start"] < row["end"]) & (row["start"] < others["end"]) | (others["start"] == row["start"])
        ).any()


@settings(max_examples=60, deadline=None)
@given(bouts)
def test_overlaps_are_found_exactly_where_a_comparison_of_all_pairs_finds_any(found):
    unique = table(found).drop_duplicates(["animal", "start", "end"])
    left = without_overlaps(unique, Ledger(), "set_aside")
    long = [(row.animal, row.start, row.end) for row in unique.itertuples() if row.end > row.start]
    clash = any(a[0] == b[0] and a[1] < b[2] and b[1] < a[2] for n, a in enumerate(long) for b in long[:n])
    assert (len(left) < len(unique)) == clash
