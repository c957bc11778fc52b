"""Workbooks written by openpyxl and by hand. Faults 12 to 16, 30, 33, 35 as they stand in cells."""

import re
import zipfile
from datetime import date, datetime, time, timedelta

import openpyxl
import pandas as pd
import pytest
from openpyxl.styles import PatternFill
from openpyxl.utils.datetime import CALENDAR_MAC_1904

from niche.errors import LogError
from niche.logs.formats import counting, sheets, xlsx, zip_guard

START = datetime(2026, 9, 3, 8, 15)  # noqa: DTZ001 - a spreadsheet knows no zone
GREY = PatternFill("solid", fgColor="FFDDDDDD")


def row(start=START, duration=60, *, animal="RW", zone="upper sand"):
    return ["dunlin", animal, zone, start, duration]


@pytest.fixture
def book(flat):
    """Writes rows below the header into a workbook and reads it back."""

    def written(*rows, form="", before=None, after=None, header=flat.header, **keys):
        workbook = openpyxl.Workbook()
        sheet = workbook.active
        sheet.title = "watches"
        if before is not None:
            before(workbook)
        for cells in ([header] if header else []) + list(rows):
            sheet.append(cells)
        if after is not None:
            after(sheet)
        workbook.save(flat.path / "a.xlsx")
        return flat.pieces("a.xlsx", form=form, **keys)

    return written


def rewrite(path, part, change):
    """Change one part of a workbook."""
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    assert change(parts[part]) != parts[part]
    parts[part] = change(parts[part])
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, data in parts.items():
            archive.writestr(name, data)


SHEET = "xl/worksheets/sheet1.xml"


def test_typed_cells_become_one_text_each(book):
    moments = [START, datetime(2026, 9, 3), datetime(2026, 9, 3, 8, 15, 30, 250_000), date(2026, 9, 3)]  # noqa: DTZ001
    taken = book(*[row(start, n) for start, n in zip(moments, [60, 60.5, 0.1, 1e16], strict=True)])
    assert taken.column("start") == [
        "2026-09-03T08:15:00",
        "2026-09-03T00:00:00",
        "2026-09-03T08:15:30.250",
        "2026-09-03",
    ]
    assert taken.column("duration") == ["60", "60.5", "0.1", "1e+16"]
    assert (taken.rows, taken.found) == ([2, 3, 4, 5], [])


def test_booleans_and_empty_cells(book):
    taken = book(row(animal=True), row(animal=None), row(zone="  middle mud "))
    assert taken.column("animal") == ["true", "", "RW"]
    assert taken.column("zone")[2] == "  middle mud "


def test_midnight_keeps_its_time_where_the_cell_shows_time(book):
    taken = book(row(), row(datetime(2026, 9, 4)))  # noqa: DTZ001
    assert taken.column("start")[1] == "2026-09-04T00:00:00"


@pytest.mark.parametrize("epoch", [1900, 1904])
def test_dates_follow_the_workbooks_own_epoch(book, epoch):
    def before(workbook):
        if epoch == 1904:
            workbook.epoch = CALENDAR_MAC_1904

    taken = book(row(), before=before)
    assert taken.column("start") == ["2026-09-03T08:15:00"]


def test_a_serial_number_is_a_date_only_where_the_cell_says_so(book):
    assert book(row(46268.34375)).column("start") == ["46268.34375"]


@pytest.mark.parametrize(
    ("length", "shown"),
    [
        (timedelta(hours=26, minutes=3), "26:03:00"),
        (timedelta(seconds=42), "0:00:42"),
        (timedelta(days=9, milliseconds=500), "216:00:00.500"),
    ],
)
def test_durations_of_any_length(book, length, shown):
    taken = book(row(duration=length))
    assert (taken.column("duration"), taken.found) == ([shown], [])


@pytest.mark.parametrize(
    ("serial", "shown"), [(1 + 2 / 24, "26:00:00"), (9.0, "216:00:00"), (61.5, "1476:00:00"), (0.25, "6:00:00")]
)
@pytest.mark.parametrize("form", ["hh:mm:ss", "yyyy-mm-dd hh:mm"])
def test_a_duration_kept_as_a_date_is_read_by_its_day_count(book, serial, shown, form):
    def after(sheet):
        sheet["E2"].number_format = form

    taken = book(row(duration=serial), after=after)
    assert taken.column("duration") == [shown]
    assert [line[3:] for line in taken.found] == ([("duration as a date", "repaired")] if serial >= 1 else [])


def test_a_first_day_of_the_calendar_in_a_time_column_stops(book):
    def after(sheet):
        sheet["D3"].number_format = "hh:mm"

    taken = book(row(), row(1.25), after=after)
    assert taken.rows == [2]
    assert [(line[0], *line[3:]) for line in taken.found] == [(3, "duration as a date", "stop")]


def test_a_time_of_day_alone_stays_one(book):
    assert book(row(time(8, 15))).column("start") == ["08:15:00"]


@pytest.mark.parametrize(("number", "stops"), [(9.0e14, False), (9.0e15, True), (123456789012345678, True)])
def test_a_number_with_more_digits_than_a_sheet_keeps_is_no_id(book, number, stops):
    taken = book(row(animal=number))
    assert [line[3:] for line in taken.found] == ([("id turned into a number", "stop")] if stops else [])
    if not stops:
        assert taken.column("animal") == ["900000000000000"]


def test_one_sheet_with_cells_is_read_whatever_its_name(book):
    assert book(row(), before=lambda workbook: workbook.create_sheet("Sheet2")).rows == [2]


def test_several_sheets_are_asked_about_by_name(book):
    def before(workbook):
        workbook.create_sheet("areas")["A1"] = "zone"
        workbook.create_sheet("old")["A1"] = "x"
        workbook["old"].sheet_state = "hidden"

    with pytest.raises(LogError, match=r"several sheets: 'watches', 'areas', 'old' \(hidden\). Set `logs.file.sheet`"):
        book(row(), before=before)
    assert book(row(), before=before, form='sheet = "watches"').rows == [2]
    with pytest.raises(LogError, match=r"no sheet 'Watches'.*'watches', 'areas'"):
        book(row(), before=before, form='sheet = "Watches"')


def test_hidden_rows_and_colours_are_flagged_once(book):
    def after(sheet):
        sheet["A1"].fill = GREY
        for number in (3, 4):
            sheet.row_dimensions[number].hidden = True
            sheet.cell(number, 2).fill = GREY

    taken = book(row(), row(), row(), after=after)
    assert taken.rows == [2, 3, 4]
    assert [(r, reason, action) for r, _, _, reason, action in taken.found] == [
        (3, "hidden rows", "flagged"),
        (3, "coloured cells", "flagged"),
    ]
    assert all("2 " in e.problem for e in taken.ledger.entries)


def test_a_coloured_header_means_nothing(book):
    def after(sheet):
        for cell in sheet[1]:
            cell.fill = GREY

    assert book(row(), after=after).found == []


def test_merged_cells_stop_the_rows_they_cover(book):
    taken = book(row(), row(), row(animal=None), row(), after=lambda sheet: sheet.merge_cells("B3:B4"))
    assert taken.rows == [2, 3, 5]
    assert [(r, reason, action) for r, _, _, reason, action in taken.found] == [(4, "merged cells", "stop")]
    assert "rows 3 to 4, columns 2 to 2" in taken.problem(4)


def test_cells_merged_across_columns_stop_their_row(book):
    taken = book(row(), row(), after=lambda sheet: sheet.merge_cells("B3:C3"))
    assert (taken.rows, taken.found[0][3]) == ([2], "merged cells")


def test_a_merged_upper_header_is_read_as_it_looks(book, flat):
    def after(sheet):
        sheet.merge_cells("A1:C1")

    columns = (
        'species = "bird species"\nanimal = "bird animal"\nzone = "bird zone"\n'
        'start = "watch start"\nduration = "watch duration"'
    )
    rows = [["bird", None, None, "watch", None], flat.header, row()]
    taken = book(*rows, header=None, after=after, form="header_rows = 2", columns=columns)
    assert taken.headings == ["bird species", "bird animal", "bird zone", "watch start", "watch duration"]
    assert (taken.rows, taken.found) == ([3], [])


def test_a_formula_counts_by_its_stored_result_or_stops(book, flat):
    book(row(), row(duration="=1+1"))
    taken = flat.pieces("a.xlsx")
    assert taken.rows == [2]
    assert [(r, reason, action) for r, _, _, reason, action in taken.found] == [(3, "formula without result", "stop")]
    rewrite(flat.path / "a.xlsx", SHEET, lambda xml: re.sub(rb"</f><v ?/?>(</v>)?", b"</f><v>2</v>", xml))
    assert flat.pieces("a.xlsx").column("duration") == ["60", "2"]


def test_a_cell_beyond_the_header_stops_its_row(book):
    taken = book(row(), [*row(), None, "note"])
    assert [(r, reason, action) for r, _, _, reason, action in taken.found] == [(3, "wrong number of cells", "stop")]


def test_blank_rows_between_are_set_aside_and_those_below_do_not_count(book):
    taken = book(row(), [None], row(), after=lambda sheet: sheet.cell(40, 1).__setattr__("fill", GREY))
    assert taken.rows == [2, 4]
    assert taken.found == [(3, "", "", "blank row", "set_aside")]


def test_a_stray_cell_far_below_is_an_error(book, monkeypatch):
    monkeypatch.setattr(sheets, "BLANK_ROWS", 20)
    with pytest.raises(LogError, match="row 40: 37 blank rows above it"):
        book(row(), after=lambda sheet: sheet.cell(40, 1, "x"))


def test_a_sheet_filled_to_its_last_row_was_cut_off(book, monkeypatch):
    monkeypatch.setattr(counting, "SHEET_ROWS", 3)
    with pytest.raises(LogError, match="filled to row 3, the last of a spreadsheet"):
        book(row(), row())


def test_header_further_down_units_and_totals_as_in_text(book, flat):
    rows = [["Tidal flat 2026"], flat.header, ["", "code", None, "utc", "s"], row(), ["Total", None, None, None, 60]]
    taken = book(*rows, header=None, form='header_row = 2\nunits_row = true\ntotals = "set_aside"')
    assert taken.rows == [4]
    assert [(r, reason, action) for r, _, _, reason, action in taken.found] == [
        (None, "above the header", "flagged"), (3, "units row", "set_aside"), (5, "totals row", "set_aside"),
    ]  # fmt: skip


def test_text_with_a_decimal_comma_is_a_number(book):
    assert book(row(duration="12,5")).column("duration") == ["12.5"]


def test_pandas_reads_the_same_cells(book, flat):
    rows = [row(datetime(2026, 9, 3, 8, i % 60), i, animal=f"A{i % 5}") for i in range(300)]  # noqa: DTZ001
    taken = book(*rows, piece_rows=70)
    frame = pd.read_excel(flat.path / "a.xlsx")
    assert taken.sizes == [70, 70, 70, 70, 20]
    assert taken.column("animal") == frame["animal"].tolist()
    assert [int(text) for text in taken.column("duration")] == frame["duration"].tolist()
    assert pd.to_datetime(taken.column("start")).tolist() == frame["start"].tolist()


@pytest.mark.parametrize("size", [1, 2, 3])
def test_no_piece_is_longer_than_allowed(book, size):
    taken = book(*[row()] * 5, piece_rows=size)
    assert max(taken.sizes) == size
    assert taken.rows == [2, 3, 4, 5, 6]


def test_a_bomb_is_refused_with_its_size(book, flat, monkeypatch):
    book(row())
    monkeypatch.setattr(zip_guard, "EXPANSION_FREE", 1_000_000)
    with zipfile.ZipFile(flat.path / "a.xlsx", "a", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("xl/media/blob.bin", b"\0" * 5_000_000)
    with pytest.raises(LogError, match=r"a.xlsx: refused: unpacks to 5 MB from 0.01 MB, more than 200 times"):
        flat.pieces("a.xlsx")


def test_shared_texts_that_would_fill_memory_are_refused(book, flat, monkeypatch):
    book(row())
    monkeypatch.setattr(zip_guard, "WHOLE_PART_LIMIT", 100)
    with pytest.raises(LogError, match=r"refused: unpacks to .* in "):
        flat.pieces("a.xlsx")


def test_entities_are_refused(book, flat):
    book(row())
    doctype = b'<!DOCTYPE x [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;">]>'
    rewrite(flat.path / "a.xlsx", SHEET, lambda xml: doctype + xml)
    with pytest.raises(LogError, match=r"refused: xl/worksheets/sheet1.xml declares an XML document type"):
        flat.pieces("a.xlsx")


@pytest.mark.parametrize(
    "change",
    [
        lambda xml: xml.replace(b'<row r="2"', b'<row r="99999999999"'),
        lambda xml: xml.replace(b'<row r="3"', b'<row r="2"'),
        lambda xml: xml[: len(xml) // 2],
        lambda xml: xml.replace(b'<row r="2"', b'<row r="x"'),
        lambda xml: xml.replace(b"<v>60</v>", b"<v>sixty</v>"),
        lambda xml: xml.replace(b't="inlineStr"><is><t>RW</t></is>', b't="s"><v>999</v>'),
    ],
)
def test_a_damaged_sheet_is_an_error_and_no_traceback(book, flat, change):
    book(row(), row())
    rewrite(flat.path / "a.xlsx", SHEET, change)
    with pytest.raises(LogError, match=r"a.xlsx: .*save it again"):
        flat.pieces("a.xlsx")


def test_texts_kept_apart_from_the_sheet_are_found(book, flat):
    book(row(), row(animal="GY"))
    path = flat.path / "a.xlsx"
    kind = "application/vnd.openxmlformats-officedocument.spreadsheetml.sharedStrings+xml"
    override = f'<Override PartName="/xl/sharedStrings.xml" ContentType="{kind}"/></Types>'.encode()
    rewrite(path, "[Content_Types].xml", lambda xml: xml.replace(b"</Types>", override))
    rewrite(path, SHEET, lambda xml: xml.replace(b't="inlineStr"><is><t>RW</t></is>', b't="s"><v>1</v>'))
    space = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
    with zipfile.ZipFile(path, "a") as archive:
        archive.writestr("xl/sharedStrings.xml", f'<sst xmlns="{space}"><si><t>x</t></si><si><t>R W</t></si></sst>')
    assert flat.pieces("a.xlsx").column("animal") == ["R W", "GY"]


def test_what_a_sheet_says_of_its_size_is_not_believed(book, flat):
    book(row(), row(), row())
    rewrite(flat.path / "a.xlsx", SHEET, lambda xml: re.sub(rb'<dimension ref="[^"]*"', b'<dimension ref="A1:B2"', xml))
    assert flat.pieces("a.xlsx").rows == [2, 3, 4]


def test_rows_lost_by_the_reader_are_noticed(book, monkeypatch):
    whole = xlsx._rows
    monkeypatch.setattr(xlsx, "_rows", lambda *a: (r for r in whole(*a) if r.number != 3))
    with pytest.raises(LogError, match="3 filled rows read and 4 counted in the sheet"):
        book(row(), row(), row())


@pytest.mark.parametrize(
    ("content", "words"), [(b"\xd0\xcf\x11\xe0", "password"), (b"species,zone\n", "cannot be read as the workbook")]
)
def test_what_is_no_workbook_is_said_to_be_none(flat, content, words):
    with pytest.raises(LogError, match=words):
        flat.pieces("a.xlsx", content)


def test_a_missing_workbook(flat):
    with pytest.raises(LogError, match="there is no such file"):
        flat.pieces("a.xlsx")
