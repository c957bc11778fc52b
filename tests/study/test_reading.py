"""From a path to a study: files that are not there or cannot be read, TOML that is none, several problems at once."""

from pathlib import Path

import pytest
from pydantic import ValidationError

from niche.errors import NicheError, StudyError
from niche.study import read_study, study_from_text


def refused(path):
    with pytest.raises(StudyError) as caught:
        read_study(path)
    return str(caught.value)


@pytest.fixture
def flat(tmp_path, texts):
    (tmp_path / "study.toml").write_text(texts.sound, encoding="utf-8")
    return tmp_path


def test_a_folder_and_the_file_in_it_give_the_same_study(flat):
    study = read_study(flat)
    assert study == read_study(flat / "study.toml")
    assert study.title == "Two waders on a flat"
    assert study.folder == flat


def test_a_study_file_may_bear_any_name(flat):
    (flat / "study.toml").rename(flat / "autumn.toml")
    assert read_study(flat / "autumn.toml").folder == flat
    assert "the folder has no study.toml" in refused(flat)


def test_every_key_of_the_sound_study_is_read(flat):
    study = read_study(flat)
    assert study.logs.files == ("logs/*.csv",)
    assert {name: heading for name, heading in study.logs.columns.model_dump().items() if heading is not None} == {
        "species": "species", "animal": "animal", "session": "session", "zone": "zone", "start": "start", "end": "end",
    }  # fmt: skip
    assert (study.logs.time_zone, study.logs.out_of_sight) == ("Europe/Berlin", ("out of sight",))
    assert (study.logs.problems.overlap, study.logs.problems.unknown_zone) == ("set_aside", "stop")
    assert [(s.name, s.body_mass, s.r) for s in study.species] == [("dunlin", 48, None), ("redshank", 125, 0.3)]
    assert study.species[0].k.model_dump() == {
        "low": 10,
        "high": 20,
        "source": "a count",
        "distribution": "log-uniform",
    }
    settings = study.analysis
    assert (settings.resamples, settings.confidence, settings.seed, settings.core) == (500, 0.9, 7, 0.5)
    assert (study.report.permits, study.report.ethics) == ("none needed", "")


def test_the_shortest_study_takes_the_defaults():
    text = (
        'title = "t"\n[logs]\nfiles = ["a.csv"]\n[logs.columns]\nanimal = "animal"\nduration = "d"\n'
        '[zones]\nrows = ["r"]\ncolumns = ["c"]\nlayout = [["mud"]]\n'
    )
    study = study_from_text(text, Path("study.toml"))
    assert study.species == ()
    assert (study.logs.rule, study.logs.duration_unit, study.logs.time_zone) == ("bouts", "s", None)
    assert (study.logs.columns.start, study.logs.columns.end, study.logs.columns.duration) == ("start", None, "d")
    problems = study.logs.problems.model_dump()
    # Only what cannot mislead goes without asking: the last stay of a log of changes, which has no end.
    assert {name for name, policy in problems.items() if policy != "stop"} == {"last_state_open"}
    assert problems["last_state_open"] == "set_aside"
    settings = study.analysis
    assert (settings.resamples, settings.confidence, settings.unit, settings.weighting) == (
        9999,
        0.95,
        "animal",
        "time",
    )
    assert study.folder == Path()


def test_a_study_is_not_changed_once_read(flat):
    study = read_study(flat)
    with pytest.raises(ValidationError):
        study.title = "another"
    with pytest.raises(ValidationError):
        study.analysis.seed = 2


def test_several_problems_are_told_at_once_each_on_a_line(texts):
    text = texts.changed(
        ("seed = 7", "sede = 7"), ("confidence = 0.9", "confidence = 95"), ('"Europe/Berlin"', '"Mars/Base"'),
        ("low = 10", "low = 0"), ("= 1.5", "= -2"), ('name = "redshank"\n', ""),
    )  # fmt: skip
    paths = [line.split(": ")[0] for line in texts.problems(text)]
    assert sorted(paths) == [
        "analysis.confidence", "analysis.sede", "logs.time_zone", "species[1].k.low", "species[2].name",
        "zones.availability.amounts.upper mud",
    ]  # fmt: skip


def test_entries_are_counted_from_one(texts):
    text = texts.changed(("body_mass = 48", "body_mass = 'x'"), ("body_mass = 125", "body_mass = 'y'"))
    assert [line.split(":")[0] for line in texts.problems(text)] == ["species[1].body_mass", "species[2].body_mass"]


@pytest.mark.parametrize(
    ("broken", "passage"),
    [
        ("title = Two waders\n", "at line 1, column 9). Text stands in quotes; lists in square brackets."),
        ('title = "a"\ntitle = "b"\n', "at line 2"),
        ('title = "a\n', "at line 1"),
        ("[logs\n", "at line 1"),
        ("[logs]\n[logs]\n", "line 2"),
        ('title = "a"\x00\n', "line 1"),
        ("x = " + "[" * 20_000 + "]" * 20_000, "not valid TOML"),
        ("x = " + "{a = " * 20_000 + "1" + "}" * 20_000, "not valid TOML"),
        ("x = 1" + "0" * 5000, "not valid TOML"),
    ],
)
def test_what_is_not_toml_is_refused_with_its_place(tmp_path, broken, passage):
    file = tmp_path / "study.toml"
    file.write_text(broken, encoding="utf-8")
    told = refused(file)
    assert told.startswith(f"{file}: not valid TOML: ")
    assert passage in told


def test_an_empty_file_lacks_every_required_key(texts):
    assert [line.split(":")[0] for line in texts.problems("")] == ["title", "logs", "zones"]


def test_a_file_that_is_not_there_points_to_the_starter(tmp_path):
    told = refused(tmp_path / "none.toml")
    assert told.startswith(f"{tmp_path / 'none.toml'}: there is no such file")
    assert "niche start" in told


def test_a_folder_without_a_study_is_told_so(tmp_path):
    assert refused(tmp_path).startswith(f"{tmp_path / 'study.toml'}: the folder has no study.toml")


def test_a_folder_called_study_toml_cannot_be_read(tmp_path):
    (tmp_path / "study.toml").mkdir()
    assert "cannot be read" in refused(tmp_path)


def test_a_path_through_a_file_cannot_be_read(flat):
    assert "cannot be read" in refused(flat / "study.toml" / "deeper")


@pytest.mark.parametrize("encoding", ["latin-1", "utf-16"])
def test_a_study_that_is_not_utf8_is_refused_with_the_byte(tmp_path, encoding):
    (tmp_path / "study.toml").write_bytes('title = "Wattläufer"'.encode(encoding))
    byte = {"latin-1": 14, "utf-16": 0}[encoding]
    assert f"byte {byte} is not UTF-8" in refused(tmp_path)


def test_a_byte_order_mark_does_not_matter(tmp_path, texts):
    (tmp_path / "study.toml").write_bytes(b"\xef\xbb\xbf" + texts.sound.replace("\n", "\r\n").encode())
    assert read_study(tmp_path).title == "Two waders on a flat"


def test_every_refusal_is_of_the_family():
    assert issubclass(StudyError, NicheError)
