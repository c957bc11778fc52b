"""Two observers with one animal at the same time: a finding of its own, and a choice."""

from __future__ import annotations

import pytest

HEADER = "species,animal,session,zone,start,end,observer"
COLUMNS = 'observer = "observer"'


def lines(flat):
    return [
        flat.bout("08:00", "08:10", "HB"),
        flat.bout("08:10", "08:20", "HB", zone="lower mud"),
        flat.bout("08:02", "08:09", "LK", zone="upper sand"),
        flat.bout("08:09", "08:19", "LK", zone="lower mud"),
        flat.bout("09:00", "09:10", "LK"),
    ]


def test_the_work_stops_once_with_both_names_and_the_key(flat):
    log = flat.read(lines(flat), header=HEADER, columns=COLUMNS)
    assert flat.told(log) == [("a.csv", 4, "start", "two observers", "stop")]
    problem = flat.problem(log, 4)
    assert "'HB' and 'LK' both logged 'RW' at this time (a.csv, row 2)" in problem
    assert "2 rows of 'LK'" in problem
    assert '`logs.observer = "HB"`' in problem


def test_the_chosen_observers_rows_count_and_the_others_are_kept_apart(flat):
    log = flat.read(lines(flat), header=HEADER, columns=COLUMNS, logs='observer = "hb"')
    assert flat.told(log) == [("a.csv", row, "start", "second observer", "set_aside") for row in (4, 5)]
    assert "'LK' and 'HB' logged 'RW' at the same time" in flat.problem(log, 4)
    assert "(a.csv, row 3)" in flat.problem(log, 5)
    assert flat.spans(log) == [("upper mud", 0, 600), ("lower mud", 600, 1200), ("upper mud", 3600, 4200)]
    log.require_usable()


def test_the_other_choice_keeps_what_the_chosen_did_not_see(flat):
    log = flat.read(lines(flat), header=HEADER, columns=COLUMNS, logs='observer = "LK"')
    assert [entry[1] for entry in flat.told(log)] == [2, 3]
    assert log.ledger.milliseconds["set_aside"] == 1_200_000


def test_the_one_who_had_the_animal_first_can_count(flat):
    log = flat.read(lines(flat), header=HEADER, columns=COLUMNS, problems='two_observers = "set_aside_later"')
    assert flat.told(log) == [("a.csv", row, "start", "second observer", "set_aside") for row in (4, 5)]


def test_a_choice_that_does_not_settle_it_still_stops(flat):
    log = flat.read(lines(flat), header=HEADER, columns=COLUMNS, logs='observer = "XX"')
    assert [entry[4] for entry in flat.told(log)] == ["stop"]


def test_equal_rows_of_two_observers_are_no_repeat(flat):
    log = flat.read(
        [flat.bout("08:00", "08:10", "HB"), flat.bout("08:00", "08:10", "LK")], header=HEADER, columns=COLUMNS
    )
    assert [entry[3] for entry in flat.told(log)] == ["two observers"]


def test_observers_may_be_in_files_of_their_own_and_told_by_the_sessions_table(flat):
    folder = flat.folder()
    (folder / "a.csv").write_text(f"{HEADER[:-9]}\n{flat.bout('08:00', '08:10')}\n")
    (folder / "b.csv").write_text(f"{HEADER[:-9]}\n{flat.bout('08:05', '08:15', session='s2')}\n")
    watch = "2026-09-03T08:00Z,2026-09-03T09:00Z"
    table = f"session,start,end,observer\ns1,{watch},HB\ns2,{watch},LK\n"
    (folder / "watches.txt").write_text(table)
    from niche.logs import read_logs

    log = read_logs(flat.study(folder, tables='[logs.sessions]\nfile = "watches.txt"'))
    assert [(e.file, e.row, e.reason) for e in log.ledger.stops] == [("b.csv", 2, "two observers")]


def test_one_observer_in_two_places_is_a_plain_overlap(flat):
    log = flat.read(
        [flat.bout("08:00", "08:10", "HB"), flat.bout("08:05", "08:15", " hb ")], header=HEADER, columns=COLUMNS
    )
    assert "overlaps another bout of the same animal" in [entry[3] for entry in flat.told(log)]


def test_a_row_without_observer_is_a_plain_overlap(flat):
    log = flat.read(
        [flat.bout("08:00", "08:10", "HB"), flat.bout("08:05", "08:15", "")], header=HEADER, columns=COLUMNS
    )
    assert [entry[3] for entry in flat.told(log)] == ["overlaps another bout of the same animal"]


@pytest.mark.parametrize("policy", ["stop", "set_aside_later"])
def test_three_observers_and_two_animals(flat, policy):
    rows = [
        flat.bout("08:00", "08:10", "HB"),
        flat.bout("08:01", "08:10", "LK", zone="lower mud"),
        flat.bout("08:02", "08:10", "MM", zone="lower sand"),
        flat.bout("08:00", "08:10", "HB", animal="GY"),
        flat.bout("08:10", "08:20", "LK", animal="GY"),
    ]
    log = flat.read(rows, header=HEADER, columns=COLUMNS, problems=f'two_observers = "{policy}"')
    if policy == "stop":
        assert [(entry[1], entry[3]) for entry in flat.told(log)] == [(3, "two observers"), (4, "two observers")]
    else:
        assert [(entry[1], entry[4]) for entry in flat.told(log)] == [(3, "set_aside"), (4, "set_aside")]
        assert log.ledger.rows["used"] == 3
