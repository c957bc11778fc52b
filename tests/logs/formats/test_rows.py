"""Faults 31, 34, 35: rows that are no observations, rows out of shape, files cut short."""

import gzip

import pytest

from niche.errors import LogError
from niche.logs.formats import byte_source, counting, csv_text, records
from niche.logs.formats.counting import count_records

LABELS = [
    "Total",
    "subtotal",
    "Sub-total",
    "GRAND TOTAL",
    "totals:",
    "Total dunlin",
    "Sum",
    "sum of day 1",
    "mean",
    "Average",
]


@pytest.mark.parametrize("label", LABELS)
@pytest.mark.parametrize("field", ["species", "animal", "zone"])
def test_totals_stop_by_default_and_are_set_aside_where_declared(flat, label, field):
    row = flat.bout(duration="120")
    row[flat.header.index(field)] = label
    content = flat.text([flat.header, flat.bout(), row, flat.bout("middle mud")])
    for form, action in (("", "stop"), ('totals = "set_aside"', "set_aside")):
        taken = flat.pieces("a.csv", content, form)
        assert taken.rows == [2, 4]
        assert taken.found == [(3, field, label, "totals row", action)]
        assert "`logs.file.totals`" in taken.problem(3)


@pytest.mark.parametrize("zone", ["sum of pools", "Sum  of pools"])
def test_a_listed_name_is_no_total(flat, zone):
    assert flat.pieces("a.csv", flat.text([flat.header, flat.bout(zone)])).found == []


@pytest.mark.parametrize("animal", ["Meander", "Summer", "Totalus", "Averager", "Gesamtkunst"])
def test_a_name_that_begins_like_a_total_is_none(flat, animal):
    assert flat.pieces("a.csv", flat.text([flat.header, flat.bout(animal=animal)])).found == []


def test_blank_rows_are_set_aside(flat):
    content = flat.text([flat.header, flat.bout()]) + "\n,,,,\n , ,\t,,\n" + flat.text([flat.bout()])
    taken = flat.pieces("a.csv", content)
    assert taken.rows == [2, 6]
    assert taken.found == [(row, "", "", "blank row", "set_aside") for row in (3, 4, 5)]


@pytest.mark.parametrize("error", ["#N/A", "#REF!", "#DIV/0!", "Err:502", "######"])
def test_an_error_of_a_spreadsheet_is_no_name(flat, error):
    taken = flat.pieces("a.csv", flat.text([flat.header, flat.bout(), flat.bout(animal=error)]))
    assert taken.found == [(3, "animal", error, "spreadsheet error", "stop")]


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("dunlin,RW,upper sand,t", "4 cells where the header has 5; leave a cell empty"),
        ("dunlin,RW,upper sand,t,5,6", "6 cells where"),
    ],
)
def test_a_row_out_of_shape_stops_with_its_line(flat, line, words):
    content = flat.text([flat.header, flat.bout()]) + line + "\n" + flat.text([flat.bout()])
    taken = flat.pieces("a.csv", content)
    assert taken.rows == [2, 4]
    assert taken.found == [(3, "", line, "wrong number of cells", "stop")]
    assert words in taken.problem(3)


def test_line_breaks_in_quoted_cells_keep_the_count_of_lines(flat):
    rows = [[*flat.header, "notes"], [*flat.bout(), '"one\ntwo\r\nthree"'], [*flat.bout(), "plain"]]
    taken = flat.pieces("a.csv", flat.text(rows))
    assert taken.rows == [2, 5]
    assert taken.column("notes") == ["one\ntwo\r\nthree", "plain"]


@pytest.mark.parametrize("sign", [",", ";"])
@pytest.mark.parametrize("last", [3, 5])
def test_rows_swallowed_by_a_stray_quote_stop(flat, sign, last):
    rows = [[*flat.header, "notes"], *([[*flat.bout(animal=f"A{i}"), ""] for i in range(6)])]
    lines = flat.text(rows, sign).splitlines()
    lines[2] += '"ran'
    lines[last] += 'stood"'
    taken = flat.pieces("a.csv", "\n".join(lines) + "\n")
    assert taken.rows == [row for row in range(2, 8) if row < 3 or row > last + 1]
    assert [(row, reason, action) for row, _, _, reason, action in taken.found if row] == [
        (3, "quote left open", "stop")
    ]
    assert f"runs on to line {last + 1}" in taken.problem(3)


@pytest.mark.parametrize(
    ("lines", "where"),
    [
        (['dunlin,RW,"upper sand,t,5'], "line 2: .*seen at line 3"),
        (['dunlin,RW,"upper" sand,t,5'], "line 2"),
        (['dunlin,"RW,x', 'y" z,u,t,5'], "line 2: .*seen at line 3"),
    ],
)
def test_quotes_that_do_not_close_are_an_error_with_their_lines(flat, lines, where):
    content = (
        flat.text([flat.header])
        + "\n".join(lines)
        + "\n"
        + (flat.text([flat.bout()]) if "upper sand" in lines[0] else "")
    )
    with pytest.raises(LogError, match=rf"a.csv: {where}.*two quotes in a row"):
        flat.pieces("a.csv", content)


def test_a_quote_inside_a_cell_that_does_not_begin_with_one_is_a_letter(flat):
    taken = flat.pieces("a.csv", flat.text([flat.header, flat.bout(animal='5" bill')]))
    assert (taken.records[0][1], taken.found) == ('5" bill', [])


@pytest.mark.parametrize(("letters", "fits"), [(1_000_000, True), (1_000_001, False)])
def test_a_cell_of_more_than_a_million_letters_is_none(flat, letters, fits):
    content = flat.text([flat.header, *[flat.bout()] * 30, flat.bout(animal="x" * letters)])
    if fits:
        assert len(flat.pieces("a.csv", content).records[-1][1]) == letters
    else:
        with pytest.raises(LogError, match=r"a.csv: line 32: field larger than field limit"):
            flat.pieces("a.csv", content)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("last", [True, False])
def test_line_ends_of_every_kind(flat, end, last):
    content = flat.text([flat.header, flat.bout(), flat.bout("middle mud")], end=end)
    taken = flat.pieces("a.csv", content if last else content.removesuffix(end))
    assert (taken.rows, taken.column("zone")) == ([2, 3], ["upper sand", "middle mud"])


@pytest.mark.parametrize("limit", [3, 4])
def test_as_many_rows_as_a_spreadsheet_has_are_a_file_cut_off(flat, monkeypatch, limit):
    monkeypatch.setattr(counting, "SHEET_ROWS", limit)
    content = flat.text([flat.header, flat.bout(), flat.bout()])
    if limit == 3:
        with pytest.raises(LogError, match=r"a.csv: exactly 3 lines, the most a spreadsheet holds"):
            flat.pieces("a.csv", content)
    else:
        assert len(flat.pieces("a.csv", content).rows) == 2


def test_the_limit_is_that_of_spreadsheets():
    assert counting.SHEET_ROWS == 2**20


def test_a_reading_cut_short_is_an_error(flat, monkeypatch):
    whole = records.Records.next_record

    def short(self):
        record = whole(self)
        return record if record is None or record[0] < 3 else None

    monkeypatch.setattr(records.Records, "next_record", short)
    monkeypatch.setattr(records.Records, "more", lambda self: False)
    with pytest.raises(LogError, match="3 records read and 4 counted: the reading was cut short"):
        flat.pieces("a.csv", flat.text([flat.header, *[flat.bout()] * 3]))


@pytest.mark.parametrize(
    ("content", "count"),
    [
        ("", 0), ("a", 1), ("a\n", 1), ("a\nb", 2), ("a\r\nb\r\n", 2), ("a\rb", 2), ("\n\n", 2),
        ('"a\nb",c\nd\n', 2), ('a,"b""\n""c"\nd', 2),
        ('5" bill\nb\n', 2), ('a,5"\n"x\ny"\n', 2), ('""\n"a"\n', 2), ('"open\nto the end', 1),
    ],
)  # fmt: skip
def test_records_are_counted_by_quotes_and_line_ends_alone(content, count):
    assert count_records([content.encode()], ",") == count
    by_line = [line.encode() for line in content.splitlines(keepends=True)]
    assert count_records(by_line, ",") == count


def test_a_packed_file_is_read(flat):
    content = flat.text([flat.header, *[flat.bout(animal=str(i)) for i in range(50)]])
    taken = flat.pieces("a.csv.gz", gzip.compress(content.encode()))
    assert taken.column("animal") == [str(i) for i in range(50)]
    assert flat.pieces("a.tsv.gz", gzip.compress(content.replace(",", "\t").encode())).found == []


def test_a_packed_file_that_unpacks_out_of_all_proportion_is_refused_with_its_size(flat, monkeypatch):
    monkeypatch.setattr(byte_source, "EXPANSION_FREE", 1_000_000)
    monkeypatch.setattr(byte_source, "BLOCK", 100_000)
    packed = gzip.compress(b"species,zone\n" + b"dunlin,mud\n" * 1_000_000)
    with pytest.raises(LogError, match=r"a.csv.gz: unpacks to more than \d+ MB from 0.0\d MB"):
        flat.pieces("a.csv.gz", packed)


@pytest.mark.parametrize(
    "spoil", [lambda b: b[:-12], lambda b: b[:20] + b"\xff" * 8 + b[28:], lambda b: b"species,zone\n"]
)
def test_a_damaged_packed_file_is_an_error(flat, spoil):
    content = flat.text([flat.header, *[flat.bout(animal=str(i)) for i in range(50)]])
    with pytest.raises(LogError, match=r"a.csv.gz: not a whole gzip file"):
        flat.pieces("a.csv.gz", spoil(gzip.compress(content.encode())))


def test_no_piece_is_longer_than_allowed(flat):
    content = flat.text([flat.header, *[flat.bout()] * 2500])
    taken = flat.pieces("a.csv", content, piece_rows=1000)
    assert max(taken.sizes) <= 1000
    assert taken.rows == list(range(2, 2502))
    assert csv_text.PIECE_ROWS == 100_000


def test_a_wide_file_gives_short_pieces(flat, monkeypatch):
    monkeypatch.setattr(csv_text, "PIECE_CELLS", 50)
    content = flat.text([flat.header] + [flat.bout(animal='"a\nb"')] * 25)
    assert max(flat.pieces("a.csv", content).sizes) <= 25


@pytest.mark.parametrize("size", [1, 2, 7])
def test_no_piece_of_a_short_file_is_longer_than_allowed(flat, size):
    taken = flat.pieces("a.csv", flat.text([flat.header, *[flat.bout()] * 7]), piece_rows=size)
    assert max(taken.sizes) == size
    assert taken.rows == list(range(2, 9))
