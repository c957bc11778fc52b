"""Switches: each row lasts until the next of its animal and session, or the recorded end (fault 18)."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

HEADER = "species,animal,session,zone,time"
COLUMNS = 'session = "session"\ntime = "time"'
TABLE = 'sessions = { file = "sessions.csv" }'
SESSIONS = "session,start,end\ns1,2026-09-03 08:00,2026-09-03 09:00\ns2,2026-09-04 08:00,\n"


def row(time, zone="mud", animal="RW", session="s1", species="dunlin"):
    return [species, animal, session, zone, time]


@pytest.fixture
def run(bench):
    def with_keys(*logs, sessions=SESSIONS, logs_keys=TABLE, problems="", columns=COLUMNS, **keys):
        study = bench.study("switches", columns, logs_keys, problems, sessions=sessions)
        return bench.run(study, keys.pop("header", HEADER), *logs, **keys)

    return with_keys


def test_a_row_lasts_until_the_next_and_the_last_until_the_end_of_the_session(run, clock, eight):
    found = run([row(clock(0)), row(clock(10), "sand"), row(clock(25), "out of sight"), row(clock(30))])
    assert found.stays() == [
        ("RW", "", eight + 1500, eight + 1800, 300_000),
        ("RW", "mud", eight, eight + 600, 600_000),
        ("RW", "mud", eight + 1800, eight + 3600, 1_800_000),
        ("RW", "sand", eight + 600, eight + 1500, 900_000),
    ]
    assert found.rows() == {"used": 3, "out_of_sight": 1}


def test_last_state_without_an_end_is_set_aside_and_said(run, clock):
    found = run([row(clock(0, day=4), session="s2"), row(clock(5, day=4), "sand", session="s2")])
    assert found.stays()[0][1:2] == ("mud",)
    assert found.lines("set_aside") == [(3, "zone", "sand", "last state has no end", "set_aside")]
    assert found.problem(3).endswith("no end of the session; give session 's2' an end in sessions.csv")


@pytest.mark.parametrize(
    ("session", "keys", "remedy"),
    [
        ("s9", TABLE, "session 's9' is not in sessions.csv"),
        ("s1", "", "name a table of sessions with their ends under `logs.sessions.file`"),
    ],
)
def test_last_state_open_says_what_is_missing_and_may_stop(run, clock, session, keys, remedy):
    found = run([row(clock(0), session=session)], logs_keys=keys, problems='last_state_open = "stop"')
    assert found.lines() == [(2, "zone", "mud", "last state has no end", "stop")]
    assert found.problem(2).endswith(remedy)


def test_a_last_row_out_of_sight_needs_no_end(run, clock):
    found = run([row(clock(0), session="s9"), row(clock(1), "out of sight", session="s9")])
    assert found.rows() == {"used": 1, "out_of_sight": 1}
    assert found.ledger.milliseconds["out_of_sight"] == 0


def test_a_row_that_cannot_be_used_still_ends_the_stay_before_it(run, clock):
    log = [row(clock(0)), row(clock(10), "mudd"), row(clock(15), "sand")]
    found = run(log, problems='unknown_zone = "set_aside"')
    assert [stay[1:] for stay in found.stays()] == [
        ("mud", found.stays()[0][2], found.stays()[0][2] + 600, 600_000),
        ("sand", found.stays()[0][2] + 900, found.stays()[0][2] + 3600, 2_700_000),
    ]
    assert found.ledger.milliseconds["set_aside"] == 300_000
    assert found.lines("set_aside") == [(3, "zone", "mudd", "unknown zone", "set_aside")]


def test_unknown_species_ends_the_stay_of_its_animal(run, clock):
    log = [
        row(clock(0)),
        row(clock(10), species="dunlinn"),
        row(clock(20), "sand"),
        row(clock(5), animal="X", species="q"),
    ]
    found = run(log, problems='unknown_species = "set_aside"')
    assert [stay[4] for stay in found.stays()] == [600_000, 2_400_000]
    assert found.ledger.milliseconds["set_aside"] == 600_000
    assert found.rows() == {"used": 2, "set_aside": 2}


def test_one_moment_in_two_zones_stops_and_takes_the_time_with_it(run, clock):
    found = run([row(clock(0)), row(clock(10), "sand"), row(clock(10), "mussel bed"), row(clock(30))])
    assert [line[0] for line in found.lines("stop")] == [3, 4]
    assert found.lines("stop", row=3)[0][3] == "in two zones at one moment"
    assert "set `logs.problems.overlap`" in found.problem(3)
    assert found.ledger.milliseconds["stop"] == 20 * 60_000
    again = run([row(clock(0)), row(clock(10), "sand"), row(clock(10), "mud")], problems='overlap = "set_aside"')
    assert again.rows() == {"used": 1, "set_aside": 2}


def test_exact_repeat_is_dropped_and_named(run, clock):
    found = run([row(clock(0)), row(clock(10), "sand")], [row(clock(10), "sand")])
    assert found.lines("set_aside") == [(2, "", "", "exact repeat of an earlier row", "set_aside")]
    assert found.problem(2) == "repeats a.csv, row 3, exactly"
    assert found.ledger.milliseconds_read == 3_600_000


def test_rows_outside_the_recorded_session_stop(run, clock):
    found = run([row(clock(0)), row(clock(70), "sand")])
    assert found.lines("stop") == [(3, "time", "2026-09-03T07:10:00Z", "outside its session", "stop")]
    assert "which sessions.csv has from 2026-09-03T06:00:00Z to 2026-09-03T07:00:00Z" in found.problem(3)
    assert found.ledger.milliseconds["used"] == 3_600_000
    early = run([row("2026-09-03 07:30")], problems='end_before_start = "set_aside"')
    assert early.rows() == {"set_aside": 1}
    assert early.ledger.milliseconds["set_aside"] == 5_400_000


def test_a_stay_over_night_stops(run, clock):
    found = run([row(clock(0, day=4), session="s2"), row(clock(1, day=5), "sand", session="s2")])
    assert found.lines("stop") == [(2, "time", "2026-09-04T06:00:00Z", "stay too long", "stop")]
    assert "is a session name used twice" in found.problem(2)


def test_a_row_at_the_end_of_the_session_adds_nothing_and_is_flagged(run, clock):
    found = run([row(clock(0)), row(clock(60), "sand")])
    assert found.lines("flagged") == [(3, "time", "2026-09-03T07:00:00Z", "zero duration", "flagged")]
    assert found.rows() == {"used": 2}


def test_two_observers_keep_two_lines(run, clock):
    log = [[*row(clock(0)), "HB"], [*row(clock(1), "sand"), "LK"], [*row(clock(10), "sand"), "HB"]]
    found = run(log, header=HEADER + ",observer", columns=COLUMNS + '\nobserver = "observer"')
    assert sorted(stay[4] for stay in found.stays()) == [600_000, 3_000_000, 59 * 60_000]


def test_session_column_is_needed(bench, clock):
    from niche.errors import LogError

    study = bench.study("switches", 'time = "time"')
    with pytest.raises(LogError, match=r"logs.columns.session: missing. The rule 'switches' needs"):
        bench.run(study, HEADER, [row(clock(0))])


def twin(log, ends):
    """Row by row: the end is the least later time on the line, or the end of the session."""
    found = []
    for species, animal, session, zone, time in log:
        minute = int(time[11:13]) * 60 + int(time[14:16]) - 480
        later = [
            int(t[11:13]) * 60 + int(t[14:16]) - 480 for s, a, w, _, t in log if (s, a, w) == (species, animal, session)
        ]
        after = [m for m in later if m > minute]
        end = min(after) if after else ends.get(session)
        if end is not None:
            found.append((animal, session, "" if zone == "out of sight" else zone, minute, end))
    return sorted(found)


@settings(max_examples=15, deadline=None)
@given(data=st.data())
def test_order_and_pieces_change_nothing_and_a_slow_twin_agrees(bench, clock, eight, data):
    places = st.sampled_from(["mud", "sand", "mussel bed", "out of sight"])
    keys = st.tuples(st.sampled_from(["RW", "BO"]), st.sampled_from(["s1", "s2", "s3"]), st.integers(0, 59))
    chosen = data.draw(st.dictionaries(keys, places, min_size=1, max_size=14))
    log = [row(clock(minute), zone, animal, session) for (animal, session, minute), zone in chosen.items()]
    sessions = "session,start,end\ns1,2026-09-03 08:00,2026-09-03 09:00\ns2,2026-09-03 08:00,\n"
    study = bench.study("switches", COLUMNS, TABLE, sessions=sessions)
    first = bench.run(study, HEADER, log)
    found = sorted(
        (a, s, z, (start // 1000 - eight) // 60, (end // 1000 - eight) // 60)
        for _, a, s, z, start, end, _ in first.what()
        if end > start or z
    )
    assert found == [stay for stay in twin(log, {"s1": 60}) if stay[4] > stay[3]]
    order = data.draw(st.permutations(range(len(log))))
    again = bench.run(
        study, HEADER, [log[i] for i in order], cut=data.draw(st.integers(1, 4)), rows=np.array(order) + 2
    )
    assert again.visits.equals(first.visits)
    assert again.ledger.sums() == first.ledger.sums()
