"""Rows and time that could be lost or gained quietly: open quotes, slips of the year, pieces."""

import pandas as pd
import pytest

from niche.errors import LogError, StudyError
from niche.logs import read_logs
from niche.logs.formats.csv_text import read_csv
from niche.logs.ledger import Ledger
from niche.logs.rules.bouts import Bouts

HEADER = "species,animal,session,zone,start,end,notes\n"


def line(minute, notes="", animal="RW"):
    return f"dunlin,{animal},s1,mud,2026-09-03T08:{minute:02d}Z,2026-09-03T08:{minute + 1:02d}Z,{notes}\n"


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"], ids=["LF", "CRLF", "CR"])
@pytest.mark.parametrize("between", [0, 1, 5])
def test_rows_swallowed_by_a_quote_left_open_stop_the_work(field, between, end):
    text = (
        HEADER
        + line(0)
        + line(1, '"ran')
        + "".join(line(2 + i) for i in range(between))
        + line(9, 'two juv"')
        + line(10)
    )
    log = field.read(text.replace("\n", end))
    assert field.rows(log) == {"used": 2, "stop": 1}
    assert [entry[0::3] for entry in field.entries(log) if entry[0] is not None] == [(3, "quote left open")]
    assert f"runs on to line {4 + between}" in field.problem(log, 3)
    assert log.visits["row"].tolist() == [2, 5 + between]


def test_a_quote_left_open_in_an_early_cell_is_found_too(field):
    text = HEADER + line(0, animal='"RW') + line(1) + line(2, animal='GY"')
    assert field.rows(field.read(text)) == {"stop": 1}


@pytest.mark.parametrize("notes", ["two\nlines", "mud, sand,\nthen mud, then off", "a,b,c,d\n\n", "\n"])
def test_a_remark_of_several_lines_is_a_remark(field, notes):
    assert field.rows(field.read(HEADER + line(0, f'"{notes}"') + line(1))) == {"used": 2}


def test_a_quote_that_breaks_the_file_is_told_where_its_row_begins(field):
    with pytest.raises(LogError, match=r"^a\.csv: line 3: .*\(seen at line 5, in the row that begins here\)"):
        field.read(HEADER + line(0) + line(1, '"ran') + line(2) + line(3, '"off" he said'))


@pytest.mark.parametrize("policy", ["stop", "set_aside"])
def test_a_bout_of_more_than_a_century_is_a_slip_of_the_year(field, policy):
    row = field.bout("0226-09-03T08:00Z", "2026-09-03T08:10Z")
    log = field.read([row, field.bout()], problems=f'unreadable = "{policy}"')
    assert field.rows(log) == {"used": 1, policy: 1}
    assert field.problem(log, 2) == "more than a century after the start; is the year right?"
    assert log.ledger.milliseconds_read == 600_000


def test_a_bout_of_more_than_a_day_is_used_and_flagged(field):
    log = field.read(
        [
            field.bout("2026-09-03T08:00Z", "2026-09-04T08:00Z"),
            field.bout("2026-09-04T08:00Z", "2026-09-05T08:00:00.001Z"),
        ],
        logs="clock = { longest_bout = 24 }",
    )
    assert field.rows(log) == {"used": 2}
    assert field.entries(log) == [(3, "end", "2026-09-05T08:00:00.001Z", "long bout", "flagged")]


def test_a_duration_of_more_than_a_day_is_used_and_flagged(field):
    header = ("species", "animal", "session", "zone", "start", "duration")
    rows = [[*field.bout(day=f"2026-09-0{n}")[:-1], hours] for n, hours in ((1, "24"), (5, "24.1"))]
    log = field.read(
        field.text(*rows, header=header),
        columns='duration = "duration"',
        logs='duration_unit = "h"\nclock = { longest_bout = 24 }',
    )
    assert field.entries(log) == [(3, "duration", "24.1", "long bout", "flagged")]


@pytest.mark.parametrize("offset", ["+05:99", "+00:60", "-0175", "+99"])
def test_an_offset_with_more_than_59_minutes_is_no_offset(field, offset):
    log = field.read([field.bout(f"2026-09-03T08:00{offset}", "2026-09-04T20:10Z")])
    assert field.problem(log, 2) == "no such date or time of day"


@pytest.mark.parametrize("space", ["\u00a0", "\u2003", "\u3000", "\t"])
def test_spaces_of_any_kind_round_a_time_do_not_matter(field, space):
    log = field.read([field.bout(f"{space}2026-09-03T08:00Z", f"2026-09-03T08:10Z{space}")])
    assert field.rows(log) == {"used": 1}


@pytest.mark.parametrize("time", ["0000-06-01T08:00Z", "9999-06-01T08:00Z"])
def test_a_year_that_some_calendars_do_not_reach_is_refused(field, time):
    log = field.read([field.bout(time, "9998-01-01T00:00Z")])
    assert field.rows(log) == {"stop": 1}


def test_the_first_time_of_the_file_is_the_same_in_pieces_of_any_size(field):
    rows = [
        field.bout("x", "2026-09-03T08:10Z"),
        field.bout("2026-09-03T08:10", "2026-09-03T08:20", animal="GY"),
        field.bout("2026-09-03T08:10Z", "2026-09-03T08:20Z", animal="NB"),
    ]
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(*rows), encoding="utf-8")
    study = field.study(folder, logs='time_zone = "Europe/Berlin"')
    read = []
    for piece_rows in (1, 2, 100):
        ledger = Ledger()
        rule = Bouts(study, ledger)
        visits = pd.concat([rule.visits(piece) for piece in read_csv(folder / "a.csv", "a.csv", ledger, piece_rows)])
        read.append((visits["row"].tolist(), sorted((e.row, e.field, e.problem) for e in ledger.entries)))
    assert read[0] == read[1] == read[2]
    assert read[0][0] == [4]


def test_repairs_and_flags_are_told_of_rows_that_are_used_only(field):
    log = field.read(
        [
            field.bout(zone=" MUD", animal=""), field.bout(zone="", species="knot"), field.bout("9.45", "24:00"),
            field.bout("2026-02-30T24:00Z", "2026-03-02T00:00Z"), field.bout("08:30", "08:30", session=""),
        ]
    )  # fmt: skip
    assert {e.action for e in log.ledger.entries} == {"set_aside", "stop"}


def test_a_cell_of_thousands_of_letters_is_shown_in_part(field):
    log = field.read([field.bout(zone="x" * 5000)])
    assert log.ledger.entries[0].value == "x" * 80 + "..."


def test_an_animal_is_named_in_quotes(field):
    log = field.read([field.bout(animal="\x1bRW"), field.bout("08:05", "08:20", animal="\x1bRW")])
    (problem,) = (e.problem for e in log.ledger.entries if e.row == 3 and e.action == "stop")
    assert problem.startswith("'\\x1bRW' is already in 'mud'")


def test_an_absolute_pattern_finds_its_files(field):
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(field.bout()), encoding="utf-8")
    log = read_logs(field.study(folder, files=f'["{folder.as_posix()}/*.csv"]'))
    assert [file.name for file in log.files] == ["a.csv"]


@pytest.mark.parametrize("name", ["log[1].csv", "what?.csv", "[a].csv", "*.csv"])
def test_a_file_may_bear_the_letters_of_a_pattern(field, name):
    folder = field.folder()
    (folder / name).write_text(field.text(field.bout()), encoding="utf-8")
    log = read_logs(field.study(folder, files=f'["{name}"]'))
    assert [file.name for file in log.files] == [name]


@pytest.mark.parametrize("pattern", [".", "**x", "a" * 5000, "/" + "a" * 5000, "/", "./"])
def test_a_pattern_that_is_none_names_no_file(field, pattern):
    with pytest.raises(StudyError, match=r"^logs\.files\[1\]: "):
        read_logs(field.study(field.folder(), files=f'["{pattern}"]'))


def test_one_row_is_one_row_in_the_table(field):
    assert field.read([field.bout()]).ledger.table()["value"].tolist() == ["1 row"]
