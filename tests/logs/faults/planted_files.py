"""Faults 28 to 38, 41 and 42: files, tables, tags, tallies."""

from __future__ import annotations

import io
from datetime import datetime, timedelta

from fault_register import DURATIONS, HEADER, SOUND, Found, Planted, lengths

TALLY = "species,animal,session,upper sand,upper mud,middle sand,middle mud,lower sand,lower mud\n"


def workbook() -> bytes:
    """A workbook with a hidden row, a second sheet and a coloured cell."""
    from openpyxl import Workbook
    from openpyxl.styles import PatternFill

    book = Workbook()
    sheet = book.active
    sheet.title = "bouts"
    sheet.append(["species", "animal", "session", "zone", "start", "end"])
    day = datetime(2026, 9, 3)  # noqa: DTZ001 - cells of a workbook have no time zone
    for hour in (8, 9, 10):
        start = day + timedelta(hours=hour)
        sheet.append(["dunlin", "RW", "s1", "upper mud", start, start + timedelta(seconds=630)])
    sheet["A2"].fill = PatternFill("solid", fgColor="FFFF00")
    sheet.row_dimensions[3].hidden = True
    book.create_sheet("notes").append(["rain at noon"])
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


PLANTED = [
    Planted(
        28,
        "decimal commas and semicolons",
        "read and noted where nothing else can be meant; else asks",
        "logs.file.delimiter, logs.file.decimal",
        "species;animal;session;zone;start;duration\ndunlin;RW;s1;upper mud;2026-09-03T08:00:30Z;90,5\n",
        found=(
            Found(None, "", "repaired", ("cells are parted by a semicolon",)),
            Found(2, "duration", "repaired", ("decimal comma",)),
        ),
        rows={"used": 1},
        study={"columns": DURATIONS},
        check=lambda log: lengths(log) == [90.5],
    ),
    Planted(
        29,
        "a byte order mark, UTF-16, Windows letters",
        "UTF-8 and UTF-16 are known by their marks; others must be declared",
        "logs.file.encoding",
        (HEADER + SOUND.replace("RW", "Grün")).encode("windows-1252"),
        refused=("a.csv", "not UTF-8", "logs.file.encoding"),
        answer={"tables": '[logs.file]\nencoding = "windows-1252"'},
        answered={"used": 1},
        check_answered=lambda log: log.visits["animal"].tolist() == ["Grün"],
    ),
    Planted(
        30,
        "notes above the header, or a header of two rows",
        "asks for the header’s row",
        "logs.file.header_row, logs.file.header_rows, logs.file.units_row",
        "Tidal flat September 2026,,,,,\n" + HEADER + SOUND,
        refused=("a.csv", "logs.file.header_row"),
        answer={"tables": "[logs.file]\nheader_row = 2"},
        answered={"used": 1},
    ),
    Planted(
        31,
        "rows of totals among the bouts",
        "stops",
        "logs.file.totals",
        HEADER + SOUND + "Total,,,,,600\n",
        found=(Found(3, "species", "stop", ("total", "logs.file.totals")),),
        rows={"used": 1, "stop": 1},
        answer={"tables": '[logs.file]\ntotals = "set_aside"'},
        answered={"used": 1, "set_aside": 1},
    ),
    Planted(
        32,
        "zones as columns of a table",
        "asks for the rule of tallies",
        "logs.rule, logs.tallies.unit",
        TALLY + "dunlin,RW,s1,0,340,0,20,0,0\n",
        refused=("a.csv", "upper sand", '`logs.rule = "tallies"`', "`logs.tallies.unit`"),
        answer={
            "keys": 'rule = "tallies"',
            "columns": 'session = "session"',
            "tables": '[logs.tallies]\nunit = "s"',
        },
        answered={"used": 1},
        check_answered=lambda log: int(log.visits["amount"].sum()) == 360_000,
    ),
    Planted(
        33,
        "several sheets, hidden rows, colour that means something",
        "flagged; the sheet is asked for where several hold data; colour is never data",
        "logs.file.sheet",
        {"a.xlsx": workbook()},
        refused=("a.xlsx", "logs.file.sheet", "'bouts'", "'notes'"),
        study={"keys": 'time_zone = "Etc/GMT"', "pattern": "*.xlsx"},
        answer={"tables": '[logs.file]\nsheet = "bouts"'},
        answered={"used": 3},
        check_answered=lambda log: any("hidden rows are read" in e.problem for e in log.ledger.entries),
    ),
    Planted(
        34,
        "a row with too many or too few cells",
        "stops, with the line",
        "",
        HEADER + SOUND + SOUND.replace("\n", ",ran, then stood\n").replace("08:", "09:"),
        found=(Found(3, "", "stop", ("8 cells where the header has 6", "quotes")),),
        rows={"used": 1, "stop": 1},
    ),
    Planted(
        35,
        "a file cut short",
        "stops",
        "",
        (HEADER + SOUND + '"dunlin,RW,s1,upper mud,2026-09-03T08:10:30Z'),
        refused=("a.csv", "line 3", "quote"),
    ),
    Planted(
        36,
        "text that a spreadsheet would run as a formula",
        "read as text, and made harmless in every table that is written",
        "",
        HEADER + SOUND.replace("RW", '"=HYPERLINK(""http://x"")"').replace("upper mud", "=1+1"),
        found=(Found(2, "zone", "stop", ("no such zone",)),),
        rows={"stop": 1},
        check=lambda log: _harmless(log.ledger.table()),
    ),
    Planted(
        37,
        "test tags and what is no animal",
        "set aside and counted, by a declared list",
        "logs.reads.test_tags, logs.columns.kind",
        "species,tag,zone,time\n"
        + "".join(f"dunlin,{tag},upper mud,2026-09-03T08:0{n}:30Z\n" for n in (0, 1) for tag in ("T0001", "A1B2")),
        found=(Found(2, "tag", "set_aside", ("test",)),),
        rows={"used": 2, "set_aside": 2},
        study={
            "keys": 'rule = "reads"',
            "columns": 'tag = "tag"\ntime = "time"',
            "tables": '[logs.reads]\ngap = 120\ntest_tags = ["T0001"]',
        },
    ),
    Planted(
        38,
        "a tag that was put on another animal",
        "the tag table’s validity dates decide; outside them a read is set aside",
        "logs.tags.file",
        {
            "a.csv": "tag,zone,time\n"
            + "".join(f"A1B2,upper mud,2026-0{month}-03T08:0{n}:30Z\n" for month in (3, 5, 9) for n in (0, 1)),
            "worn.txt": "tag,animal,species,valid_from,valid_to\n"
            "A1B2,RW,dunlin,2026-03-01,2026-03-31\nA1B2,GY,redshank,2026-09-01,\n",
        },
        found=(Found(4, "tag", "set_aside", ("nobody wore the tag at this time",)),),
        rows={"used": 4, "set_aside": 2},
        study={
            "keys": 'rule = "reads"\ntime_zone = "Etc/GMT"',
            "columns": 'tag = "tag"\ntime = "time"',
            "tables": '[logs.reads]\ngap = 120\n[logs.tags]\nfile = "worn.txt"',
        },
        check=lambda log: log.visits["animal"].tolist() == ["RW", "GY"],
    ),
    Planted(
        41,
        "percentages among seconds or counts",
        "asks",
        "logs.tallies.unit, logs.tallies.adds_to_100",
        TALLY + "dunlin,RW,s1,10,60,0,30,0,0\ndunlin,GY,s1,0,340,0,20,0,0\nredshank,BB,s1,25,25,25,25,0,0\n",
        found=(Found(2, "zone", "stop", ("100", "percent")),),
        rows={"used": 1, "stop": 2},
        study={
            "keys": 'rule = "tallies"',
            "columns": 'session = "session"',
            "tables": '[logs.tallies]\nunit = "s"',
        },
        answer={"tables": '[logs.tallies]\nunit = "s"\nadds_to_100 = "keep"'},
        answered={"used": 3},
    ),
    Planted(
        42,
        "a count above 1 in a row",
        "weighs as many, as one unit",
        "logs.columns.count",
        "species,session,zone,time,count\ndunlin,s1,upper mud,2026-09-03T08:00:30Z,14\n",
        rows={"used": 1},
        study={
            "keys": 'rule = "scans"',
            "columns": 'animal = ""\nsession = "session"\ntime = "time"\ncount = "count"',
        },
        check=lambda log: log.visits["amount"].tolist() == [14] and log.visits["session"].tolist() == ["s1"],
    ),
]


def _harmless(table: object) -> bool:
    from niche.tables import csv_text

    return not any(
        cell.lstrip('"')[:1] in "=+-@" for line in csv_text(table).splitlines() for cell in line.split(",") if cell
    )
