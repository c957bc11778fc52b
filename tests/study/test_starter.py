"""The starter study: it is a valid study, reads its own empty log, and never writes over anything."""

import re
import tomllib

import pytest

from niche.errors import OutputError
from niche.logs import read_logs
from niche.study import read_study
from niche.study.starter import STUDY, write_starter


def test_the_starter_is_a_study_that_reads_its_log(tmp_path):
    written = write_starter(tmp_path / "new" / "flat")
    assert sorted(path.relative_to(tmp_path).as_posix() for path in written) == [
        "new/flat/logs/log.csv", "new/flat/study.toml", "new/flat/zones.csv",
    ]  # fmt: skip
    study = read_study(tmp_path / "new" / "flat")
    assert study.zones.names == ("upper sand", "upper mud", "lower sand", "lower mud")
    log = read_logs(study)
    assert len(log.visits) == 0
    header = (tmp_path / "new/flat/logs/log.csv").read_text(encoding="utf-8")
    (tmp_path / "new/flat/logs/log.csv").write_text(
        header + "dunlin,RW,s1,lower mud,2026-09-03T08:15:30+02:00,2026-09-03T08:16:00+02:00,foraging,XY,\n",
        encoding="utf-8",
    )
    log = read_logs(study)
    log.require_usable()
    assert (log.visits["end"] - log.visits["start"]).tolist() == [30_000]


def test_every_line_of_the_starter_that_is_commented_out_is_a_valid_setting(tmp_path):
    write_starter(tmp_path / "flat")
    uncommented = re.sub(r"(?m)^# (?=\S+ = |\[)", "", STUDY)
    assert uncommented != STUDY
    content = tomllib.loads(uncommented)
    assert content["species"][0]["name"] == "dunlin"
    (tmp_path / "flat" / "study.toml").write_text(uncommented, encoding="utf-8")
    study = read_study(tmp_path / "flat")
    assert study.logs.time_zone == "Europe/Berlin"
    assert study.logs.problems.overlap == "set_aside"
    assert study.species[0].k.low == 700


def test_an_empty_folder_is_filled(tmp_path):
    assert len(write_starter(tmp_path)) == 3


def test_nothing_is_written_over(tmp_path):
    (tmp_path / "notes.txt").write_text("mine", encoding="utf-8")
    with pytest.raises(OutputError, match="not empty"):
        write_starter(tmp_path)
    with pytest.raises(OutputError, match="not empty"):
        write_starter(tmp_path / "notes.txt")
    assert [path.name for path in tmp_path.iterdir()] == ["notes.txt"]


def test_a_folder_that_cannot_be_made_is_told(tmp_path):
    (tmp_path / "file").write_text("", encoding="utf-8")
    with pytest.raises(OutputError, match="cannot be written"):
        write_starter(tmp_path / "file" / "flat")
