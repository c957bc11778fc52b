"""Which reader a log needs: by the ending of its name."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

from niche.errors import LogError
from niche.logs.formats.csv_text import PIECE_ROWS, read_text
from niche.logs.formats.wanted import Wanted
from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.study.model import Study

TEXT_ENDINGS = (".csv", ".tsv", ".txt")

_ADVICE = {
    ".xls": "save it as .xlsx",
    ".xlsb": "save it as .xlsx",
    ".numbers": "export it as CSV or XLSX",
    ".zip": "unpack it, and name the file inside",
    ".sqlite": 'set `logs.file.database` to its URL, such as "sqlite:///watch.sqlite"',
    ".sqlite3": 'set `logs.file.database` to its URL, such as "sqlite:///watch.sqlite3"',
    ".db": 'set `logs.file.database` to its URL, such as "sqlite:///watch.db"',
    ".pdf": "write the log as CSV",
    ".docx": "write the log as CSV",
    ".rds": "write the log as CSV or Parquet",
    ".json": "write the log as CSV or Parquet",
}


def open_pieces(
    path: Path, name: str, study: Study | None, ledger: Ledger, piece_rows: int = PIECE_ROWS
) -> Iterator[Piece]:
    """Pieces of a log of any form, by the ending of its name.

    Parameters
    ----------
    path : Path
        ``.csv``, ``.tsv``, ``.txt`` (or another ending of a text file), each perhaps with ``.gz``; ``.xlsx``, ``.ods``,
        ``.parquet``.
    name : str
        The file as messages and the ledger call it.
    study : Study, optional
        What it declares under ``logs.file`` and ``logs.columns``; without one, the standard headings are looked for.
    ledger : Ledger
        Takes every row that does not come out in a piece, and what was found about the file.
    piece_rows : int
        Most rows a piece.

    Yields
    ------
    Piece
        In order, every row of the file once; a file without rows gives one empty piece with its headings.

    Raises
    ------
    LogError
        The file cannot be read, or something about it must be declared: the message names the key.
    """
    if study is not None and (study.logs.file.standard is not None or study.logs.file.descriptor is not None):
        from niche.logs.standards import open_standard

        yield from open_standard(path, name, study, ledger)
        return
    wanted = Wanted.of(name, ledger, study)
    suffix = path.suffix.lower()
    if suffix in _ADVICE:
        raise LogError(f"{name}: no log can be read from {suffix} files; {_ADVICE[suffix]}.")
    yield from _reader(suffix)(path, wanted, piece_rows)


def _reader(suffix: str) -> Callable[[Path, Wanted, int], Iterator[Piece]]:
    """Imported where it is needed: most studies need one."""
    if suffix in (".xlsx", ".xlsm"):
        from niche.logs.formats.xlsx import read_xlsx

        return read_xlsx
    if suffix == ".ods":
        from niche.logs.formats.ods import read_ods

        return read_ods
    if suffix == ".parquet":
        from niche.logs.formats.parquet import read_parquet

        return read_parquet
    return read_text
