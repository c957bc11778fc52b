"""Bouts with a start and an end: what becomes of each row, under each policy, and which words go with it."""

import pytest

from niche.errors import LogError

SOUND = 600_000


def test_sound_bouts_become_visits_with_their_place_in_the_file(field):
    log = field.read(
        [
            field.bout(),
            field.bout("08:10", "08:12:30", zone="sand"),
            field.bout(zone="mud", animal="GY", species="redshank"),
        ]
    )
    assert log.visits.to_dict("list") == {
        "species": ["dunlin", "dunlin", "redshank"],
        "animal": ["RW", "RW", "GY"],
        "session": ["s1", "s1", "s1"],
        "zone": ["mud", "sand", "mud"],
        "start": [1_788_415_200_000, 1_788_415_800_000, 1_788_415_200_000],
        "end": [1_788_415_800_000, 1_788_415_950_000, 1_788_415_800_000],
        "amount": [600_000, 150_000, 600_000],
        "file": ["a.csv", "a.csv", "a.csv"],
        "row": [2, 3, 4],
    }
    assert log.ledger.entries == []
    assert field.rows(log) == {"used": 3}
    log.require_usable()


@pytest.mark.parametrize("policy", ["stop", "set_aside"])
@pytest.mark.parametrize(
    ("key", "row", "field_name", "reason", "words", "milliseconds"),
    [
        ("unknown_zone", {"zone": "creek"}, "zone", "unknown zone", ["no such zone", "mud, sand, mussel bed"], SOUND),
        ("unknown_species", {"species": "knot"}, "species", "unknown species", ["not listed", "dunlin, redshank"], SOUND),
        ("unreadable", {"start": "soon"}, "start", "unreadable time", ["ISO 8601", "2026-09-03T08:15:30+02:00"], 0),
        ("unreadable", {"end": "2026-09-31T08:00Z"}, "end", "unreadable time", ["no such date"], 0),
        ("unreadable", {"end": "2026-09-03T08:05"}, "end", "unreadable time", ["no offset"], 0),
        ("end_before_start", {"end": "07:59:59"}, "end", "end before start", ["before the start", "past midnight"], 0),
    ],
)  # fmt: skip
def test_a_row_is_handled_by_its_policy(field, policy, key, row, field_name, reason, words, milliseconds):
    log = field.read([field.bout("07:00", "07:10"), field.bout(**row)], problems=f'{key} = "{policy}"')
    assert field.rows(log) == {"used": 1, policy: 1}
    (entry,) = log.ledger.entries
    assert (entry.file, entry.row, entry.field, entry.reason, entry.action) == ("a.csv", 3, field_name, reason, policy)
    assert entry.value == field.bout(**row)[["species", "animal", "session", "zone", "start", "end"].index(field_name)]
    assert entry.milliseconds == log.ledger.milliseconds[policy] == milliseconds
    assert all(word in entry.problem for word in words)
    if policy == "stop":
        with pytest.raises(LogError, match="1 problem stops the work"):
            log.require_usable()
    else:
        log.require_usable()


@pytest.mark.parametrize("key", ["unknown_zone", "unknown_species", "unreadable", "end_before_start"])
def test_a_policy_bears_on_its_own_problem_only(field, key):
    rows = [
        field.bout(zone="creek"), field.bout(species="knot"), field.bout("soon"), field.bout(end="07:00"),
    ]  # fmt: skip
    log = field.read(rows, problems=f'{key} = "set_aside"')
    assert field.rows(log) == {"set_aside": 1, "stop": 3}
    reason = {"unreadable": "unreadable time"}.get(key, key.replace("_", " "))
    assert log.ledger.reasons["set_aside", reason] == 1


@pytest.mark.parametrize("blank", ["", "  ", "\u00a0"])
@pytest.mark.parametrize(
    ("name", "milliseconds"), [("species", SOUND), ("animal", SOUND), ("session", SOUND), ("start", 0), ("end", 0)]
)
def test_a_cell_without_which_a_bout_means_nothing_sets_the_row_aside(field, name, milliseconds, blank):
    log = field.read([field.bout("07:00", "07:10"), field.bout(**{name: blank})])
    assert field.entries(log) == [(3, name, blank, f"{name} missing", "set_aside")]
    assert log.ledger.milliseconds["set_aside"] == milliseconds
    log.require_usable()


def test_a_missing_cell_stops_nothing_whatever_the_policies(field):
    log = field.read([field.bout(end="")], problems='unreadable = "stop"')
    assert field.rows(log) == {"set_aside": 1}
    with pytest.raises(LogError, match="nothing to compute"):
        log.require_usable()


def test_a_row_with_several_problems_is_one_row_and_the_worst_carries_its_time(field):
    log = field.read([field.bout(animal="", zone="creek", species="knot")], problems='unknown_species = "set_aside"')
    assert field.rows(log) == {"stop": 1}
    assert {(e.field, e.action, e.milliseconds) for e in log.ledger.entries} == {
        ("species", "set_aside", 0), ("animal", "set_aside", 0), ("zone", "stop", SOUND),
    }  # fmt: skip
    assert log.ledger.reasons == {("stop", "unknown zone"): 1}


def test_all_problems_of_a_row_are_told(field):
    log = field.read([field.bout("x", "y", zone="creek", species="knot", animal="", session="")])
    assert {e.field for e in log.ledger.entries} == {"species", "animal", "session", "zone", "start", "end"}
    assert field.rows(log) == {"stop": 1}


def test_a_bout_without_length_is_kept_and_flagged(field):
    log = field.read([field.bout(end="08:00"), field.bout("08:00", "08:10")])
    assert field.rows(log) == {"used": 2}
    assert field.entries(log) == [(2, "end", "2026-09-03T08:00:00+02:00", "zero duration", "flagged")]
    assert log.ledger.milliseconds["used"] == SOUND
    log.require_usable()


def test_24_00_is_read_as_the_next_midnight_and_told(field):
    log = field.read([field.bout("23:50", "24:00:00")])
    assert log.visits["end"].tolist() == [log.visits["start"].item() + SOUND]
    assert field.entries(log) == [(2, "end", "2026-09-03T24:00:00+02:00", "24:00", "repaired")]


def test_a_bout_over_midnight_without_the_new_date_is_carried_on_and_told(field):
    log = field.read([field.bout("23:50", "00:10")])
    assert field.rows(log) == {"used": 1}
    assert (log.visits["end"] - log.visits["start"]).tolist() == [20 * 60_000]
    assert [(e.row, e.field, e.action) for e in log.ledger.entries] == [(2, "end", "repaired")]
    assert "next day" in field.problem(log, 2)


def test_midnight_is_not_guessed_where_the_bout_would_be_long_or_the_study_says_stop(field):
    assert field.rows(field.read([field.bout("12:00", "11:00")])) == {"stop": 1}
    log = field.read([field.bout("23:50", "00:10")], logs='clock = { midnight = "stop" }')
    assert field.rows(log) == {"stop": 1}
    assert "next day's date" in field.problem(log, 2)


def test_local_times_use_the_declared_zone_and_the_changed_hours_stop(field):
    rows = [
        field.bout("2026-10-25T01:50", "2026-10-25T02:10"),
        field.bout("2026-03-29T02:10", "2026-03-29T03:10"),
        field.bout("2026-03-29T01:50", "2026-03-29T03:10"),
    ]
    log = field.read(rows, logs='time_zone = "Europe/Berlin"')
    assert field.rows(log) == {"stop": 2, "used": 1}
    assert "came twice" in field.problem(log, 2)
    assert "does not exist" in field.problem(log, 3)
    assert log.ledger.milliseconds["used"] == 20 * 60_000


def test_times_with_and_without_offset_in_one_file_are_told_apart(field):
    rows = [field.bout(), field.bout("2026-09-03T09:00", "2026-09-03T09:10")]
    log = field.read(rows, logs='time_zone = "Europe/Berlin"')
    assert {(e.row, e.field) for e in log.ledger.entries} == {(3, "start"), (3, "end")}
    assert all("first time has one" in e.problem for e in log.ledger.entries)
    log = field.read(rows[1:], rows[:1], logs='time_zone = "Europe/Berlin"')
    assert field.rows(log) == {"used": 2}


def test_all_ends_without_offset_stop_where_the_starts_have_one(field):
    rows = [field.bout("08:00", "2026-09-03T08:10"), field.bout("08:10", "2026-09-03T08:20")]
    log = field.read(rows, logs='time_zone = "Europe/Berlin"')
    assert {(e.row, e.field) for e in log.ledger.entries} == {(2, "end"), (3, "end")}
    assert field.rows(log) == {"stop": 2}


def test_the_message_of_a_stop_names_file_row_field_and_value(field):
    log = field.read([field.bout(), field.bout("09:00", "09:10", zone="mudd")], [field.bout("x", animal="GY")])
    with pytest.raises(LogError) as caught:
        log.require_usable()
    lines = str(caught.value).splitlines()
    assert lines[0] == "2 problems stop the work:"
    assert lines[1].startswith("a.csv, row 3: zone 'mudd': no such zone; did you mean 'mud'?")
    assert lines[2].startswith("b.csv, row 2: start 'x': not an ISO 8601")
    assert "logs.problems" in lines[-1]
    assert "niche check" in lines[-1]


def test_of_many_stops_eight_are_shown_in_the_order_of_the_log_and_the_rest_counted(field):
    log = field.read([field.bout(zone=f"creek {i}", animal=f"A{i}") for i in range(20)])
    with pytest.raises(LogError) as caught:
        log.require_usable()
    lines = str(caught.value).splitlines()
    assert lines[0].startswith("20 problems")
    assert [line.split(":")[0] for line in lines[1:9]] == [f"a.csv, row {row}" for row in range(2, 10)]
    assert lines[9] == "… and 12 more"


def test_a_log_of_out_of_sight_rows_alone_gives_nothing_to_compute(field):
    log = field.read([field.bout(zone="out of sight")])
    assert field.rows(log) == {"out_of_sight": 1}
    with pytest.raises(LogError, match="No row of the logs tells of an animal in a zone"):
        log.require_usable()


def test_a_log_without_rows_is_read_and_gives_nothing_to_compute(field):
    log = field.read([])
    assert (len(log.visits), log.ledger.sums()[0]) == (0, ("read", 0, 0))
    with pytest.raises(LogError, match="nothing to compute"):
        log.require_usable()
