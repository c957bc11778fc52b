"""Cleaned visits saved as a Data Package read back to the same usage."""

import csv
import hashlib
import json
import re

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st
from typer.testing import CliRunner

from niche.cli import app
from niche.errors import LogError, OutputError
from niche.logs import read_logs
from niche.logs.clean import write_clean
from niche.logs.standards.clean_study import to_toml
from niche.logs.standards.formulas import escape, unescape
from niche.logs.standards.terms import DWC
from niche.study import read_study
from niche.usage import Usage

HEADER = "species,animal,session,zone,start,end"
BOUTS = [
    "dunlin,=R+W,w1,upper sand,2026-09-03T08:15:30.250+02:00,2026-09-03T08:20:00.001+02:00",
    "Dunlin,=R+W,w1,UPPER MUD,2026-09-03T08:20:00.001+02:00,2026-09-03T08:21:00+02:00",
    "dunlin,=R+W,w1,out of sight,2026-09-03T08:21:00+02:00,2026-09-03T08:25:00+02:00",
    "Calidris alpina,'=R,w 2,middle sand,2026-09-03T08:15:30+02:00,2026-09-03T08:15:30+02:00",
    "redshank,-3,w1,middle mud,2026-09-03T09:00:00+02:00,2026-09-03T09:00:00.007+02:00",
    'redshank,"a, ""b""",\'quoted,upper sand,2026-10-25T00:30:00Z,2026-10-25T01:30:00Z',
    "redshank,@x,w1,nowhere,2026-09-03T09:00:00+02:00,2026-09-03T09:01:00+02:00",
]
POLICY = '[logs.problems]\nunknown_zone = "set_aside"'


def same(one, other):
    """Whether two Usages are the same, to the millisecond and the visit."""
    assert (one.species, one.zones, one.units, one.unit) == (other.species, other.zones, other.units, other.unit)
    for mine, theirs in zip((*one.time, *(one.visits or ())), (*other.time, *(other.visits or ())), strict=True):
        np.testing.assert_array_equal(mine, theirs)
    assert one.measure == other.measure
    np.testing.assert_array_equal(one.effort, other.effort)
    np.testing.assert_array_equal(one.availability, other.availability)
    assert sum(int(t.sum()) for t in one.time) > 0


@pytest.fixture
def clean(station, tools):
    """Read a log, save it, read it back; returns both logs and the folder."""

    def both(text, **keys):
        folder = station.folder()
        (folder / "log.csv").write_text(text)
        study = station.study(folder, "log.csv", **{"form": "", **keys})
        log = read_logs(study)
        tools.closed(log)
        out = folder / "cleaned"
        assert write_clean(log, study, out) == out
        again = read_study(out)
        back = read_logs(again)
        tools.closed(back)
        used = [Usage.from_visits(one.visits, its, one.looked_at) for one, its in ((log, study), (back, again))]
        same(*used)
        if log.effort is None:
            assert back.effort is None
        else:
            pd.testing.assert_frame_equal(back.effort, log.effort, check_dtype=False)
        return log, back, out

    return both


def bouts(*rows):
    return "\n".join([HEADER, *(rows or BOUTS)]) + "\n"


COLUMNS = 'session = "session"\nstart = "start"\nend = "end"'


def visits_of(out):
    with (out / "visits.csv").open(newline="", encoding="utf-8") as stream:
        return list(csv.reader(stream))


def test_bouts_read_back_to_the_millisecond(clean):
    log, back, _ = clean(bouts(), columns=COLUMNS, logs=POLICY)
    names = ["species", "animal", "session", "zone", "start", "end", "amount"]
    assert back.visits[names].values.tolist() == log.visits[names].values.tolist()
    assert back.ledger.sums()[1:3] == log.ledger.sums()[1:3]
    assert {e.reason for e in back.ledger.entries} <= {"zero duration", "look-alike letter"}


def test_columns_bear_the_terms_of_darwin_core(clean):
    _, _, out = clean(bouts(), columns=COLUMNS, logs=POLICY)
    header, first, *rest = visits_of(out)
    assert header == [
        "vernacularName", "scientificName", "organismID", "eventID", "habitat", "eventDate", "file", "row",
    ]  # fmt: skip
    assert first == [
        "dunlin", "Calidris alpina", "'=R+W", "w1", "upper sand",
        "2026-09-03T06:15:30.250Z/2026-09-03T06:20:00.001Z", "log.csv", "2",
    ]  # fmt: skip
    assert rest[1][4] == "out of sight"
    package = json.loads((out / "datapackage.json").read_text())
    assert package["$schema"] == "https://datapackage.org/profiles/2.0/datapackage.json"
    visits, zones = package["resources"]
    fields = {field["name"]: field for field in visits["schema"]["fields"]}
    assert list(fields) == header
    assert all(field["description"] for field in fields.values())
    assert {name: f.get("skos:exactMatch") for name, f in fields.items()} == {
        **{name: DWC + name for name in header[:6]}, "file": None, "row": None,
    }  # fmt: skip
    assert {"value": "out of sight", "label": "out of sight"} in fields["habitat"]["missingValues"]
    assert visits["schema"]["foreignKeys"] == [
        {"fields": ["habitat"], "reference": {"resource": "zones", "fields": ["habitat"]}}
    ]
    assert zones["schema"]["primaryKey"] == ["habitat"]
    for resource in package["resources"]:
        content = (out / resource["path"]).read_bytes()
        assert resource["bytes"] == len(content)
        assert resource["hash"] == f"sha256:{hashlib.sha256(content).hexdigest()}"


def test_no_cell_could_be_run_as_a_formula(clean):
    _, _, out = clean(bouts(), columns=COLUMNS, logs=POLICY)
    cells = [cell for row in visits_of(out) for cell in row]
    assert not [cell for cell in cells if re.match(r"[=+\-@\t\r]", cell)]
    assert {"'=R+W", "''=R", "'-3", "'quoted", 'a, "b"'} <= set(cells)


@given(st.text(alphabet="'=+-@a\t\r\n, ", max_size=8))
def test_what_is_escaped_comes_back(text):
    assert unescape(escape(text)) == text
    assert not re.match(r"[=+\-@\t\r]", escape(text))
    assert escape(text) == text or re.match(r"'*[=+\-@\t\r]", text)


def test_durations_and_local_times_read_back(clean):
    text = "species,animal,zone,start,minutes\ndunlin,RW,upper sand,2026-10-25 01:30,90.5\n"
    text += "redshank,RX,upper mud,2026-09-01 10:00,3\n"
    logs = 'time_zone = "Europe/Berlin"\nduration_unit = "min"'
    log, back, _ = clean(text, columns='start = "start"\nduration = "minutes"', logs=logs)
    assert back.visits["end"].tolist() == log.visits["end"].tolist()


def test_scans_read_back(clean):
    text = (
        "species,session,zone,time,count\n"
        "dunlin,s1,upper sand,2026-09-03T08:00:00Z,3\n"
        "dunlin,s1,upper sand,2026-09-03T08:00:00Z,3\n"
        "redshank,s1,out of sight,2026-09-03T08:00:00Z,1\n"
        "redshank,s2,upper mud,2026-09-03T09:00:00.500Z,2\n"
    )
    columns = 'animal = ""\nsession = "session"\ntime = "time"\ncount = "count"'
    log, back, out = clean(text, rule="scans", columns=columns, unit="session")
    assert back.measure == log.measure == "scans"
    assert back.visits["amount"].tolist() == [3, 3, 1, 2]
    assert visits_of(out)[0] == [
        "vernacularName", "scientificName", "eventID", "habitat", "eventDate", "individualCount", "file", "row",
    ]  # fmt: skip


def test_empty_scans_leave_their_effort(clean):
    text = (
        "species,session,zone,time,count\n"
        "dunlin,s1,upper sand,2026-09-03T08:00:00Z,3\n"
        ",s1,upper mud,2026-09-03T08:00:00Z,0\n"
    )
    columns = 'animal = ""\nsession = "session"\ntime = "time"\ncount = "count"'
    _, back, _ = clean(text, rule="scans", columns=columns, unit="session")
    assert back.looked_at == {"upper sand": True, "upper mud": True, "middle sand": False, "middle mud": False}


def test_cameras_leave_their_effort(station, tools):
    folder = station.folder()
    (folder / "log.csv").write_text("species,deployment,time\ndunlin,d1,2026-09-03T08:00:00Z\n")
    (folder / "d.csv").write_text(
        "deployment,zone,start,end\nd1,upper sand,2026-09-01T00:00Z,2026-09-04T00:20Z\nd2,upper mud,2026-09-01T00:00Z,\n"
    )
    study = station.study(
        folder, "log.csv", rule="camera", form="", unit="session", columns='deployment = "deployment"\ntime = "time"',
        logs='[logs.camera]\ndeployments = "d.csv"',
    )  # fmt: skip
    log = read_logs(study)
    again = read_study(write_clean(log, study, folder / "out"))
    back = read_logs(again)
    tools.closed(back)
    pd.testing.assert_frame_equal(back.effort, log.effort)
    same(Usage.from_visits(log.visits, study, log.looked_at), Usage.from_visits(back.visits, again, back.looked_at))


def test_camera_events_read_back_and_are_not_joined_again(clean):
    text = "species,deployment,zone,time,count\n" + "".join(
        f"dunlin,d1,upper sand,2026-09-03T08:{minute:02d}:00Z,{minute // 10 + 1}\n" for minute in (0, 20, 40)
    )
    columns = 'deployment = "deployment"\ntime = "time"\ncount = "count"'
    log, back, _ = clean(text, rule="camera", columns=columns, unit="session", logs="[logs.camera]\ngap = 600")
    assert back.visits["amount"].tolist() == log.visits["amount"].tolist() == [1, 3, 5]


@pytest.mark.parametrize(("unit", "total"), [("count", 15), ("percent", 200_000), ("min", 1_530_000), ("s", 25_500)])
def test_tallies_read_back(clean, unit, total):
    cells = {"count": ("3,2,10,0", ",,,0"), "percent": ("33.3,66.7,0,", "0,50,50,")}
    first, second = cells.get(unit, ("10,5.5,10,2", ",,,"))
    if unit == "count":
        second = "0,0,0,0"
    text = f"species,animal,upper sand,upper mud,middle mud,out of sight\ndunlin,RW,{first}\nredshank,RX,{second}\n"
    if unit in ("min", "s"):
        text = text.rsplit("redshank", 1)[0]
    log, back, _ = clean(
        text, rule="tallies", columns="", logs=f'[logs.tallies]\nunit = "{unit}"\nadds_to_100 = "keep"'
    )
    seen = log.visits[log.visits["zone"] != ""]
    assert int(seen["amount"].sum()) == total
    assert back.visits["amount"].tolist() == log.visits["amount"].tolist()


def test_a_zone_like_a_formula_reads_back_as_a_heading(station, tools):
    folder = station.folder()
    (folder / "log.csv").write_text("species,animal,=A1+1,mud\ndunlin,RW,3,4\n")
    content = {
        "title": "t",
        "logs": {"files": ["log.csv"], "rule": "tallies", "tallies": {"unit": "count"}},
        "zones": {"rows": ["r"], "columns": ["a", "b"], "layout": [["=A1+1", "mud"]]},
    }
    (folder / "study.toml").write_text(to_toml(content))
    study = read_study(folder)
    log = read_logs(study)
    again = read_study(write_clean(log, study, folder / "out"))
    assert visits_of(folder / "out")[0][2] == "'=A1+1"
    same(Usage.from_visits(log.visits, study), Usage.from_visits(read_logs(again).visits, again))


def test_switches_and_their_sessions_are_saved(station, clean):
    folder = station.folder()
    (folder / "log.csv").write_text(
        "species,animal,session,zone,time\n"
        "dunlin,RW,w1,upper sand,2026-09-03T08:00:00Z\ndunlin,RW,w1,upper mud,2026-09-03T08:10:00Z\n"
    )
    (folder / "watches.csv").write_text("session,start,end,observer\nw1,2026-09-03T08:00Z,2026-09-03T08:40Z,=HB\n")
    study = station.study(
        folder, "log.csv", rule="switches", form="", columns='session = "session"\ntime = "time"',
        logs='[logs.sessions]\nfile = "watches.csv"',
    )  # fmt: skip
    log = read_logs(study)
    out = write_clean(log, study, folder / "out")
    again = read_study(out)
    assert again.logs.rule == "bouts"
    same(Usage.from_visits(log.visits, study), Usage.from_visits(read_logs(again).visits, again))
    text = (out / "sessions.csv").read_bytes().decode()
    assert text == "eventID,eventDate,recordedBy\r\nw1,2026-09-03T08:00:00Z/2026-09-03T08:40:00Z,'=HB\r\n"


def test_a_darwin_core_log_keeps_the_term_of_its_zones(station):
    log = station.folder()
    (log / "log.csv").write_text(
        "vernacularName,organismID,locality,eventDate\ndunlin,RW,upper sand,2026-09-03T08:00Z/08:10Z\n"
    )
    study = station.study(log, "log.csv", columns='zone = "locality"')
    out = write_clean(read_logs(study), study, log / "out")
    assert "locality" in visits_of(out)[0]


def test_the_study_comes_along(clean):
    _, _, out = clean(bouts(), columns=COLUMNS, logs=POLICY)
    study = read_study(out)
    assert study.title == "two waders on a flat (invented)"
    assert [(s.name, s.scientific_name) for s in study.species] == [
        ("dunlin", "Calidris alpina"), ("redshank", "Tringa totanus"),
    ]  # fmt: skip
    assert study.zones.layout == (("upper sand", "upper mud"), ("middle sand", "middle mud"))


def test_nothing_is_saved_while_problems_stop_the_work(station):
    folder = station.folder()
    (folder / "log.csv").write_text(bouts())
    study = station.study(folder, "log.csv", form="", columns=COLUMNS)
    with pytest.raises(LogError, match="1 problem stops the work"):
        write_clean(read_logs(study), study, folder / "out")
    assert not (folder / "out").exists()


@pytest.fixture
def ready(station):
    folder = station.folder()
    (folder / "log.csv").write_text(bouts(BOUTS[0]))
    study = station.study(folder, "log.csv", form="", columns=COLUMNS)
    return folder, study, read_logs(study)


def test_only_what_was_written_before_is_replaced(ready):
    folder, study, log = ready
    out = folder / "out"
    out.mkdir()
    write_clean(log, study, out)  # an empty folder
    first = (out / "visits.csv").read_bytes()
    write_clean(log, study, out)
    assert (out / "visits.csv").read_bytes() == first
    (out / "notes.txt").write_text("mine")
    with pytest.raises(OutputError, match=r"holds 'notes\.txt', which `niche check --clean` did not write"):
        write_clean(log, study, out)
    assert (out / "notes.txt").read_text() == "mine"
    with pytest.raises(OutputError, match=r"holds 'log\.csv'|holds 'out'"):
        write_clean(log, study, folder)
    with pytest.raises(OutputError, match="there is a file of this name"):
        write_clean(log, study, folder / "log.csv")
    (out / "notes.txt").unlink()
    (out / "datapackage.json").write_text("{}")
    with pytest.raises(OutputError, match="holds"):
        write_clean(log, study, out)


def test_nothing_half_written_is_left(ready, monkeypatch):
    folder, study, log = ready
    before = sorted(path.name for path in folder.iterdir())

    def full(self, content):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("pathlib.Path.write_bytes", full)
    with pytest.raises(OutputError, match="No space left on device"):
        write_clean(log, study, folder / "out")
    assert sorted(path.name for path in folder.iterdir()) == before


def test_the_command_saves_and_tells(ready):
    folder, study, _ = ready
    logs = {"files": ["log.csv"], "columns": {name: name for name in ("session", "start", "end")}}
    zones = study.zones.model_dump(exclude_none=True)
    (folder / "study.toml").write_text(to_toml({"title": "t", "logs": logs, "zones": zones}))
    done = CliRunner().invoke(app, ["check", str(folder), "--clean", str(folder / "out")])
    assert done.exit_code == 0, done.output
    assert f"Saved: {folder / 'out'}" in done.stderr
    assert CliRunner().invoke(app, ["check", str(folder / "out")]).exit_code == 0
    (folder / "log.csv").write_text(bouts(BOUTS[-1]))
    stopped = CliRunner().invoke(app, ["check", str(folder), "--clean", str(folder / "other")])
    assert stopped.exit_code == 1
    assert "nothing is saved, because problems stop the work" in stopped.stderr
    assert not (folder / "other").exists()


@pytest.mark.parametrize(
    "value",
    [{"a": 'x"y\\z\n\x7f\u2028é'}, {"a b": {"c.d": 1}}, {"l": [1.5, 2.0, 1e-7]},
     {"t": [{"x": True}, {"x": False, "s": {"n": ""}}]}, {"e": []}, {"": "empty"}, {"n": [["a", ""], ["b"]]}],
)  # fmt: skip
def test_toml_is_read_back_by_the_standard_library(value):
    import tomllib

    assert tomllib.loads(to_toml(value)) == value
