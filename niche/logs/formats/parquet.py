"""Parquet: typed columns to text, batch by batch. A row is named by its position, the first being row 1."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import timedelta
from pathlib import Path
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc

from niche.errors import LogError
from niche.logs.formats.csv_text import PIECE_CELLS, PIECE_ROWS
from niche.logs.formats.heading import Heading, tidy_heading
from niche.logs.formats.inspector import Inspector
from niche.logs.formats.typed import duration_text, number_text
from niche.logs.formats.wanted import Wanted
from niche.logs.pieces import Piece

ROWS_PER_BYTE = 5000
"""Most rows for each byte of a file beyond `ROWS_FREE`; a column of one value packs to about a tenth of it."""
ROWS_FREE = 10_000_000
TEXT_LIMIT = 1_000_000_000
"""Most bytes of text in a batch."""


def read_parquet(path: Path, wanted: Wanted, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
    """Pieces of a Parquet file.

    Times with a time zone become UTC (``Z``), times without one stay without; durations take the unit that the study
    declares; missing values become empty cells.

    Raises
    ------
    LogError
        The file is missing, damaged, out of all proportion, or a column that the study names is nested.
    """
    import pyarrow.parquet as pq

    name = wanted.name
    try:
        with pq.ParquetFile(path, memory_map=False) as file:
            rows = file.metadata.num_rows
            if rows > ROWS_FREE and rows > ROWS_PER_BYTE * path.stat().st_size:
                size = path.stat().st_size / 1e6
                raise LogError(f"{name}: refused: {rows} rows in {size:.3f} MB; no log packs so well.")
            schema = file.schema_arrow
            chosen = _columns(schema, wanted)
            texts = [n for n in chosen if pa.types.is_string(schema.field(n).type)]
            limit = max(1, min(piece_rows, PIECE_CELLS // max(1, len(chosen))))
            with pq.ParquetFile(path, read_dictionary=texts) as file:
                heading = Heading([tidy_heading(n) for n in chosen], [], [])
                inspector = Inspector(wanted, heading)
                done = 0
                for batch in file.iter_batches(batch_size=limit, columns=chosen):
                    numbers = np.arange(done + 1, done + 1 + batch.num_rows, dtype=np.int64)
                    done += batch.num_rows
                    yield inspector.inspect(numbers, [_text(batch.column(n), n, wanted) for n in chosen])
                if not done:
                    yield inspector.inspect(np.zeros(0, dtype=np.int64), [pa.array([], pa.string()) for _ in chosen])
        if done != rows:
            raise LogError(f"{name}: {done} rows read of {rows} that the file says it has. Copy it again.")
        inspector.finish()
    except FileNotFoundError:
        raise LogError(f"{name}: there is no such file.") from None
    except (pa.ArrowException, OSError, ValueError, KeyError) as error:
        told = str(error).splitlines()[0][:160] if str(error) else type(error).__name__
        raise LogError(f"{name}: cannot be read as Parquet ({told}). Copy it again from where it was made.") from None


def _columns(schema: Any, wanted: Wanted) -> list[str]:
    """Columns to read: all but nested ones, which the study must not name.

    Raises
    ------
    LogError
    """
    names = [tidy_heading(name) for name in schema.names]
    twice = next((n for i, n in enumerate(names) if n in names[:i]), None)
    if twice is not None:
        raise LogError(f"{wanted.name}: the column {twice!r} is there twice. Each column needs a name of its own.")
    chosen = []
    for field in schema:
        kind = field.type.value_type if pa.types.is_dictionary(field.type) else field.type
        if pa.types.is_nested(kind) or pa.types.is_binary(kind) or pa.types.is_large_binary(kind):
            if tidy_heading(field.name) in wanted.fields.values():
                raise LogError(
                    f"{wanted.name}: the column {field.name!r} holds {kind}; a log has one value in each cell. Write it "
                    "as a column of its own type."
                )
            wanted.note(None, field.name, "nested column", f"holds {kind}, not one value a cell; left out")
            continue
        chosen.append(field.name)
    if not chosen:
        raise LogError(f"{wanted.name}: no column holds one value in each cell.")
    return chosen


def _text(column: Any, name: str, wanted: Wanted) -> Any:
    """A typed column as text, missing values empty."""
    kind = column.type
    if pa.types.is_dictionary(kind):
        if pa.types.is_string(kind.value_type) or pa.types.is_large_string(kind.value_type):
            lengths = pc.take(pc.fill_null(pc.binary_length(column.dictionary), 0), pc.fill_null(column.indices, 0))
            if (pc.sum(lengths).as_py() or 0) > TEXT_LIMIT:
                raise LogError(
                    f"{wanted.name}: refused: {len(column)} rows of column {name!r} unpack to more than 1 GB."
                )
        column = column.dictionary_decode()
        return _text(column, name, wanted)
    if pa.types.is_floating(kind):
        return pa.array([number_text(x) if x is not None else "" for x in column.to_pylist()], pa.string())
    if pa.types.is_timestamp(kind) or pa.types.is_time(kind):
        return _clock(column, kind)
    if pa.types.is_duration(kind):
        lengths = column.cast(pa.duration("us"), safe=False).to_pylist()
        return pa.array([_duration(length, name, wanted) for length in lengths], pa.string())
    return pc.fill_null(pc.cast(column, pa.string()), "")


def _clock(column: Any, kind: Any) -> Any:
    """Date and time, or time of day, in ISO 8601, no more decimals of a second than are needed."""
    zoned = pa.types.is_timestamp(kind) and kind.tz is not None
    if zoned:
        column = column.cast(pa.timestamp(kind.unit))  # the instants, in UTC
    text = pc.replace_substring_regex(pc.cast(column, pa.string()), r"(\.\d*?)0+$", r"\1")
    text = pc.replace_substring(pc.replace_substring_regex(text, r"\.$", ""), " ", "T")
    if zoned:
        text = pc.binary_join_element_wise(text, "Z", "")
    return pc.fill_null(text, "")


def _duration(length: timedelta | None, name: str, wanted: Wanted) -> str:
    if length is None:
        return ""
    in_unit = wanted.field_of(tidy_heading(name)) == "duration"
    return duration_text(length, wanted.duration_unit if in_unit else "h:m:s")
