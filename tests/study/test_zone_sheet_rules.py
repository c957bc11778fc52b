"""The zone sheet line by line: numbers of lines that hold, headings that nobody reads, amounts that are none."""

import pytest

from niche.errors import StudyError
from niche.study import study_from_text

HEADER = "zone,row,column,availability\n"


def refused(with_sheet, sheet, keys='sheet = "zones.csv"'):
    text, file = with_sheet(sheet, keys)
    with pytest.raises(StudyError) as caught:
        study_from_text(text, file)
    return str(caught.value).removeprefix(f"{file.parent / 'zones.csv'}: ")


@pytest.mark.parametrize("before", ["\n\n", ",,,\n,,,\n", " , ,,\n\n"])
def test_blank_lines_are_passed_over_and_counted(with_sheet, before):
    assert refused(with_sheet, f"{HEADER}mud,low,a,1\n{before}sand,low,a,1\n").startswith(
        "line 5: zones 'mud' and 'sand'"
    )


def test_line_breaks_in_cells_are_counted(with_sheet):
    sheet = f'{HEADER}mud,low,"a\nb",1\nsand,low,,1\n'
    assert refused(with_sheet, sheet).startswith("line 4: column is empty")


def test_a_comma_without_quotes_is_not_passed_over(with_sheet):
    assert refused(with_sheet, f"{HEADER}mud, wet,low,a,1\n").startswith("line 2: 5 cells where the header has 4")


def test_empty_cells_beyond_the_header_do_not_matter(with_sheet):
    assert study_from_text(*with_sheet(f"{HEADER}mud,low,a,1,,\n")).zones.names == ("mud",)


@pytest.mark.parametrize("heading", ["availabilty", "Availability", "avail ability"])
def test_a_misspelt_heading_of_availability_is_not_passed_over(with_sheet, heading):
    told = refused(with_sheet, f"zone,row,column,{heading}\nmud,low,a,1\n")
    assert told.startswith(f"line 1: the heading {heading!r} is not known; did you mean 'availability'?")


def test_other_columns_may_stand_in_the_sheet(with_sheet):
    zones = study_from_text(*with_sheet("zone,row,column,availability,notes\nmud,low,a,1,wet\n")).zones
    assert zones.availability.amounts == {"mud": 1.0}


@pytest.mark.parametrize("heading", ["zone", "row", "availability"])
def test_a_heading_that_stands_twice_is_refused(with_sheet, heading):
    assert (
        refused(with_sheet, f"{HEADER.strip()},{heading}\nmud,low,a,1,x\n")
        == f"line 1: the heading {heading!r} stands twice."
    )


@pytest.mark.parametrize("amount", ["-1", "inf", "nan", "1_000", "1e400", "-inf", "1 ha"])
def test_an_amount_that_is_none_is_told_with_its_line(with_sheet, amount):
    told = refused(with_sheet, f"{HEADER}sand,low,b,1\nmud,low,a,{amount}\n")
    assert told == f"line 3: availability is {amount!r}; it must be a number, 0 or above."


def test_a_source_without_amounts_is_refused(with_sheet):
    keys = 'sheet = "zones.csv"\navailability_source = "walked"'
    assert "the sheet has no availability" in refused(with_sheet, "zone,row,column\nmud,low,a\n", keys)


@pytest.mark.parametrize(
    ("sheet", "words"),
    [
        (f"{HEADER}mud,low,a,1\nMud,low,b,1\n", "zone 'mud' is named twice"),
        (f"{HEADER}mud,low,a,1\nsand,low,b,\n", "no amount for zone 'sand'"),
        (f"{HEADER}mud,low,a,0\n", "all amounts of availability are 0"),
        (f"{HEADER}wet  mud,low,a,1\n", "zone 'wet  mud' has spaces"),
    ],
)
def test_what_is_wrong_with_the_sheet_as_a_whole_is_told_of_the_sheet(with_sheet, sheet, words):
    told = refused(with_sheet, sheet)
    assert words in told
    assert "study.toml" not in told


def test_an_open_quote_in_the_sheet_is_refused(with_sheet):
    assert "cannot be read as UTF-8 CSV" in refused(with_sheet, f'{HEADER}"mud,low,a,1\nsand,low,b,1\n')
