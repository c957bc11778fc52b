"""Durations: ISO 8601, plain numbers in a declared unit, parts with colons, and dates that a spreadsheet made of them."""

from datetime import timedelta

import pyarrow as pa
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs.clocks.durations import (
    DECIMAL_COMMA,
    HOURS_OR_PARTS,
    LOWEST_ONLY,
    NEGATIVE,
    NO_FIXED_LENGTH,
    NOT_ISO,
    THREE_PARTS,
    TWO_PARTS,
    read_durations,
)


def one(text, unit="s", **keys):
    found = read_durations(pa.array([text]), unit, **keys)
    return found.problem[0] or int(found.ms[0])


@pytest.mark.parametrize(
    ("text", "seconds"),
    [
        ("PT90M", 5400),
        ("PT1H30M", 5400),
        ("PT5400S", 5400),
        ("PT1.5H", 5400),
        ("PT1,5H", 5400),
        ("P1D", 86_400),
        ("P2W", 1_209_600),
        ("P0.5D", 43_200),
        ("P1DT12H", 129_600),
        ("PT0S", 0),
        ("PT1H0.5S", 3600.5),
        ("P1,5W", 907_200),
        ("PT36H", 129_600),
        ("P3DT4H59M10.125S", 277_150.125),
        (" PT1S ", 1),
    ],
)
@pytest.mark.parametrize("unit", ["s", "h", "h:m", "m:s"])
def test_iso_durations_say_their_unit_themselves(text, seconds, unit):
    assert one(text, unit) == seconds * 1000


@pytest.mark.parametrize("text", ["P1Y", "P1M", "P1Y2M3DT4H", "P2M1D", "P1Y6M", "P0.5Y"])
def test_years_and_months_are_refused_because_their_length_is_not_fixed(text):
    assert one(text) == NO_FIXED_LENGTH


def test_m_is_a_month_before_the_t_and_a_minute_after_it():
    assert one("P1M") == NO_FIXED_LENGTH
    assert one("PT1M") == 60_000


@pytest.mark.parametrize("text", ["PT1.5H30M", "P1.5DT1H", "PT0,5M1S"])
def test_only_the_lowest_part_may_have_a_decimal(text):
    assert one(text) == LOWEST_ONLY


@pytest.mark.parametrize(
    "text", ["P", "PT", "P1DT", "P1H", "PT1D", "P1W2D", "PT1M1H", "PT.5S", "PT1.S", "P 1D", "PT1H30", "P1", "p1d"]
)
def test_what_only_resembles_a_duration_is_refused(text):
    assert one(text) == (NOT_ISO if text[0] == "P" else "not a plain number, such as 42 or 42.5")


@settings(max_examples=100, deadline=None)
@given(st.lists(st.tuples(*[st.integers(0, 999)] * 4, st.integers(0, 999)), min_size=1, max_size=20))
def test_iso_durations_agree_with_timedelta(parts):
    texts = [f"P{d}DT{h}H{m}M{s}.{f:03d}S" for d, h, m, s, f in parts]
    found = read_durations(pa.array(texts), "s")
    expected = [timedelta(days=d, hours=h, minutes=m, seconds=s, milliseconds=f) for d, h, m, s, f in parts]
    assert found.ms.tolist() == [length // timedelta(milliseconds=1) for length in expected]


@pytest.mark.parametrize(
    ("unit", "text", "ms"),
    [
        ("s", "42.5", 42_500),
        ("min", "1.5", 90_000),
        ("h", "7.30", 26_280_000),
        ("d", "0.5", 43_200_000),
        ("s", "0", 0),
        ("h:m:s", "0:42:30", 2_550_000),
        ("h:m:s", "36:00:00.5", 129_600_500),
        ("h:m", "7:30", 27_000_000),
        ("h:m", "7:30:00", 27_000_000),
        ("m:s", "7:30", 450_000),
        ("m:s", "90:00", 5_400_000),
    ],
)
def test_the_declared_unit_is_what_a_value_means(unit, text, ms):
    assert one(text, unit) == ms


def test_frames_count_at_their_rate():
    assert one("250", "frames", frames_per_second=25.0) == 10_000
    assert one("1", "frames", frames_per_second=29.97) == 33


@settings(max_examples=100, deadline=None)
@given(st.integers(0, 10**9))
def test_whole_seconds_are_the_same_in_every_way_of_writing_them(seconds):
    h, m, s = seconds // 3600, seconds // 60 % 60, seconds % 60
    expected = [seconds * 1000] * 3
    assert [one(str(seconds)), one(f"PT{seconds}S"), one(f"{h}:{m:02d}:{s:02d}", "h:m:s")] == expected


@pytest.mark.parametrize("unit", ["s", "min", "h", "h:m:s"])
def test_fault_8_two_parts_are_asked_about(unit):
    assert one("7:30", unit) == TWO_PARTS
    assert '`logs.duration_unit` to "h:m" or "m:s"' in TWO_PARTS


def test_fault_8_three_parts_under_another_unit_name_the_unit_to_set():
    assert one("0:07:30") == one("0:07:30", "m:s") == one("7:30:01", "h:m") == THREE_PARTS
    assert '"h:m:s"' in THREE_PARTS


def test_fault_7_hours_with_a_point_are_asked_about():
    assert one("7.30", "h:m") == HOURS_OR_PARTS
    assert '`logs.duration_unit` to "h"' in HOURS_OR_PARTS


def test_a_decimal_comma_is_read_only_where_it_is_declared():
    assert one("42,5") == DECIMAL_COMMA
    assert one("42,5", decimal=",") == 42_500
    assert one("1.042,5", decimal=",") == "not a plain number, such as 42 or 42.5"


@pytest.mark.parametrize(("text", "unit"), [("-5", "s"), ("-PT5M", "s"), ("-0:05", "h:m"), ("-0:00:05", "h:m:s")])
def test_a_negative_duration_is_told_apart(text, unit):
    assert one(text, unit) == NEGATIVE


@pytest.mark.parametrize(
    ("text", "unit"),
    [("", "s"), ("ten", "s"), ("1e3", "s"), ("nan", "s"), ("5 min", "min"), ("7:60", "h:m"), ("5", "h:m")],
)
def test_anything_else_is_refused(text, unit):
    assert one(text, unit).startswith("not ")


def test_a_century_is_the_limit():
    assert one("36601", "d") == "longer than a century; is the unit 'd' right?"
    assert one("9" * 15).startswith("longer than a century")


@pytest.mark.parametrize(
    ("text", "hours", "epoch"),
    [
        # Serial 9.229… of the epoch 1900 shows as 9 January 1900, serial 1.229… as 1 January.
        ("1900-01-09T05:30:00", 9 * 24 + 5.5, 1900),
        ("1900-01-01 05:30", 29.5, 1900),
        ("1904-01-01T05:30:00", 5.5, 1904),
        ("1904-01-02T05:30:00", 29.5, 1904),
        # Where day 0 is 30 December 1899, dates of 1899 show it.
        ("1899-12-30T05:30:00", 5.5, 1900),
        ("1899-12-31T05:30:00", 29.5, 1900),
    ],
)
def test_fault_14_a_duration_shown_as_a_date_is_read_back_and_noted(text, hours, epoch):
    found = read_durations(pa.array([text, "0:10:00"]), "h:m:s", epoch=epoch)
    assert found.problem.tolist() == [None, None]
    assert found.ms.tolist() == [hours * 3_600_000, 600_000]
    assert found.repair[1] is None
    assert found.repair[0].endswith(f"read as {int(hours)}:{hours % 1 * 60:02.0f}:00")


def test_fault_14_dates_of_1899_decide_how_the_whole_column_counts():
    found = read_durations(pa.array(["1899-12-30T05:30:00", "1900-01-01T00:00:00"]), "h:m:s")
    assert found.ms.tolist() == [5.5 * 3_600_000, 48 * 3_600_000]


def test_fault_14_a_real_date_is_no_duration():
    assert (
        one("2026-09-03T05:30:00", "h:m:s")
        == "not in the form h:m:s that `logs.duration_unit` declares, such as 0:42:30"
    )
