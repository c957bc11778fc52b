"""The sample with planted faults: each planted row is found with the action it should have, and no other row."""

import csv
from collections import defaultdict
from pathlib import Path

import pytest

from niche.errors import LogError
from niche.logs import read_logs
from niche.study import read_study

SAMPLES = Path(__file__).parents[2] / "sample_logs"


def planted():
    with (SAMPLES / "spoiled" / "planted.csv").open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


@pytest.fixture(scope="module")
def log():
    return read_logs(read_study(SAMPLES / "spoiled"))


def found(log):
    """Actions by file and row: those of the ledger; a row flagged while out of sight is said to be out of sight."""
    actions = defaultdict(set)
    unseen = {(v.file, v.row) for v in log.visits.itertuples() if v.zone == ""}
    for entry in log.ledger.entries:
        place = (entry.file, entry.row)
        actions[place].add("out_of_sight" if entry.action == "flagged" and place in unseen else entry.action)
    return dict(actions)


def test_the_list_of_planted_faults_is_there():
    rows = planted()
    assert list(rows[0]) == ["file", "row", "fault", "expected_action"]
    assert len(rows) >= 20
    assert {row["expected_action"] for row in rows} == {"stop", "set_aside", "repaired", "flagged", "out_of_sight"}


def test_every_planted_fault_is_found_with_its_action_and_no_other_row_is_complained_of(log):
    expected = {(row["file"], int(row["row"])): {row["expected_action"]} for row in planted()}
    assert found(log) == expected


def test_the_ledger_of_the_spoiled_sample_closes(field, log):
    field.check_closed(log)
    lines = sum(
        len(path.read_text(encoding="utf-8").splitlines()) - 1 for path in (SAMPLES / "spoiled" / "logs").glob("*.csv")
    )
    assert log.ledger.sums()[0][1] == lines


def test_the_spoiled_sample_stops_the_work_and_names_the_planted_rows(log):
    stops = [(row["file"], int(row["row"])) for row in planted() if row["expected_action"] == "stop"]
    assert [(e.file, e.row) for e in log.ledger.stops] == sorted(stops)
    with pytest.raises(LogError, match=f"^{len(stops)} problems stop the work"):
        log.require_usable()


def test_the_faults_that_can_be_told_by_a_word_are_told_by_it(log):
    words = {
        "zone misspelt": "did you mean 'middle mud'?",
        "look-alike letter": "did you mean 'lower mud'?",
        "species misspelt": "did you mean 'dunlin'?",
        "time without offset": "no offset",
        "date that does not exist": "no such date",
        "end before start": "before the start",
        "exact repeat": "exactly",
        "bout inside": "is already in",
    }
    problems = {(e.file, e.row): e.problem for e in log.ledger.entries}
    for begin, word in words.items():
        rows = [row for row in planted() if row["fault"].startswith(begin)]
        assert rows, begin
        for row in rows:
            assert word in problems[row["file"], int(row["row"])]


def test_the_sound_sample_has_nothing_to_complain_of(field):
    log = read_logs(read_study(SAMPLES / "tidal_flat"))
    field.check_closed(log)
    log.require_usable()
    assert log.ledger.entries == []
    assert log.ledger.sums()[3:] == [("set_aside", 0, 0), ("stop", 0, 0)]
