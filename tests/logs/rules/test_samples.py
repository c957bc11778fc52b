"""The small samples: written the same each time, read without a stop, and with the sums that their files show."""

import csv
import importlib.util
from datetime import datetime
from pathlib import Path

import pytest

from niche.logs import read_logs
from niche.study import read_study
from niche.usage import Usage

SAMPLES = Path(__file__).parents[3] / "sample_logs"
UNITS = {
    "switch_log": [4, 4, 4],
    "hourly_scans": [10, 10, 10, 10],
    "roost_readers": [3, 3, 3, 4],
    "camera_events": [10, 8, 6],
    "tally_sheet": [4, 4, 4],
}


@pytest.fixture(scope="module")
def logs():
    pytest.importorskip("openpyxl")
    return {name: read_logs(read_study(SAMPLES / name)) for name in UNITS}


def table(name):
    with (SAMPLES / name).open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


@pytest.mark.parametrize("name", UNITS)
def test_sample_can_be_used_and_says_that_it_is_invented(logs, name):
    study, log = read_study(SAMPLES / name), logs[name]
    log.require_usable()
    assert Usage.from_visits(log.visits, study).unit_counts.tolist() == UNITS[name]
    assert study.note.startswith("Invented data")


def test_switches_fill_their_sessions(logs):
    log, first = logs["switch_log"], {}
    for row in table("switch_log/logs/switches.csv"):
        first.setdefault(row["session"], datetime.fromisoformat(row["time"]))
    ends = {row["session"]: row["end"] for row in table("switch_log/sessions.csv")}
    seconds = sum((datetime.fromisoformat(ends[s]) - start).total_seconds() for s, start in first.items() if ends[s])
    broken = log.visits[[not ends[session] for session in log.visits["session"]]]
    assert log.ledger.milliseconds_read / 1000 == seconds + broken["amount"].sum() / 1000
    assert log.ledger.reasons == {("set_aside", "last state has no end"): 1}


def test_scans_add_up(logs):
    rows = table("hourly_scans/logs/scans.csv")
    assert logs["hourly_scans"].visits["amount"].sum() == sum(int(row["count"] or 0) for row in rows)
    empty = sum(not row["species"] for row in rows)
    assert len(logs["hourly_scans"].visits) == len(rows) - empty
    effort = logs["hourly_scans"].effort.set_index("zone")["effort"]
    assert (effort["upper sand"], effort["lower mussel bed"]) == (80.0, 60.0)


def test_reads_hold_each_planted_fault(logs):
    reasons = logs["roost_readers"].ledger.reasons
    assert reasons["set_aside", "test tag"] == 5
    assert reasons["set_aside", "tag not in the tag table"] == 1
    assert reasons["set_aside", "exact repeat of an earlier row"] == 1
    assert reasons["set_aside", "lone read"] == sum(reasons.values()) - 7 > 0
    assert {"OB-RY", "GG-OR", "YY-NB"} <= set(logs["roost_readers"].visits["animal"])


def test_camera_events_are_events_and_nothing_else(logs):
    rows = table("camera_events/logs/events.csv")
    reasons = logs["camera_events"].ledger.reasons
    assert reasons["set_aside", "no animal"] == sum(row["kind"] != "animal" for row in rows)
    assert len(logs["camera_events"].visits) == len(rows) - sum(reasons.values())


def test_tally_sheet_adds_up(logs):
    openpyxl = pytest.importorskip("openpyxl")
    sheet = openpyxl.load_workbook(SAMPLES / "tally_sheet/logs/minutes.xlsx")["minutes"]
    minutes = sum(sum(cell or 0 for cell in row[2:9]) for row in sheet.iter_rows(min_row=2, values_only=True))
    assert logs["tally_sheet"].ledger.milliseconds_read == round(minutes * 60_000)


def test_samples_are_written_the_same_each_time(tmp_path):
    pytest.importorskip("openpyxl")
    spec = importlib.util.spec_from_file_location("make_small_samples", SAMPLES / "make_small_samples.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    module.HERE = tmp_path
    module.main()
    written = sorted(path.relative_to(tmp_path) for path in tmp_path.rglob("*") if path.is_file())
    assert len(written) == 8
    different = [str(path) for path in written if (tmp_path / path).read_bytes() != (SAMPLES / path).read_bytes()]
    assert different == []
