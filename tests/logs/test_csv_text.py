"""CSV as people save it: line numbers that hold, rows that do not fit, quotes left open, marks at the start."""

import numpy as np
import pandas as pd
import pytest

from niche.errors import LogError
from niche.logs.formats.csv_text import read_csv
from niche.logs.ledger import Ledger
from niche.logs.rules.bouts import Bouts

HEADER = "species,animal,session,zone,start,end,notes\n"


def line(start, end, notes="", **cells):
    return f"dunlin,RW,s1,{cells.get('zone', 'mud')},2026-09-03T{start}:00Z,2026-09-03T{end}:00Z,{notes}\n"


def refused(field, *logs, **keys):
    with pytest.raises(LogError) as caught:
        field.read(*logs, **keys)
    return str(caught.value)


def test_embedded_line_breaks_keep_the_line_numbers(field):
    log = field.read(
        HEADER
        + line("08:00", "08:10", '"two\nlines"')  # lines 2 and 3
        + line("08:10", "08:20", '"three\r\nwhole\nlines"')  # 4 to 6
        + line("08:20", "08:30", zone="creek")  # 7
        + line("08:30", "08:40", '"\n"')  # 8 and 9
        + line("08:40", "08:50")  # 10
    )
    assert log.visits["row"].tolist() == [2, 4, 8, 10]
    assert field.entries(log) == [(7, "zone", "creek", "unknown zone", "stop")]


def test_a_line_break_in_the_header_moves_the_first_row_down(field):
    log = field.read(HEADER.replace("notes", '"notes\nof the observer"') + line("08:00", "08:10"))
    assert log.visits["row"].tolist() == [3]


def test_commas_and_quotes_in_quoted_cells_are_text(field):
    log = field.read(HEADER + line("08:00", "08:10", '"ran, then ""stood"""') + line("08:10", "08:20", 'a "b" c'))
    assert field.rows(log) == {"used": 2}


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"], ids=["LF", "CRLF", "CR"])
@pytest.mark.parametrize("last", [True, False], ids=["end at the last line", "no end at the last line"])
@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"], ids=["plain", "byte order mark"])
def test_line_ends_and_byte_order_marks_do_not_matter(field, end, last, mark):
    text = HEADER + line("08:00", "08:10") + line("08:10", "08:20", zone="creek") + line("08:20", "08:30")
    text = text if last else text[:-1]
    log = field.read(mark + text.replace("\n", end).encode())
    assert log.visits["row"].tolist() == [2, 4]
    assert field.entries(log) == [(3, "zone", "creek", "unknown zone", "stop")]


@pytest.mark.parametrize("blank", ["", ",,,,,,"], ids=["no cells", "empty cells"])
@pytest.mark.parametrize("place", [0, 1, 2])
def test_a_blank_row_is_set_aside_wherever_it_stands(field, blank, place):
    lines = [line("08:00", "08:10"), line("08:10", "08:20")]
    lines.insert(place, blank + "\n")
    log = field.read(HEADER + "".join(lines))
    assert field.entries(log) == [(place + 2, "", "", "blank row", "set_aside")]
    assert log.visits["row"].tolist() == [row for row in (2, 3, 4) if row != place + 2]
    log.require_usable()


@pytest.mark.parametrize(
    ("ragged", "cells", "words"),
    [
        (line("08:00", "08:10", "ran, then stood"), 8, "quotes"),
        ("dunlin,RW,s1,mud\n", 4, "cells where the header has 7"),
        ("total\n", 1, "cells where the header has 7"),
        (",,,,,,,,\n", 9, "cells where the header has 7"),
    ],
)
def test_a_row_with_a_wrong_number_of_cells_stops_with_its_line(field, ragged, cells, words):
    log = field.read(HEADER + line("07:00", "07:10") + ragged)
    assert [entry[0::3] for entry in field.entries(log)] == [(3, "wrong number of cells")]
    assert field.rows(log) == {"used": 1, "stop": 1}
    assert field.problem(log, 3).startswith(f"{cells} cells where the header has 7")
    assert words in field.problem(log, 3)


def test_a_ragged_row_stops_even_where_every_policy_says_set_aside(field):
    policies = ("unknown_zone", "unknown_species", "unreadable", "end_before_start", "overlap")
    log = field.read(HEADER + "x\n", problems="\n".join(f'{name} = "set_aside"' for name in policies))
    assert field.rows(log) == {"stop": 1}


def test_a_long_ragged_row_is_shown_in_part(field):
    log = field.read(HEADER + "x" * 500 + "\n")
    assert log.ledger.entries[0].value == "x" * 80


@pytest.mark.parametrize(
    "text",
    [
        HEADER + line("08:00", "08:10", '"ran') + line("08:10", "08:20"),
        HEADER + line("08:00", "08:10", '"ran" off'),
        HEADER.replace("notes", '"notes') + line("08:00", "08:10"),
        HEADER + line("08:00", "08:10", '"'),
    ],
    ids=["to the end of the file", "text after the quote", "in the header", "alone"],
)
def test_an_unclosed_quote_stops_the_file_and_says_how_to_quote(field, text):
    told = refused(field, text)
    assert told.startswith("a.csv: line ")
    assert "A quoted cell must end with a quote" in told


def test_a_cell_longer_than_a_million_letters_stops_the_file(field):
    assert refused(field, HEADER + line("08:00", "08:10", "x" * 1_100_000)).startswith("a.csv: line 2: ")


@pytest.mark.parametrize("text", ["", "\n", "\n" + HEADER, ",,,\n", b"\xef\xbb\xbf", "\r\n\r\n"])
def test_a_file_without_a_header_is_refused(field, text):
    assert refused(field, text) == "a.csv: line 1: no header. The first line names the columns."


@pytest.mark.parametrize("second", ["zone", " zone", "zone\u00a0"])
def test_a_heading_that_stands_twice_is_refused(field, second):
    told = refused(field, HEADER.replace("notes", second))
    assert told.startswith("a.csv: line 1: the heading 'zone' stands twice")


def test_several_columns_without_a_heading_are_no_trouble(field):
    log = field.read(HEADER.replace("notes", ",") + "dunlin,RW,s1,mud,2026-09-03T08:00Z,2026-09-03T08:10Z,x,y\n")
    assert field.rows(log) == {"used": 1}


def test_spaces_round_a_heading_do_not_matter(field):
    log = field.read(HEADER.replace("zone", " zone ").replace("start", '"start\n"') + line("08:00", "08:10"))
    assert log.visits["zone"].tolist() == ["mud"]


@pytest.mark.parametrize("name", ["species", "animal", "session", "zone", "start", "end"])
def test_a_heading_that_is_not_there_is_told_with_its_key_and_those_that_are(field, name):
    told = refused(field, HEADER.replace(name, "other", 1))
    assert told.startswith(f"a.csv: line 1: no heading '{name}', which `logs.columns.{name}` names.")
    assert "'other'" in told
    assert "'notes'" in told


def test_headings_are_taken_from_the_study(field):
    text = "Art;x,Ring,Von,Bis,Ort,Folge\ndunlin,RW,2026-09-03T08:00Z,2026-09-03T08:10Z,mud,s1\n"
    columns = 'species = "Art;x"\nzone = "Ort"\nstart = "Von"\nend = "Bis"'
    log = field.read(text.replace("Ring", "animal").replace("Folge", "session"), columns=columns)
    assert log.visits[["species", "animal", "session", "zone"]].to_numpy().tolist() == [["dunlin", "RW", "s1", "mud"]]


def test_a_missing_heading_is_found_in_a_file_without_rows_too(field):
    assert "no heading 'zone'" in refused(field, HEADER.replace("zone", "place"))


def test_without_a_session_column_the_animal_stands_in(field):
    text = "species,animal,zone,start,end\ndunlin,RW,mud,2026-09-03T08:00Z,2026-09-03T08:10Z\n"
    log = field.read(text, units='animal = "animal"')
    assert log.visits["session"].tolist() == ["RW"]


@pytest.mark.parametrize(
    ("content", "byte"),
    [
        (HEADER.encode() + line("08:00", "08:10", "é").encode("latin-1"), "0xe9"),
        (HEADER.encode() + b"\xc3", "0xc3"),
        (HEADER.encode() + b"\xed\xa0\x80", "0xed"),
    ],
    ids=["Latin-1", "cut short", "half a pair"],
)
def test_a_file_that_is_not_utf8_is_refused_with_the_byte(field, content, byte):
    told = refused(field, content)
    assert told.startswith("a.csv: not UTF-8 (byte " + byte)
    assert "logs.file.encoding" in told


def test_utf_16_tells_itself_by_its_mark(field):
    log = field.read((HEADER + line("08:00", "08:10", "é")).encode("utf-16"))
    assert field.rows(log) == {"used": 1}


SPOILED = (
    HEADER
    + line("08:00", "08:10", '"two\nlines"')
    + "\n"
    + line("08:10", "08:20", zone=" Mud")
    + line("08:20", "08:25", zone="")
    + "short,row\n"
    + line("08:25", "08:30", zone="creek")
    + ",,,,,,\n"
    + line("08:30", "08:30")
    + line("08:40", "08:35")
    + line("08:45", "08:50")
)


@pytest.mark.parametrize("piece_rows", [1, 2, 3, 4, 5, 7])
def test_the_size_of_the_pieces_changes_nothing(field, piece_rows):
    whole = field.read(SPOILED)
    folder = field.folder()
    (folder / "a.csv").write_text(SPOILED, encoding="utf-8", newline="")
    ledger = Ledger()
    rule = Bouts(field.study(folder), ledger)
    pieces = list(read_csv(folder / "a.csv", "a.csv", ledger, piece_rows))
    assert max(len(piece.rows) for piece in pieces) == piece_rows
    visits = pd.concat([rule.visits(piece) for piece in pieces], ignore_index=True)
    ledger.close()
    assert visits.to_dict("list") == whole.visits.to_dict("list")
    assert ledger.sums() == whole.ledger.sums()
    assert sorted(map(repr, ledger.entries)) == sorted(map(repr, whole.ledger.entries))


def test_a_piece_holds_each_cell_as_written_under_its_heading(field):
    folder = field.folder()
    (folder / "a.csv").write_text('a, b \n1,"x\ny"\n 2 ,\n', encoding="utf-8")
    (piece,) = read_csv(folder / "a.csv", "any name", Ledger())
    assert piece.file == "any name"
    np.testing.assert_array_equal(piece.rows, [2, 4])
    assert {name: cells.to_pylist() for name, cells in piece.columns.items()} == {"a": ["1", " 2 "], "b": ["x\ny", ""]}
    assert piece.column(None).to_pylist() == ["", ""]


def test_a_file_that_vanished_is_told_so(field):
    with pytest.raises(LogError, match=r"^b\.csv: there is no such file"):
        list(read_csv(field.folder() / "b.csv", "b.csv", Ledger()))


def test_a_folder_is_no_log(field):
    with pytest.raises(LogError, match="cannot be read"):
        list(read_csv(field.folder(), "b.csv", Ledger()))
