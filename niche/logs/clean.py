"""Saves cleaned visits as a Frictionless Data Package with Darwin Core names, and a study file that reads it back."""

from __future__ import annotations

import csv
import hashlib
import io
import json
import shutil
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from niche.errors import OutputError
from niche.logs.engine import Log
from niche.logs.sessions import read_sessions
from niche.logs.standards.clean_study import clean_study
from niche.logs.standards.clean_tables import Column, session_columns, visit_columns, zone_columns, zone_term
from niche.logs.standards.formulas import escape
from niche.study.model import Study

DESCRIPTOR = "datapackage.json"
PROFILE = "https://datapackage.org/profiles/2.0/datapackage.json"
FILES = "niche:files"
"""Key of the descriptor by which a folder is known as written here; it lists what belongs to it."""

_LITTER = {".DS_Store", "Thumbs.db", "desktop.ini"}
_ESCAPED = (
    "Text that a spreadsheet would run as a formula (after any apostrophes it begins with = + - @) has one apostrophe in "
    "front, which is no part of it."
)
_TITLES = {"visits": "Visits of animals to zones", "zones": "Zones", "sessions": "Sessions"}


def write_clean(log: Log, study: Study, folder: Path) -> Path:
    """Save the cleaned visits, the zones and, where known, the sessions.

    Parameters
    ----------
    log : Log
        Read from the study, with nothing that stops the work.
    study : Study
    folder : Path
        May be missing, empty, or written by this function before, which is replaced.

    Returns
    -------
    Path
        The folder.

    Raises
    ------
    LogError
        The log cannot be used as it stands.
    OutputError
        The folder holds something else, or cannot be written.
    """
    log.require_usable()
    tables = {"visits": visit_columns(log.visits, study), "zones": zone_columns(study, log.effort)}
    sessions = read_sessions(study)
    if sessions:
        tables["sessions"] = session_columns(sessions)
    files = {f"{name}.csv": _csv(columns) for name, columns in tables.items()}
    files["study.toml"] = clean_study(study).encode()
    descriptor = _descriptor(log, study, tables, files)
    files[DESCRIPTOR] = (json.dumps(descriptor, indent=2, ensure_ascii=False) + "\n").encode()
    with _whole_folder(folder) as new:
        for name, content in files.items():
            (new / name).write_bytes(content)
    return folder


def _csv(columns: list[Column]) -> bytes:
    """RFC 4180, with text that could be taken for a formula made harmless."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow([escape(column.name) for column in columns])
    cells = [[escape(cell) for cell in c.cells] if c.type == "string" else c.cells for c in columns]
    writer.writerows(zip(*cells, strict=True))
    return stream.getvalue().encode()


def _descriptor(log: Log, study: Study, tables: dict[str, list[Column]], files: dict[str, bytes]) -> dict[str, Any]:
    note = f" {study.note}" if study.note else ""
    return {
        "$schema": PROFILE,
        "name": "cleaned-visits",
        "title": study.title,
        "description": (
            "Visits of watched animals to zones, cleaned: rows that were set aside are not here. Column names are terms of "
            f"Darwin Core (in the term lists of 2025-07-10 and 2026-05-26) where one fits.{note}"
        ),
        "sources": [{"title": file.name, "niche:sha256": file.sha256} for file in log.files],
        "resources": [
            _resource(name, columns, files[f"{name}.csv"], study, tables) for name, columns in tables.items()
        ],
        FILES: [*files, DESCRIPTOR],
    }


def _resource(
    name: str, columns: list[Column], content: bytes, study: Study, tables: dict[str, list[Column]]
) -> dict[str, Any]:
    term = zone_term(study)
    keys = []
    if name == "visits" and any(column.name == term for column in columns):
        keys.append({"fields": [term], "reference": {"resource": "zones", "fields": [term]}})
    schema: dict[str, Any] = {"fields": [column.field() for column in columns], "missingValues": [""]}
    if name != "visits":
        schema["primaryKey"] = [columns[0].name]
    if keys:
        schema["foreignKeys"] = keys
    return {
        "name": name,
        "path": f"{name}.csv",
        "type": "table",
        "title": _TITLES[name],
        "description": f"{_TITLES[name]}. {_ESCAPED}",
        "niche:formulaEscape": True,
        "format": "csv",
        "mediatype": "text/csv",
        "encoding": "utf-8",
        "bytes": len(content),
        "hash": f"sha256:{hashlib.sha256(content).hexdigest()}",
        "dialect": {"delimiter": ",", "lineTerminator": "\r\n", "quoteChar": '"', "doubleQuote": True},
        "schema": schema,
    }


@contextmanager
def _whole_folder(folder: Path) -> Iterator[Path]:
    """A new folder to write into, which takes the place of ``folder`` once it is whole."""
    target = folder.resolve()
    _require_free(target, folder)
    aside = None
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(prefix=f".{target.name}-", dir=target.parent))
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
        raise OutputError(f"{folder}: cannot be written ({error.strerror or error}).") from None
    finally:
        if aside is not None:
            shutil.rmtree(aside, ignore_errors=True)


def _require_free(target: Path, named: Path) -> None:
    """Raise unless the place is free, or holds only what was written here before."""
    try:
        if not target.exists():
            return
        if not target.is_dir():
            raise OutputError(f"{named}: there is a file of this name. Name a folder that is new or empty.")
        there = {path.name for path in target.iterdir()} - _LITTER
    except OSError as error:
        raise OutputError(f"{named}: cannot be looked into ({error.strerror}).") from None
    strangers = sorted(there - set(_written_before(target)))
    if strangers:
        raise OutputError(
            f"{named}: the folder holds {strangers[0]!r}, which `niche check --clean` did not write and replacing the "
            "folder would delete. Name a folder that is new or empty."
        )


def _written_before(target: Path) -> list[str]:
    """Files that an earlier descriptor lists; none where it is not ours."""
    try:
        content = json.loads((target / DESCRIPTOR).read_text(encoding="utf-8"))
    except (OSError, ValueError, RecursionError):
        return []
    listed = content.get(FILES) if isinstance(content, dict) else None
    return [str(name) for name in listed] if isinstance(listed, list) else []
