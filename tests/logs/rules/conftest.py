"""Rows of a few logs, put through one recording rule in pieces of any size."""

from collections import defaultdict
from dataclasses import dataclass

import numpy as np
import pandas as pd
import pyarrow as pa
import pytest

from niche.logs import read_logs
from niche.logs.ledger import DISPOSITIONS, Ledger
from niche.logs.pieces import Piece
from niche.logs.rules import RULES
from niche.study import study_from_text

STUDY = """\
title = "waders on a flat"
[logs]
files = ["*.csv"]
rule = "{rule}"
time_zone = "Etc/GMT-2"
out_of_sight = ["out of sight"]
{logs}
[logs.columns]
{columns}
[logs.problems]
{problems}
[zones]
rows = ["shore"]
columns = ["1", "2", "3"]
layout = [["mud", "sand", "mussel bed"]]
[[species]]
name = "dunlin"
[[species]]
name = "redshank"
[analysis]
{analysis}
"""


def check_closed(ledger, visits):
    """Rows and milliseconds add up, in the counters and in the table, and visits carry exactly the time used."""
    ledger.close()
    total, *parts = ledger.sums()
    assert [part[0] for part in parts] == list(DISPOSITIONS)
    assert total == ("read", sum(part[1] for part in parts), sum(part[2] for part in parts))
    assert all(number >= 0 for part in parts for number in part[1:])
    assert sum(round(seconds * 1000) for seconds in ledger.table()["seconds"]) == total[2]
    lost = [(e.file, e.row) for e in ledger.entries if e.action in ("set_aside", "stop") and e.row is not None]
    assert len(set(lost)) == ledger.rows["set_aside"] + ledger.rows["stop"]
    assert not set(lost) & set(zip(visits["file"], visits["row"], strict=True))
    length = visits["end"] - visits["start"]
    if (length > 0).any():
        assert length[visits["zone"] != ""].sum() == ledger.milliseconds["used"]
        assert length[visits["zone"] == ""].sum() == ledger.milliseconds["out_of_sight"]


@dataclass
class Result:
    visits: pd.DataFrame
    ledger: Ledger
    rule: object

    def lines(self, *actions, row=...):
        """Lines of the ledger as (row, field, value, reason, action)."""
        found = [e for e in self.ledger.entries if not actions or e.action in actions]
        return [(e.row, e.field, e.value, e.reason, e.action) for e in found if row is ... or e.row == row]

    def problem(self, row, reason=None):
        (line,) = (e for e in self.ledger.entries if e.row == row and reason in (None, e.reason))
        return line.problem

    def note(self, reason):
        (line,) = (e for e in self.ledger.entries if e.row is None and e.reason == reason)
        return line

    def stays(self):
        """Visits as (animal, zone, start, end in seconds, amount), sorted."""
        v = self.visits
        seconds = ((v["start"] // 1000).tolist(), (v["end"] // 1000).tolist())
        return sorted(zip(v["animal"], v["zone"], *seconds, v["amount"].tolist(), strict=True))

    def what(self, *columns):
        """Visits without their place in the files."""
        names = list(columns) or ["species", "animal", "session", "zone", "start", "end", "amount"]
        return sorted(self.visits[names].itertuples(index=False, name=None))

    def rows(self):
        return {action: rows for action, rows, _ in self.ledger.sums()[1:] if rows}


@dataclass
class Bench:
    """A study with one rule; logs are given as header and rows."""

    base: object
    count: int = 0

    def study(self, rule, columns="", logs="", problems="", analysis="", **files):
        self.count += 1
        folder = self.base / str(self.count)
        folder.mkdir()
        for name, text in files.items():
            (folder / f"{name}.csv").write_text(text)
        content = STUDY.format(rule=rule, columns=columns, logs=logs, problems=problems, analysis=analysis)
        return study_from_text(content, folder / "study.toml")

    def run(self, study, header, *logs, cut=None, rows=None):
        """Read logs (lists of rows), called a.csv, b.csv, …; ``cut`` is the most rows a piece."""
        ledger = Ledger()
        rule = RULES[study.logs.rule](study, ledger)
        tables = []
        names = header.split(",")
        for letter, log in zip("abcdefgh", logs, strict=False):
            numbers = np.arange(2, len(log) + 2) if rows is None else np.array(rows)
            step = cut or max(len(log), 1)
            for at in range(0, max(len(log), 1), step):
                part = [[str(cell) for cell in row] for row in log[at : at + step]]
                cells = list(zip(*part, strict=True)) or [()] * len(names)
                columns = {n: pa.array(list(c), type=pa.string()) for n, c in zip(names, cells, strict=True)}
                tables.append(rule.visits(Piece(f"{letter}.csv", numbers[at : at + step].astype(np.int64), columns)))
        tables.append(rule.finish())
        visits = pd.concat(tables, ignore_index=True)
        check_closed(ledger, visits)
        return Result(visits, ledger, rule)

    def read(self, study, header, *logs):
        """The same through files and all of the reading."""
        for letter, log in zip("abcdefgh", logs, strict=False):
            lines = [header, *(",".join(str(cell) for cell in row) for row in log)]
            (study.folder / f"{letter}.csv").write_text("\n".join(lines) + "\n")
        return read_logs(study)


@pytest.fixture(scope="session")
def bench(tmp_path_factory):
    return Bench(tmp_path_factory.mktemp("rules"))


def at(minutes=0.0, seconds=0.0, day=3):
    """A time of 2026-09-03 (or another day) from 08:00 on, at +02:00 by the study."""
    whole = round(minutes * 60 + seconds)
    return f"2026-09-{day:02d} {8 + whole // 3600:02d}:{whole // 60 % 60:02d}:{whole % 60:02d}"


EIGHT = int(pd.Timestamp("2026-09-03T06:00Z").timestamp())
"""08:00 at +02:00 in seconds."""


@pytest.fixture(scope="session")
def clock():
    return at


@pytest.fixture(scope="session")
def eight():
    return EIGHT


def grouped(pairs):
    found = defaultdict(list)
    for key, value in pairs:
        found[key].append(value)
    return found


@pytest.fixture(scope="session")
def group():
    return grouped
