"""Reads: visits by a gap, tag table, test tags, lone reads (faults 22, 37, 38)."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.errors import StudyError

HEADER = "time,tag,reader"
COLUMNS = 'time = "time"\ntag = "tag"\nantenna = "reader"'
TAGS = """\
tag,animal,species,valid_from,valid_to
T1,RW,dunlin,,
T2,BO,redshank,2026-09-01,2026-09-03
T2,NY,dunlin,2026-09-04,
"""
ZONES = 'zones = { R1 = "mud", R2 = "sand", R3 = "mud", R4 = "Out of sight" }'


@pytest.fixture(scope="session")
def run(bench):
    def with_keys(*logs, reads="gap = 20", problems="", tags=TAGS, **keys):
        text = f'tags = {{ file = "tags.csv" }}\n[logs.reads]\n{reads}\n{ZONES}'
        return bench.run(bench.study("reads", COLUMNS, text, problems, tags=tags), HEADER, *logs, **keys)

    return with_keys


def row(seconds, reader="R1", tag="T1", day=3):
    return [f"2026-09-{day:02d} 08:{seconds // 60:02d}:{seconds % 60:02d}", tag, reader]


def test_reads_within_the_gap_make_a_visit_from_first_to_last(run, eight):
    found = run([row(0), row(20), row(40), row(61), row(70)])
    assert found.stays() == [("RW", "mud", eight, eight + 40, 40_000), ("RW", "mud", eight + 61, eight + 70, 9_000)]
    assert found.rows() == {"used": 5}


def test_a_read_in_another_zone_ends_the_visit(run, eight):
    found = run([row(0), row(10), row(15, "R2"), row(20), row(30)])
    assert [stay[2:4] for stay in found.stays()] == [(eight, eight + 10), (eight + 20, eight + 30)]
    assert found.lines("set_aside") == [(4, "time", "2026-09-03T06:00:15Z", "lone read", "set_aside")]


def test_two_antennas_of_one_zone_make_one_visit(run, eight):
    assert run([row(0), row(15, "R3"), row(30)]).stays() == [("RW", "mud", eight, eight + 30, 30_000)]


def test_an_antenna_can_have_a_gap_of_its_own(run, eight):
    found = run([row(0, "R2"), row(50, "R2"), row(100), row(150)], reads="gap = 20\ngaps = { R2 = 60 }")
    assert found.stays() == [("RW", "sand", eight, eight + 50, 50_000)]
    with pytest.raises(StudyError, match=r"logs.reads.gaps: no antenna 'R9' under `logs.reads.zones`"):
        run([row(0)], reads="gap = 20\ngaps = { R9 = 60 }")


def test_lone_reads_are_set_aside_or_kept_without_time(run, eight):
    found = run([row(0), row(60), row(70)])
    assert found.lines("set_aside") == [(2, "time", "2026-09-03T06:00:00Z", "lone read", "set_aside")]
    assert found.problem(2).startswith("no other read of RW in 'mud' within 20 s; one read alone may be false.")
    kept = run([row(0), row(60), row(70)], reads='gap = 20\nlone = "keep"')
    assert kept.stays()[0] == ("RW", "mud", eight, eight, 0)
    assert kept.rows() == {"used": 3}


def test_test_tags_are_set_aside_and_counted(run):
    found = run(
        [row(0), row(10), row(5, tag="beacon 1"), row(6, "R9", tag="Beacon 1")],
        reads='gap = 20\ntest_tags = ["BEACON 1"]',
    )
    assert found.lines("set_aside") == [
        (4, "tag", "beacon 1", "test tag", "set_aside"),
        (5, "tag", "Beacon 1", "test tag", "set_aside"),
    ]
    assert found.ledger.reasons["set_aside", "test tag"] == 2


def test_a_tag_belongs_to_who_wore_it_then(run):
    found = run([row(s, tag="T2", day=d) for d in (3, 4) for s in (0, 10)])
    assert found.what("species", "animal") == [("dunlin", "NY"), ("redshank", "BO")]


def test_reads_outside_every_validity_and_of_strange_tags_are_set_aside(run):
    tags = TAGS.replace("2026-09-04,", "2026-09-06,")
    found = run([row(0, tag="T2", day=5), row(0, tag="T22"), row(0), row(9)], tags=tags)
    assert found.lines("set_aside") == [
        (2, "tag", "T2", "outside the tag's validity", "set_aside"),
        (3, "tag", "T22", "tag not in the tag table", "set_aside"),
    ]
    assert "by tags.csv (lines 3, 4)" in found.problem(2)
    assert found.problem(3) == "not in tags.csv; did you mean 'T2'?"


def test_a_read_at_an_unknown_antenna_stops_and_ends_the_visit(run, eight):
    found = run([row(0), row(5), row(10, "R7"), row(15), row(18)])
    assert found.lines("stop") == [(4, "antenna", "R7", "unknown antenna", "stop")]
    assert [stay[2:4] for stay in found.stays()] == [(eight, eight + 5), (eight + 15, eight + 18)]


def test_exact_repeat_is_dropped(run):
    found = run([row(0), row(10)], [row(10)])
    assert found.lines("set_aside") == [(2, "", "", "exact repeat of an earlier row", "set_aside")]
    assert found.problem(2, "exact repeat of an earlier row") == "repeats a.csv, row 3, exactly"


def test_one_moment_in_two_zones_stops(run):
    found = run([row(0), row(10), row(10, "R2"), row(20)])
    assert [line[:4] for line in found.lines("stop")] == [
        (3, "time", "2026-09-03T06:00:10Z", "in two zones at one moment"),
        (4, "time", "2026-09-03T06:00:10Z", "in two zones at one moment"),
    ]


def test_a_moment_in_two_zones_belongs_to_no_visit(run, eight):
    log = [row(0), row(5), row(10), row(10, "R2"), row(20, "R2"), row(25, "R2")]
    found = run(log, problems='overlap = "set_aside"')
    assert [stay[1:4] for stay in found.stays()] == [("mud", eight, eight + 5), ("sand", eight + 20, eight + 25)]
    assert found.rows() == {"used": 4, "set_aside": 2}


def test_out_of_sight_antennas_have_their_own_account(run):
    found = run([row(0, "R4"), row(10, "R4")])
    assert found.rows() == {"out_of_sight": 2}
    assert found.ledger.milliseconds["out_of_sight"] == 10_000


def test_time_at_half_and_twice_the_gap_is_noted(run):
    note = run([row(0), row(10), row(30), row(60), row(70)]).note("gap")
    assert (note.file, note.action, note.value) == ("all logs", "flagged", "20 s")
    assert note.problem == (
        "time by gap, lone reads apart: 20 s in 2 visits at 10 s, 40 s in 2 visits at 20 s (as set), "
        "70 s in 1 visits at 40 s"
    )


def test_a_zone_that_is_none_is_named(bench):
    with pytest.raises(
        StudyError, match=r"logs.reads.zones: antenna 'R1' is in 'mudd', which is no zone; did you mean 'mud'"
    ):
        bench.run(bench.study("reads", COLUMNS, '[logs.reads]\ngap = 9\nzones = { R1 = "mudd" }'), HEADER, [])


def test_zone_column_and_animal_column_do_without_tables(bench, eight):
    study = bench.study("reads", 'time = "time"', "reads = { gap = 20 }")
    log = [["dunlin", "RW", "mud", "2026-09-03 08:00:00"], ["dunlin", "RW", "MUD", "2026-09-03 08:00:20"]]
    assert bench.run(study, "species,animal,zone,time", log).stays() == [("RW", "mud", eight, eight + 20, 20_000)]


def test_tag_alone_names_the_animal(bench):
    study = bench.study("reads", 'time = "time"\ntag = "tag"', "reads = { gap = 20 }")
    log = [["dunlin", "T1", "mud", "2026-09-03 08:00:00"], ["dunlin", "T1", "mud", "2026-09-03 08:00:20"]]
    assert bench.run(study, "species,tag,zone,time", log).what("animal") == [("T1",)]


def twin(log, gap):
    """One tag after another, one read after another."""
    zones = {"R1": "mud", "R2": "sand", "R3": "mud"}
    found = []
    for tag in ("T1", "T2"):
        visit = None
        for second, zone in sorted({(s, zones[r]) for s, r, t in log if t == tag}):
            if visit and visit[1] == zone and second - visit[3] <= gap:
                visit[3] = second
            else:
                visit = [{"T1": "RW", "T2": "BO"}[tag], zone, second, second]
                found.append(visit)
    return sorted((a, z, s, e) for a, z, s, e in found if e > s)


@settings(max_examples=20, deadline=None)
@given(data=st.data())
def test_order_and_pieces_change_nothing_and_a_slow_twin_agrees(run, eight, data):
    keys = st.tuples(st.integers(0, 150), st.sampled_from(["T1", "T2"]))
    chosen = data.draw(st.dictionaries(keys, st.sampled_from(["R1", "R2", "R3"]), min_size=1, max_size=16))
    log = [row(second, reader, tag) for (second, tag), reader in chosen.items()]
    first = run(log)
    expected = twin([(second, reader, tag) for (second, tag), reader in chosen.items()], 20)
    assert [(a, z, s - eight, e - eight) for a, z, s, e, _ in first.stays()] == expected
    order = data.draw(st.permutations(range(len(log))))
    again = run([log[i] for i in order], cut=data.draw(st.integers(1, 5)), rows=np.array(order) + 2)
    assert again.visits.equals(first.visits)
    assert again.ledger.sums() == first.ledger.sums()
