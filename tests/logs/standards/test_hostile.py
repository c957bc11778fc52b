"""Files made to harm: each is refused in words, and nothing outside its package is read."""

import gzip
import io
import json
import os
import zipfile

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from niche.errors import LogError, NicheError
from niche.logs.ledger import Ledger
from niche.logs.standards import containers, open_standard
from niche.logs.standards.containers import inside, read_descriptor
from niche.logs.standards.meta_xml import read_meta

SECRET = "scientificName,organismID\n"


def wide(tools, file="o.txt"):
    fields = {"vernacularName": 0, "organismID": 1, "eventDate": 2, "habitat": 3}
    return tools.meta(("Occurrence", file, fields, None), terminated=",", header=0)


@pytest.mark.parametrize(
    "member",
    ["../secret.csv", "/etc/passwd", "a/../../b", "..", "C:/x", "c:x", "a\\b", "http://x.org/a.csv", "", ".", "a\0b"],
)
def test_no_path_leads_out_of_a_package(member):
    with pytest.raises(LogError, match="only files inside the package are read"):
        inside(member, "flat")


def test_a_file_beside_the_package_stays_unread(station, tools):
    content = {"a/meta.xml": wide(tools, "../secret.csv"), "secret.csv": SECRET}
    with pytest.raises(LogError, match=r"'\.\./secret\.csv'; only files inside"):
        station.read(content, name="a/meta.xml")


def test_a_link_out_of_the_package_is_not_followed(station, tools):
    folder = station.folder()
    (folder / "secret.csv").write_text(SECRET)
    (folder / "a").mkdir()
    (folder / "a" / "meta.xml").write_text(wide(tools))
    os.symlink(folder / "secret.csv", folder / "a" / "o.txt")
    study = station.study(folder, "a/meta.xml")
    with pytest.raises(LogError, match="leads out of the folder of the package"):
        list(open_standard(folder / "a" / "meta.xml", "a/meta.xml", study, Ledger()))


@pytest.mark.parametrize("name", ["../o.txt", "/o.txt", "a/../../o.txt"])
def test_a_zip_with_a_member_that_leads_out_is_refused(station, tools, name):
    with pytest.raises(LogError, match="only files inside"):
        station.read({"z.zip": tools.zipped({"meta.xml": wide(tools), name: "x"})})


def test_a_link_in_a_zip_is_refused(station, tools):
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        archive.writestr("meta.xml", wide(tools))
        link = zipfile.ZipInfo("o.txt")
        link.external_attr = 0o120777 << 16
        archive.writestr(link, "/etc/passwd")
    with pytest.raises(LogError, match="is a link"):
        station.read({"z.zip": stream.getvalue()})


def test_a_zip_bomb_is_refused_with_its_size(station, tools, monkeypatch):
    monkeypatch.setattr(containers, "ALWAYS_BEARABLE", 1 << 20)
    content = tools.zipped({"meta.xml": wide(tools), "o.txt": b"\0" * (4 << 20)})
    with pytest.raises(LogError, match=r"z\.zip: \d+ bytes would unpack to 419\d{4}, which no log does"):
        station.read({"z.zip": content})


def test_a_gzip_bomb_is_refused_while_it_unpacks(station, tools, monkeypatch):
    monkeypatch.setattr(containers, "ALWAYS_BEARABLE", 1 << 20)
    content = {"a/meta.xml": wide(tools, "o.csv.gz"), "a/o.csv.gz": gzip.compress(b"a" * (4 << 20))}
    with pytest.raises(LogError, match=r"o\.csv\.gz: \d+ bytes would unpack to \d+"):
        station.read(content, name="a/meta.xml")


def test_a_zip_of_very_many_files_is_refused(station, tools, monkeypatch):
    monkeypatch.setattr(containers, "MOST_MEMBERS", 3)
    with pytest.raises(LogError, match="the zip holds 5 files; at most 3"):
        station.read({"z.zip": tools.zipped({"meta.xml": "", **{str(n): "" for n in range(4)}})})


def test_entities_are_never_declared(tools):
    laughs = '<!DOCTYPE archive [<!ENTITY a "ha"><!ENTITY b "&a;&a;&a;">]><archive>&b;</archive>'
    outside = '<!DOCTYPE archive [<!ENTITY x SYSTEM "file:///etc/passwd">]><archive>&x;</archive>'
    for text in (laughs, outside, "<!DOCTYPE archive SYSTEM 'http://example.org/x.dtd'><archive/>"):
        with pytest.raises(LogError, match="declares a document type"):
            read_meta(text.encode(), "meta.xml")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "not well-formed"),
        ("<archive>", "not well-formed"),
        ("<core/>", "begins with <archive>"),
        ("<archive/>", "0 elements <core>"),
        ("<archive><core/></archive>", "no rowType"),
        ('<archive><core rowType="x"/></archive>', "names 0 files"),
        ("<a>" * 50 + "</a>" * 50, "nested or long"),
        ("<archive>" + "<x/>" * 10_001 + "</archive>", "nested or long"),
        ("<archive>" + " " * (1 << 20) + "</archive>", "no archive needs more"),
        ("<?xml version='1.0' encoding='klingon'?><archive/>", "not well-formed|cannot be read"),
    ],
)
def test_a_meta_xml_that_breaks_the_guide(text, message):
    with pytest.raises(LogError, match=message):
        read_meta(text.encode(), "meta.xml")


@pytest.mark.parametrize(
    ("attributes", "message"),
    [
        ('fieldsTerminatedBy=""', "delimiter is ''"),
        ('fieldsTerminatedBy="||"', "must be one character"),
        ('linesTerminatedBy=";"', "lines end with"),
        ('encoding="EBCDIC"', "encoding is 'EBCDIC'"),
        ('ignoreHeaderLines="-1"', "ignoreHeaderLines is '-1'"),
        ('ignoreHeaderLines="٣"', "ignoreHeaderLines"),
        ('fieldsEnclosedBy=","', "the same character"),
    ],
)
def test_a_table_that_cannot_be_cut(attributes, message):
    text = f'<archive><core rowType="x" {attributes}><files><location>o.txt</location></files></core></archive>'
    with pytest.raises(LogError, match=message):
        read_meta(text.encode(), "meta.xml")


@pytest.mark.parametrize("content", [b"[" * 100_000, b"{", b"\xff\xfe", b"[]", b"1e999", b"nul"])
def test_a_descriptor_that_is_no_json_object(content):
    with pytest.raises(LogError, match=r"d\.json: "):
        read_descriptor(io.BytesIO(content), "d.json")


def test_a_pattern_that_would_run_for_ever_does_not(station):
    described = {"fields": [{"name": "zone", "constraints": {"pattern": "(a+)+$"}}], "fieldsMatch": "subset"}
    header = "species,bird,zone,start,end"
    content = {
        "log.csv": f"{header}\ndunlin,RW,{'a' * 5000}!,2026-09-03T08:00:00Z,2026-09-03T08:10:00Z\n",
        "table.json": json.dumps(described),
    }
    columns = 'species = "species"\nanimal = "bird"\nzone = "zone"\nstart = "start"\nend = "end"'
    log = station.read(content, form='descriptor = "table.json"', columns=columns)
    assert [e.action for e in log.ledger.entries] == ["stop"]


@pytest.mark.parametrize("content", [b"", b"PK\x03\x04", b"PK\x05\x06" + b"\0" * 18, b"not a zip"])
@pytest.mark.parametrize("form", ["darwin-core", "camtrap-dp"])
def test_a_file_that_is_no_package(station, content, form):
    rule = "camera" if form == "camtrap-dp" else "bouts"
    with pytest.raises(LogError):
        station.read({"z.zip": content}, form=f'standard = "{form}"', rule=rule)


def test_a_damaged_member_is_told(station, tools):
    content = bytearray(tools.zipped({"meta.xml": wide(tools), "o.txt": "dunlin,RW,x,upper sand\n" * 50}))
    place = content.rfind(b"o.txt", 0, content.find(b"PK\x01\x02")) + 12
    content[place] ^= 0xFF
    with pytest.raises(LogError, match=r"cannot be read to its end|cannot be unpacked"):
        station.read({"z.zip": bytes(content)})


def _refused(call, place):
    """Whether a call is refused in words that name the place; anything else that it raises goes on."""
    try:
        call()
    except NicheError as error:
        if place not in str(error):
            raise
        return True
    return False


_PIECES = st.sampled_from(
    [b"<archive>", b"</archive>", b"<core rowType='Event'>", b"</core>", b"<files><location>o.txt</location></files>",
     b"<id index='0'/>", b"<field index='1' term='http://rs.tdwg.org/dwc/terms/eventDate'/>", b"<extension>", b"&lt;",
     b"\xc3"]
)  # fmt: skip


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(st.lists(st.one_of(_PIECES, st.binary(max_size=20)), max_size=15))
def test_no_meta_xml_ends_in_a_traceback(parts):
    _refused(lambda: read_meta(b"".join(parts), "meta.xml"), "meta.xml")


_JSON = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False) | st.text(max_size=8),
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(
                [
                    "fields",
                    "name",
                    "type",
                    "format",
                    "constraints",
                    "pattern",
                    "enum",
                    "minLength",
                    "required",
                    "missingValues",
                    "categories",
                    "label",
                    "value",
                    "schema",
                    "dialect",
                    "delimiter",
                    "quoteChar",
                    "headerRows",
                    "commentChar",
                    "resources",
                    "path",
                    "encoding",
                    "fieldsMatch",
                    "header",
                ]
            ),
            inner,
            max_size=5,
        )
    ),
    max_leaves=12,
)


@pytest.fixture(scope="module")
def described(station):
    folder = station.folder()
    (folder / "log.csv").write_text("species,animal,zone,start,end\ndunlin,RW,upper sand,x,\n'a,\"b\n")
    return folder, station.study(
        folder, "log.csv", form='descriptor = "d.json"', columns='start = "start"\nend = "end"'
    )


@settings(max_examples=200, deadline=None)
@given(descriptor=_JSON)
def test_no_descriptor_ends_in_a_traceback(described, descriptor):
    folder, study = described
    (folder / "d.json").write_text(json.dumps(descriptor))
    found = []
    if not _refused(lambda: found.extend(open_standard(folder / "log.csv", "log.csv", study, Ledger())), ""):
        assert all(len(column) == len(piece.rows) for piece in found for column in piece.columns.values())


@settings(max_examples=150, deadline=None)
@given(text=st.text(alphabet="RW,\"'/PT0123456789-:Z+.\n\r\t=\\", max_size=200))
def test_no_darwin_core_csv_ends_in_a_traceback(station, text):
    folder = station.folder()
    content = f"vernacularName,organismID,habitat,eventDate,sampleSizeValue,sampleSizeUnit\n{text}\n"
    (folder / "log.csv").write_text(content, newline="")
    ledger, found = Ledger(), []
    study = station.study(folder, "log.csv")
    if not _refused(lambda: found.extend(open_standard(folder / "log.csv", "log.csv", study, ledger)), "log.csv"):
        out = sum(len(piece.rows) for piece in found)
        assert ledger.rows_read["log.csv"] == sum(ledger.rows.values())
        assert out + ledger.rows_read["log.csv"] <= content.count("\n") + content.count("\r")
