"""The forms of eventDate, by the examples of the standards page and worked by hand."""

from decimal import Decimal

import pytest

from niche.logs.standards.event_date import sampled_seconds, seconds_of, shift, split


@pytest.mark.parametrize(
    ("text", "clock", "found"),
    [
        ("2026-09-03T08:15+02:00", "", ("2026-09-03T08:15+02:00", "")),
        ("2026-09-03T08:15+02:00/2026-09-03T08:40+02:00", "", ("2026-09-03T08:15+02:00", "2026-09-03T08:40+02:00")),
        # Forms of ISO 8601 that Darwin Core gives as examples.
        ("2007-03-01T13:00:00Z/2008-05-11T15:30:00Z", "", ("2007-03-01T13:00:00Z", "2008-05-11T15:30:00Z")),
        ("2024-05-01T09:00/09:45", "", ("2024-05-01T09:00", "2024-05-01T09:45")),
        ("2024-05-01T09:00+01:00/09:45", "", ("2024-05-01T09:00+01:00", "2024-05-01T09:45+01:00")),
        ("2024-05-01T09:00+01:00/2024-05-01T09:45", "", ("2024-05-01T09:00+01:00", "2024-05-01T09:45+01:00")),
        ("2024-05-01T23:50Z/02T00:10", "", ("2024-05-01T23:50Z", "2024-05-02T00:10Z")),
        ("2024-05-31T23:50Z/06-01T00:10", "", ("2024-05-31T23:50Z", "2024-06-01T00:10Z")),
        ("2024-05-01T09:00Z/PT45M", "", ("2024-05-01T09:00Z", "2024-05-01T09:45:00Z")),
        ("PT1H30M/2024-05-01T09:00Z", "", ("2024-05-01T07:30:00Z", "2024-05-01T09:00Z")),
        # A date alone stays a date: nothing becomes more exact than it was written.
        ("2007-11-13/15", "", ("2007-11-13", "15")),
        ("1906-06", "", ("1906-06", "")),
        ("2026-09-03", "08:15:00Z/08:40:00Z", ("2026-09-03T08:15:00Z", "2026-09-03T08:40:00Z")),
        ("2026-09-03", "08:15", ("2026-09-03T08:15", "")),
        ("2026-09-03T08:15Z", "09:00Z", ("2026-09-03T08:15Z", "")),
        ("2024-05-01T09:00Z/P1M", "", ("2024-05-01T09:00Z", "P1M")),
        ("", "", ("", "")),
        ("/", "", ("", "")),
    ],
)
def test_start_and_end_of_an_event_date(text, clock, found):
    assert split(text, clock) == found


@pytest.mark.parametrize(
    ("text", "seconds"),
    [
        ("PT90M", 5400), ("PT1H30M", 5400), ("PT0.5S", "0.5"), ("PT0,5S", "0.5"), ("P1D", 86400), ("P2W", 1209600),
        ("PT1.5H", 5400), ("P0.5D", 43200), ("PT36H", 129600), ("P1DT12H", 129600), ("PT0S", 0),
        ("P1Y", None), ("P1M", None), ("P", None), ("PT", None), ("PT1.5H30M", None), ("90", None), ("P1H", None),
        ("-PT5M", None), ("PT" + "9" * 80 + "S", None),
    ],
)  # fmt: skip
def test_length_of_a_duration(text, seconds):
    assert seconds_of(text) == (None if seconds is None else Decimal(seconds))


def test_a_time_moves_over_the_hour_that_clocks_are_put_forward():
    # Europe/Berlin, 2026-03-29: 02:00 becomes 03:00 (IANA), so half an hour after 01:45 it is 03:15.
    assert shift("2026-03-29T01:45", Decimal(1800), "Europe/Berlin") == "2026-03-29T03:15:00"
    assert shift("2026-03-29T01:45+01:00", Decimal(1800), "Europe/Berlin") == "2026-03-29T02:15:00+01:00"
    assert shift("2026-09-03T24:00Z", Decimal("0.25")) == "2026-09-04T00:00:00.250Z"
    assert shift("soon", Decimal(1)) == ""
    assert shift("9999-12-31T23:59Z", Decimal(86400)) == ""


@pytest.mark.parametrize(
    ("value", "unit", "seconds"),
    [("25", "minute", 1500), ("0.5", "hours", 1800), ("90", "s", 90), ("25", "metre", None), ("x", "min", None),
     ("-5", "min", None), ("", "min", None)],
)  # fmt: skip
def test_a_sample_size_is_a_time_only_in_a_unit_of_time(value, unit, seconds):
    assert sampled_seconds(value, unit) == (None if seconds is None else Decimal(seconds))
