"""The tables of a Camtrap DP package: CSV, gzipped CSV or Parquet, as its ``datapackage.json`` names them."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import IO, Any

import pyarrow as pa
import pyarrow.compute as pc

from niche.errors import LogError
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.standards.camtrap_fields import MISSING, VERSIONS
from niche.logs.standards.containers import Package, inside, open_package, opened, read_descriptor
from niche.logs.standards.delimited import PIECE_ROWS, header_of, pieces, records
from niche.logs.standards.descriptors import Reader, dialect_of, short

DESCRIPTOR = "datapackage.json"
_TABLES = ("deployments", "media", "observations")
_MOST_PARQUET = 1 << 30


@dataclass(frozen=True)
class CamtrapPackage:
    """A package, its descriptor read and checked as far as the program relies on it."""

    package: Package
    resources: Mapping[str, Reader]
    individual_animals: bool

    def path(self, table: str) -> str:
        """The file of a table, relative to the descriptor.

        Raises
        ------
        LogError
            It lies outside the package.
        """
        path = _path(self.resources[table])
        inside(path, self.package.name)
        return path

    def pieces(self, table: str, fields: Mapping[str, bool], ledger: Ledger) -> Iterator[Piece]:
        """Pieces of a table with every field of the standard, those that the file leaves out empty.

        Raises
        ------
        LogError
            A required column is missing, or the file cannot be read.
        """
        item = self.resources[table]
        path = _path(item)
        label = self.package.label(path)
        with opened(self.package, path) as stream:
            found = _parquet(stream, label) if path.lower().endswith(".parquet") else _text(stream, item, label, ledger)
            for piece in found:
                missing = next(
                    (name for name, required in fields.items() if required and name not in piece.columns), None
                )
                if missing is not None:
                    raise LogError(f"{label}: no column {missing!r}, which Camtrap DP requires in {table}.")
                blank = pa.array([""] * len(piece.rows), type=pa.string())
                columns = {name: _present(column) for name, column in piece.columns.items()}
                yield Piece(label, piece.rows, {**dict.fromkeys(fields, blank), **columns})


def open_camtrap(path: Path, name: str) -> CamtrapPackage:
    """Open a Camtrap DP package.

    Raises
    ------
    LogError
        It is none, or of a version that is not read.
    """
    package = open_package(path, name, DESCRIPTOR)
    label = package.label(DESCRIPTOR)
    with opened(package, DESCRIPTOR) as stream:
        top = Reader(read_descriptor(stream, label), label)
    profile = top.get("profile", str, "")
    if "camtrap-dp" not in profile:
        raise LogError(f"{label}: profile is {short(profile)}; that of Camtrap DP ends in camtrap-dp-profile.json.")
    version = next((part for part in profile.split("/") if part[:1].isdigit()), "")
    if version and version not in VERSIONS:
        raise LogError(
            f"{label}: Camtrap DP {version}; read are {', '.join(VERSIONS)}. Convert the package to one of these."
        )
    resources = {}
    for number, value in enumerate(top.get("resources", list, []), 1):
        item = Reader(value, f"{label}: resources[{number}]")
        resources[item.get("name", str, "")] = item
    missing = next((table for table in _TABLES if table not in resources), None)
    if missing is not None:
        raise LogError(f"{label}: no resource {missing!r}; Camtrap DP requires {', '.join(_TABLES)}.")
    project = Reader(top.get("project", dict, {}), f"{label}: project")
    return CamtrapPackage(package, resources, project.get("individualAnimals", bool, False))


def _path(item: Reader) -> str:
    path = item.value.get("path")
    if isinstance(path, list) and len(path) == 1:
        path = path[0]
    if not isinstance(path, str):
        raise LogError(f"{item.place}.path: found {short(path)}; one path expected.")
    return path


def _text(stream: IO[bytes], item: Reader, label: str, ledger: Ledger) -> Iterator[Piece]:
    place = f"{item.place}.dialect"
    if isinstance(item.value.get("dialect"), str):
        raise LogError(f"{place}: names another file or address; write the dialect out here instead.")
    dialect = dialect_of(item.get("dialect", dict, {}), place)
    found = records(stream, dialect, label)
    yield from pieces(found, header_of(found, dialect, label), label, ledger)


def _parquet(stream: IO[bytes], label: str) -> Iterator[Piece]:
    """Pieces of a Parquet file, its cells as text; rows are counted from 1, for there is no header line."""
    import numpy as np
    import pyarrow.parquet as pq

    content = stream.read(_MOST_PARQUET + 1)
    if len(content) > _MOST_PARQUET:
        raise LogError(f"{label}: larger than {_MOST_PARQUET} bytes.")
    begun = 0
    try:
        file = pq.ParquetFile(pa.BufferReader(content))
        for batch in file.iter_batches(batch_size=PIECE_ROWS):
            rows = np.arange(begun + 1, begun + len(batch) + 1, dtype=np.int64)
            columns = zip(batch.schema.names, batch.columns, strict=True)
            yield Piece(label, rows, {name: _as_text(column) for name, column in columns})
            begun += len(batch)
        if not begun:
            empty = pa.array([], type=pa.string())
            yield Piece(label, np.array([], dtype=np.int64), dict.fromkeys(file.schema_arrow.names, empty))
    except (pa.ArrowException, OSError, ValueError) as error:
        raise LogError(f"{label}: not a Parquet file that can be read ({error}).") from None


def _as_text(column: Any) -> Any:
    """Cells of a typed column as text: times in ISO 8601 with their offset, empty where there is none."""
    if pa.types.is_timestamp(column.type):
        if column.type.tz is not None:
            column = pc.cast(column, pa.timestamp("ms", tz="UTC"), safe=False)
            text = pc.strftime(column, format="%Y-%m-%dT%H:%M:%SZ")
        else:
            text = pc.strftime(pc.cast(column, pa.timestamp("ms"), safe=False), format="%Y-%m-%dT%H:%M:%S")
    else:
        text = pc.cast(column, pa.string())
    return pc.fill_null(text, "")


def _present(column: Any) -> Any:
    """Cells with the marks of a missing value emptied."""
    missing = pc.is_in(column, value_set=pa.array(MISSING))
    return pc.if_else(missing, "", column)
