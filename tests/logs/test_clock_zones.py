"""Local times in a declared zone: the missing and the repeated hour, north and south, and fixed offsets.

The rules of the zones are facts of the IANA time zone database.
"""

from collections import defaultdict
from datetime import UTC, datetime, timedelta
from zoneinfo import ZoneInfo

import pyarrow as pa
import pytest

from niche.logs.clocks import IMPOSSIBLE, MISSING_HOUR, REPEATED_HOUR, read_times

EPOCH = datetime(1970, 1, 1, tzinfo=UTC)


def read(zone, *texts):
    found = read_times(pa.array(texts, type=pa.string()), zone)
    return [problem or int(ms) for problem, ms in zip(found.problem, found.ms, strict=True)]


def utc(text):
    return (datetime.fromisoformat(text).replace(tzinfo=UTC) - EPOCH) // timedelta(milliseconds=1)


def test_berlin_2026_03_29_has_no_time_between_two_and_three():
    assert read(
        "Europe/Berlin",
        "2026-03-29T01:59:59.999", "2026-03-29T02:00", "2026-03-29T02:30", "2026-03-29T02:59:59.999", "2026-03-29T03:00",
    ) == [utc("2026-03-29T01:00") - 1, MISSING_HOUR, MISSING_HOUR, MISSING_HOUR, utc("2026-03-29T01:00")]  # fmt: skip


def test_berlin_2026_10_25_has_the_times_between_two_and_three_twice():
    assert read(
        "Europe/Berlin",
        "2026-10-25T01:59:59.999", "2026-10-25T02:00", "2026-10-25T02:30", "2026-10-25T02:59:59.999", "2026-10-25T03:00",
    ) == [utc("2026-10-25T00:00") - 1, REPEATED_HOUR, REPEATED_HOUR, REPEATED_HOUR, utc("2026-10-25T02:00")]  # fmt: skip


def test_auckland_in_the_south_goes_forward_in_september_and_back_in_april():
    assert read("Pacific/Auckland", "2026-09-27T01:59", "2026-09-27T02:30", "2026-09-27T03:00") == [
        utc("2026-09-26T13:59"), MISSING_HOUR, utc("2026-09-26T14:00"),
    ]  # fmt: skip
    assert read("Pacific/Auckland", "2026-04-05T01:59", "2026-04-05T02:30", "2026-04-05T03:00") == [
        utc("2026-04-04T12:59"), REPEATED_HOUR, utc("2026-04-04T15:00"),
    ]  # fmt: skip


def test_lord_howe_moves_by_half_an_hour():
    assert read("Australia/Lord_Howe", "2026-10-04T01:59", "2026-10-04T02:00", "2026-10-04T02:29", "2026-10-04T02:30") == [
        utc("2026-10-03T15:29"), MISSING_HOUR, MISSING_HOUR, utc("2026-10-03T15:30"),
    ]  # fmt: skip


def test_a_fixed_offset_keeps_the_same_time_all_year_and_its_sign_is_the_databases():
    # Etc/GMT-1 lies east of Greenwich: one hour ahead of UTC.
    assert read("Etc/GMT-1", "2026-03-29T02:30", "2026-10-25T02:30", "2026-07-01T12:00") == [
        utc("2026-03-29T01:30"), utc("2026-10-25T01:30"), utc("2026-07-01T11:00"),
    ]  # fmt: skip


def test_24_00_before_a_change_of_the_clock_is_the_next_midnight():
    assert read("Europe/Berlin", "2026-03-28T24:00", "2026-10-25T24:00") == [
        utc("2026-03-28T23:00"), utc("2026-10-25T23:00"),
    ]  # fmt: skip


@pytest.mark.parametrize("text", ["0000-06-01T12:00", "0001-01-01T00:00", "9999-12-31T24:00"])
def test_a_local_time_beyond_the_calendar_is_impossible(text):
    assert read("Europe/Berlin", text) == [IMPOSSIBLE]


CHANGES = [
    ("Europe/Berlin", "2026-03-29"), ("Europe/Berlin", "2026-10-25"), ("Europe/Dublin", "2026-03-29"),
    ("Pacific/Auckland", "2026-04-05"), ("Pacific/Auckland", "2026-09-27"), ("Pacific/Chatham", "2026-04-05"),
    ("Australia/Lord_Howe", "2026-04-05"), ("Australia/Lord_Howe", "2026-10-04"), ("America/Santiago", "2026-04-05"),
    ("America/Santiago", "2026-09-06"), ("America/New_York", "2026-11-01"), ("America/Havana", "2026-03-08"),
    ("Africa/Casablanca", "2026-02-15"), ("Africa/Casablanca", "2026-03-22"), ("Pacific/Apia", "2011-12-30"),
    ("Asia/Kathmandu", "2026-06-01"), ("America/Caracas", "2016-05-01"), ("Antarctica/Troll", "2026-03-29"),
    ("Europe/Lisbon", "1992-09-27"), ("America/St_Johns", "2006-10-29"), ("UTC", "2026-01-01"),
]  # fmt: skip


@pytest.mark.parametrize(("zone", "day"), CHANGES)
def test_every_five_minutes_round_a_change_agree_with_a_count_of_real_instants(zone, day):
    """Go through the instants of five days and see which local times they show: none, one or two instants each."""
    shown = defaultdict(list)
    instant = datetime.fromisoformat(day).replace(tzinfo=UTC) - timedelta(days=2, hours=14)
    for _ in range(6 * 24 * 60):
        shown[instant.astimezone(ZoneInfo(zone)).replace(tzinfo=None)].append(instant)
        instant += timedelta(minutes=1)
    local = datetime.fromisoformat(day) - timedelta(days=1)
    texts, expected = [], []
    while local < datetime.fromisoformat(day) + timedelta(days=2):
        instants = shown[local]
        texts.append(local.isoformat())
        single = (instants[0] - EPOCH) // timedelta(milliseconds=1) if len(instants) == 1 else None
        expected.append({0: MISSING_HOUR, 1: single, 2: REPEATED_HOUR}[len(instants)])
        local += timedelta(minutes=5)
    assert read(zone, *texts) == expected


def test_the_changes_tested_hold_missing_and_repeated_times():
    """The table above would prove little if no time in it were missing or repeated."""
    found = {
        problem
        for zone, day in CHANGES
        for problem in read(
            zone, *(f"{day}T{hour:02d}:{minute:02d}" for hour in range(24) for minute in (0, 15, 30, 45))
        )
        if isinstance(problem, str)
    }
    assert found == {MISSING_HOUR, REPEATED_HOUR}
