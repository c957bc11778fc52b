"""A table or query of a database, only ever read. A row is named by its position in the result, the first being row 1."""

from __future__ import annotations

import hashlib
import sqlite3
from collections.abc import Iterator
from datetime import timedelta
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pyarrow as pa

from niche.errors import LogError, NicheError
from niche.logs.formats.csv_text import PIECE_CELLS, PIECE_ROWS
from niche.logs.formats.heading import Heading, tidy_heading
from niche.logs.formats.inspector import Inspector
from niche.logs.formats.typed import cell_text, duration_text
from niche.logs.formats.wanted import Wanted
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.study.model import Study

if TYPE_CHECKING:
    from sqlalchemy import Connection, CursorResult, Engine, Select, TextClause
    from sqlalchemy.engine import URL

_SYSTEMS = ("sqlite", "postgresql")
_ROWS_AT_ONCE = 10_000


class DatabaseLog:
    """The database that ``logs.file.database`` names, as a log.

    Parameters
    ----------
    study : Study
        Paths of SQLite files are relative to its folder.

    Raises
    ------
    NicheError
        SQLAlchemy is not installed.
    LogError
        The URL is none, or of a system that cannot be held to reading.
    """

    def __init__(self, study: Study) -> None:
        try:
            from sqlalchemy.engine import make_url
            from sqlalchemy.exc import ArgumentError
        except ImportError:
            raise NicheError(
                "logs.file.database: reading a database needs SQLAlchemy: install niche with the extra, "
                "`niche[database]`."
            ) from None
        form = study.logs.file
        self.study = study
        try:
            self.url: URL = make_url(form.database or "")
        except (ArgumentError, ValueError):
            raise LogError(
                "logs.file.database: not a database URL. Write it like sqlite:///watch.sqlite or "
                "postgresql+psycopg://user@host/name."
            ) from None
        if self.url.get_backend_name() not in _SYSTEMS:
            raise LogError(
                f"logs.file.database: {self.url.get_backend_name()} cannot be held to reading only; allowed: "
                f"{' and '.join(_SYSTEMS)}. Export the table as CSV or Parquet."
            )
        base = Path(self.url.database).name if self.url.database else self.url.get_backend_name()
        self.name = f"{base}: {form.table or 'query'}"
        """The log as messages and the ledger call it."""
        self._hash = hashlib.sha256()

    @property
    def sha256(self) -> str:
        """SHA-256 of the cells read so far, as text: what came out, for a database has no bytes of its own to hash."""
        return self._hash.hexdigest()

    def pieces(self, ledger: Ledger, piece_rows: int = PIECE_ROWS) -> Iterator[Piece]:
        """Pieces of the table or of the result of the query.

        A table is read in the order of its primary key, or of all its columns where it has none; a query in the order
        that it gives itself.

        Raises
        ------
        LogError
            The database cannot be reached, or the table or query cannot be read.
        """
        from sqlalchemy.exc import SQLAlchemyError

        wanted = Wanted.of(self.name, ledger, self.study)
        try:
            engine = self._engine()
            try:
                with engine.connect() as connection:
                    yield from self._read(connection, wanted, piece_rows)
            finally:
                engine.dispose()
        except ImportError as error:
            raise NicheError(f"logs.file.database: {error.name} is not installed; install `niche[database]`.") from None
        except (SQLAlchemyError, sqlite3.Error, ValueError) as error:
            told = str(getattr(error, "orig", None) or error).strip().splitlines()
            password = self.url.password
            line = told[0][:200] if told else type(error).__name__
            line = line.replace(str(password), "***") if password else line
            raise LogError(f"{self.name}: the database cannot be read ({line}). Check `logs.file`.") from None

    def _engine(self) -> Engine:
        from sqlalchemy import create_engine
        from sqlalchemy.pool import NullPool

        if self.url.get_backend_name() == "postgresql":
            return create_engine(self.url, poolclass=NullPool, execution_options={"postgresql_readonly": True})
        if not self.url.database:
            raise LogError("logs.file.database: name the SQLite file, such as sqlite:///watch.sqlite.")
        path = (self.study.folder / self.url.database).resolve()
        if not path.is_file():
            raise LogError(f"{path}: logs.file.database names this file, and there is no such file.")

        def connect() -> sqlite3.Connection:
            # Opened for reading only, or a misspelt name would make a new database.
            connection = sqlite3.connect(f"{path.as_uri()}?mode=ro", uri=True)
            connection.set_authorizer(_only_reading)
            return connection

        return create_engine("sqlite://", creator=connect, poolclass=NullPool)

    def _read(self, connection: Connection, wanted: Wanted, piece_rows: int) -> Iterator[Piece]:
        statement = self._table(connection) if wanted.form.table else self._query(wanted)
        streaming = connection.execution_options(stream_results=True, max_row_buffer=_ROWS_AT_ONCE)
        result: CursorResult[Any] = streaming.execute(statement)
        try:
            yield from self._rows(result, wanted, piece_rows)
        finally:
            result.close()

    def _rows(self, result: CursorResult[Any], wanted: Wanted, piece_rows: int) -> Iterator[Piece]:
        if not result.returns_rows:
            raise LogError("logs.file.query: gives no rows; only a query that reads (SELECT) can be a log.")
        names = [tidy_heading(str(column)) for column in result.keys()]  # noqa: SIM118 - a result is no dict
        twice = next((n for i, n in enumerate(names) if n in names[:i]), None)
        if twice is not None:
            raise LogError(f"{self.name}: the column {twice!r} is there twice. Give each column its own name (AS).")
        self._hash.update("\x1f".join(names).encode())
        inspector = Inspector(wanted, Heading(names, [], []))
        durations = {i for i, n in enumerate(names) if wanted.field_of(n) == "duration"}
        limit, done = max(1, min(piece_rows, PIECE_CELLS // len(names))), 0
        while rows := result.fetchmany(limit):
            first, done = done + 1, done + len(rows)
            columns = [
                pa.array([self._text(row[i], name, i in durations) for row in rows], pa.string())
                for i, name in enumerate(names)
            ]
            for column in columns:
                self._hash.update(b"\x1e" + "\x1f".join(column.to_pylist()).encode())
            yield inspector.inspect(np.arange(first, done + 1, dtype=np.int64), columns)
        if not done:
            yield inspector.inspect(np.zeros(0, dtype=np.int64), [pa.array([], pa.string()) for _ in names])
        inspector.finish()

    def _table(self, connection: Connection) -> Select[Any]:
        """All of a table (``schema.table`` where it lies in one), in a stable order; the rows are counted first."""
        from sqlalchemy import MetaData, Table, select
        from sqlalchemy.exc import NoSuchTableError

        schema, _, table = (self.study.logs.file.table or "").rpartition(".")
        try:
            found = Table(table, MetaData(), schema=schema or None, autoload_with=connection, resolve_fks=False)
        except NoSuchTableError:
            raise LogError(f"{self.name}: no such table, which `logs.file.table` names.") from None
        return select(found).order_by(*(found.primary_key.columns or found.columns))

    def _query(self, wanted: Wanted) -> TextClause:
        from sqlalchemy import text

        query = (wanted.form.query or "").strip().rstrip(";").rstrip()
        if ";" in query:
            raise LogError("logs.file.query: one query only, and a semicolon only at its end.")
        if query.split(maxsplit=1)[0].lower() not in ("select", "with", "values", "table"):
            raise LogError("logs.file.query: must begin with SELECT or WITH; a log is only ever read.")
        if "order by" not in " ".join(query.lower().split()):
            problem = "no ORDER BY: another reading may give the rows in another order, and so other row numbers"
            wanted.note(None, query, "order of rows", problem)
        # A colon in a query is not the mark of a parameter: there are none.
        return text(query.replace("\\", "\\\\").replace(":", "\\:"))

    def _text(self, value: Any, name: str, is_duration: bool) -> str:
        if is_duration and isinstance(value, timedelta):
            return duration_text(value, self.study.logs.duration_unit)
        try:
            return cell_text(value)
        except TypeError as error:
            raise LogError(f"{self.name}: the column {name!r} holds {error}, not one value in each cell.") from None


def _only_reading(action: int, *_: str | None) -> int:
    """Let SQLite do nothing but read this file: no ATTACH of another, no change of settings."""
    allowed = (sqlite3.SQLITE_SELECT, sqlite3.SQLITE_READ, sqlite3.SQLITE_FUNCTION, sqlite3.SQLITE_RECURSIVE)
    reading = action in allowed or action == sqlite3.SQLITE_PRAGMA or action == sqlite3.SQLITE_TRANSACTION
    return sqlite3.SQLITE_OK if reading else sqlite3.SQLITE_DENY
