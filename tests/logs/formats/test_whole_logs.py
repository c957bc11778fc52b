"""Files of every form read to the end by the rule of bouts: one meaning, and faults found where the rules look for them."""

import gzip
from datetime import datetime

import openpyxl
import pandas as pd
import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from niche.logs.single import study_of_log
from niche.tables import csv_text

WATCH = [("RW", "upper sand", "60"), ("GY", "middle mud", "12.5"), ("RW", "middle mud", "30")]


def rows(flat):
    times = [f"2026-09-03T08:{15 + 5 * i}:00+02:00" for i in range(3)]
    return [
        flat.bout(zone, length, animal=animal, start=t) for (animal, zone, length), t in zip(WATCH, times, strict=True)
    ]


@pytest.fixture
def forms(flat):
    """The same log in every form: name to what must be declared."""
    table = [flat.header, *rows(flat)]
    semicolons = [flat.header] + [[cell.replace("12.5", "12,5") for cell in row] for row in rows(flat)]
    flat.write("a.csv", flat.text(table))
    flat.write("b.tsv", flat.text(table, "\t").encode("utf-16"))
    flat.write("c.txt", flat.text(semicolons, ";").encode("utf-8-sig"))
    flat.write("d.csv.gz", gzip.compress(flat.text(table).encode()))
    workbook = openpyxl.Workbook()
    for row in table:
        workbook.active.append([*row[:4], float(row[4]) if row[4][0].isdigit() else row[4]])
    workbook.save(flat.path / "e.xlsx")
    columns = {name: [row[i] for row in rows(flat)] for i, name in enumerate(flat.header)}
    starts = [datetime.fromisoformat(text) for text in columns["start"]]
    typed = {**columns, "start": pa.array(starts, pa.timestamp("s", "UTC")), "duration": [60.0, 12.5, 30.0]}
    pq.write_table(pa.table(typed), flat.path / "f.parquet")
    return ["a.csv", "b.tsv", "c.txt", "d.csv.gz", "e.xlsx", "f.parquet"]


def test_every_form_gives_the_same_visits(flat, forms):
    first = flat.log(forms[0]).visits
    for name in forms:
        log = flat.log(name)
        pd.testing.assert_frame_equal(log.visits.drop(columns=["file", "row"]), first.drop(columns=["file", "row"]))
        assert log.visits["row"].tolist() == ([1, 2, 3] if name == "f.parquet" else [2, 3, 4])
        assert log.ledger.sums()[:2] == [("read", 3, 102_500), ("used", 3, 102_500)]
        log.require_usable()


def test_a_log_without_a_study_may_have_any_form(flat, forms):
    for name in forms:
        assert study_of_log(flat.path / name).zones.names == ("middle mud", "upper sand")


def test_a_copy_of_a_workbook_is_set_aside_row_by_row(flat, forms):
    flat.write("z.xlsx", (flat.path / "e.xlsx").read_bytes())
    log = flat.log("*.xlsx")
    assert log.ledger.reasons == {("set_aside", "copy of another file"): 3}


@pytest.mark.parametrize(
    ("change", "field", "reason"),
    [
        ({"zone": "1-Feb"}, "zone", "zone turned into a date"),
        ({"animal": "9.0E+14"}, "animal", "id turned into a number"),
    ],
)
def test_what_a_spreadsheet_made_of_names_stops(flat, change, field, reason):
    log = flat.log(
        "a.csv", flat.text([flat.header, flat.bout(), flat.bout(**change, start="2026-09-03T10:00:00+02:00")])
    )
    ((row, name, action),) = [(e.row, e.field, e.action) for e in log.ledger.entries if e.reason == reason]
    assert (row, name, action) == (3, field, "stop")


def test_a_zone_that_a_workbook_keeps_as_a_date_stops(flat):
    workbook = openpyxl.Workbook()
    for row in (flat.header, flat.bout(zone=datetime(2026, 2, 1))):  # noqa: DTZ001
        workbook.active.append(row)
    workbook.active["C2"].number_format = "d-mmm"
    workbook.active["E2"] = 60
    workbook.save(flat.path / "a.xlsx")
    log = flat.log("a.xlsx")
    assert [(e.row, e.field, e.value, e.reason, e.action) for e in log.ledger.entries] == [
        (2, "zone", "2026-02-01", "zone turned into a date", "stop")
    ]


def test_a_table_saved_again_holds_no_formula(flat):
    saved = csv_text(pd.DataFrame({"species": ["=1+1", "+x", "-x", "@x", "dunlin"], "n": [1, -2, 3, 4, 5]}))
    assert flat.pieces("a.csv", saved).column("species") == ["'=1+1", "'+x", "'-x", "'@x", "dunlin"]
