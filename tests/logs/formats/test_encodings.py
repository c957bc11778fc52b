"""Fault 29: marks at the top of a file, UTF-16, and bytes that are not UTF-8."""

import pytest

from niche.errors import LogError
from niche.logs.formats import byte_source

ROWS = [["species", "animal", "zone", "start", "duration"], ["dunlin", "Größe", "middle mud", "t", "5"]]


@pytest.fixture
def content(flat):
    return flat.text(ROWS)


def test_a_utf8_mark_is_no_part_of_the_first_heading(flat, content):
    taken = flat.pieces("a.csv", content.encode("utf-8-sig"))
    assert taken.headings == ROWS[0]
    assert taken.records == ROWS[1:]
    assert taken.found == []


@pytest.mark.parametrize(("codec", "mark"), [("utf-16-le", b"\xff\xfe"), ("utf-16-be", b"\xfe\xff")])
def test_utf16_is_known_by_its_mark_and_said(flat, content, codec, mark):
    taken = flat.pieces("a.csv", mark + content.encode(codec))
    assert (taken.rows, taken.records) == ([2], ROWS[1:])
    assert taken.found == [(None, "", codec, "encoding", "repaired")]


@pytest.mark.parametrize("codec", ["utf-16-le", "utf-16-be"])
def test_utf16_without_its_mark_is_read_where_declared_and_asked_for_where_not(flat, content, codec):
    taken = flat.pieces("a.csv", content.encode(codec), 'encoding = "utf-16"')
    assert taken.records == ROWS[1:]
    with pytest.raises(LogError, match=r"line 1: .*`logs\.file\.encoding`"):
        flat.pieces("b.csv", content.encode(codec))


@pytest.mark.parametrize(("declared", "codec"), [("latin-1", "latin-1"), ("windows-1252", "cp1252")])
def test_a_declared_encoding_is_read(flat, content, declared, codec):
    assert flat.pieces("a.csv", content.encode(codec), f'encoding = "{declared}"').records == ROWS[1:]


def test_an_undeclared_byte_is_shown_with_its_line_and_what_it_could_be(flat, content):
    with pytest.raises(LogError) as caught:
        flat.pieces("a.csv", content.encode("cp1252"))
    message = str(caught.value)
    assert message.startswith("a.csv: not UTF-8 (byte 0xf6 in line 2; here it would be 'dunlin,Größe,mid")
    assert "in Windows-1252" in message
    assert "`logs.file.encoding`" in message


def test_the_line_of_a_bad_byte_is_found_far_down(flat):
    rows = [ROWS[0]] + [["dunlin", "RW", "middle mud", "t", "5"]] * 500
    content = flat.text(rows).encode() + b"dunlin,R\x84,middle mud,t,5\n"
    with pytest.raises(LogError, match=r"a.csv: not UTF-8 \(byte 0x84 in line 502;"):
        flat.pieces("a.csv", content)


def test_a_quote_of_windows_1252_is_no_latin_1(flat):
    content = flat.text([ROWS[0], ["dunlin", "R\x93", "middle mud", "t", "5"]]).encode("latin-1")
    with pytest.raises(LogError, match=r'line 2: byte 0x93 is no letter in Latin-1.*"windows-1252"'):
        flat.pieces("a.csv", content, 'encoding = "latin-1"')
    assert flat.pieces("b.csv", content, 'encoding = "windows-1252"').records[0][1] == "R“"


def test_a_byte_that_windows_1252_lacks_is_an_error(flat):
    with pytest.raises(LogError, match="line 2: byte 0x81 cannot be in Windows-1252"):
        flat.pieces("a.csv", b"species,zone\ndunlin,\x81\n", 'encoding = "windows-1252"')


def test_a_mark_is_certain_whatever_is_declared(flat, content):
    taken = flat.pieces("a.csv", content.encode("utf-8-sig"), 'encoding = "latin-1"')
    assert taken.records == ROWS[1:]
    assert taken.found == [(None, "", "latin-1", "encoding", "flagged")]


def test_half_a_utf16_letter_at_the_end_is_an_error(flat, content):
    with pytest.raises(LogError, match="cannot be in UTF-16"):
        flat.pieces("a.csv", (content + "€").encode("utf-16")[:-1])


@pytest.mark.parametrize("block", [1, 2, 3, 7])
@pytest.mark.parametrize("codec", ["utf-8", "utf-8-sig", "utf-16"])
def test_letters_and_line_ends_cut_by_a_block_are_whole_again(flat, monkeypatch, block, codec):
    monkeypatch.setattr(byte_source, "BLOCK", block if codec == "utf-8" else max(block, 3))
    rows = [ROWS[0], *([["dünlín€", "𝄞", "middle mud", "t", str(i)] for i in range(9)])]
    taken = flat.pieces("a.csv", flat.text(rows, end="\r\n").encode(codec))
    assert taken.records == rows[1:]
    assert taken.rows == list(range(2, 11))


def test_a_nul_byte_is_named_with_its_line(flat, content):
    with pytest.raises(LogError, match=r"a.csv: line 3: a NUL byte"):
        flat.pieces("a.csv", content.encode() + b"dunlin,\0,middle mud,t,5\n")


@pytest.mark.parametrize(
    ("first", "word"),
    [(b"PK\x03\x04", "workbook"), (b"PAR1", "Parquet"), (b"%PDF-1.7", "PDF"), (b"\x1f\x8b\x08", "gzip")],
)
def test_another_form_under_a_text_name_is_told_by_its_first_bytes(flat, first, word):
    with pytest.raises(LogError, match=f"a.csv: by its first bytes this is .*{word}"):
        flat.pieces("a.csv", first + b"x" * 20)


@pytest.mark.parametrize("name", ["a.xls", "a.zip", "a.db", "a.pdf"])
def test_a_form_that_is_none_of_ours_is_refused_with_what_to_do(flat, name):
    with pytest.raises(LogError, match=rf"{name}: no log can be read from"):
        flat.pieces(name, b"x")


def test_a_line_without_end_is_no_table(flat, monkeypatch):
    monkeypatch.setattr(byte_source, "LONGEST_LINE", 100)
    monkeypatch.setattr(byte_source, "BLOCK", 50)
    with pytest.raises(LogError, match="line 2: longer than"):
        flat.pieces("a.csv", b"species,zone\n" + b"x" * 300)
