"""From log to Usage: the order of rows, the file a row stands in and the size of a piece must not matter."""

from __future__ import annotations

import csv
import io
from collections import defaultdict
from dataclasses import dataclass, replace
from datetime import UTC, datetime, timedelta
from pathlib import Path
from tempfile import TemporaryDirectory

import numpy as np
import pandas as pd
from generated import assert_same, examples, quick
from hypothesis import given
from hypothesis import strategies as st

import niche
from niche.logs import Ledger, Log, read_logs
from niche.logs.formats.csv_text import read_csv
from niche.logs.rules.bouts import Bouts
from niche.logs.visits import KEY, without_overlaps
from niche.study import Study
from niche.study.reading import study_from_text

SPECIES, ZONES = ("dunlin", "redshank"), ("mud", "sand", "mussel bed", "channel")
OUT = "out of sight"
HEADER = ("species", "animal", "session", "zone", "start", "end")
BEGIN = datetime(2026, 9, 3, 6, 0, tzinfo=UTC)

STUDY = """
title = "generated"
[logs]
files = ["logs/*.csv"]
out_of_sight = ["out of sight"]
problems = {{ overlap = "{overlap}" }}
columns = {{ species = "species", animal = "animal", session = "session", zone = "zone", start = "start", end = "end" }}
[zones]
rows = ["upper", "lower"]
columns = ["left", "right"]
layout = [["mud", "sand"], ["mussel bed", "channel"]]
[[species]]
name = "dunlin"
[[species]]
name = "redshank"
[analysis]
unit = "{unit}"
"""


@dataclass(frozen=True)
class Row:
    """One bout, times in milliseconds after the first."""

    species: str
    animal: str
    session: str
    zone: str
    start: int
    end: int

    def cells(self) -> list[str]:
        times = [
            (BEGIN + timedelta(milliseconds=ms)).isoformat(timespec="milliseconds") for ms in (self.start, self.end)
        ]
        return [self.species, self.animal, self.session, self.zone, *times]


@st.composite
def logs(draw: st.DrawFn, *, shortest: int = 0, repeats: bool = True) -> list[Row]:
    """Bouts of a few animals, each in one place at a time; some out of sight, some without length, some written twice."""
    rows: list[Row] = []
    for s, species in enumerate(SPECIES):
        for a in range(draw(st.integers(1, 4))):
            clock = 0
            for b in range(draw(st.integers(1, 5))):
                clock += draw(st.integers(0, 2000))
                length = draw(st.integers(shortest, 9000))
                zone = draw(st.sampled_from((*ZONES, OUT)))
                rows.append(Row(species, f"{'DR'[s]}{a}", f"watch {b // 2}", zone, clock, clock + length))
                clock += length
    if repeats:
        rows += draw(st.lists(st.sampled_from(rows), max_size=3))
    return draw(st.permutations(rows))


def _study(folder: Path, unit: str = "animal", overlap: str = "stop") -> Study:
    return study_from_text(STUDY.format(unit=unit, overlap=overlap), folder / "study.toml")


def _read(files: list[list[Row]], unit: str = "animal", overlap: str = "stop") -> tuple[Log, Study]:
    """Write the rows to files and read them with `read_logs`."""
    with TemporaryDirectory() as place:
        folder = Path(place)
        (folder / "logs").mkdir()
        for number, rows in enumerate(files):
            (folder / "logs" / f"{number:02d}.csv").write_text(_text(rows), encoding="utf-8", newline="")
        study = _study(folder, unit, overlap)
        return read_logs(study), study


def _text(rows: list[Row]) -> str:
    stream = io.StringIO()
    csv.writer(stream).writerows([HEADER, *(row.cells() for row in rows)])
    return stream.getvalue()


def _visits(log: Log) -> list[tuple]:
    """Visits without where they stood, sorted."""
    return sorted(log.visits[KEY].itertuples(index=False, name=None))


def _tally(rows: list[Row], unit: str) -> dict[str, dict[str, dict[str, list[int]]]]:
    """Milliseconds and visits by species, unit and zone, row by row."""
    found: dict = {s: defaultdict(lambda: {z: [0, 0] for z in ZONES}) for s in SPECIES}
    for row in set(rows):  # a row written twice is one visit
        if row.zone != OUT:
            cell = found[row.species][getattr(row, unit)][row.zone]
            cell[0] += row.end - row.start
            cell[1] += 1
    return found


UNITS = st.sampled_from(["animal", "session"])


@examples(40)
@given(logs(), UNITS)
def test_tally_against_a_loop_over_rows(rows: list[Row], unit: str) -> None:
    log, study = _read([rows], unit)
    assert not log.ledger.stops
    assert log.ledger.rows["set_aside"] == len(rows) - len(set(rows))
    usage = niche.Usage.from_visits(log.visits, study)
    expected = _tally(rows, unit)
    assert usage.visits is not None
    assert usage.zones == ZONES
    for s, species in enumerate(usage.species):
        found = expected[species]
        assert usage.units[s] == tuple(sorted(found))
        for u, name in enumerate(usage.units[s]):
            assert usage.time[s][u].tolist() == [found[name][z][0] for z in ZONES]
            assert usage.visits[s][u].tolist() == [found[name][z][1] for z in ZONES]
        used = [name for name, zones in sorted(found.items()) if any(ms for ms, _ in zones.values())]
        assert usage.with_use().units[s] == tuple(used)


@examples(40)
@given(logs(), st.integers(1, 4), st.data())
def test_the_file_a_row_stands_in_and_its_place_do_not_matter(rows: list[Row], files: int, rest: st.DataObject) -> None:
    whole, study = _read([rows])
    where = rest.draw(st.lists(st.integers(0, files - 1), min_size=len(rows), max_size=len(rows)))
    order = rest.draw(st.permutations(range(len(rows))))
    split, _ = _read([[rows[i] for i in order if where[i] == f] for f in range(files)])
    assert _visits(split) == _visits(whole)
    ours, theirs = ({name: (n, ms) for name, n, ms in log.ledger.sums()} for log in (whole, split))
    for kept in ("used", "out_of_sight"):
        assert ours[kept] == theirs[kept]
    assert ours["set_aside"][0] == theirs["set_aside"][0]
    assert ours["read"][0] == theirs["read"][0] == len(rows)
    _assert_same_usage(*(niche.Usage.from_visits(log.visits, study) for log in (whole, split)))


@examples(10)
@given(logs(shortest=1), st.integers(2, 3))
def test_the_same_tables_from_one_file_or_several(rows: list[Row], files: int) -> None:
    analyses = []
    for parts in ([rows], [rows[f::files] for f in range(files)]):
        log, study = _read(parts)
        usage = niche.Usage.from_visits(log.visits, study)
        if 0 in usage.unit_counts:
            return  # a species that was never in sight
        analyses.append(quick(usage))
    assert_same(*analyses, exactly=True)
    for name in ("usage", "breadth", "overlap", "coefficients", "draws"):
        pd.testing.assert_frame_equal(*(analysis.table(name) for analysis in analyses))


@examples(30)
@given(logs(), st.integers(1, 6))
def test_the_size_of_a_piece_does_not_matter(rows: list[Row], piece_rows: int) -> None:
    with TemporaryDirectory() as place:
        path = Path(place) / "log.csv"
        path.write_text(_text(rows), encoding="utf-8", newline="")
        study = _study(Path(place))
        read = []
        for size in (len(rows) + 1, piece_rows):
            ledger = Ledger()
            rule = Bouts(study, ledger)
            pieces = list(read_csv(path, "log.csv", ledger, piece_rows=size))
            assert all(len(piece.rows) <= size for piece in pieces)
            visits = pd.concat([rule.visits(piece) for piece in pieces], ignore_index=True)
            ledger.close()
            read.append((visits, ledger.sums(), list(ledger.entries)))
    pd.testing.assert_frame_equal(read[0][0], read[1][0])
    assert read[0][1] == read[1][1]
    key = [sorted(entries, key=lambda e: (e.row, e.field, e.reason)) for _, _, entries in read]
    assert key[0] == key[1]


@examples(30)
@given(logs(), st.data())
def test_usage_of_pieces_of_the_visits_adds_up(rows: list[Row], rest: st.DataObject) -> None:
    log, study = _read([rows])
    part = rest.draw(st.lists(st.integers(0, 2), min_size=len(log.visits), max_size=len(log.visits)))
    pieces = [niche.Usage.from_visits(log.visits[np.array(part) == p], study) for p in range(3)]
    _assert_same_usage(pieces[0] + pieces[1] + pieces[2], niche.Usage.from_visits(log.visits, study))


def test_a_visit_without_length_counts_whatever_the_pieces() -> None:
    row = Row("dunlin", "D0", "watch 0", "mud", 0, 5000)
    log, study = _read([[row, replace(row, zone="sand", start=5000)]])
    first = log.visits["zone"] == "mud"
    visits = log.visits.copy()
    visits.loc[~first, "end"] = visits.loc[~first, "start"]
    pieces = [niche.Usage.from_visits(visits[mask], study) for mask in (first, ~first)]
    _assert_same_usage(pieces[0] + pieces[1], niche.Usage.from_visits(visits, study))


def _assert_same_usage(first: niche.Usage, second: niche.Usage) -> None:
    assert (first.species, first.zones, first.units, first.unit) == (
        second.species,
        second.zones,
        second.units,
        second.unit,
    )
    assert first.visits is not None
    assert second.visits is not None
    for a, b in zip((*first.time, *first.visits), (*second.time, *second.visits), strict=True):
        np.testing.assert_array_equal(a, b)


@st.composite
def clashing(draw: st.DrawFn) -> list[Row]:
    """Bouts of two animals with times at random, so that many overlap; starts differ within an animal."""
    rows = []
    for animal in ("D0", "D1"):
        starts = draw(st.lists(st.integers(0, 40), min_size=1, max_size=8, unique=True))
        rows += [Row("dunlin", animal, "w", "mud", s, s + draw(st.integers(0, 15))) for s in starts]
    return draw(st.permutations(rows))


@examples(60)
@given(clashing())
def test_overlapping_bouts_against_all_pairs(rows: list[Row]) -> None:
    """A bout is taken out if any that was kept and starts earlier still runs; one without length clashes with none."""
    log, study = _read([[row for row in rows if row.end > row.start]], overlap="set_aside")
    timed = [row for row in rows if row.end > row.start]
    base = int(BEGIN.timestamp() * 1000)
    clash: list[Row] = []
    for row in sorted(timed, key=lambda r: r.start):
        running = (e for e in timed if e.animal == row.animal and e not in clash)
        if any(e.start < row.start < e.end for e in running):
            clash.append(row)
    kept = sorted((r.animal, r.start + base, r.end + base) for r in timed if r not in clash)
    assert sorted(log.visits[["animal", "start", "end"]].itertuples(index=False, name=None)) == kept
    assert log.ledger.rows["set_aside"] == len(clash)
    assert log.ledger.milliseconds["set_aside"] == sum(r.end - r.start for r in clash)
    assert study.logs.problems.overlap == "set_aside"
    assert len(without_overlaps(log.visits, Ledger(), "stop")) == len(log.visits)
