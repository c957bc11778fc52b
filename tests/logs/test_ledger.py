"""The ledger as an account: what each posting does to it, that it refuses to close over a gap, and its table."""

import pytest

from niche.errors import NicheError
from niche.logs.ledger import Entry, Ledger


def entry(row=2, action="set_aside", reason="reason", file="a.csv", milliseconds=0):
    return Entry(file, row, "zone", "creek", reason, "no such zone", action, milliseconds)


def test_an_empty_ledger_closes_on_nothing():
    ledger = Ledger()
    ledger.close()
    assert ledger.sums() == [
        ("read", 0, 0), ("used", 0, 0), ("out_of_sight", 0, 0), ("set_aside", 0, 0), ("stop", 0, 0),
    ]  # fmt: skip
    assert len(ledger.table()) == 0


def test_postings_add_up():
    ledger = Ledger()
    ledger.come_in("a.csv", 5, 900)
    ledger.count("a.csv", "used", 2, 500)
    ledger.count("a.csv", "out_of_sight", 1, 100)
    ledger.dispose([entry(5)], 200)
    ledger.dispose([entry(6, "stop")], 100)
    ledger.note(entry(2, "repaired"))
    ledger.close()
    assert ledger.sums() == [
        ("read", 5, 900), ("used", 2, 500), ("out_of_sight", 1, 100), ("set_aside", 1, 200), ("stop", 1, 100),
    ]  # fmt: skip


@pytest.mark.parametrize(("rows", "milliseconds"), [(3, 500), (1, 500), (2, 499), (2, 501)])
def test_a_ledger_with_a_gap_does_not_close_and_says_by_how_much(rows, milliseconds):
    ledger = Ledger()
    ledger.come_in("a.csv", rows, milliseconds)
    ledger.count("a.csv", "used", 2, 500)
    with pytest.raises(NicheError) as caught:
        ledger.close()
    assert f"{rows} rows read and 2 accounted for, {milliseconds} ms read and 500 accounted for" in str(caught.value)
    assert "defect of niche" in str(caught.value)


def test_one_row_with_two_problems_counts_once_by_its_worst():
    ledger = Ledger()
    ledger.come_in("a.csv", 1, 70)
    ledger.dispose(
        [entry(reason="first"), entry(action="stop", reason="second"), entry(action="stop", reason="third")], 70
    )
    ledger.close()
    assert ledger.reasons == {("stop", "second"): 1}
    assert [(e.reason, e.milliseconds) for e in ledger.entries] == [("first", 0), ("second", 70), ("third", 0)]


def test_a_moved_row_leaves_the_account_it_was_in():
    ledger = Ledger()
    ledger.come_in("a.csv", 2, 300)
    ledger.count("a.csv", "used", 2, 300)
    ledger.move(entry(3, "stop", milliseconds=100), "used")
    ledger.close()
    assert ledger.sums()[1:] == [("used", 1, 200), ("out_of_sight", 0, 0), ("set_aside", 0, 0), ("stop", 1, 100)]
    assert ledger.by_file["a.csv", "used"].tolist() == [1, 200]


def test_a_row_that_moves_from_another_file_opens_a_gap_nowhere_else():
    ledger = Ledger()
    for file in ("a.csv", "b.csv"):
        ledger.come_in(file, 1, 10)
        ledger.count(file, "out_of_sight", 1, 10)
    ledger.move(entry(2, file="b.csv", milliseconds=10), "out_of_sight")
    ledger.close()
    assert ledger.by_file["a.csv", "out_of_sight"].tolist() == [1, 10]
    assert ledger.by_file["b.csv", "out_of_sight"].tolist() == [0, 0]


def test_stops_come_by_file_and_row():
    ledger = Ledger()
    for row, action, file in (
        (2, "stop", "b.csv"),
        (9, "stop", "a.csv"),
        (3, "set_aside", "a.csv"),
        (7, "stop", "a.csv"),
    ):
        ledger.dispose([entry(row, action, file=file)])
    assert [(e.file, e.row) for e in ledger.stops] == [("a.csv", 7), ("a.csv", 9), ("b.csv", 2)]


def test_time_is_counted_in_whole_numbers_of_any_size():
    ledger = Ledger()
    ledger.come_in("a.csv", 3, 3 * 2**62)
    for _ in range(3):
        ledger.count("a.csv", "used", 1, 2**62)
    ledger.close()
    assert ledger.by_file["a.csv", "used"].tolist() == [3, 3 * 2**62]


def test_the_table_has_the_promised_columns_and_order(field):
    log = field.read(
        [
            field.bout(), field.bout("08:10", "08:20", zone="creek"), field.bout("08:20", "08:20"),
            field.bout("08:30", "08:40", zone=""),
        ],
        [field.bout("2026-09-03T09:00Z", "2026-09-03T09:00:00.250Z"), field.bout("09:10", "09:20", animal="")],
        problems='unknown_zone = "set_aside"',
    )  # fmt: skip
    table = log.ledger.table()
    assert list(table.columns) == ["file", "row", "field", "value", "problem", "action", "seconds"]
    assert str(table["row"].dtype) == "Int64"
    assert table["seconds"].dtype == float
    values = [value.replace("rows", "row") for value in table["value"]]
    assert list(zip(table["file"], table["field"], values, table["action"], table["seconds"], strict=True)) == [
        ("a.csv", "", "2 row", "used", 600.0),
        ("a.csv", "", "1 row", "out_of_sight", 600.0),
        ("a.csv", "zone", "creek", "set_aside", 600.0),
        ("a.csv", "end", "2026-09-03T08:20:00+02:00", "flagged", 0.0),
        ("a.csv", "zone", "", "flagged", 0.0),
        ("b.csv", "", "1 row", "used", 0.25),
        ("b.csv", "animal", "", "set_aside", 600.0),
    ]
    assert table["row"].astype("string").fillna("").tolist() == ["", "", "3", "4", "5", "", "3"]
    assert table["seconds"].sum() == log.ledger.milliseconds_read / 1000 == 2400.25


def test_a_file_whose_rows_all_move_away_has_no_line_of_its_own(field):
    log = field.read([field.bout()], [field.bout(), field.bout(zone="creek", animal="GY")])
    table = log.ledger.table()
    assert table[table["row"].isna()]["file"].tolist() == ["a.csv"]
