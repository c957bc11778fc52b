"""ISO 8601 intervals in one cell. The values are written from memory of the forms that the standard describes."""

import pytest

from niche.logs.clocks.intervals import NOT_AN_INTERVAL, TWO_DURATIONS
from niche.logs.clocks.iso import SPAN


@pytest.mark.parametrize(
    "cell",
    [
        "2026-09-03T08:15Z/2026-09-03T08:40Z",
        "2026-09-03T08:15Z/08:40",
        "2026-09-03T08:15Z/T08:40",
        "2026-09-03T08:15Z/03T08:40",
        "2026-09-03T08:15Z/09-03T08:40",
        "2026-09-03T08:15Z--08:40",
        "2026-09-03T08:15Z/PT25M",
        "PT25M/2026-09-03T08:40Z",
        "2026-09-03T10:15+02:00/10:40",
        "2026-09-03T10:15+02:00/10:40:00+02:00",
        "2026-09-03T10:15+02:00/08:40Z",
        "20260903T0815Z/0840",
        "20260903T101500+0200/104000",
        "20260903T0815Z/20260903T0840Z",
        "2026-W36-4T08:15Z/08:40",
        "2026-246T08:15Z/T08:40",
        "2026-09-03 08:15Z / 08:40",
        "2026-09-03T08:15Z/PT0,41666667H",
        "PT1500S--20260903T0840Z",
        "2026-09-03T05:15-03:00/05:40",
        "2026-09-03T05:15-03:00--05:40",
    ],
)
def test_every_form_of_an_interval_gives_the_same_bout(read, cell):
    found = read(["start"], [cell])
    assert found.lines() == []
    assert found.spans() == [("2026-09-03T08:15:00", "2026-09-03T08:40:00", 2)]


def test_an_end_may_give_its_day_or_its_month_and_day(read):
    found = read(["start"], ["2026-09-30T23:15+02:00/10-01T00:10"], ["2026-09-03T23:15+02:00/04T00:10"])
    assert found.spans() == [
        ("2026-09-30T21:15:00", "2026-09-30T22:10:00", 2),
        ("2026-09-03T21:15:00", "2026-09-03T22:10:00", 3),
    ]


def test_an_end_that_drops_the_date_and_lies_after_midnight_is_the_next_day_and_noted(read):
    found = read(["start"], ["2026-09-30T23:50Z/00:10"])
    assert found.spans() == [("2026-09-30T23:50:00", "2026-10-01T00:10:00", 2)]
    assert found.lines() == [(2, "end", "2026-09-30T23:50Z/00:10", "past midnight", "repaired")]


@pytest.mark.parametrize(
    ("cell", "reason", "words"),
    [
        ("2026-09-03T08:15Z", "unreadable time", NOT_AN_INTERVAL),
        ("P1D/PT2H", "unreadable time", TWO_DURATIONS),
        ("2026-09-03/04", "unreadable time", SPAN),
        ("2026-09-03/2026-09-04", "unreadable time", SPAN),
        ("2026-09-03T08:15Z/P1M", "unreadable duration", "years and months have no fixed length"),
        ("2026-09-03T08:15Z/", "unreadable time", "not an ISO 8601 date and time"),
        ("2026-09-03T08:15Z/40", "unreadable time", "not an ISO 8601 date and time"),
        ("2026-09-03T08:15Z/08:40/09:00", "unreadable time", NOT_AN_INTERVAL),
        ("2026-09-03T08:15Z/0840", "unreadable time", "basic and extended form"),
        ("2026-09-03T08:15Z/08:05", "end before start", "the end is before the start"),
        ("", "start missing", "a bout without it has no length"),
    ],
)
def test_a_cell_that_is_no_interval_says_why(read, cell, reason, words):
    found = read(["start", "notes"], [cell, "x"], ["2026-09-03T09:15Z/09:40", ""])
    ((row, _, value, told, action),) = found.lines()
    assert (row, value, told) == (2, cell, reason)
    assert action == ("set_aside" if cell == "" else "stop")
    assert words in found.said(2)
    assert [row for *_, row in found.spans()] == [3]


def test_an_interval_without_offset_is_local_time(read):
    found = read(["start"], ["2026-09-03T08:15/08:40"], logs='time_zone = "Europe/Berlin"')
    assert found.spans() == [("2026-09-03T06:15:00", "2026-09-03T06:40:00", 2)]


def test_the_two_sides_of_an_interval_are_one_way(read):
    found = read(["start"], ["2026-09-03T08:15/08:40Z"], logs='time_zone = "Europe/Berlin"')
    assert found.lines() == [(2, "end", "2026-09-03T08:15/08:40Z", "unreadable time", "stop")]
    assert found.said(2).startswith("an offset, where the file's first time has none")
