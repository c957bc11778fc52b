"""Fault 28: which sign parts cells, decimal commas, signs between thousands."""

import pytest

from niche.errors import LogError, StudyError
from niche.logs.formats import open_pieces
from niche.logs.ledger import Ledger


@pytest.mark.parametrize(("sign", "called"), [(";", "semicolon"), ("\t", "tab")])
@pytest.mark.parametrize("name", ["a.csv", "a.txt"])
def test_semicolons_and_tabs_are_found_and_said(flat, sign, called, name):
    taken = flat.pieces(name, flat.text([flat.header, flat.bout()], sign))
    assert taken.records == [flat.bout()]
    assert taken.found == [(None, "", sign, "delimiter", "repaired")]
    assert called in taken.ledger.entries[0].problem


@pytest.mark.parametrize(("name", "sign"), [("a.csv", ","), ("a.tsv", "\t")])
def test_what_the_name_says_is_no_surprise(flat, name, sign):
    taken = flat.pieces(name, flat.text([flat.header, flat.bout()], sign))
    assert (taken.records, taken.found) == ([flat.bout()], [])


def test_commas_inside_cells_of_a_semicolon_file_stay(flat):
    rows = [[*flat.header, "notes"]] + [[*flat.bout(), "ran, stood, ran"]] * 3
    assert flat.pieces("a.csv", flat.text(rows, ";")).column("notes") == ["ran, stood, ran"] * 3


def test_two_signs_that_would_do_are_asked_about(flat):
    content = "a,b;c,d\n1,2;3,4\n5,6;7,8\n"
    with pytest.raises(LogError, match=r"line 1: comma and semicolon would both .*`logs\.file\.delimiter`"):
        flat.pieces("a.csv", content)
    assert flat.pieces("a.csv", content, 'delimiter = ";"').records == [["1,2", "3,4"], ["5,6", "7,8"]]


def test_the_headings_of_the_study_decide(flat):
    content = "species,animal;zone\nx,y;z\n"
    assert flat.pieces("a.csv", content, columns='duration = "d"\nanimal = "animal;zone"').headings == [
        "species",
        "animal;zone",
    ]


def test_a_declared_sign_is_kept_to(flat):
    assert flat.pieces("a.csv", "species|zone\na|b;c\n", 'delimiter = "|"').records == [["a", "b;c"]]


@pytest.mark.parametrize("sign", ["a", ".", '\\"', "5", " ", "\\n"])
def test_a_sign_that_cells_hold_is_refused_in_the_study(flat, sign):
    with pytest.raises(StudyError, match=r"logs\.file\.delimiter: .*cannot part cells"):
        flat.study(f'delimiter = "{sign}"')


def test_a_decimal_comma_among_semicolons_is_read_and_noted_once(flat):
    rows = [flat.bout(duration=d) for d in ("12,5", "7", "0,25", "1,500", "-3,5")]
    taken = flat.pieces("a.csv", flat.text([flat.header, *rows], ";"), piece_rows=2)
    assert taken.column("duration") == ["12.5", "7", "0.25", "1.500", "-3.5"]
    (found,) = (line for line in taken.found if line[3] == "decimal comma")
    assert found == (2, "duration", "12,5", "decimal comma", "repaired")
    assert "in 4 cells" in taken.problem(2)


def test_only_columns_of_numbers_are_touched(flat):
    taken = flat.pieces("a.csv", flat.text([flat.header, flat.bout(animal="1,5", duration="1,5")], ";"))
    assert taken.records[0][1] == "1,5"


def test_comma_and_point_in_one_file_are_asked_about_across_pieces(flat):
    rows = [flat.bout(duration=d) for d in ("12,5", "7", "12.5")]
    with pytest.raises(LogError, match=r"row 2: duration '12,5'.*'12.5' in row 4 has a point.*`logs\.file\.decimal`"):
        flat.pieces("a.csv", flat.text([flat.header, *rows], ";"), piece_rows=1)


@pytest.mark.parametrize("written", ["1,234", "1.234"])
def test_three_digits_alone_could_be_thousands(flat, written):
    content = flat.text([flat.header, flat.bout(duration=written), flat.bout(duration="90")], ";")
    with pytest.raises(LogError, match=rf"row 2: duration '{written}': decimal or thousands\?.*`logs\.file\.decimal`"):
        flat.pieces("a.csv", content)
    sign = written[1]
    assert flat.pieces("a.csv", content, f'decimal = "{sign}"').column("duration") == ["1.234", "90"]


def test_a_point_before_three_digits_is_usual_where_commas_part_cells(flat):
    taken = flat.pieces("a.csv", flat.text([flat.header, flat.bout(duration="1.234")]))
    assert (taken.column("duration"), taken.found) == (["1.234"], [])


@pytest.mark.parametrize("written", ["1.234,5", "1,234.5", "1 234", "1'234", "1.234.567", "12\u00a0345", "1\u202f234"])
def test_signs_between_thousands_stop_the_row(flat, written):
    rows = [flat.bout(duration="0,5"), flat.bout(duration=written)]
    taken = flat.pieces("a.csv", flat.text([flat.header, *rows], ";"))
    assert taken.rows == [2]
    assert (3, "duration", written, "thousands sign", "stop") in taken.found
    assert "12345.5" in taken.problem(3)
    assert taken.ledger.rows_read == {"a.csv": 1}


def test_a_point_stops_the_row_where_a_comma_is_declared(flat):
    rows = [flat.bout(duration=d) for d in ("0,5", "12.5")]
    taken = flat.pieces("a.csv", flat.text([flat.header, *rows], ";"), 'decimal = ","')
    assert taken.column("duration") == ["0.5"]
    assert (3, "duration", "12.5", "thousands sign", "stop") in taken.found


def test_quoted_decimal_commas_among_commas_need_the_key(flat):
    content = flat.text([flat.header, flat.bout(duration='"12,5"')])
    assert flat.pieces("a.csv", content).column("duration") == ["12,5"]
    assert flat.pieces("a.csv", content, 'decimal = ","').column("duration") == ["12.5"]


def test_numbers_under_zone_headings_are_numbers_where_tallies_are_kept(flat):
    content = "species;animal;upper sand;middle mud;notes\ndunlin;RW;12,5;3;1,5\n"
    study = flat.study()
    logs = study.logs.model_copy(update={"rule": "tallies"})
    study = study.model_copy(update={"logs": logs})
    ledger = Ledger()
    taken = flat.take(open_pieces(flat.write("a.csv", content), "a.csv", study, ledger), ledger)
    assert taken.records == [["dunlin", "RW", "12.5", "3", "1,5"]]


def test_elapsed_times_are_numbers_too(flat):
    rows = [flat.bout(start="12,5"), flat.bout(start="13")]
    taken = flat.pieces("a.csv", flat.text([flat.header, *rows], ";"), more='[logs.clock]\nformat = "unix_seconds"')
    assert taken.column("start") == ["12.5", "13"]
