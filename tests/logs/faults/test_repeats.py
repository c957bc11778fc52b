"""Rows entered twice, in one file or in several."""

from __future__ import annotations


def some(flat):
    return [flat.bout(f"08:{10 * n:02d}", f"08:{10 * n + 9:02d}:30", zone="lower mud") for n in range(5)]


def test_a_log_exported_again_in_another_order_is_said_in_one_note(flat):
    again = some(flat)[::-1]
    log = flat.read(some(flat), again)
    notes = [e for e in log.ledger.entries if e.row is None and e.file == "b.csv" and e.reason == "the same log again"]
    assert [e.problem for e in notes] == [
        "all its rows repeat rows of a.csv, in another order: the same log a second time; leave one of the two out"
    ]
    assert log.ledger.rows["set_aside"] == 5
    assert log.ledger.reasons["set_aside", "exact repeat of an earlier row"] == 5
    assert set(log.visits["file"]) == {"a.csv"}
    assert flat.problem(log, 2, "b.csv") == "repeats a.csv, row 6, exactly"


def test_in_the_same_order_and_only_in_part(flat):
    rows = [
        flat.bout(f"{8 + n // 6:02d}:{10 * (n % 6):02d}", f"{8 + n // 6:02d}:{10 * (n % 6) + 9:02d}:30")
        for n in range(12)
    ]
    log = flat.read(rows, [*rows, flat.bout("12:00", "12:01:30")])
    (note,) = [e for e in log.ledger.entries if e.reason == "the same log again"]
    assert note.problem == "12 of its 13 rows repeat rows of a.csv, in the same order; leave them out of one of the two"


def test_a_repeat_or_two_need_no_note(flat):
    log = flat.read(some(flat), [some(flat)[0], flat.bout("10:00", "10:01:30")])
    assert [entry[1:] for entry in flat.told(log)] == [(2, "start", "exact repeat of an earlier row", "set_aside")]


def test_the_same_bytes_under_two_names(flat):
    log = flat.read(some(flat), some(flat))
    assert log.ledger.rows["set_aside"] == 5
    assert "byte for byte" in flat.problem(log, 2, "b.csv")


def test_rows_of_two_sites_are_no_repeats(flat):
    rows = [flat.bout("08:00", "08:10:30", "north"), flat.bout("08:00", "08:10:30", "south")]
    log = flat.read(
        rows,
        header="species,animal,session,zone,start,end,site",
        columns='site = "site"',
        zones="same_across_sites = true",
        problems='reused_animals = "keep_apart_by_site"',
    )
    assert log.ledger.rows["used"] == 2
