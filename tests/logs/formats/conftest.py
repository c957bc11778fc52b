"""Small logs of a tidal flat in every form, written to a folder of their own and read as pieces or to the end."""

from dataclasses import dataclass, field
from pathlib import Path

import pytest

from niche.logs import read_logs
from niche.logs.formats import open_pieces
from niche.logs.ledger import Ledger
from niche.study import study_from_text

HEADER = ["species", "animal", "zone", "start", "duration"]
START = "2026-09-03T08:15:00+02:00"

STUDY = """\
title = "waders on a flat"
[logs]
files = {files}
rule = "bouts"
out_of_sight = ["out of sight"]
{logs}
[logs.columns]
{columns}
[logs.file]
{form}
{more}
[zones]
rows = ["shore"]
columns = ["1", "2", "3"]
layout = [["upper sand", "middle mud", "sum of pools"]]
"""


def bout(zone="upper sand", duration="60", *, animal="RW", species="dunlin", start=START):
    return [species, animal, zone, start, duration]


def text(rows, delimiter=",", end="\n"):
    return "".join(delimiter.join(row) + end for row in rows)


@dataclass
class Taken:
    """What came out of a file: its records with row numbers, and the ledger."""

    records: list = field(default_factory=list)
    rows: list = field(default_factory=list)
    headings: list = field(default_factory=list)
    sizes: list = field(default_factory=list)
    ledger: Ledger = field(default_factory=Ledger)

    def column(self, heading):
        at = self.headings.index(heading)
        return [record[at] for record in self.records]

    @property
    def found(self):
        """Lines of the ledger as (row, field, value, reason, action)."""
        return [(e.row, e.field, e.value, e.reason, e.action) for e in self.ledger.entries]

    def problem(self, row):
        (entry,) = (e for e in self.ledger.entries if e.row == row)
        return entry.problem


def take(pieces, ledger):
    taken = Taken(ledger=ledger)
    for piece in pieces:
        taken.headings = list(piece.columns)
        taken.sizes.append(len(piece.rows))
        assert {len(column) for column in piece.columns.values()} == {len(piece.rows)}
        taken.rows += piece.rows.tolist()
        taken.records += [list(r) for r in zip(*(c.to_pylist() for c in piece.columns.values()), strict=True)]
    return taken


@dataclass
class Folder:
    path: Path
    bout = staticmethod(bout)
    text = staticmethod(text)
    take = staticmethod(take)
    header = HEADER

    def study(self, form="", *, files='["*"]', logs="", columns='duration = "duration"', more=""):
        content = STUDY.format(files=files, form=form, logs=logs, columns=columns, more=more)
        if 'start = "' not in columns:
            content = content.replace("[logs.columns]\n", '[logs.columns]\nstart = "start"\n')
        return study_from_text(content, self.path / "study.toml")

    def write(self, name, content):
        path = self.path / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return path

    def pieces(self, name, content=None, form="", piece_rows=100_000, **keys):
        """Pieces of a file with this content, or of a file that is there."""
        path = self.path / name if content is None else self.write(name, content)
        ledger = Ledger()
        return take(open_pieces(path, name, self.study(form, **keys), ledger, piece_rows), ledger)

    def log(self, name, content=None, form="", **keys):
        """The log read to the end by the rule of bouts; its ledger closes."""
        if content is not None:
            self.write(name, content)
        return read_logs(self.study(form, files=f'["{name}"]', **keys))


@pytest.fixture
def flat(tmp_path):
    return Folder(tmp_path)
