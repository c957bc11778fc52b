"""One animal in two places at once: what each policy does with the time, to the millisecond, whatever the row order."""

from __future__ import annotations

from itertools import permutations

import numpy as np
import pandas as pd
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs.ledger import Ledger
from niche.logs.visits import COLUMNS, without_overlaps
from niche.logs.visits.overlaps import takeovers

POLICIES = ("stop", "set_aside", "trim_earlier", "split")


def pair(flat, policy):
    lines = [flat.bout("08:00", "08:00:50"), flat.bout("08:00:20", "08:01:10", zone="upper sand")]
    return flat.read(lines, problems=f'overlap = "{policy}"')


def test_the_work_stops_by_default_and_the_message_offers_every_policy(flat):
    log = flat.read([flat.bout("08:00", "08:00:50"), flat.bout("08:00:20", "08:01:10", zone="upper sand")])
    assert flat.told(log) == [("a.csv", 3, "start", "overlaps another bout of the same animal", "stop")]
    problem = flat.problem(log, 3)
    assert "'RW' is already in 'upper mud' until 2026-09-03T08:00:50Z (a.csv, row 2)" in problem
    assert all(f'"{policy}"' in problem for policy in POLICIES[1:])


def test_set_aside_takes_the_later_bout_out(flat):
    log = pair(flat, "set_aside")
    assert flat.spans(log) == [("upper mud", 0, 50)]
    assert +log.ledger.milliseconds == {"used": 50_000, "set_aside": 50_000}


def test_trim_earlier_ends_the_earlier_bout_where_the_later_starts(flat):
    log = pair(flat, "trim_earlier")
    assert flat.spans(log) == [("upper mud", 0, 20), ("upper sand", 20, 70)]
    assert +log.ledger.rows == {"used": 2}
    assert +log.ledger.milliseconds == {"used": 70_000, "set_aside": 30_000}
    assert flat.told(log) == [("a.csv", 2, "end", "overlap trimmed", "repaired")]
    assert "ended at 2026-09-03T08:00:20Z" in flat.problem(log, 2)
    assert "(a.csv, row 3); 30 s set aside" in flat.problem(log, 2)
    log.require_usable()


def test_split_halves_the_shared_time(flat):
    log = pair(flat, "split")
    assert flat.spans(log) == [("upper mud", 0, 35), ("upper sand", 35, 70)]
    assert +log.ledger.milliseconds == {"used": 70_000, "set_aside": 30_000}
    assert [entry[1] for entry in flat.told(log)] == [2, 3]
    assert "counts from 2026-09-03T08:00:35Z to 2026-09-03T08:01:10Z; 15 s set aside" in flat.problem(log, 3)


@pytest.mark.parametrize(
    ("policy", "spans", "lost"),
    [
        ("trim_earlier", [("upper mud", 0, 20), ("upper sand", 20, 40)], 80_000),
        ("split", [("upper mud", 0, 30), ("upper sand", 30, 40), ("upper mud", 40, 100)], 20_000),
        ("set_aside", [("upper mud", 0, 100)], 20_000),
    ],
)
def test_a_bout_inside_another(flat, policy, spans, lost):
    lines = [flat.bout("08:00", "08:01:40"), flat.bout("08:00:20", "08:00:40", zone="upper sand")]
    log = flat.read(lines, problems=f'overlap = "{policy}"')
    assert flat.spans(log) == spans
    assert log.ledger.milliseconds["set_aside"] == lost


@pytest.mark.parametrize(
    ("policy", "spans"),
    [
        ("trim_earlier", [("upper mud", 0, 20), ("upper sand", 20, 40), ("lower mud", 40, 100)]),
        ("split", [("upper mud", 0, 40), ("upper sand", 40, 60), ("lower mud", 60, 100)]),
        ("set_aside", [("upper mud", 0, 60)]),
        ("stop", [("upper mud", 0, 60)]),
    ],
)
def test_a_chain_of_three_in_every_order_of_rows(flat, policy, spans):
    lines = [
        flat.bout("08:00", "08:01"),
        flat.bout("08:00:20", "08:01:20", zone="upper sand"),
        flat.bout("08:00:40", "08:01:40", zone="lower mud"),
    ]
    for order in permutations(lines):
        log = flat.read(list(order), problems=f'overlap = "{policy}"')
        assert flat.spans(log) == spans


def test_set_aside_keeps_a_bout_that_overlaps_only_one_set_aside(flat):
    lines = [
        flat.bout("08:00", "08:01"),
        flat.bout("08:00:30", "08:02"),
        flat.bout("08:01:30", "08:03", zone="lower mud"),
    ]
    log = flat.read(lines, problems='overlap = "set_aside"')
    assert flat.spans(log) == [("upper mud", 0, 60), ("lower mud", 90, 180)]


def test_of_bouts_that_start_together_none_is_the_earlier_one_to_trim(flat):
    lines = [flat.bout("08:00", "08:01"), flat.bout("08:00", "08:02", zone="upper sand")]
    for order in permutations(lines):
        log = flat.read(list(order), problems='overlap = "trim_earlier"')
        assert [entry[4] for entry in flat.told(log)] == ["stop"]
        assert flat.spans(log) == [("upper mud", 0, 60)]
        (entry,) = log.ledger.stops
        assert "neither is the earlier one" in entry.problem
        assert '"set_aside" or "split"' in entry.problem


@pytest.mark.parametrize("policy", ["trim_earlier", "split"])
def test_time_out_of_sight_is_trimmed_from_its_own_account(flat, policy):
    lines = [flat.bout("08:00", "08:01", zone="out of sight"), flat.bout("08:00:30", "08:01:30")]
    log = flat.read(lines, problems=f'overlap = "{policy}"')
    unseen, used = {"trim_earlier": (30_000, 60_000), "split": (45_000, 45_000)}[policy]
    assert +log.ledger.milliseconds == {"out_of_sight": unseen, "used": used, "set_aside": 30_000}


def test_a_bout_of_which_nothing_is_left_is_set_aside(flat):
    instant = ("2026-09-03T08:00:20.000Z", "2026-09-03T08:00:20.001Z")
    lines = [
        flat.bout("08:00", "08:01:40"),
        flat.bout(*instant, zone="upper sand"),
        flat.bout(*instant, zone="lower mud"),
    ]
    log = flat.read(lines, problems='overlap = "split"')
    assert flat.spans(log) == [("upper mud", 0, 20), ("upper sand", 20, 20.001), ("upper mud", 20.001, 100)]
    assert +log.ledger.rows == {"used": 2, "set_aside": 1}
    assert "no part of it is left" in flat.problem(log, 4)


def table(bouts):
    zones = ["upper sand", "upper mud", "lower mud"]
    rows = [
        ("dunlin", animal, "s", zones[zone], start, start + length, length, "a.csv", n)
        for n, (animal, start, length, zone) in enumerate(bouts, 2)
    ]
    return pd.DataFrame(rows, columns=COLUMNS).astype({"start": np.int64, "end": np.int64, "row": np.int64})


def settled(bouts, policy):
    visits, ledger = table(bouts), Ledger()
    time = int((visits["end"] - visits["start"]).sum())
    ledger.come_in("a.csv", len(visits), time)
    ledger.count("a.csv", "used", len(visits), time)
    left = without_overlaps(visits, ledger, policy)
    ledger.close()
    assert int((left["end"] - left["start"]).sum()) == ledger.milliseconds["used"] == int(left["amount"].sum())
    return left, ledger


BOUTS = st.lists(
    st.tuples(st.sampled_from("AB"), st.integers(0, 60), st.integers(0, 25), st.integers(0, 2)), max_size=14
)
UNIQUE = BOUTS.map(lambda bouts: list(dict.fromkeys(bouts)))


def moments(left, animal):
    """Zone of an animal at each millisecond; fails where it has two."""
    found = {}
    for row in left[left["animal"] == animal].itertuples():
        for moment in range(row.start, row.end):
            assert moment not in found
            found[moment] = row.zone
    return found


@settings(max_examples=60, deadline=None)
@given(UNIQUE, st.sampled_from(["set_aside", "trim_earlier", "split"]), st.randoms())
def test_no_animal_is_left_in_two_places_and_the_order_of_rows_decides_nothing(bouts, policy, random):
    left, _ = settled(bouts, policy)
    shuffled = bouts.copy()
    random.shuffle(shuffled)
    again, _ = settled(shuffled, policy)
    for animal in "AB":
        assert moments(left, animal) == moments(again, animal)


@settings(max_examples=60, deadline=None)
@given(UNIQUE)
def test_split_loses_no_moment_and_gives_each_to_a_bout_that_claims_it(bouts):
    left, _ = settled(bouts, "split")
    for animal in "AB":
        claimed = {}
        for _, start, length, zone in (b for b in bouts if b[0] == animal):
            for moment in range(start, start + length):
                claimed.setdefault(moment, set()).add(["upper sand", "upper mud", "lower mud"][zone])
        found = moments(left, animal)
        assert found.keys() == claimed.keys()
        assert all(zone in claimed[moment] for moment, zone in found.items())


@pytest.mark.parametrize(
    ("start", "end", "parts"),
    [
        ([0, 0], [60, 60], [(0, 0, 30), (1, 30, 60)]),
        ([0, 0, 0], [60, 60, 60], [(0, 0, 30), (1, 30, 45), (2, 45, 60)]),
        ([0, 20, 20], [100, 60, 60], [(0, 0, 40), (1, 40, 50), (2, 50, 60), (0, 60, 100)]),
        ([0, 20, 21], [100, 90, 30], [(0, 0, 25), (2, 25, 30), (0, 30, 55), (1, 55, 90), (0, 90, 100)]),
        ([0, 20, 30], [100, 40, 60], [(0, 0, 30), (1, 30, 40), (0, 40, 45), (2, 45, 60), (0, 60, 100)]),
    ],
)
def test_three_bouts_share(start, end, parts):
    assert takeovers(start, end) == parts


def test_an_odd_millisecond_goes_to_the_later_bout():
    assert takeovers([0, 2], [5, 9]) == [(0, 0, 3), (1, 3, 9)]


def test_a_hundred_thousand_bouts_that_all_hang_together_are_divided_in_seconds():
    start = list(range(100_000))
    parts = takeovers(start, [s + 50_000 for s in start])
    assert parts[0][1] == 0
    assert parts[-1][2] == 149_999
