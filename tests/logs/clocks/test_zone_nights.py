"""Nights on which clocks change, as the IANA time zone database records them; and stations that keep one time."""

from datetime import UTC, datetime
from zoneinfo import ZoneInfo

import pyarrow as pa
import pytest

from niche.logs.clocks import MISSING_HOUR, REPEATED_HOUR
from niche.logs.clocks.iso import read_iso
from niche.logs.clocks.local import READ_AS, to_utc
from niche.study.time_zone import time_zone


def read(zone, *texts, repeated="stop"):
    found = to_utc(read_iso(pa.array(texts)), time_zone(zone), None, repeated)
    times = (datetime.fromtimestamp(int(ms) / 1000, UTC).strftime("%d %H:%M") for ms in found.ms)
    return [problem or time for problem, time in zip(found.problem, times, strict=True)], found


@pytest.mark.parametrize(
    ("zone", "text", "earlier", "later"),
    [
        ("Europe/Berlin", "2026-10-25T02:30", "25 00:30", "25 01:30"),
        ("America/New_York", "2026-11-01T01:30", "01 05:30", "01 06:30"),
        # Lord Howe Island goes back by half an hour, from +11:00 to +10:30, at 02:00.
        ("Australia/Lord_Howe", "2026-04-05T01:45", "04 14:45", "04 15:15"),
    ],
)
def test_fault_9_a_repeated_hour_stops_unless_the_study_says_which(zone, text, earlier, later):
    assert read(zone, text)[0] == [REPEATED_HOUR]
    for choice, expected in (("earlier", earlier), ("later", later)):
        answer, found = read(zone, text, repeated=choice)
        assert answer == [expected]
        assert found.repair.tolist() == [READ_AS[choice]]
    assert "`logs.clock.repeated_hour`" in REPEATED_HOUR


def test_fault_9_the_order_of_rows_never_decides():
    night = ["2026-10-25T01:59", "2026-10-25T02:30", "2026-10-25T02:10", "2026-10-25T03:00"]
    answer, _ = read("Europe/Berlin", *night)
    assert answer == ["24 23:59", REPEATED_HOUR, REPEATED_HOUR, "25 02:00"]
    assert read("Europe/Berlin", *night[::-1])[0] == answer[::-1]


@pytest.mark.parametrize("repeated", ["stop", "earlier", "later"])
@pytest.mark.parametrize(
    ("zone", "text"),
    [
        ("Europe/Berlin", "2026-03-29T02:30"),
        ("America/New_York", "2026-03-08T02:30"),
        ("Australia/Lord_Howe", "2026-10-04T02:15"),
        # Samoa went over the date line: 30 December 2011 was left out.
        ("Pacific/Apia", "2011-12-30T12:00"),
        ("Pacific/Apia", "2011-12-30T00:00"),
    ],
)
def test_fault_9_a_missing_hour_is_no_time_whatever_the_study_says(zone, text, repeated):
    assert read(zone, text, repeated=repeated)[0] == [MISSING_HOUR]


def test_samoa_jumps_from_the_29th_to_the_31st_of_december_2011():
    assert read("Pacific/Apia", "2011-12-29T23:59", "2011-12-31T00:00")[0] == ["30 09:59", "30 10:00"]


@pytest.mark.parametrize("zone", ["+01:00", "+0100", "Etc/GMT-1"])
def test_fault_11_standard_time_kept_all_year_has_no_such_nights(zone):
    assert read(zone, "2026-03-29T02:30", "2026-07-01T12:00", "2026-10-25T02:30")[0] == [
        "29 01:30",
        "01 11:00",
        "25 01:30",
    ]


def test_a_fixed_offset_may_lie_west_and_between_hours():
    assert read("-03:30", "2026-07-01T12:00")[0] == ["01 15:30"]


@pytest.mark.parametrize("name", ["+19:00", "+01:60", "+1:00", "Europe/Graue_Platte", "", "../x", "+01:00 "])
def test_names_of_no_zone_are_refused_with_examples(name):
    with pytest.raises(ValueError, match=r"IANA name such as Europe/Berlin or Etc/GMT-1, or an offset such as \+01:00"):
        time_zone(name)


def test_every_half_hour_of_two_years_agrees_with_zoneinfo():
    """The short cut for days without a change must not hide one."""
    stamps = range(1_735_689_600, 1_735_689_600 + 2 * 366 * 86_400, 1800)
    for zone in ("Europe/Berlin", "Australia/Lord_Howe", "America/Santiago", "Africa/Casablanca"):
        locals_ = [datetime.fromtimestamp(s, ZoneInfo(zone)).replace(tzinfo=None) for s in stamps]
        found = to_utc(read_iso(pa.array([t.isoformat() for t in locals_])), ZoneInfo(zone))
        wrong = [
            problem
            for problem, ms, s in zip(found.problem.tolist(), found.ms.tolist(), stamps, strict=True)
            if problem != REPEATED_HOUR and (problem, ms) != (None, s * 1000)
        ]
        assert wrong == []
        assert (found.problem == REPEATED_HOUR).sum() == {"Australia/Lord_Howe": 4}.get(zone, 8)
