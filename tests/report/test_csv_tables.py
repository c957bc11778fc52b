import csv
import io
import math

import numpy as np
import pandas as pd
import pytest

from niche.report import csv_text, report_tables, write_tables
from niche.tables import COLUMNS


def parsed(text):
    return list(csv.reader(io.StringIO(text, newline="")))


def test_every_digit_comes_back():
    values = [1 / 3, 0.1 + 0.2, 1e-300, 123456789.123456789, -2.5, 5e300]
    text = csv_text(pd.DataFrame({"x": values}))
    assert [float(row[0]) for row in parsed(text)[1:]] == values


def test_missing_true_and_boundless_values():
    frame = pd.DataFrame(
        {
            "low": [math.nan, math.inf, -math.inf],
            "core": [True, False, True],
            "row": pd.array([1, None, 3], dtype="Int64"),
            "name": ["a", None, ""],
        }
    )
    assert parsed(csv_text(frame))[1:] == [["", "true", "1", "a"], ["INF", "false", "", ""], ["-INF", "true", "3", ""]]


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r"])
def test_text_that_poses_as_a_formula_is_marked(start):
    text = csv_text(pd.DataFrame({"zone": [f"{start}1+1", f"a{start}b"], "low": [-1.5, 2.0], "units": [-1, 2]}))
    assert parsed(text)[1:] == [[f"'{start}1+1", "-1.5", "-1"], [f"a{start}b", "2.0", "2"]]


def test_headings_are_text_too():
    assert csv_text(pd.DataFrame({"=x": [1]})).startswith("'=x")


def test_lines_end_and_quote_by_the_standard():
    text = csv_text(pd.DataFrame({"zone": ['upper "sand", wet', "two\nlines", "上の砂"]}))
    assert text == 'zone\r\n"upper ""sand"", wet"\r\n"two\nlines"\r\n上の砂\r\n'


def test_a_table_without_rows_keeps_its_header():
    assert csv_text(pd.DataFrame(columns=["species_1", "share"])) == "species_1,share\r\n"


def test_columns_are_as_promised(plain, tmp_path):
    tables = report_tables(plain)
    paths = write_tables(tables, tmp_path / "tables")
    for name, columns in COLUMNS.items():
        with paths[name].open(encoding="utf-8", newline="") as stream:
            assert tuple(next(csv.reader(stream))) == columns
    assert list(tables["ledger"]) == ["file", "row", "field", "value", "problem", "action", "seconds"]
    assert set(paths) == {*COLUMNS, "effort", "effort_by_day", "ledger", "capacity", "assumptions", "inputs"}


def test_numbers_in_files_are_the_numbers_of_the_analysis(plain, tmp_path):
    path = write_tables({"overlap": plain.analysis.table("overlap")}, tmp_path)["overlap"]
    expected = plain.analysis.table("overlap")
    with path.open(encoding="utf-8", newline="") as stream:
        rows = list(csv.DictReader(stream))
    for name in ("estimate", "low", "high", "pooled", "units_1", "undefined"):
        assert [float(row[name]) for row in rows] == expected[name].tolist()
    assert [row["index"] for row in rows] == expected["index"].tolist()


def test_effort_by_day_adds_up_to_the_time_in_view(plain):
    tables = report_tables(plain)
    hours = tables["effort_by_day"].groupby("species")["hours"].sum()
    seconds = tables["effort"].set_index("species")["seconds_in_view"]
    np.testing.assert_allclose(hours[seconds.index] * 3600, seconds)


def test_a_species_never_seen_stands_in_effort_by_day(make):
    table = report_tables(make.run({"dunlin": 0, "redshank": 3}))["effort_by_day"]
    assert table[table["species"] == "dunlin"]["hours"].tolist() == [0.0, 0.0, 0.0]
