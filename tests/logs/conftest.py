"""Logs of a few lines, written beside a study that reads them."""

from collections import Counter
from dataclasses import dataclass, field

import pytest

from niche.logs import read_logs
from niche.logs.ledger import DISPOSITIONS
from niche.study import study_from_text

HEADER = ("species", "animal", "session", "zone", "start", "end")
UNITS = 'animal = "animal"\nsession = "session"'

STUDY = """\
title = "two waders on a flat"
[logs]
files = {files}
out_of_sight = ["out of sight", "not seen"]
{logs}
[logs.columns]
{units}
{columns}
[logs.problems]
{problems}
[zones]
rows = ["shore"]
columns = ["1", "2", "3"]
layout = [["mud", "sand", "mussel bed"]]
{species}
"""


def bout(start="08:00", end="08:10", *, zone="mud", animal="RW", species="dunlin", session="s1", day="2026-09-03"):
    """A row of a log; a bare time of day gets the date and +02:00, and seconds, for times to the minute are noted."""
    whole = [f"{t}:00" if len(t) == 5 and ":" in t else t for t in (start, end)]
    times = [f"{day}T{t}+02:00" if len(t) == 8 and ":" in t else t for t in whole]
    return [species, animal, session, zone, *times]


def quoted(cell):
    """A cell as RFC 4180 wants it."""
    return '"' + cell.replace('"', '""') + '"' if set(cell) & set('",\r\n') else cell


def text(*rows, header=HEADER):
    return "".join(",".join(quoted(cell) for cell in row) + "\n" for row in [header, *rows])


def check_closed(log):
    """Every row has one disposition, every millisecond one place: by the counters, by the table and by the visits."""
    ledger = log.ledger
    total, *parts = ledger.sums()
    assert [part[0] for part in parts] == list(DISPOSITIONS)
    assert total == ("read", sum(part[1] for part in parts), sum(part[2] for part in parts))
    assert all(type(number) is int and number >= 0 for part in parts for number in part[1:])
    table = ledger.table()
    assert sum(round(seconds * 1000) for seconds in table["seconds"]) == total[2]
    length = log.visits["end"] - log.visits["start"]
    seen = log.visits["zone"] != ""
    kept = {part[0]: part[1:] for part in parts}
    assert kept["used"] == (int(seen.sum()), int(length[seen].sum()))
    assert kept["out_of_sight"] == (int((~seen).sum()), int(length[~seen].sum()))
    lost = {(e.file, e.row) for e in ledger.entries if e.action in ("set_aside", "stop")}
    assert kept["set_aside"][0] + kept["stop"][0] == len(lost)
    assert not lost & set(zip(log.visits["file"], log.visits["row"], strict=True))
    assert sum(ledger.reasons.values()) == len(lost)
    assert {f.name: f.rows for f in log.files} == {f.name: ledger.rows_read[f.name] for f in log.files}


@dataclass
class Field:
    """A place for one study after another."""

    base: object
    count: int = 0
    bout = staticmethod(bout)
    text = staticmethod(text)
    check_closed = staticmethod(check_closed)
    names: list = field(default_factory=lambda: [f"{letter}.csv" for letter in "abcdefgh"])

    def folder(self):
        self.count += 1
        place = self.base / str(self.count)
        place.mkdir()
        return place

    def study(
        self, folder, *, files='["*.csv"]', logs="", units=UNITS, columns='end = "end"', problems="", species=None
    ):
        listed = ("dunlin", "redshank") if species is None else species
        tables = "\n".join(f'[[species]]\nname = "{name}"' for name in listed)
        content = STUDY.format(files=files, logs=logs, units=units, columns=columns, problems=problems, species=tables)
        return study_from_text(content, folder / "study.toml")

    def read(self, *logs, **keys):
        """Read logs given as text, as bytes or as a list of rows; they are called a.csv, b.csv and so on."""
        folder = self.folder()
        for name, log in zip(self.names, logs, strict=False):
            content = text(*log) if isinstance(log, list) else log
            (folder / name).write_bytes(content if isinstance(content, bytes) else content.encode())
        log = read_logs(self.study(folder, **keys))
        check_closed(log)
        return log

    @staticmethod
    def entries(log, row=None):
        """Lines of the ledger as (row, field, value, reason, action), of one row if asked."""
        found = [(e.row, e.field, e.value, e.reason, e.action) for e in log.ledger.entries]
        return sorted((entry for entry in found if row in (None, entry[0])), key=lambda e: (e[0] or 0, *e[1:]))

    @staticmethod
    def rows(log):
        """Rows by disposition, those without any left out."""
        return +Counter({name: rows for name, rows, _ in log.ledger.sums()[1:]})

    @staticmethod
    def problem(log, row):
        (entry,) = (e for e in log.ledger.entries if e.row == row)
        return entry.problem


@pytest.fixture(scope="session")
def field(tmp_path_factory):
    return Field(tmp_path_factory.mktemp("field"))
