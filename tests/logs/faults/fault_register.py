"""What a planted fault is: a small log with one fault in it, what must be found, and what the study can answer."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

from niche.logs import Log, read_logs
from niche.study import study_from_text

HEADER = "species,animal,session,zone,start,end\n"
SOUND = "dunlin,RW,s1,upper mud,2026-09-03T08:00:00Z,2026-09-03T08:10:00Z\n"
BOUTS = 'session = "session"\nstart = "start"\nend = "end"'
DURATIONS = 'session = "session"\nstart = "start"\nduration = "duration"'

_STUDY = """\
title = "waders on a tidal flat"
[logs]
files = ["{pattern}"]
out_of_sight = ["out of sight"]
{keys}
[logs.columns]
{columns}
{tables}
[zones]
rows = ["upper", "middle", "lower"]
columns = ["sand", "mud"]
layout = [["upper sand", "upper mud"], ["middle sand", "middle mud"], ["lower sand", "lower mud"]]
{zones}
[[species]]
name = "dunlin"
[[species]]
name = "redshank"
"""


@dataclass(frozen=True)
class Found:
    """A line that the ledger must have: row (None for a whole file), field, action, and words of its message."""

    row: int | None
    field: str
    action: str
    words: tuple[str, ...]
    file: str = "a.csv"


@dataclass(frozen=True)
class Planted:
    """One fault of a field log.

    Attributes
    ----------
    number : int
    fault, default, option : str
        What goes wrong; what happens by default; which key of the study decides otherwise (empty where none can).
    log : str or dict
        Text of ``a.csv``, or several files by name; bytes are written as they are.
    study : dict
        Parts of the study: ``keys`` of ``[logs]``, ``columns``, ``tables`` and ``zones``, ``pattern`` of the files.
    found : tuple of Found
        What the ledger must tell.
    refused : tuple of str
        Words of the error, where the file as a whole is refused.
    rows : dict
        Rows by disposition.
    answer : dict
        Parts of the study that answer the question; with them the work goes on.
    answered : dict
        Rows by disposition then.
    check, check_answered : callable, optional
        Something else that must hold of the log.
    """

    number: int
    fault: str
    default: str
    option: str
    log: str | bytes | dict[str, str | bytes]
    found: tuple[Found, ...] = ()
    rows: dict[str, int] = field(default_factory=dict)
    refused: tuple[str, ...] = ()
    study: dict[str, str] = field(default_factory=dict)
    answer: dict[str, str] = field(default_factory=dict)
    answered: dict[str, int] = field(default_factory=dict)
    check: Callable[[Log], bool] | None = None
    check_answered: Callable[[Log], bool] | None = None

    @property
    def name(self) -> str:
        """Number and a word or two, for the name of a test."""
        return f"{self.number:02d} {self.fault}"

    def read(self, folder: Path, **changes: str) -> Log:
        """Read the planted log, with changes to the study."""
        folder.mkdir(parents=True, exist_ok=True)
        files = self.log if isinstance(self.log, dict) else {"a.csv": self.log}
        for name, content in files.items():
            (folder / name).write_bytes(content if isinstance(content, bytes) else content.encode())
        parts = {"keys": "", "columns": BOUTS, "tables": "", "zones": "", "pattern": "*.csv", **self.study, **changes}
        return read_logs(study_from_text(_STUDY.format(**parts), folder / "study.toml"))


def lengths(log: Log) -> list[float]:
    """Seconds of each visit, in the order of the logs."""
    return ((log.visits["end"] - log.visits["start"]) / 1000).tolist()


def starts(log: Log) -> list[str]:
    """Start of each visit as text in UTC, to the minute."""
    return log.visits["start"].astype("datetime64[ms]").dt.strftime("%Y-%m-%dT%H:%M").tolist()
