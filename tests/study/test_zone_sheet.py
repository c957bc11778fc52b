"""The zone sheet: a CSV of zone, row, column and, if known, availability. Its problems are told with their line."""

import pytest

from niche.errors import StudyError
from niche.study import study_from_text


def refused(study):
    with pytest.raises(StudyError) as caught:
        study_from_text(*study)
    return str(caught.value)


def test_a_sheet_gives_the_same_zones_as_the_layout_that_says_the_same(texts, with_sheet):
    zones = study_from_text(*with_sheet(texts.sheet)).zones
    assert zones.names == ("upper sand", "upper mud", "lower sand")
    assert zones.layout == (("upper sand", "upper mud"), ("lower sand", ""))
    assert (zones.rows, zones.columns) == (("upper", "lower"), ("sand", "mud"))
    assert zones.availability.amounts == {"upper sand": 2.0, "upper mud": 1.5, "lower sand": 0.0}


def test_rows_and_columns_stand_in_the_order_in_which_the_sheet_first_names_them(with_sheet):
    zones = study_from_text(*with_sheet("column,zone,row\nmud,b,low\nsand,c,high\nmud,a,high\n")).zones
    assert (zones.rows, zones.columns) == (("low", "high"), ("mud", "sand"))
    assert zones.layout == (("b", ""), ("a", "c"))
    assert zones.availability is None


def test_the_source_of_availability_is_kept(texts, with_sheet):
    study = study_from_text(*with_sheet(texts.sheet, 'sheet = "zones.csv"\navailability_source = "walked"'))
    assert study.zones.availability.source == "walked"
    assert study_from_text(*with_sheet(texts.sheet)).zones.availability.source == "not given"


def test_the_study_keeps_its_folder_when_a_sheet_is_read(texts, with_sheet):
    text, file = with_sheet(texts.sheet)
    study = study_from_text(text, file)
    assert study.folder == file.parent
    assert study.species[1].name == "redshank"


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"], ids=["plain", "byte order mark"])
@pytest.mark.parametrize("end", [b"\n", b"\r\n", b"\r"], ids=["LF", "CRLF", "CR"])
def test_a_sheet_from_a_spreadsheet_is_read(texts, with_sheet, mark, end):
    zones = study_from_text(*with_sheet(mark + texts.sheet.encode().replace(b"\n", end))).zones
    assert zones.names == ("upper sand", "upper mud", "lower sand")


def test_spaces_round_a_cell_of_the_sheet_do_not_count(with_sheet):
    zones = study_from_text(*with_sheet("zone,row,column,availability\n mud , low ,c, 1.5 \nsand,low,d,1\n")).zones
    assert zones.names == ("mud", "sand")
    assert zones.rows == ("low",)
    assert zones.availability.amounts == {"mud": 1.5, "sand": 1.0}


@pytest.mark.parametrize(
    ("sheet", "line", "passage"),
    [
        ("zone,row,column\nmud,,a\n", 2, "row is empty"),
        ("zone,row,column\nmud,low,a\n,low,b\n", 3, "zone is empty"),
        ("zone,row,column\nmud,low,a\nsand,low, \n", 3, "column is empty"),
        ("zone,row,column\nmud,low,a\nsand\n", 3, "row is empty"),
        ("zone,row,column\nmud,low,a\nsand,low,a\n", 3, "zones 'mud' and 'sand' both stand in row 'low', column 'a'"),
        ("zone,row,column,availability\nmud,low,a,1\nsand,low,b,some\n", 3, "availability is 'some'; it must be a number"),
        ("zone,row,column,availability\nmud,low,a,\"1,5\"\n", 2, "availability is '1,5'; it must be a number"),
        ("zone,row\nmud,low\n", 1, "no heading 'column'"),
        ("Zone,row,column\nmud,low,a\n", 1, "no heading 'zone'"),
        ("zone;row;column\nmud;low;a\n", 1, "no heading 'zone'"),
        ("zone,row,column\n", 1, "no zone below it"),
        ("", 1, "no heading 'zone'"),
    ],
)  # fmt: skip
def test_a_problem_of_the_sheet_is_told_with_its_line(with_sheet, sheet, line, passage):
    text, file = with_sheet(sheet)
    told = refused((text, file))
    assert told.startswith(f"{file.parent / 'zones.csv'}: line {line}: ")
    assert passage in told


def test_a_zone_named_twice_in_the_sheet_is_refused(with_sheet):
    assert "'mud' is named twice" in refused(with_sheet("zone,row,column\nmud,low,a\nmud,low,b\n"))


def test_an_amount_for_some_zones_only_is_refused(with_sheet):
    sheet = "zone,row,column,availability\nmud,low,a,1\nsand,low,b,\n"
    assert "no amount for zone 'sand'" in refused(with_sheet(sheet))


@pytest.mark.parametrize("amount", ["-1", "inf", "nan"])
def test_an_impossible_amount_of_the_sheet_is_refused(with_sheet, amount):
    told = refused(with_sheet(f"zone,row,column,availability\nmud,low,a,{amount}\nsand,low,b,1\n"))
    assert ("allowed: a number at least 0" in told) or ("allowed: a finite number" in told) or ("0 or above" in told)


def test_a_sheet_that_is_not_there_is_told_with_the_key(with_sheet, texts):
    text, file = with_sheet(texts.sheet, 'sheet = "zone.csv"')
    assert (
        refused((text, file)) == f"{file.parent / 'zone.csv'}: zones.sheet names this file, and there is no such file."
    )


@pytest.mark.parametrize("sheet", [b"zone,row,column\nm\xfcd,low,a\n", "zone,row,column\nmud,low,a\n".encode("utf-16")])
def test_a_sheet_that_is_not_utf8_is_refused(with_sheet, sheet):
    assert "cannot be read as UTF-8 CSV" in refused(with_sheet(sheet))


def test_a_folder_for_a_sheet_is_refused(with_sheet, texts):
    assert "cannot be read" in refused(with_sheet(texts.sheet, 'sheet = "."'))
