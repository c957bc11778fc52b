"""Times that are numbers, or a date and a time of day apart: read only as the study declares."""

import pyarrow as pa
import pytest

from niche.errors import StudyError
from niche.logs.clocks.numbers import read_spreadsheet

BERLIN = 'time_zone = "Europe/Berlin"'
BOUT = [("2026-09-03T06:15:00", "2026-09-03T06:40:00", 2)]


def test_date_and_time_of_day_in_two_columns(read):
    found = read(["date", "start", "end"], ["2026-09-03", "08:15", "08:40"], logs=BERLIN)
    assert (found.spans(), found.lines()) == (BOUT, [])


def test_a_spreadsheets_date_may_carry_its_midnight(read):
    assert read(["date", "start", "end"], ["2026-09-03T00:00:00", "08:15:00", "08:40:00"], logs=BERLIN).spans() == BOUT


def test_a_pattern_is_that_of_date_space_time(read):
    found = read(["date", "start", "end"], ["3.9.2026", "8.15", "8.40"], logs=BERLIN, clock='format = "%d.%m.%Y %H.%M"')
    assert (found.spans(), found.lines()) == (BOUT, [])


def test_a_missing_date_is_told_by_its_own_column(read):
    found = read(["date", "start", "end"], ["", "08:15", "08:40"], ["2026-09-03", "08:15", ""], logs=BERLIN)
    assert (2, "date", "", "date missing", "set_aside") in found.lines(2)
    assert found.lines(3) == [(3, "end", "", "end missing", "set_aside")]


def test_decimal_hours_of_a_day(read):
    found = read(
        ["date", "start", "end"], ["2026-09-03", "8.25", "8.75"], logs=BERLIN, clock='format = "decimal_hours"'
    )
    assert found.spans() == [("2026-09-03T06:15:00", "2026-09-03T06:45:00", 2)]


def test_decimal_hours_end_with_the_day(read):
    found = read(
        ["date", "start", "end"],
        ["2026-09-03", "23.5", "24"],
        ["2026-09-03", "23.5", "24.5"],
        logs=BERLIN,
        clock='format = "decimal_hours"',
    )
    assert found.spans() == [("2026-09-03T21:30:00", "2026-09-03T22:00:00", 2)]
    assert found.lines() == [(3, "end", "2026-09-03 24.5", "unreadable time", "stop")]


# 2026-09-03 is day 46268 of a spreadsheet that counts from 1900, and 44806 of one that counts from 1904.
@pytest.mark.parametrize(("epoch", "day"), [(1900, 46_268), (1904, 44_806)])
def test_fault_12_days_of_a_spreadsheet_by_the_declared_epoch(read, epoch, day):
    row = [f"{day + (8 * 60 + 15) / 1440!r}", f"{day + (8 * 60 + 40) / 1440!r}"]
    found = read(["start", "end"], row, logs=BERLIN, clock=f'format = "spreadsheet"\nepoch = {epoch}')
    assert (found.spans(), found.lines()) == (BOUT, [])
    assert ("a.csv", "spreadsheet days", "flagged") in found.notes()


def test_fault_12_date_and_time_of_day_as_two_numbers(read):
    row = ["46268", "0.34375", "0.3611111111"]
    assert read(["date", "start", "end"], row, logs=BERLIN, clock='format = "spreadsheet"').spans() == BOUT


def test_fault_12_days_agree_with_openpyxl():
    from openpyxl.utils.datetime import CALENDAR_MAC_1904, CALENDAR_WINDOWS_1900, from_excel

    serials = [61, 61.25, 367.5, 25_569, 36_526.999, 45_123.5, 46_268.34375, 60_000.000_01]
    for epoch, base in ((1900, CALENDAR_WINDOWS_1900), (1904, CALENDAR_MAC_1904)):
        found = read_spreadsheet(pa.array([repr(serial) for serial in serials]), epoch)
        expected = [from_excel(serial, epoch=base) for serial in serials]
        got = found.ms.astype("datetime64[ms]").tolist()
        assert all(abs((a - b).total_seconds()) < 0.001 for a, b in zip(got, expected, strict=True))


@pytest.mark.parametrize(("name", "unit"), [("unix_seconds", 1), ("unix_milliseconds", 1000)])
def test_unix_time_is_utc_by_definition(read, name, unit):
    # 2026-09-03T06:15:00Z is 20 699 days and 6 h 15 min after 1970.
    start = (20_699 * 24 * 3600 + 6 * 3600 + 900) * unit
    found = read(["start", "end"], [str(start), str(start + 1500 * unit)], clock=f'format = "{name}"')
    assert (found.spans(), found.lines()) == (BOUT, [])


def test_unix_seconds_may_have_a_fraction(read):
    found = read(["start", "end"], ["1788416100.25", "1788416101"], clock='format = "unix_seconds"')
    assert found.log.visits["end"][0] - found.log.visits["start"][0] == 750


@pytest.mark.parametrize(
    ("declared", "cell", "other"),
    [("seconds", "1788416100000", "milliseconds"), ("milliseconds", "1788416100", "seconds")],
)
def test_unix_time_in_the_other_unit_is_refused_and_named(read, declared, cell, other):
    found = read(["start", "end"], [cell, cell], clock=f'format = "unix_{declared}"')
    assert found.lines(2)[0] == (2, "start", cell, "unreadable time", "stop")
    assert all(f'"unix_{other}"' in e.problem for e in found.log.ledger.entries if e.row == 2)


@pytest.fixture
def sessions(tmp_path):
    (tmp_path / "watches").mkdir()
    (tmp_path / "watches" / "sessions.csv").write_text(
        "session,start,end\nw1,2026-09-03T06:00Z,2026-09-03T09:00Z\nw2,2026-09-04T06:00Z,\n", encoding="utf-8"
    )
    return {"more": '[logs.sessions]\nfile = "watches/sessions.csv"'}


@pytest.mark.parametrize(
    ("unit", "start", "end"),
    [
        ("min", "15", "40"),
        ("s", "900", "2400"),
        ("h:m:s", "0:15:00", "0:40:00"),
        ("s", "PT15M", "PT40M"),
        ("h:m", "0:15", "0:40"),
    ],
)
def test_time_since_the_start_of_the_session(read, sessions, unit, start, end):
    found = read(
        ["session", "start", "end"],
        ["w1", start, end],
        ["w2", start, end],
        ["w9", start, end],
        logs=f'duration_unit = "{unit}"',
        clock='format = "elapsed"',
        **sessions,
    )
    assert found.spans() == [*BOUT, ("2026-09-04T06:15:00", "2026-09-04T06:40:00", 3)]
    assert found.lines()[0] == (4, "start", start, "unreadable time", "stop")
    assert all("`logs.sessions.file`" in e.problem for e in found.log.ledger.entries if e.row == 4)


def test_frames_since_the_start_of_the_session(read, sessions):
    found = read(
        ["session", "start", "end"],
        ["w1", "22500", "60000"],
        ["w1", "60000", "60001"],
        clock='format = "frames"\nframes_per_second = 25',
        **sessions,
    )
    assert found.spans()[0] == BOUT[0]
    assert (found.log.visits["end"] - found.log.visits["start"]).tolist() == [1_500_000, 40]


def test_a_cell_in_another_form_than_the_declared_is_refused(read):
    for form in ("spreadsheet", "unix_seconds", "unix_milliseconds"):
        found = read(
            ["start", "end"], ["2026-09-03T08:15", "2026-09-03T08:40"], logs=BERLIN, clock=f'format = "{form}"'
        )
        assert found.lines(2)[0] == (2, "start", "2026-09-03T08:15", "unreadable time", "stop")
        assert f"`logs.clock.format` = '{form}'" in found.log.ledger.entries[0].problem


def test_a_duration_in_frames_and_in_parts(read):
    found = read(
        ["start", "duration"],
        ["2026-09-03T06:15Z", "37500"],
        logs='duration_unit = "frames"',
        clock="frames_per_second = 25",
    )
    assert found.spans() == BOUT
    assert read(["start", "duration"], ["2026-09-03T06:15Z", "25:00"], logs='duration_unit = "m:s"').spans() == BOUT
    assert read(["start", "duration"], ["2026-09-03T06:15Z", "PT25M"]).spans() == BOUT


@pytest.mark.parametrize(
    ("keys", "words"),
    [
        ({"columns": 'start = "start"\ndate = "date"'}, "then each start cell holds an interval"),
        ({"columns": 'start = "start"', "clock": 'format = "unix_seconds"'}, "then each start cell holds an interval"),
        ({"columns": 'start = "start"\nend = "end"\nduration = "duration"'}, "name one of the two"),
        ({"clock": 'format = "elapsed"'}, "give `logs.sessions.file`"),
        ({"clock": 'format = "frames"'}, "give `frames_per_second` too"),
        ({"clock": 'format = "decimal_hours"'}, "name the column of the date as `columns.date`"),
        (
            {"clock": 'format = "unix_seconds"', "columns": 'start = "start"\nend = "end"\ndate = "date"'},
            "leave `columns.date` out",
        ),
        ({"clock": 'format = "excel"'}, "allowed: iso, spreadsheet"),
        ({"clock": 'format = "%d.%m.%Y %I:%M"'}, "12-hour clock"),
        ({"clock": "first_year = 2027\nlast_year = 2026"}, "the first comes first"),
        ({"logs": 'time_zone = "+1:00"'}, "or an offset such as +01:00"),
    ],
)
def test_a_study_that_leaves_the_clock_open_is_refused_when_it_is_read(read, keys, words):
    with pytest.raises(StudyError) as error:
        read(["start", "end"], **{"columns": 'start = "start"\nend = "end"', **keys})
    assert words in str(error.value)
