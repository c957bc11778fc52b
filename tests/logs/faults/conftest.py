"""A tidal flat to read small logs on: text in, log and ledger out."""

from __future__ import annotations

import sys
from dataclasses import dataclass
from pathlib import Path

import pytest

from niche.logs import Log, read_logs
from niche.study import Study, study_from_text

sys.path.insert(0, str(Path(__file__).parent))  # the register and the page that is written from it

HEADER = "species,animal,session,zone,start,end"

STUDY = """\
title = "waders on a tidal flat"
[logs]
files = ["*.csv"]
out_of_sight = ["out of sight"]
{logs}
[logs.columns]
session = "session"
start = "start"
end = "end"
{columns}
{tables}
[logs.problems]
{problems}
[zones]
rows = ["upper", "middle", "lower"]
columns = ["sand", "mud"]
layout = {layout}
{zones}
{species}
[analysis]
{analysis}
"""
LAYOUT = '[["upper sand", "upper mud"], ["middle sand", "middle mud"], ["lower sand", "lower mud"]]'


def bout(start, end, *more, zone="upper mud", animal="RW", species="dunlin", session="s1"):
    """A line of a log; times of day in UTC on one day, seconds if there are none."""
    day = [t if "T" in t else f"2026-09-03T{t if t.count(':') == 2 else t + ':00'}Z" for t in (start, end)]
    return ",".join([species, animal, session, zone, *day, *more])


@dataclass
class Flat:
    """Reads logs given as lines, in a folder of its own for each."""

    base: Path
    count: int = 0
    bout = staticmethod(bout)

    def study(self, folder: Path, **parts: str) -> Study:
        listed = parts.pop("species", "dunlin redshank")
        species = "\n".join(f'[[species]]\nname = "{name}"' for name in listed.split())
        keys = dict.fromkeys(("logs", "columns", "tables", "problems", "zones", "analysis"), "")
        return study_from_text(
            STUDY.format(**{**keys, "layout": LAYOUT, **parts}, species=species), folder / "study.toml"
        )

    def folder(self) -> Path:
        self.count += 1
        place = self.base / str(self.count)
        place.mkdir()
        return place

    def read(self, *files: list[str], header: str = HEADER, **parts: str) -> Log:
        """Read logs, called a.csv, b.csv and so on."""
        folder = self.folder()
        for name, lines in zip("abcdef", files, strict=False):
            (folder / f"{name}.csv").write_text("\n".join([header, *lines]) + "\n", encoding="utf-8")
        log = read_logs(self.study(folder, **parts))
        check_closed(log)
        return log

    @staticmethod
    def told(log: Log) -> list[tuple[str, int | None, str, str, str]]:
        """Lines of the ledger as (file, row, field, reason, action), without the note on how finely times are written."""
        return [
            (e.file, e.row, e.field, e.reason, e.action)
            for e in sorted(log.ledger.entries, key=lambda e: (e.file, e.row or 0))
            if e.reason != "resolution" and "known to ±" not in e.reason
        ]

    @staticmethod
    def problem(log: Log, row: int | None, file: str = "a.csv", reason: str = "") -> str:
        (entry,) = (e for e in log.ledger.entries if (e.file, e.row) == (file, row) and reason in e.reason)
        return entry.problem

    @staticmethod
    def spans(log: Log) -> list[tuple[str, int, int]]:
        """Zone, start and end of each visit, in seconds after 2026-09-03T08:00Z, in order of time."""
        begin = 1_788_422_400_000
        visits = log.visits.sort_values(["start", "end", "zone"])
        cells = (visits[name].tolist() for name in ("zone", "start", "end"))
        return [(zone, (a - begin) / 1000, (b - begin) / 1000) for zone, a, b in zip(*cells, strict=True)]


def check_closed(log: Log) -> None:
    """All rows and milliseconds have one place, in the counters, in the table and in the visits."""
    (_, rows, time), *parts = log.ledger.sums()
    assert rows == sum(part[1] for part in parts)
    assert time == sum(part[2] for part in parts)
    assert all(part[1] >= 0 and part[2] >= 0 for part in parts)
    by_name = {name: milliseconds for name, _, milliseconds in parts}
    table = log.ledger.table()
    seconds = (table["seconds"] * 1000).round().astype("int64").groupby(table["action"]).sum()
    assert {name: int(seconds.get(name, 0)) for name in by_name} == by_name
    length = log.visits["end"] - log.visits["start"]
    seen = log.visits["zone"] != ""
    if log.measure == "time" and len(log.visits) and (length > 0).any():
        assert int(length[seen].sum()) == by_name["used"] == int(log.visits["amount"][seen].sum())
        assert int(length[~seen].sum()) == by_name["out_of_sight"]


@pytest.fixture(scope="session")
def flat(tmp_path_factory: pytest.TempPathFactory) -> Flat:
    return Flat(tmp_path_factory.mktemp("flat"))
