"""Times as written: which forms are read, what they mean, and which are refused with which words."""

import pyarrow as pa
import pytest

from niche.logs.clocks import (
    END_OF_DAY,
    IMPOSSIBLE,
    MIXED_WITH,
    MIXED_WITHOUT,
    NO_OFFSET,
    UNREADABLE,
    read_times,
)

MORNING = (20_699 * 24 + 6) * 3_600_000
"""2026-09-03T06:00:00Z in milliseconds: 20 699 days and 6 hours after 1970 began."""


def read(*texts, zone=None, has_offset=None):
    return read_times(pa.array(texts, type=pa.string()), zone, has_offset)


def one(text, zone=None):
    found = read(text, zone=zone)
    return found.problem[0] or int(found.ms[0])


@pytest.mark.parametrize(
    ("text", "later"),
    [
        ("2026-09-03T06:00:00Z", 0),
        ("2026-09-03 06:00:00Z", 0),
        ("2026-09-03T06:00Z", 0),
        ("  2026-09-03T06:00Z\t", 0),
        ("2026-09-03T08:00:00+02:00", 0),
        ("2026-09-03T08:00:00+0200", 0),
        ("2026-09-03T08:00:00+02", 0),
        ("2026-09-03T08:00+02:00", 0),
        ("2026-09-03T06:00:00+00:00", 0),
        ("2026-09-03T06:00:00-00:00", 0),
        ("2026-09-03T02:30:00-03:30", 0),
        ("2026-09-03T11:45:00+05:45", 0),
        ("2026-09-03T20:00:00+14:00", 0),
        ("2026-09-02T18:00:00-12:00", 0),
        ("2026-09-04T00:00:00+18:00", 0),
        ("2026-09-02T12:00:00-18:00", 0),
        ("2026-09-03T06:00:00.5Z", 500),
        ("2026-09-03T06:00:00,5Z", 500),
        ("2026-09-03T06:00:00.05Z", 50),
        ("2026-09-03T06:00:00.005Z", 5),
        ("2026-09-03T06:00:00.050Z", 50),
        ("2026-09-03T06:00:00,123Z", 123),
        ("2026-09-03T06:00:00.123999Z", 123),
        ("2026-09-03T06:00:00.9999999999Z", 999),
        ("2026-09-03T06:00:59.999+00", 59_999),
        ("2026-09-03T23:59:59.999Z", 18 * 3_600_000 - 1),
        ("2026-09-03T24:00Z", 18 * 3_600_000),
        ("2026-09-03T24:00:00Z", 18 * 3_600_000),
        ("2026-09-03T24:00:00.000Z", 18 * 3_600_000),
        ("2026-09-04T00:00:00Z", 18 * 3_600_000),
    ],
)
def test_a_form_of_iso_8601_is_read_to_the_millisecond(text, later):
    assert one(text) == MORNING + later


@pytest.mark.parametrize(
    "text",
    [
        "", " ", "9.45", "06:00", "03.09.2026 06:00", "03/09/2026 06:00", "9/3/26 6:00",
        "2026-9-3T06:00Z", "26-09-03T06:00Z", "45904.25",
        "2026-09-03T6:00Z", "2026-09-03T06:00:0Z", "2026-09-03T06:00.5Z", "2026-09-03T06:00:00.Z", "2026-09-03T06:00:00 Z",
        "2026-09-03T06:00:00 +02:00", "2026-09-03T06:00:00+2", "2026-09-03T06:00:00+2:00", "2026-09-03T06:00:00+02:0",
        "2026-09-03T06:00:00\u221202:00", "2026-09-03  06:00Z", "-026-09-03T06:00Z", "+2026-09-03T06:00Z",
        "12026-09-03T06:00Z", "2026-09-03T06:00Z x", "2026-09-03T06:00 UTC", "2026-09-03T06:00 am", "２０２６-09-03T06:00Z",
        "2026-09-03T06:00Z\n2026-09-03T06:00Z", "2026-09-03\nT06:00Z", "2026-09-03T06:00Z\x00", "1788415200", "nan",
    ],
)  # fmt: skip
def test_anything_else_is_refused_with_an_example(text):
    assert one(text) == UNREADABLE
    assert "2026-09-03T08:15:30+02:00" in UNREADABLE


@pytest.mark.parametrize(
    "text",
    [
        "2026-02-29T06:00Z", "2026-02-30T06:00Z", "2026-04-31T06:00Z", "2026-09-31T06:00Z", "2026-09-00T06:00Z",
        "2026-09-32T06:00Z", "2026-00-10T06:00Z", "2026-13-10T06:00Z", "2026-99-99T99:99:99Z", "1900-02-29T06:00Z",
        "2100-02-29T06:00Z", "2026-09-03T24:01Z", "2026-09-03T24:00:01Z", "2026-09-03T24:00:00.001Z", "2026-09-03T25:00Z",
        "2026-09-03T06:60Z", "2026-09-03T06:00:60Z", "2026-02-29T24:00Z",
        "2026-09-03T06:00+99:99", "2026-09-03T06:00-99:99", "2026-09-03T06:00+18:01", "2026-09-03T06:00-19",
    ],
)  # fmt: skip
def test_a_date_or_time_that_no_calendar_has_is_refused(text):
    assert one(text) == IMPOSSIBLE


@pytest.mark.parametrize("year", [1904, 2000, 2024, 2028, 2400])
def test_leap_years_have_a_29th_of_february(year):
    assert one(f"{year}-03-01T00:00Z") - one(f"{year}-02-29T00:00Z") == 86_400_000
    assert one(f"{year}-02-29T24:00Z") == one(f"{year}-03-01T00:00Z")


def test_the_ends_of_the_calendar_are_read():
    assert one("1970-01-01T00:00Z") == 0
    assert one("1969-12-31T23:59:59.999Z") == -1
    assert one("0001-01-01T00:00Z") == -62_135_596_800_000
    assert one("9998-12-31T24:00Z") == 253_370_764_800_000


def test_24_00_is_noted_as_a_repair_and_no_other_time_is():
    found = read("2026-09-03T24:00Z", "2026-09-03T23:59Z", "x", "2026-09-03T00:00Z")
    assert found.repair.tolist() == [END_OF_DAY, None, None, None]


def test_a_time_without_offset_needs_a_declared_zone():
    assert one("2026-09-03T08:00") == NO_OFFSET
    assert "logs.time_zone" in NO_OFFSET
    assert one("2026-09-03T08:00", zone="Europe/Berlin") == MORNING


def test_a_written_offset_goes_before_the_declared_zone():
    assert one("2026-09-03T15:00+09:00", zone="Europe/Berlin") == MORNING


def test_the_first_time_that_can_be_read_decides_whether_offsets_belong():
    found = read("x", "2026-09-03T06:00Z", "2026-09-03T08:00", "2026-09-03T08:00+02:00", zone="Europe/Berlin")
    assert found.problem.tolist() == [UNREADABLE, None, MIXED_WITH, None]
    assert found.has_offset is True
    found = read("x", "2026-09-03T08:00", "2026-09-03T06:00Z", zone="Europe/Berlin")
    assert found.problem.tolist() == [UNREADABLE, None, MIXED_WITHOUT]
    assert found.has_offset is False


def test_what_earlier_times_of_the_file_were_like_is_kept():
    assert read("2026-09-03T08:00", zone="Europe/Berlin", has_offset=True).problem[0] == MIXED_WITH
    assert read("2026-09-03T08:00Z", zone="Europe/Berlin", has_offset=False).problem[0] == MIXED_WITHOUT
    assert read("x").has_offset is None
    assert read("x", has_offset=True).has_offset is True


def test_without_a_zone_and_with_mixed_times_none_passes():
    found = read("2026-09-03T08:00", "2026-09-03T06:00Z")
    assert found.problem.tolist() == [NO_OFFSET, MIXED_WITHOUT]


def test_no_times_at_all_are_no_trouble():
    found = read()
    assert (len(found.ms), len(found.problem), found.has_offset) == (0, 0, None)


@pytest.mark.parametrize("text", ["20260903T060000Z", "2026-W36-4T06:00Z", "2026-246T06:00Z"])
def test_the_basic_form_week_dates_and_ordinal_dates_name_the_same_moment(text):
    assert one(text) == MORNING


@pytest.mark.parametrize("text", ["2026-09-03", "2026-09-03T06Z"])
def test_what_names_a_span_is_no_moment(text):
    assert one(text).startswith("a span of time, not an instant")


def test_a_leap_second_is_the_second_before():
    assert one("2026-12-31T23:59:60Z") == one("2026-12-31T23:59:59Z")
