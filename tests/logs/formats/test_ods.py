"""OpenDocument sheets written by odfpy."""

import zipfile
from datetime import datetime

import pandas as pd
import pytest
from odf.opendocument import OpenDocumentSpreadsheet
from odf.style import Style, TableCellProperties
from odf.table import CoveredTableCell, Table, TableCell, TableRow
from odf.text import P

from niche.errors import LogError
from niche.logs.formats import counting, ods


def cell(kind=None, value=None, text=None, **more):
    keys = {"float": "value", "date": "datevalue", "time": "timevalue", "boolean": "booleanvalue"}
    given = {"valuetype": kind, **({keys[kind]: value} if kind in keys else {})} if kind else {}
    made = TableCell(**given, **more)
    if text is not None or kind == "string":
        made.addElement(P(text=value if text is None else text))
    return made


def strings(*values):
    return [cell("string", value) for value in values]


def bout(start="2026-09-03T08:15:00", duration=None, *, animal="RW"):
    return [*strings("dunlin", animal, "upper sand"), cell("date", start), duration or cell("float", 60)]


@pytest.fixture
def book(flat):
    def written(*rows, sheets=(), form="", styles=(), change=None, **keys):
        document = OpenDocumentSpreadsheet()
        for style in styles:
            document.automaticstyles.addElement(style)
        table = Table(name="watches")
        for made in (strings(*flat.header), *rows):
            attributes, cells = made if isinstance(made, tuple) else ({}, made)
            line = TableRow(**attributes)
            for one in cells:
                line.addElement(one)
            table.addElement(line)
        document.spreadsheet.addElement(table)
        for other in sheets:
            document.spreadsheet.addElement(other)
        document.save(flat.path / "a.ods")
        if change is not None:
            with zipfile.ZipFile(flat.path / "a.ods") as archive:
                parts = {name: archive.read(name) for name in archive.namelist()}
            parts["content.xml"] = change(parts["content.xml"])
            with zipfile.ZipFile(flat.path / "a.ods", "w", zipfile.ZIP_DEFLATED) as archive:
                for name, data in parts.items():
                    archive.writestr(name, data)
        return flat.pieces("a.ods", form=form, **keys)

    return written


def test_typed_cells_become_one_text_each(book):
    taken = book(
        bout(),
        bout("2026-09-03", cell("float", 0.5)),
        bout("2026-09-04T00:00:00", cell("time", "PT26H03M00S")),
        bout(duration=cell("time", "PT00H00M00.5S")),
        [*strings("dunlin", "a", "b"), cell("boolean", "true"), cell("float", 1e16)],
    )
    assert taken.column("start") == [
        "2026-09-03T08:15:00",
        "2026-09-03",
        "2026-09-04T00:00:00",
        "2026-09-03T08:15:00",
        "true",
    ]
    assert taken.column("duration") == ["60", "0.5", "26:03:00", "0:00:00.500", "1e+16"]
    assert (taken.rows, taken.found) == ([2, 3, 4, 5, 6], [])


def test_a_date_of_the_first_days_is_a_duration_in_its_column_only(book):
    taken = book(bout(duration=cell("date", "1899-12-31T02:00:00")), bout("1899-12-30T08:00:00"))
    assert taken.column("duration") == ["26:00:00"]
    assert [(line[0], *line[3:]) for line in taken.found] == [
        (2, "duration as a date", "repaired"), (3, "duration as a date", "stop"),
    ]  # fmt: skip


def test_repeated_rows_and_cells_stand_as_often_as_they_say(book):
    twin = [
        *strings("dunlin"),
        cell("string", "x", numbercolumnsrepeated=2),
        cell("date", "2026-09-03"),
        cell("float", 5),
    ]
    empty = ({"numberrowsrepeated": 1_000_000}, [TableCell(numbercolumnsrepeated=16_000)])
    taken = book(
        ({"numberrowsrepeated": 3}, twin),
        ({"numberrowsrepeated": 2}, [TableCell(numbercolumnsrepeated=5)]),
        bout(),
        empty,
    )
    assert taken.rows == [2, 3, 4, 7]
    assert taken.records[0] == ["dunlin", "x", "x", "2026-09-03", "5"]
    assert [line[:1] + line[3:] for line in taken.found] == [
        (5, "blank row", "set_aside"),
        (6, "blank row", "set_aside"),
    ]


def test_rows_repeated_beyond_a_sheet_are_refused(book):
    with pytest.raises(LogError, match=r"rows down to 9000000\d, more than a spreadsheet has"):
        book(({"numberrowsrepeated": 90_000_000}, bout()))


def test_a_wall_of_repeated_cells_is_refused(book, monkeypatch):
    monkeypatch.setattr(ods, "CELLS_LIMIT", 100)
    with pytest.raises(LogError, match="refused: more than 100 cells"):
        book(({"numberrowsrepeated": 50}, bout()))


def test_a_sheet_filled_to_its_last_row_was_cut_off(book, monkeypatch):
    monkeypatch.setattr(counting, "SHEET_ROWS", 3)
    with pytest.raises(LogError, match="filled to row 3, the last of a spreadsheet"):
        book(bout(), bout())


def test_spaces_and_breaks_of_a_text_are_kept_and_remarks_left_out(book):
    def change(xml):
        note = b"<office:annotation><text:p>a remark</text:p></office:annotation>"
        return xml.replace(
            b"<text:p>RW</text:p>",
            note
            + b'<text:p>R<text:s text:c="2"/>'
            + note
            + b"<text:span>W</text:span></text:p><text:p>x<text:tab/>y</text:p>",
        )

    assert book(bout(), change=change).column("animal") == ["R  W\nx\ty"]


def test_several_sheets_are_asked_about(book):
    other = Table(name="areas")
    other.addElement(TableRow())
    other.childNodes[0].addElement(cell("string", "zone"))
    with pytest.raises(LogError, match=r"several sheets: 'watches', 'areas'. Set `logs.file.sheet`"):
        book(bout(), sheets=[other])
    assert book(bout(), sheets=[other], form='sheet = "watches"').rows == [2]
    assert book(bout(), sheets=[Table(name="Sheet2")]).rows == [2]


def test_hidden_rows_and_colours_are_flagged_once(book):
    style = Style(name="grey", family="table-cell")
    style.addElement(TableCellProperties(backgroundcolor="#dddddd"))
    grey = [cell("string", "dunlin", stylename=style), *bout()[1:]]
    taken = book(bout(), grey, ({"visibility": "filter"}, bout()), styles=[style])
    assert taken.rows == [2, 3, 4]
    assert [line[:1] + line[3:] for line in taken.found] == [
        (4, "hidden rows", "flagged"),
        (3, "coloured cells", "flagged"),
    ]


def test_merged_cells_stop_the_rows_they_cover(book):
    top = [*strings("dunlin"), cell("string", "RW", numberrowsspanned=2, numbercolumnsspanned=1), *bout()[2:]]
    below = [*strings("dunlin"), CoveredTableCell(), *bout()[2:]]
    taken = book(top, below, bout())
    assert taken.rows == [2, 4]
    assert [line[:1] + line[3:] for line in taken.found] == [(3, "merged cells", "stop")]


def test_a_formula_without_a_stored_result_stops(book):
    taken = book(
        bout(), bout(duration=TableCell(formula="of:=1+1")), bout(duration=cell("float", 2, formula="of:=1+1"))
    )
    assert taken.column("duration") == ["60", "2"]
    assert [line[:1] + line[3:] for line in taken.found] == [(3, "formula without result", "stop")]


def test_entities_are_refused(book):
    def change(xml):
        head, _, body = xml.partition(b"?>")
        return head + b'?><!DOCTYPE x [<!ENTITY a "aaaaaaaaaa">]>' + body

    with pytest.raises(LogError, match=r"content.xml declares an XML document type"):
        book(bout(), change=change)


@pytest.mark.parametrize(
    "change",
    [
        lambda xml: xml[:-80],
        lambda xml: xml.replace(b'office:value="60"', b'office:value="x"'),
        lambda xml: xml.replace(b"2026-09-03T", b"2026-99-03T"),
    ],
)
def test_a_damaged_sheet_is_an_error_and_no_traceback(book, change):
    with pytest.raises(LogError, match=r"a.ods: cannot be read as the workbook"):
        book(bout(), change=change)


def test_a_zip_that_is_no_sheet(flat):
    with zipfile.ZipFile(flat.path / "a.ods", "w") as archive:
        archive.writestr("x.txt", "x")
    with pytest.raises(LogError, match=r"a.ods: cannot be read as the workbook"):
        flat.pieces("a.ods")


def test_rows_lost_by_the_reader_are_noticed(book, monkeypatch):
    whole = ods._guarded
    monkeypatch.setattr(ods, "_guarded", lambda *a: (r for r in whole(*a) if r.number != 3))
    with pytest.raises(LogError, match="3 filled rows read and 4 counted in the sheet"):
        book(bout(), bout(), bout())


def test_pandas_reads_the_same_cells(book, flat):
    taken = book(
        *[bout(f"2026-09-03T08:{i % 60:02d}:00", cell("float", i), animal=f"A{i % 5}") for i in range(100)],
        piece_rows=30,
    )
    frame = pd.read_excel(flat.path / "a.ods", engine="odf")
    assert taken.column("animal") == frame["animal"].tolist()
    assert [int(text) for text in taken.column("duration")] == frame["duration"].tolist()
    starts = [datetime.fromisoformat(text) for text in taken.column("start")]
    assert starts == pd.to_datetime(frame["start"]).tolist()
