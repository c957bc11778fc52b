"""The zones as a grid and their availability: what must fit together, and what is read from it."""

from pathlib import Path

import pytest

from niche.study import study_from_text

LAYOUT = 'layout = [["upper sand", "upper mud"], ["lower sand", ""]]'

CASES = {
    "a row too short": ('["lower sand", ""]', '["lower sand"]', "row 2 of the layout has 1 cells", "`columns` names 2"),
    "a row too long": ('["lower sand", ""]', '["lower sand", "", ""]', "row 2 of the layout has 3 cells", "names 2"),
    "too few row names": ('"upper shore", "lower shore"', '"shore"', "the layout has 2 rows and `rows` names 1"),
    "no row names": ('["upper shore", "lower shore"]', "[]", "the layout has 2 rows and `rows` names 0"),
    "no zone at all": (LAYOUT, 'layout = [["", ""], ["", ""]]', "the layout names no zone"),
    "a zone twice": ('["lower sand", ""]', '["lower sand", "upper sand"]', "zone 'upper sand' is named twice"),
    "a zone twice but for case": ('["lower sand", ""]', '["lower sand", "Upper SAND"]', "zone 'upper sand' is named twice"),
    "spaces in a row": ('["lower sand", ""]', '["lower sand", "lower  mud"]', "'lower  mud' has spaces"),
    "space at the end": ('["lower sand", ""]', '["lower sand", "lower mud "]', "'lower mud ' has spaces"),
    "nothing but a space": ('["lower sand", ""]', '["lower sand", " "]', "' ' has spaces"),
    "no layout and no sheet": (LAYOUT, "", "either as `layout` or as `sheet`"),
    "layout and sheet": (LAYOUT, LAYOUT + '\nsheet = "z.csv"', "either as `layout` or as `sheet`", "not both"),
    "sheet beside rows": (LAYOUT, 'sheet = "z.csv"', "with a zone sheet, rows, columns and availability stand in the sheet"),
    "source of a sheet without sheet": (LAYOUT, LAYOUT + '\navailability_source = "x"', "`zones.availability.source`"),
    "an amount of a stranger": (
        '"upper mud" = 1.5', '"upper mud" = 1.5\n"creek" = 1', "availability names 'creek'", "no zone",
    ),
    "an amount in other case": ('"upper mud" = 1.5', '"Upper mud" = 1.5', "availability names 'Upper mud'"),
    "no amount for a zone": ('"lower sand" = 0\n', "", "no amount for zone 'lower sand'"),
    "all amounts nought": ('"upper sand" = 2\n"upper mud" = 1.5', '"upper sand" = 0\n"upper mud" = 0.0', "are 0"),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES.values(), ids=CASES.keys())
def test_zones_that_do_not_fit_together_are_refused(texts, case):
    old, new, *passages = case
    (line,) = texts.problems(texts.changed((old, new)))
    assert line.startswith("zones: ")
    for passage in passages:
        assert passage in line


def test_zones_come_row_by_row_without_the_empty_places(texts):
    zones = study_from_text(texts.sound, Path("study.toml")).zones
    assert zones.names == ("upper sand", "upper mud", "lower sand")
    assert zones.layout == (("upper sand", "upper mud"), ("lower sand", ""))
    assert zones.rows == ("upper shore", "lower shore")
    assert zones.columns == ("sand", "mud")
    assert zones.availability.amounts == {"upper sand": 2.0, "upper mud": 1.5, "lower sand": 0.0}
    assert (zones.availability.source, zones.availability.unit) == ("a survey", "ha")


def test_a_zone_may_hold_any_letters(texts):
    text = texts.changed(
        ('["lower sand", ""]', '["lower sand", "Wattmäander “7”, west"]'),
        ("= 0\n", '= 0\n"Wattmäander “7”, west" = 1\n'),
    )
    assert study_from_text(text, Path("study.toml")).zones.names[-1] == "Wattmäander “7”, west"


def test_a_single_zone_is_a_layout(texts):
    start, end = texts.sound.index("[zones]"), texts.sound.index("[[species]]")
    zones = '[zones]\nrows = ["flat"]\ncolumns = ["mud"]\nlayout = [["mud"]]\n\n'
    study = study_from_text(texts.sound[:start] + zones + texts.sound[end:], Path("study.toml"))
    assert study.zones.names == ("mud",)
    assert study.zones.availability is None
