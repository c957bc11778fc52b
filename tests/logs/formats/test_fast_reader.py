"""The fast reader means the same as the careful one, and both the same as pandas and pyarrow on clean files."""

import csv
import io

import pandas as pd
import pyarrow.csv
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from niche.errors import LogError
from niche.logs.formats import byte_source, csv_text, records
from niche.logs.formats.csv_text import read_csv
from niche.logs.ledger import Ledger

SETTINGS = settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
CELL = st.text(alphabet='ab ,;"\n\r=é', max_size=5)
RAW = st.text(alphabet='ab,"\n\r ', max_size=60)


def outcome(path, take, monkeypatch, *, fast, block):
    with monkeypatch.context() as patch:
        patch.setattr(byte_source, "BLOCK", block)
        patch.setattr(csv_text, "rows_needed", lambda wanted: 2)
        if not fast:
            patch.setattr(records.Records, "next_columns", lambda self, width: None)
        ledger = Ledger()
        try:
            taken = take(read_csv(path, "a.csv", ledger), ledger)
        except LogError as error:
            return str(error)
        return taken.rows, taken.records, sorted(taken.found)


@SETTINGS
@given(rows=st.lists(st.lists(CELL, min_size=3, max_size=3), max_size=12), end=st.sampled_from(["\n", "\r\n"]))
def test_what_a_writer_quotes_comes_back_from_both(flat, monkeypatch, rows, end):
    stream = io.StringIO()
    plain = not any("\r" in cell for row in rows for cell in row)  # the writer leaves a lone return without quotes
    quoting = csv.QUOTE_MINIMAL if plain else csv.QUOTE_ALL
    csv.writer(stream, lineterminator=end, quoting=quoting).writerows(
        [["species", "zone", "note"], ["x", "y", "z"], *rows]
    )
    path = flat.write("a.csv", stream.getvalue())
    careful = outcome(path, flat.take, monkeypatch, fast=False, block=4000)
    assert outcome(path, flat.take, monkeypatch, fast=True, block=20) == careful
    kept = [row for row in rows if any(cell.strip() for cell in row)]
    if isinstance(careful, tuple) and not any(reason == "quote left open" for *_, reason, _ in careful[2]):
        assert careful[1] == [["x", "y", "z"], *kept]


@SETTINGS
@given(raw=RAW, block=st.integers(5, 40))
def test_whatever_stands_in_a_file_both_say_the_same_of_it(flat, monkeypatch, raw, block):
    path = flat.write("a.csv", "species,zone,note\nx,y,z\n" + raw)
    careful = outcome(path, flat.take, monkeypatch, fast=False, block=4000)
    assert outcome(path, flat.take, monkeypatch, fast=True, block=block) == careful


def test_the_fast_reader_is_used_for_clean_chunks_and_only_for_them(flat, monkeypatch):
    used = []
    whole = records.Records.next_columns

    def noted(self, width):
        block = whole(self, width)
        used.append(block and (block[0], len(block[1][0])))
        return block

    monkeypatch.setattr(records.Records, "next_columns", noted)
    monkeypatch.setattr(byte_source, "BLOCK", 1000)
    rows = [flat.header, *[flat.bout(animal=str(i)) for i in range(2, 200)]]
    taken = flat.pieces("a.csv", flat.text(rows))
    assert taken.column("animal") == [str(row) for row in taken.rows]
    assert None not in used[:-1]
    used.clear()
    rows[100][1] = '"two\nlines"'
    taken = flat.pieces("b.csv", flat.text(rows))
    assert taken.rows == [*range(2, 102), *range(103, 201)]
    assert used.count(None) == 1


def test_a_row_lost_by_the_fast_reader_is_read_by_the_careful_one(flat, monkeypatch):
    whole = pyarrow.csv.read_csv
    monkeypatch.setattr(records.fast_csv, "read_csv", lambda *keys: whole(*keys).slice(1))
    rows = [flat.bout(animal=str(i)) for i in range(60)]
    assert flat.pieces("a.csv", flat.text([flat.header, *rows])).column("animal") == [str(i) for i in range(60)]


@pytest.fixture
def clean(flat):
    rows = [
        flat.bout(zone, str(i), animal=f'A"{i}, left' if i % 7 == 0 else f"A{i}")
        for i, zone in enumerate(["upper sand", "middle mud"] * 300)
    ]
    stream = io.StringIO()
    csv.writer(stream).writerows([flat.header, *rows])
    return flat.write("a.csv", stream.getvalue())


def test_pandas_reads_the_same_cells(flat, clean):
    frame = pd.read_csv(clean, dtype=str, keep_default_na=False)
    taken = flat.pieces("a.csv")
    assert taken.headings == list(frame.columns)
    assert taken.records == frame.to_numpy().tolist()


def test_pyarrow_reads_the_same_cells(flat, clean):
    options = pyarrow.csv.ConvertOptions(column_types=dict.fromkeys(flat.header, pyarrow.string()))
    table = pyarrow.csv.read_csv(clean, convert_options=options)
    taken = flat.pieces("a.csv", piece_rows=77)
    assert {name: taken.column(name) for name in taken.headings} == table.to_pydict()
