"""A single log with standard headings in place of a study."""

import pytest

from niche.errors import LogError, StudyError
from niche.logs import read_logs
from niche.logs.single import open_study, study_of_log
from niche.usage import Usage

HEADER = ("species", "animal", "session", "zone", "start", "end")


def write(field, text, name="log.csv"):
    file = field.folder() / name
    file.write_text(text, encoding="utf-8", newline="")
    return file


def without(field, name, rows):
    """Text of a log that lacks one of the standard columns."""
    place = HEADER.index(name)
    return field.text(*(r[:place] + r[place + 1 :] for r in rows), header=[h for h in HEADER if h != name])


def test_the_zones_are_those_the_log_names_each_once(field):
    rows = [
        field.bout(zone="sand"), field.bout("08:10", "08:20", zone="Mud"), field.bout("08:20", "08:30", zone=" mud"),
        field.bout("08:30", "08:40", zone=""), field.bout("08:40", "08:50", zone="Out of sight"),
    ]  # fmt: skip
    file = write(field, field.text(*rows))
    study = open_study(file)
    assert study.title == "log.csv"
    assert study.zones.names == ("Mud", "sand")
    assert study.folder == file.parent
    log = read_logs(study)
    field.check_closed(log)
    assert field.rows(log) == {"used": 3, "out_of_sight": 2}
    assert Usage.from_visits(log.visits, study).time[0].tolist() == [[1_200_000, 600_000]]


def test_with_animals_the_animal_is_the_unit_and_without_them_the_session(field):
    rows = [field.bout(), field.bout("08:10", "08:20", session="s2")]
    assert open_study(write(field, field.text(*rows))).analysis.unit == "animal"
    study = open_study(write(field, without(field, "animal", rows)))
    assert study.analysis.unit == "session"
    log = read_logs(study)
    assert log.visits["animal"].tolist() == ["s1", "s2"]
    assert Usage.from_visits(log.visits, study).units == (("s1", "s2"),)
    study = open_study(write(field, without(field, "session", rows)))
    assert Usage.from_visits(read_logs(study).visits, study).units == (("RW",),)


def test_a_duration_in_seconds_stands_in_for_an_end_and_an_end_goes_first(field):
    header = (*HEADER[:-1], "duration")
    study = open_study(write(field, field.text([*field.bout()[:-1], "90"], header=header)))
    assert (study.logs.columns.end, study.logs.columns.duration) == (None, "duration")
    log = read_logs(study)
    assert (log.visits["end"] - log.visits["start"]).tolist() == [90_000]
    study = open_study(write(field, field.text([*field.bout(), "90"], header=(*HEADER, "duration"))))
    assert (study.logs.columns.end, study.logs.columns.duration) == ("end", None)


@pytest.mark.parametrize("name", ["species", "zone", "start"])
def test_a_needed_heading_that_is_missing_is_told_with_those_that_are_there(field, name):
    with pytest.raises(LogError) as caught:
        study_of_log(write(field, without(field, name, [field.bout()])))
    assert str(caught.value).startswith(f"log.csv: line 1: no heading {name!r}. ")
    assert "'end'" in str(caught.value)
    assert "niche start" in str(caught.value)


def test_a_log_without_animal_and_session_or_without_end_and_duration_is_refused(field):
    with pytest.raises(LogError, match="no heading 'animal' and none 'session'"):
        study_of_log(write(field, "species,zone,start,end\n"))
    with pytest.raises(LogError, match="no heading 'end' and none 'duration'"):
        study_of_log(write(field, without(field, "end", [field.bout()])))


def test_a_log_that_names_no_zone_is_refused(field):
    with pytest.raises(LogError, match=r"^log\.csv: no row names a zone"):
        study_of_log(write(field, field.text(field.bout(zone=""), field.bout(zone="OUT OF SIGHT"))))


def test_a_path_that_is_not_there_or_ends_in_toml_or_is_a_folder_is_taken_for_a_study(field):
    folder = field.folder()
    for path in (folder, folder / "none.csv", folder / "none.toml"):
        with pytest.raises(StudyError, match="niche start"):
            open_study(path)


@pytest.mark.parametrize("zone", ["\u200b", "Ⅷ", "ſ", "İ", "ß", "x" * 5000, "mud  \u00a0flat", "\U0001f426"])
def test_any_zone_that_a_log_names_is_a_zone(field, zone):
    study = open_study(write(field, field.text(field.bout(zone=zone), field.bout("09:00", "09:10", zone="mud"))))
    log = read_logs(study)
    field.check_closed(log)
    assert field.rows(log) == {"used": 2}
