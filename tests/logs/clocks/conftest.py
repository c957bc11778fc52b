"""Logs of a few rows, each with a study that declares how its times are written."""

import csv
from datetime import UTC, datetime, timedelta

import pytest

from niche.logs import read_logs
from niche.study import study_from_text

STUDY = """\
title = "dunlin on a flat (invented)"
[logs]
files = ["*.csv"]
{logs}
[logs.columns]
species = "species"
animal = "animal"
zone = "zone"
{columns}
[logs.clock]
{clock}
[logs.problems]
{problems}
[zones]
rows = ["flat"]
columns = ["1", "2"]
layout = [["upper sand", "middle mud"]]
[[species]]
name = "dunlin"
{more}
"""


class Read:
    """A log that was read, and what became of its rows."""

    def __init__(self, log):
        self.log = log

    def lines(self, row=None):
        """Lines of the ledger about rows: (row, field, value, reason, action)."""
        found = [e for e in self.log.ledger.entries if e.row is not None and row in (None, e.row)]
        return [(e.row, e.field, e.value, e.reason, e.action) for e in sorted(found, key=lambda e: e.row)]

    def said(self, row):
        """The one message about a row."""
        (entry,) = (e for e in self.log.ledger.entries if e.row == row)
        return entry.problem

    def messages(self, row):
        """All messages about a row, in the order in which they were found."""
        return [e.problem for e in self.log.ledger.entries if e.row == row]

    def notes(self):
        """Lines about a file as a whole: (file, reason, action)."""
        return [(e.file, e.reason, e.action) for e in self.log.ledger.entries if e.row is None]

    def spans(self):
        """Start and end of each visit as UTC text, and the row."""
        visits = self.log.visits.sort_values(["file", "row"])
        return [(utc(v.start), utc(v.end), int(v.row)) for v in visits.itertuples()]


def utc(ms):
    """An instant as text; Python's own calendar."""
    return (datetime(1970, 1, 1, tzinfo=UTC) + timedelta(milliseconds=int(ms))).isoformat(timespec="seconds")[:19]


def ms(text):
    """Milliseconds of a UTC time."""
    return (datetime.fromisoformat(text).replace(tzinfo=UTC) - datetime(1970, 1, 1, tzinfo=UTC)) // timedelta(
        milliseconds=1
    )


def make_study(folder, *, columns, logs="", clock="", problems="", more=""):
    return study_from_text(
        STUDY.format(logs=logs, columns=columns, clock=clock, problems=problems, more=more), folder / "study.toml"
    )


@pytest.fixture
def read(tmp_path):
    """Read rows of cells under headings; every row is a dunlin A in the middle mud unless it says otherwise."""

    def reading(headings, *rows, files=None, columns=None, **keys):
        for number, content in enumerate(files or [rows]):
            with (tmp_path / f"{'abc'[number]}.csv").open("w", encoding="utf-8", newline="") as stream:
                writer = csv.writer(stream)
                given = [name for name in ("species", "animal", "zone") if name not in headings]
                writer.writerow([*given, *headings])
                standing = {"species": "dunlin", "animal": "A", "zone": "middle mud"}
                writer.writerows([*(standing[name] for name in given), *row] for row in content)
        known = [h for h in headings if h in ("date", "session", "start", "end", "duration")]
        named = "\n".join(f'{name} = "{name}"' for name in known) if columns is None else columns
        return Read(read_logs(make_study(tmp_path, columns=named, **keys)))

    return reading


@pytest.fixture
def study_of():
    """A study without its log, by the same text."""
    return make_study
