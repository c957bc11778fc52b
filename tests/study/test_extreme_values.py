"""Values of a size that nobody writes on purpose: still refused in words that fit on a screen."""

from pathlib import Path

import pytest

from niche.errors import StudyError
from niche.logs.single import open_study
from niche.study import read_study, study_from_text
from niche.study.starter import write_starter


def test_a_table_in_a_table_thousands_deep_is_refused(texts):
    key = ".".join(["a"] * 5000)
    (line,) = texts.problems(texts.changed(('title = "Two', f'note.{key} = 1\ntitle = "Two')))
    assert line == "note: found what is too long to show (a table); allowed: text in quotes."


@pytest.mark.parametrize(
    ("old", "new", "path"),
    [
        ('title = "Two waders on a flat"', "title = ", "title: found what is too long to show (a whole number)"),
        ("resamples = 500", "resamples = ", "analysis.resamples: found what is too long"),
        ("confidence = 0.9", "confidence = ", "analysis.confidence: found what is too long"),
        ("seed = 7", "seed = ", "analysis.seed: found what is too long"),
        ("body_mass = 48", "body_mass = ", "species[1].body_mass: found what is too long"),
    ],
)
def test_a_number_of_ten_thousand_digits_is_refused(texts, old, new, path):
    (line,) = texts.problems(texts.changed((old, f"{new}0x{'F' * 10_000}")))
    assert line.startswith(path)


@pytest.mark.parametrize("mass", ["1e100", "1e300"])
def test_a_mass_beyond_all_measure_is_refused(texts, mass):
    (line,) = texts.problems(texts.changed(("body_mass = 48", f"body_mass = {mass}")))
    assert line.startswith("species[1].body_mass: found 1e+")
    assert "below 1e+100" in line


def test_the_largest_mass_and_exponent_give_a_demand(texts):
    study = study_from_text(
        texts.changed(("body_mass = 48", "body_mass = 9e99\n"), ("core = 0.5", "mass_exponent = 2")), Path("x")
    )
    assert study.demand_of("dunlin") == pytest.approx(8.1e199)


def test_the_largest_number_of_resamples_is_told_as_a_person_writes_it(texts):
    (line,) = texts.problems(texts.changed(("resamples = 500", "resamples = 5000000")))
    assert line.endswith("allowed: a number at most 1,000,000.")


def test_a_list_of_wrong_entries_is_not_said_to_be_too_short(texts):
    lines = texts.problems(texts.changed(('["logs/*.csv"]', "[1, true]")))
    assert [line.split(":")[0] for line in lines] == ["logs.files[1]", "logs.files[2]"]


@pytest.mark.parametrize(
    ("key", "shown"),
    [('"\\u001b[31m"', "'\\x1b[31m'"), ('"a\\nb"', "'a\\nb'"), ('""', "''"), ('"a.b"', "a.b"), ('"a b"', "a b")],
)
def test_a_key_of_unprintable_letters_is_shown_in_quotes(texts, key, shown):
    assert texts.problems(f"{key} = 1\n{texts.sound}") == [
        f"{shown}: unknown key. Allowed here: title, site, note, logs, zones, species, analysis, report."
    ]


@pytest.mark.parametrize("path", ["a" * 5000, "a\x00b"], ids=["too long", "NUL"])
@pytest.mark.parametrize("read", [read_study, open_study])
def test_a_path_that_no_file_can_have_cannot_be_read(path, read):
    with pytest.raises(StudyError, match="cannot be read"):
        read(Path(path))


@pytest.mark.parametrize("path", ["a" * 5000, "a\x00b"], ids=["too long", "NUL"])
def test_a_path_that_no_file_can_have_cannot_be_written(path):
    from niche.errors import OutputError

    with pytest.raises(OutputError, match="cannot be written"):
        write_starter(Path(path))


def test_a_sheet_whose_name_no_file_can_have_cannot_be_read(texts, with_sheet):
    text, file = with_sheet(texts.sheet, 'sheet = "a\\u0000b"')
    with pytest.raises(StudyError, match="the zone sheet cannot be read"):
        study_from_text(text, file)
