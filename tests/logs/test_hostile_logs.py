"""Whatever stands in a log, it is read or refused in words: no other error, no lost row, no endless wait."""

from contextlib import suppress

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from niche.errors import LogError, NicheError, StudyError
from niche.logs import read_logs
from niche.usage import Usage

HEADER = b"species,animal,session,zone,start,end\n"
ROW = b"dunlin,RW,s1,mud,2026-09-03T08:00Z,2026-09-03T08:10Z\n"
FRAGMENTS = [
    HEADER, ROW, b'"', b'""', b",", b"\n", b"\r", b"\r\n", b"\x00", b"\xef\xbb\xbf", b"\xff", b"\xc3", b"\xed\xa0\x80",
    b"\x1a", b"\x1b[2J", b"\xe2\x80\xa8", b"\xe2\x80\xae", b"\xcc\x81" * 50, b"mud", b"=1+1", b"9" * 30, b"\\", b"'", b";",
    b"2026-09-03T24:00Z", b"0000-00-00T00:00Z", b"9999-12-31T24:00Z", b"2026-09-03T08:00+99:99",
]  # fmt: skip


def settle(field, content):
    """The log as read, or None if it was refused; the reading and the tally raise nothing but errors of the family."""
    folder = field.folder()
    (folder / "a.csv").write_bytes(content)
    study = field.study(folder)
    try:
        log = read_logs(study)
    except (LogError, StudyError) as error:
        refusal = str(error)
    else:
        refusal = ""
    if refusal:
        assert refusal.startswith("a.csv: ")
        return None
    field.check_closed(log)
    usage = Usage.from_visits(log.visits, study)
    assert sum(int(time.sum()) for time in usage.time) == log.ledger.milliseconds["used"]
    with suppress(NicheError):
        log.require_usable()
    return log


@settings(max_examples=120, deadline=None)
@given(st.lists(st.sampled_from(FRAGMENTS), max_size=12).map(b"".join))
@example(b"")
def test_any_fragments_after_a_sound_header_are_read_or_refused(field, content):
    log = settle(field, HEADER + content)
    if log is not None and b'"' not in content:
        text = content.decode().replace("\r\n", "\n").replace("\r", "\n")
        lines = text.split("\n")
        assert log.ledger.sums()[0][1] == len(lines) - (lines[-1] == "")


@settings(max_examples=150, deadline=None)
@given(st.binary(max_size=120))
def test_any_bytes_at_all_are_refused(field, content):
    assert settle(field, content) is None


@settings(max_examples=50, deadline=None)
@given(st.text(alphabet=st.characters(exclude_categories=["Cs"], exclude_characters="\x00"), max_size=30))
def test_any_text_in_any_cell_is_accounted_for(field, cell):
    sound = ["dunlin", "RW", "s1", "mud", "2026-09-03T08:00Z", "2026-09-03T08:10Z"]
    rows = [[cell if n == place else text for n, text in enumerate(sound)] for place in range(6)]
    log = settle(field, field.text(*rows).encode())
    assert log.ledger.sums()[0][1] == 6


@pytest.mark.parametrize(
    "cell",
    [
        "\x07",
        "\x1b[31mmud\x1b[0m",
        "\u202emud",
        "mud\u200b",
        "\U0001f426",
        "\ufdfa" * 500,
        "a\u0301\u0323" * 400,
    ],
)
def test_a_strange_zone_is_unknown_and_stops(field, cell):
    log = settle(field, field.text(field.bout(zone=cell)).encode())
    assert field.rows(log) == {"stop": 1}
    with pytest.raises(LogError) as caught:
        log.require_usable()
    assert "\x1b" not in str(caught.value)


@pytest.mark.parametrize("cell", ["\x07", "\u202eRW", "\U0001f426", "x" * 100_000])
def test_a_strange_animal_is_an_animal(field, cell):
    log = settle(field, field.text(field.bout(animal=cell)).encode())
    assert log.visits["animal"].tolist() == [cell]


def test_a_zone_of_nearly_a_million_letters_stops(field):
    assert field.rows(settle(field, field.text(field.bout(zone="x" * 900_000)).encode())) == {"stop": 1}


def test_the_wrong_column_named_as_zone_gives_thousands_of_stops_in_good_time(field):
    rows = [field.bout(zone=f"remark number {i}", animal=f"A{i}") for i in range(4_000)]
    assert field.rows(field.read(rows)) == {"stop": 4_000}


def test_thousands_of_blank_lines_repeats_and_overlaps_are_told_one_by_one(field):
    rows = field.text(
        *[field.bout()] * 1_000, *[field.bout(f"08:{i // 60:02d}:{i % 60:02d}", "08:59") for i in range(1_000)]
    )
    log = field.read(rows + "\n" * 1_000)
    assert field.rows(log) == {"used": 1, "set_aside": 1_999, "stop": 1_000}


@pytest.mark.parametrize("year", ["0001", "1582", "1900", "9998"])
def test_any_year_is_read_with_an_offset(field, year):
    log = settle(field, field.text(field.bout(day=f"{year}-06-01")).encode())
    assert (log.visits["end"] - log.visits["start"]).tolist() == [600_000]


def test_many_columns_and_many_rows_are_read(field):
    extra = [f"c{i}" for i in range(500)]
    rows = [[*field.bout(f"08:{i:02d}:00", f"08:{i:02d}:30"), *extra] for i in range(60)]
    log = field.read(field.text(*rows, header=("species", "animal", "session", "zone", "start", "end", *extra)))
    assert field.rows(log) == {"used": 60}


def test_a_cell_with_a_nul_byte_stops_the_file_with_its_line(field):
    with pytest.raises(LogError, match=r"^a\.csv: line 3: .*NUL"):
        field.read(field.text(field.bout(), field.bout("08:20", "08:30", zone="mud\x00")))
