"""Names that could be taken for each other are refused: nothing may go to the wrong one quietly."""

from pathlib import Path

import pytest

from niche.study import study_from_text


@pytest.mark.parametrize(
    ("first", "second"),
    [("mud 1", "mud １"), ("m²", "m2"), ("ﬂat", "flat"), ("Straße", "STRASSE"), ("cafe\u0301", "café")],
)
def test_two_zones_that_differ_by_spelling_only_are_refused(texts, first, second):
    start, end = texts.sound.index("[zones]"), texts.sound.index("[[species]]")
    zones = f'[zones]\nrows = ["r"]\ncolumns = ["a", "b"]\nlayout = [["{first}", "{second}"]]\n\n'
    (line,) = texts.problems(texts.sound[:start] + zones + texts.sound[end:])
    assert line.startswith(f"zones: zone {first!r} is named twice")


@pytest.mark.parametrize("second", ["ｄunlin", "DUNLIN"])
def test_two_species_that_differ_by_spelling_only_are_refused(texts, second):
    (line,) = texts.problems(texts.changed(('name = "redshank"', f'name = "{second}"')))
    assert "species 'dunlin' is listed twice" in line


@pytest.mark.parametrize("name", [" redshank", "ringed  plover", "ringed\u00a0plover", " "])
def test_a_species_with_odd_spaces_is_refused(texts, name):
    (line,) = texts.problems(texts.changed(('name = "redshank"', f'name = "{name}"')))
    assert f"species {name!r} has spaces" in line


@pytest.mark.parametrize("label", ["upper mud", " Upper  MUD"])
def test_a_zone_that_is_a_label_for_out_of_sight_too_is_refused(texts, label):
    (line,) = texts.problems(texts.changed(('["out of sight"]', f'["out of sight", "{label}"]')))
    assert "'upper mud' is a zone and stands in `logs.out_of_sight` too" in line


def test_a_zone_of_a_sheet_that_is_a_label_for_out_of_sight_is_refused(texts, with_sheet):
    text, file = with_sheet(texts.sheet)
    (line,) = texts.problems(text.replace('["out of sight"]', '["upper mud"]'), file)
    assert "'upper mud' is a zone" in line


@pytest.mark.parametrize(("key", "other"), [("end", "start"), ("animal", "session"), ("zone", "species")])
def test_a_heading_named_for_two_things_is_refused(texts, key, other):
    (line,) = texts.problems(texts.changed((f'{key} = "{key}"', f'{key} = "{other}"')))
    assert line.startswith(f"logs: the heading {other!r} is named for two things")


def test_a_study_without_animals_names_sessions(texts):
    study = study_from_text(texts.changed(('animal = "animal"', 'animal = ""')), Path("study.toml"))
    assert (study.logs.columns.animal, study.logs.columns.session) == (None, "session")


def test_a_study_without_animals_and_sessions_is_refused(texts):
    (line,) = texts.problems(texts.changed(('animal = "animal"', 'animal = ""'), ('session = "session"\n', "")))
    assert line.startswith("logs: `animal` is empty and there is no `session`")


@pytest.mark.parametrize(
    "zone", ["right/Europe/Berlin", "posix/Europe/Berlin", "localtime", "posixrules", "Europe/Berlyn"]
)
def test_a_time_zone_that_other_machines_do_not_share_is_refused_and_shown(texts, zone):
    (line,) = texts.problems(texts.changed(("Europe/Berlin", zone)))
    assert line.startswith(f"logs.time_zone: found {zone!r}, and there is no such time zone")
