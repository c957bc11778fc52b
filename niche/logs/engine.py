"""Reads all logs of a study: files to visits, with the ledger closed over them."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import pandas as pd

from niche.errors import LogError, StudyError
from niche.logs.formats.csv_text import read_csv
from niche.logs.ledger import Entry, Ledger
from niche.logs.rules.bouts import Bouts
from niche.logs.visits import COLUMNS, without_overlaps, without_repeats
from niche.study.model import Study

Progress = Callable[[int, int], None]
"""Called with how much is done and how much there is."""

_SHOWN = 8


@dataclass(frozen=True)
class LogFile:
    """One log file as it was read: its name in messages, its SHA-256, its size and its rows."""

    name: str
    sha256: str
    size: int
    rows: int


@dataclass(frozen=True)
class Log:
    """All logs of a study, read: visits, ledger, files."""

    visits: pd.DataFrame
    ledger: Ledger
    files: tuple[LogFile, ...]

    def require_usable(self) -> None:
        """Raise unless every problem has been dealt with and there is something to compute.

        Raises
        ------
        LogError
            Rows stop the work, or no row tells where an animal was.
        """
        stops = self.ledger.stops
        if stops:
            shown = [f"{e.file}, row {e.row}: {e.field or 'row'} {e.value!r}: {e.problem}." for e in stops[:_SHOWN]]
            more = f"\n… and {len(stops) - _SHOWN} more" if len(stops) > _SHOWN else ""
            problems = "problem stops" if len(stops) == 1 else "problems stop"
            raise LogError(
                f"{len(stops)} {problems} the work:\n"
                + "\n".join(shown)
                + more
                + "\nMend the log, or decide under `logs.problems` in the study file; `niche check` lists everything."
            )
        if not (self.visits["zone"] != "").any():
            raise LogError("No row of the logs tells of an animal in a zone, so there is nothing to compute.")


def log_paths(study: Study) -> list[Path]:
    """Files that the study's patterns name, sorted, each once.

    Raises
    ------
    StudyError
        A pattern names no file.
    """
    found: dict[Path, None] = {}
    for number, pattern in enumerate(study.logs.files, 1):
        matched = _matching(study.folder, pattern)
        if not matched:
            raise StudyError(
                f"logs.files[{number}]: {pattern!r} names no file in {study.folder.resolve()}. Paths are relative to the "
                "study file; * stands for any letters of a name."
            )
        found.update(dict.fromkeys(matched))
    return list(found)


def _matching(folder: Path, pattern: str) -> list[Path]:
    """Files that a pattern names: the file of just that name, else all that fit."""
    try:
        if (folder / pattern).is_file():
            return [folder / pattern]
        absolute = Path(pattern).is_absolute()
        root = Path(Path(pattern).anchor) if absolute else folder
        below = Path(pattern).relative_to(root) if absolute else Path(pattern)
        found = root.glob(str(below)) if below.parts else ()  # "." and "/" are folders, and no pattern
        return sorted(path for path in found if path.is_file())
    except (OSError, ValueError):  # a name too long, or a pattern that is none, such as "**x"
        return []


def read_logs(study: Study, progress: Progress | None = None) -> Log:
    """Read every log of a study.

    Parameters
    ----------
    study : Study
    progress : callable, optional
        Called after each file with bytes done and bytes in all.

    Returns
    -------
    Log
        Also when rows stop the work: `Log.require_usable` tells.

    Raises
    ------
    StudyError, LogError
        A file is missing, or cannot be read as a log at all.
    """
    paths = log_paths(study)
    sizes = [path.stat().st_size for path in paths]
    ledger, tables, files = Ledger(), [], []
    seen: dict[str, str] = {}
    for number, (path, size) in enumerate(zip(paths, sizes, strict=True)):
        name = _name(path, study.folder)
        digest = _sha256(path)
        rule = Bouts(study, ledger)
        if digest in seen and size:
            _set_aside_copy(path, name, seen[digest], ledger)
        else:
            tables += [rule.visits(piece) for piece in read_csv(path, name, ledger)]
        seen.setdefault(digest, name)
        files.append(LogFile(name, digest, size, ledger.rows_read[name]))
        if progress is not None:
            progress(sum(sizes[: number + 1]), sum(sizes))
    visits = pd.concat(tables, ignore_index=True) if tables else pd.DataFrame(columns=COLUMNS)
    visits = without_repeats(visits, ledger)
    visits = without_overlaps(visits, ledger, study.logs.problems.overlap)
    ledger.close()
    return Log(visits, ledger, tuple(files))


def _name(path: Path, folder: Path) -> str:
    """The file as messages call it: relative to the study where it lies below it."""
    try:
        return path.relative_to(folder).as_posix()
    except ValueError:
        return path.as_posix()


def _sha256(path: Path) -> str:
    try:
        with path.open("rb") as stream:
            return hashlib.file_digest(stream, "sha256").hexdigest()
    except OSError as error:
        raise LogError(f"{path}: cannot be read ({error.strerror}).") from None


def _set_aside_copy(path: Path, name: str, original: str, ledger: Ledger) -> None:
    """A file whose every byte repeats another file's adds nothing but rows to account for."""
    for piece in read_csv(path, name, ledger):
        ledger.come_in(name, len(piece.rows))
        for row in piece.rows.tolist():
            problem = f"the file repeats {original} byte for byte"
            ledger.dispose([Entry(name, row, "", "", "copy of another file", problem, "set_aside")])
