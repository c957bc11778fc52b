"""Camera events: independent events by a gap, counts, kinds, deployments (faults 4, 37, 42)."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.errors import StudyError
from niche.usage import Usage

HEADER = "deployment,start,end,kind,species,count"
COLUMNS = 'deployment = "deployment"\nstart = "start"\nend = "end"\nkind = "kind"\ncount = "count"'
TABLE = "deployment,zone,start,end\nC1,mud,2026-09-02,2026-09-05\nC2,Sand,2026-09-02 12:00,\n"
CAMERA = '[logs.camera]\ngap = 600\ndeployments = "deployments.csv"'


@pytest.fixture(scope="session")
def run(bench):
    def with_keys(*logs, columns=COLUMNS, camera=CAMERA, problems="", **keys):
        study = bench.study("camera", columns, camera, problems, deployments=TABLE)
        return bench.run(study, HEADER, *logs, **keys)

    return with_keys


def row(start, end="", kind="animal", species="dunlin", count=1, deployment="C1"):
    return [deployment, start, end, kind, species, count]


def test_events_within_the_gap_are_one_and_chain(run, clock, eight):
    found = run([row(clock(0)), row(clock(9)), row(clock(18)), row(clock(28))])
    assert found.stays() == [("C1", "mud", eight, eight, 1), ("C1", "mud", eight + 28 * 60, eight + 28 * 60, 1)]
    assert [line[:4] for line in found.lines("set_aside")] == [
        (3, "start", "2026-09-03T06:09:00Z", "same event"),
        (4, "start", "2026-09-03T06:18:00Z", "same event"),
    ]
    assert found.problem(4).startswith("same event as a.csv, row 2: less than 600 s (`logs.camera.gap`)")
    assert found.rows() == {"used": 2, "set_aside": 2}


def test_length_of_an_event_is_no_time_but_the_gap_starts_at_its_end(run, clock):
    found = run([row(clock(0), clock(40)), row(clock(45))])
    assert found.what("amount") == [(1,)]
    assert found.ledger.milliseconds_read == 0
    assert (found.visits["end"] == found.visits["start"]).all()


def test_most_animals_of_one_moment_count(run, clock, eight):
    found = run([row(clock(0), count=2), row(clock(5), count=2), row(clock(5), count=3), row(clock(8), count=4)])
    assert found.stays() == [("C1", "mud", eight + 300, eight + 300, 5)]
    assert found.rows() == {"used": 2, "set_aside": 2}
    assert found.problem(5).startswith("same event as a.csv, row 3:")


def test_without_a_count_column_an_event_is_one(run, clock):
    found = run([row(clock(0), count=9), row(clock(0), count=8)], columns=COLUMNS.replace('count = "count"', ""))
    assert found.what("amount") == [(1,)]


def test_other_species_and_deployments_are_other_events(run, clock):
    found = run([row(clock(0)), row(clock(1), species="redshank"), row(clock(2), deployment="C2")])
    assert found.what("animal", "species", "zone") == [
        ("C1", "dunlin", "mud"),
        ("C1", "redshank", "mud"),
        ("C2", "dunlin", "sand"),
    ]


def test_gap_of_zero_keeps_every_event(run, clock):
    found = run([row(clock(0), count=2), row(clock(1))], camera=CAMERA.replace("600", "0"))
    assert found.what("amount") == [(1,), (2,)]


def test_what_is_no_animal_is_set_aside_whatever_else_is_wrong(run, clock):
    found = run(
        [
            row(clock(0), kind="blank", species="", count=""),
            row("", kind="human", species="person"),
            row(clock(1), kind="Animal"),
        ]
    )
    assert found.lines("set_aside") == [
        (2, "kind", "blank", "no animal", "set_aside"),
        (3, "kind", "human", "no animal", "set_aside"),
    ]
    assert found.rows() == {"used": 1, "set_aside": 2}


def test_exact_repeat_is_dropped(run, clock):
    found = run([row(clock(0), count=2), row(clock(60))], [row(clock(0), count=2)])
    assert found.what("amount") == [(1,), (2,)]
    assert found.lines("set_aside") == [(2, "", "", "exact repeat of an earlier row", "set_aside")]


def test_events_outside_their_deployment_stop(run, clock):
    found = run(
        [
            row("2026-09-01 23:59"),
            row("2026-09-06 00:00"),
            row("2026-09-05 23:59"),
            row(clock(0, day=9), deployment="C2"),
        ]
    )
    assert [line[:4] for line in found.lines("stop")] == [
        (2, "start", "2026-09-01 23:59", "outside its deployment"),
        (3, "start", "2026-09-06 00:00", "outside its deployment"),
    ]
    assert "was the clock reset?" in found.problem(2)


def test_unknown_deployment_stops_and_what_is_close_is_proposed(run, clock):
    found = run([row(clock(0), deployment="C11")])
    assert found.lines("stop") == [(2, "deployment", "C11", "unknown deployment", "stop")]
    assert found.problem(2) == "not in deployments.csv; did you mean 'C1'?"


def test_end_before_start_stops(run, clock):
    found = run([row(clock(5), clock(4))])
    assert found.lines("stop") == [(2, "end", clock(4), "end before start", "stop")]


def test_events_by_gap_are_noted(run, clock):
    note = run([row(clock(0)), row(clock(6)), row(clock(20))]).note("gap")
    assert note.problem == "independent events by gap: 3 at 300 s, 2 at 600 s (as set), 1 at 1200 s"


def test_known_individuals_are_kept_apart_and_the_deployment_stands_in_for_others(bench, clock):
    columns = 'deployment = "deployment"\ntime = "time"\nanimal = "ring"'
    study = bench.study("camera", columns)
    log = [
        ["C1", clock(0), "dunlin", "RW", "mud"],
        ["C1", clock(1), "dunlin", "BO", "mud"],
        ["C1", clock(2), "dunlin", "", "sand"],
    ]
    found = bench.run(study, "deployment,time,species,ring,zone", log)
    assert found.what("animal", "session", "zone") == [("BO", "C1", "mud"), ("C1", "C1", "sand"), ("RW", "C1", "mud")]


def test_a_zone_must_come_from_somewhere(bench):
    study = bench.study("camera", 'deployment = "deployment"\ntime = "time"\nzone = ""')
    with pytest.raises(StudyError, match=r"logs.columns.zone: missing. Name it, or a table of deployments"):
        bench.run(study, "deployment,time,species", [])


def test_the_deployment_is_the_sampling_unit(bench, clock):
    study = bench.study("camera", COLUMNS, CAMERA, analysis='unit = "session"', deployments=TABLE)
    (study.folder / "deployments.csv").rename(study.folder / "deployments.txt")
    camera = study.logs.camera.model_copy(update={"deployments": "deployments.txt"})
    study = study.model_copy(update={"logs": study.logs.model_copy(update={"camera": camera})})
    log = bench.read(study, HEADER, [row(clock(0)), row(clock(0), deployment="C2"), row(clock(50))])
    assert Usage.from_visits(log.visits, study).units == (("C1", "C2"), ())
    assert log.measure == "events"


def twin(log, gap):
    found = []
    for name in sorted({d for d, _, _ in log}):
        event = None
        for minute, count in sorted((m, c) for d, m, c in log if d == name):
            if event is None or (minute - event[-1][0]) * 60 >= gap:
                event = []
                found.append((name, event))
            event.append((minute, count))
    sums = []
    for name, event in found:
        by_minute = {}
        for minute, count in event:
            by_minute[minute] = by_minute.get(minute, 0) + count
        sums.append((name, max(by_minute.values())))
    return sorted(sums)


@settings(max_examples=15, deadline=None)
@given(data=st.data())
def test_order_and_pieces_change_nothing_and_a_slow_twin_agrees(run, clock, data):
    one = st.tuples(st.sampled_from(["C1", "C2"]), st.integers(0, 40), st.integers(1, 4))
    chosen = data.draw(st.lists(one, min_size=1, max_size=12, unique=True))
    log = [row(clock(minute), count=count, deployment=name) for name, minute, count in chosen]
    first = run(log)
    assert first.what("animal", "amount") == twin(chosen, 600)
    order = data.draw(st.permutations(range(len(log))))
    again = run([log[i] for i in order], cut=data.draw(st.integers(1, 4)), rows=np.array(order) + 2)
    assert again.visits.equals(first.visits)
    assert again.ledger.sums() == first.ledger.sums()
