"""Parquet written by pyarrow and pandas."""

from datetime import UTC, date, datetime, time, timedelta
from decimal import Decimal

import pandas as pd
import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from niche.errors import LogError
from niche.logs.formats import parquet

NAIVE = datetime(2026, 9, 3, 8, 15)  # noqa: DTZ001 - without a zone on purpose
COLUMNS = 'duration = "duration"'


@pytest.fixture
def stored(flat):
    def written(columns, **keys):
        pq.write_table(pa.table(columns), flat.path / "a.parquet")
        return flat.pieces("a.parquet", **keys)

    return written


@pytest.mark.parametrize(
    ("values", "kind", "texts"),
    [
        (["mud", None, ""], pa.string(), ["mud", "", ""]),
        (["mud", None, "mud"], pa.dictionary(pa.int8(), pa.string()), ["mud", "", "mud"]),
        (["mud"], pa.large_string(), ["mud"]),
        ([1, None, -3], pa.int32(), ["1", "", "-3"]),
        ([2**63 + 1], pa.uint64(), ["9223372036854775809"]),
        ([12.0, 0.1, None, float("nan"), 1e16], pa.float64(), ["12", "0.1", "", "", "1e+16"]),
        ([Decimal("1.50")], pa.decimal128(9, 2), ["1.50"]),
        ([True, False, None], pa.bool_(), ["true", "false", ""]),
        ([date(2026, 9, 3), None], pa.date32(), ["2026-09-03", ""]),
        ([NAIVE, None], pa.timestamp("us"), ["2026-09-03T08:15:00", ""]),
        ([NAIVE.replace(microsecond=250_000)], pa.timestamp("ns"), ["2026-09-03T08:15:00.25"]),
        ([NAIVE], pa.timestamp("s"), ["2026-09-03T08:15:00"]),
        ([NAIVE.replace(tzinfo=UTC)], pa.timestamp("ms", "UTC"), ["2026-09-03T08:15:00Z"]),
        ([NAIVE.replace(tzinfo=UTC)], pa.timestamp("ms", "+02:00"), ["2026-09-03T08:15:00Z"]),
        ([time(8, 15, 30)], pa.time64("us"), ["08:15:30"]),
        ([None, None], pa.null(), ["", ""]),
    ],
)
def test_typed_columns_become_one_text(stored, values, kind, texts):
    taken = stored({"species": ["x"] * len(values), "animal": pa.array(values, kind)})
    assert (taken.column("animal"), taken.found) == (texts, [])


@pytest.mark.parametrize(
    ("unit", "texts"),
    [
        ("s", ["93780.5", ""]),
        ("min", ["1563.0083333333334", ""]),
        ("h:m:s", ["26:03:00.500", ""]),
        ("m:s", ["26:03:00.500", ""]),
    ],
)
def test_durations_take_the_unit_of_the_study(stored, unit, texts):
    length = timedelta(hours=26, minutes=3, milliseconds=500)
    columns = {"species": ["x", "y"], "duration": pa.array([length, None], pa.duration("ms"))}
    assert stored(columns, logs=f'duration_unit = "{unit}"').column("duration") == texts


def test_rows_are_named_by_position_from_one(stored):
    taken = stored({"species": [f"s{i}" for i in range(10)]}, piece_rows=3)
    assert taken.rows == list(range(1, 11))
    assert max(taken.sizes) <= 3


def test_totals_and_blank_rows_as_in_text(stored):
    taken = stored({"species": ["dunlin", None, "Total"], "zone": ["mud", None, None]})
    assert taken.rows == [1]
    assert [line[:1] + line[3:] for line in taken.found] == [(2, "blank row", "set_aside"), (3, "totals row", "stop")]


def test_nested_columns_are_refused_if_named_and_left_out_if_not(stored):
    nested = pa.array([["mud"], ["sand"]])
    with pytest.raises(LogError, match="column 'zone' holds list"):
        stored({"species": ["a", "b"], "zone": nested})
    taken = stored({"species": ["a", "b"], "track": nested})
    assert taken.headings == ["species"]
    assert [(line[2], *line[3:]) for line in taken.found] == [("track", "nested column", "flagged")]


def test_a_file_without_rows_gives_its_headings(stored):
    taken = stored({"species": pa.array([], pa.string()), "zone": pa.array([], pa.string())})
    assert (taken.headings, taken.rows) == (["species", "zone"], [])


@pytest.mark.parametrize(
    "spoil", [lambda b: b[:-20], lambda b: b"PAR1", lambda b: b[: len(b) // 2] + b"\0" * (len(b) // 2), lambda b: b""]
)
def test_a_damaged_file_is_an_error_and_no_traceback(flat, spoil):
    pq.write_table(pa.table({"species": ["a"] * 100, "zone": ["b"] * 100}), flat.path / "a.parquet")
    content = spoil((flat.path / "a.parquet").read_bytes())
    with pytest.raises(LogError, match=r"a.parquet: cannot be read as Parquet"):
        flat.pieces("a.parquet", content)


def test_rows_out_of_all_proportion_are_refused_with_their_size(flat, monkeypatch):
    monkeypatch.setattr(parquet, "ROWS_FREE", 1000)
    monkeypatch.setattr(parquet, "ROWS_PER_BYTE", 10)
    pq.write_table(pa.table({"species": pa.array(["a"] * 100_000)}), flat.path / "a.parquet")
    with pytest.raises(LogError, match=r"a.parquet: refused: 100000 rows in 0.00\d MB"):
        flat.pieces("a.parquet")


def test_text_that_unpacks_to_too_much_is_refused(flat, monkeypatch):
    monkeypatch.setattr(parquet, "TEXT_LIMIT", 1_000_000)
    pq.write_table(pa.table({"species": pa.array(["x" * 1000] * 2000)}), flat.path / "a.parquet")
    with pytest.raises(LogError, match="refused: 2000 rows of column 'species'"):
        flat.pieces("a.parquet")


def test_a_missing_file(flat):
    with pytest.raises(LogError, match="there is no such file"):
        flat.pieces("a.parquet")


def test_rows_lost_by_the_reader_are_noticed(flat, monkeypatch):
    pq.write_table(pa.table({"species": ["a"] * 10}), flat.path / "a.parquet")
    whole = pq.ParquetFile.iter_batches
    monkeypatch.setattr(pq.ParquetFile, "iter_batches", lambda self, **keys: list(whole(self, **keys))[:-1])
    with pytest.raises(LogError, match="5 rows read of 10"):
        flat.pieces("a.parquet", piece_rows=5)


def test_pandas_writes_and_reads_the_same_cells(flat):
    frame = pd.DataFrame(
        {
            "species": ["dunlin", "redshank"] * 50,
            "duration": [i / 8 for i in range(100)],
            "start": pd.date_range("2026-09-03T08:00", periods=100, freq="min"),
        }
    )
    frame.to_parquet(flat.path / "a.parquet")
    taken = flat.pieces("a.parquet", piece_rows=33)
    assert taken.column("species") == frame["species"].tolist()
    assert [float(text) for text in taken.column("duration")] == frame["duration"].tolist()
    assert pd.to_datetime(taken.column("start")).tolist() == frame["start"].tolist()
