"""Fault 30: headers that are not the first row, take two rows, or have units below them."""

import pytest

from niche.errors import LogError
from niche.logs.formats.heading import joined

NOTES = "Tidal flat; watches of September\nobserver: LK\n\n"


def test_rows_above_a_declared_header_are_left_out_and_said(flat):
    taken = flat.pieces("a.csv", NOTES + flat.text([flat.header, flat.bout()]), "header_row = 4")
    assert (taken.rows, taken.records) == ([5], [flat.bout()])
    assert taken.found == [(None, "", "3 rows", "above the header", "flagged")]


def test_a_header_further_down_is_asked_for_with_its_row(flat):
    with pytest.raises(
        LogError, match=r"a.csv: line 1 is not the header; line 4 holds 5 .*`logs\.file\.header_row` to 4"
    ):
        flat.pieces("a.csv", NOTES + flat.text([flat.header, flat.bout()]))


def test_a_first_line_with_any_heading_of_the_study_is_the_header(flat):
    assert flat.pieces("a.csv", "species,place\ndunlin,mud\nspecies,zone\n").headings == ["species", "place"]


def test_two_header_rows_are_joined_and_gaps_filled_from_the_left(flat):
    content = "bird,,place,watch,\nspecies,animal,zone,start,duration\ndunlin,RW,upper sand,t,5\n"
    columns = (
        'species = "bird species"\nanimal = "bird animal"\nzone = "place zone"\n'
        'start = "watch start"\nduration = "watch duration"'
    )
    taken = flat.pieces("a.csv", content, "header_rows = 2", columns=columns)
    assert taken.headings == ["bird species", "bird animal", "place zone", "watch start", "watch duration"]
    assert (taken.rows, taken.records) == ([3], [["dunlin", "RW", "upper sand", "t", "5"]])
    with pytest.raises(LogError, match=r"lines 1 and 2 together .*`logs\.file\.header_rows` to 2"):
        flat.pieces("b.csv", content, columns=columns)


def test_an_empty_first_cell_of_the_upper_row_stays_empty():
    assert joined(["", "watch", "", "note"], ["animal", "start", "end"]) == [
        "animal",
        "watch start",
        "watch end",
        "note",
    ]


def test_a_declared_units_row_is_set_aside_and_counted(flat):
    units = ["", "code", "", "yyyy-mm-dd hh:mm", "(s)"]
    taken = flat.pieces("a.csv", flat.text([flat.header, units, flat.bout()]), "units_row = true")
    assert (taken.rows, taken.records) == ([3], [flat.bout()])
    assert taken.found == [(2, "", "code, yyyy-mm-dd hh:mm, (s)", "units row", "set_aside")]
    assert taken.ledger.rows_read == {"a.csv": 1}


def test_a_units_row_that_is_not_declared_is_asked_about(flat):
    units = ["", "code", "", "yyyy-mm-dd hh:mm", "(s)"]
    with pytest.raises(LogError, match=r"line 2 looks like units .*`logs\.file\.units_row`"):
        flat.pieces("a.csv", flat.text([flat.header, units, flat.bout()]))


def test_header_and_units_once_more_in_mid_file_are_set_aside(flat):
    units = ["", "code", "", "utc", "(s)"]
    rows = [flat.header, units, flat.bout(), [" species", *flat.header[1:]], units, flat.bout()]
    taken = flat.pieces("a.csv", flat.text(rows), "units_row = true")
    assert taken.rows == [3, 6]
    assert [line[0] for line in taken.found if line[3] == "repeated header"] == [4, 5]
    assert all(line[4] == "set_aside" for line in taken.found)


def test_a_heading_twice_is_an_error(flat):
    with pytest.raises(LogError, match="line 1: the heading 'zone' stands twice"):
        flat.pieces("a.csv", "species,zone, zone\nx,y,z\n")


@pytest.mark.parametrize("content", ["", "\n", ",,\n", "\n\n"])
def test_a_file_without_header_is_an_error(flat, content):
    with pytest.raises(LogError, match=r"a.csv: line 1: no header"):
        flat.pieces("a.csv", content)


def test_a_header_below_the_foot_is_an_error(flat):
    with pytest.raises(LogError, match="line 9: no header"):
        flat.pieces("a.csv", "species,zone\nx,y\n", "header_row = 9")


@pytest.mark.parametrize("content", ["species,zone", "species,zone\n"])
def test_a_header_alone_gives_one_empty_piece(flat, content):
    taken = flat.pieces("a.csv", content)
    assert (taken.headings, taken.records, taken.sizes) == (["species", "zone"], [], [0])
