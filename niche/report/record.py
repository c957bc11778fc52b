"""The record of a run: what went in, with which program and settings, and how to do it again."""

from __future__ import annotations

import hashlib
import platform
from collections.abc import Sequence
from dataclasses import asdict
from datetime import UTC, datetime
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import TYPE_CHECKING, Any

from niche import __version__
from niche.report.folder import PROGRAM
from niche.study.reading import STUDY_FILE

if TYPE_CHECKING:
    from niche.analysis import Run

_PACKAGES = ("jinja2", "matplotlib", "numpy", "pandas", "pyarrow", "pydantic", "scipy", "seaborn")
"""Packages whose version can move a number or a line of the report."""


def run_record(
    run: Run, *, command: str, created: str, study_file: Path | None, files: Sequence[str]
) -> dict[str, Any]:
    """The record, ready for JSON: nothing in it tells of the machine it ran on.

    Parameters
    ----------
    run : Run
    command : str
        Command line that makes the same results again.
    created : str
        RFC 3339 time.
    study_file : Path, optional
        Study file, or its folder, as it was named; by default the study's folder. With a bare log, name the log: then
        there is no study file.
    files : sequence of str
        Files written beside the record.
    """
    usage = run.analysis.usage
    return {
        "program": PROGRAM,
        "version": __version__,
        "python": platform.python_version(),
        "packages": {name: found for name in _PACKAGES if (found := _version(name)) is not None},
        "command": command,
        "created": created,
        "study": _study(run, study_file),
        "options": {**asdict(run.analysis.options), "unit": usage.unit, "demand": run.study.demand_basis()},
        "inputs": [asdict(file) for file in run.log.files],
        "ledger": [
            {"disposition": name, "rows": rows, "milliseconds": milliseconds}
            for name, rows, milliseconds in run.log.ledger.sums()
        ],
        "files": list(files),
    }


def now() -> str:
    """The present second, RFC 3339."""
    return datetime.now(UTC).replace(microsecond=0).isoformat().replace("+00:00", "Z")


def _study(run: Run, named: Path | None) -> dict[str, str | None]:
    """The study file that settings came from: a folder stands for the file in it, a bare log has none."""
    file = run.study.folder if named is None else named
    if file.is_dir():
        file = file / STUDY_FILE
    there = file.is_file() and file.suffix == ".toml"
    return {
        "title": run.study.title,
        "file": file.as_posix() if there else None,
        "sha256": hashlib.sha256(file.read_bytes()).hexdigest() if there else None,
    }


def _version(package: str) -> str | None:
    try:
        return version(package)
    except PackageNotFoundError:
        return None
