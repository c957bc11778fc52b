"""A folder of results appears whole or not at all, and nothing but an earlier report is ever replaced."""

from __future__ import annotations

import json
import shutil
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from niche.errors import OutputError

RECORD = "run.json"
"""File by which a folder is known as written by the program; it lists the files that belong to it."""

PROGRAM = "niche"

_LITTER = {".DS_Store", "Thumbs.db", "desktop.ini"}
"""What file managers leave in any folder they show."""


@contextmanager
def whole_folder(folder: Path) -> Iterator[Path]:
    """Give a new empty folder to write into; on success it takes the place of ``folder``.

    Parameters
    ----------
    folder : Path
        May be missing, empty, or an earlier report, which is replaced.

    Raises
    ------
    OutputError
        The folder holds something that no report wrote, or cannot be written.
    """
    check_folder(folder)
    target = folder.resolve()
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(prefix=f".{target.name}-", dir=target.parent))
    except OSError as error:
        raise _cannot(folder, error) from None
    try:
        new = aside / "new"
        new.mkdir()
        yield new
        _require_free(target, folder)
        if target.exists():
            target.rename(aside / "old")
        try:
            new.rename(target)
        except OSError:
            if (aside / "old").exists():
                (aside / "old").rename(target)
            raise
    except OSError as error:
        raise _cannot(folder, error) from None
    finally:
        shutil.rmtree(aside, ignore_errors=True)


def check_folder(folder: Path) -> None:
    """Raise unless a report may be written to a folder: to be asked before a long run, not after it.

    Raises
    ------
    OutputError
        The folder holds something that no report wrote, or cannot be read.
    """
    _require_free(folder.resolve(), folder)


def write_text(file: Path, text: str) -> None:
    """Write text as UTF-8, line ends as they are; a file name that is no text in UTF-8 is spelled out."""
    file.write_bytes(text.encode("utf-8", errors="backslashreplace"))


def files_below(folder: Path) -> list[str]:
    """Paths of all files in a folder, relative to it, with forward slashes, sorted."""
    return sorted(path.relative_to(folder).as_posix() for path in folder.rglob("*") if not path.is_dir())


def _require_free(target: Path, named: Path) -> None:
    """Raise unless the place may be taken."""
    try:
        if not target.exists():
            return
        if not target.is_dir():
            raise OutputError(f"{named}: there is a file of this name. Name a folder that is new or empty.")
        there = [file for file in files_below(target) if Path(file).name not in _LITTER]
        empty = not any(path.name not in _LITTER for path in target.iterdir())
    except OSError as error:
        raise _cannot(named, error) from None
    if empty:
        return
    record = _record(target / RECORD)
    if record is None:
        raise OutputError(
            f"{named}: the folder is not empty, and it is no earlier report (no {RECORD} written by {PROGRAM}). Name a "
            "folder that is new or empty."
        )
    strangers = sorted(set(there) - set(record))
    if strangers:
        raise OutputError(
            f"{named}: the folder holds {strangers[0]!r}, which no report wrote and replacing the report would delete. "
            "Move it away, or name another folder."
        )


def _record(file: Path) -> list[str] | None:
    """Files that the record of a run lists, the record included; None where it is not such a record."""
    try:
        content: Any = json.loads(file.read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return None
    if not isinstance(content, dict) or content.get("program") != PROGRAM or not isinstance(content.get("files"), list):
        return None
    return [RECORD, *map(str, content["files"])]


def _cannot(folder: Path, error: OSError) -> OutputError:
    return OutputError(f"{folder}: cannot be written ({error.strerror or error}). Name a folder that you may write to.")
