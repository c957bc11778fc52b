"""ISO 8601 in full. The values are written from memory of the forms that the standard describes."""

from datetime import UTC, date, datetime, timedelta

import pyarrow as pa
import pyarrow.compute as pc
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs.clocks import (
    IMPOSSIBLE,
    LEAP_SECOND,
    MIDNIGHT,
    MIXED_FORM,
    MIXED_WITH,
    SPAN,
    UNREADABLE,
    read_times,
)
from niche.logs.clocks.iso import _EXTENDED
from niche.logs.clocks.uniform import read_uniform
from niche.logs.clocks.written import from_parts

EPOCH = datetime(1970, 1, 1, tzinfo=UTC)


def read(*texts, zone=None, has_offset=None):
    return read_times(pa.array(texts, type=pa.string()), zone, has_offset)


def one(text, zone=None):
    found = read(text, zone=zone)
    return found.problem[0] or (EPOCH + timedelta(milliseconds=int(found.ms[0]))).isoformat()


@pytest.mark.parametrize(
    "text",
    [
        "1985-04-12T10:15:30+04:00",
        "1985-04-12T10:15:30+04",
        "19850412T101530+0400",
        "19850412T101530+04",
        "1985-04-12T06:15:30Z",
        "19850412T061530Z",
        "1985-102T06:15:30Z",
        "1985102T061530Z",
        "1985-W15-5T06:15:30Z",
        "1985W155T061530Z",
        "1985-04-12 06:15:30Z",
        "1985102T101530+0400",
        "1985-W15-5T10:15:30+04:00",
    ],
)
def test_calendar_ordinal_and_week_dates_in_extended_and_basic_form_name_one_instant(text):
    # 12 April 1985 is day 102 of its year and the Friday of week 15: the standard's own example date.
    assert one(text) == "1985-04-12T06:15:30+00:00"


@pytest.mark.parametrize(
    "text",
    [
        "1985-04-12T1015Z",
        "19850412T10:15Z",
        "1985-04-12T101530Z",
        "19850412T10:15:30Z",
        "19850412T101530+04:00",
        "1985-102T1015Z",
        "1985W155T10:15Z",
        "1985-W15-5T1015",
    ],
)
def test_basic_and_extended_form_are_not_mixed_within_one_value(text):
    assert one(text, zone="Europe/Berlin") == MIXED_FORM


@pytest.mark.parametrize(
    "text",
    [
        "1985-04-12",
        "19850412",
        "1985-04",
        "1985",
        "1985-102",
        "1985-W15",
        "1985-W15-5",
        "1985W155",
        "1985-04-12T10",
        "19850412T10Z",
    ],
)
def test_a_value_that_stops_before_the_minutes_is_a_span_and_no_instant(text):
    assert one(text, zone="Europe/Berlin") == SPAN


@pytest.mark.parametrize(
    "text",
    [
        "1985-366T10:15Z",
        "1985-000T10:15Z",
        "1985-W53-1T10:15Z",
        "1985-W00-1T10:15Z",
        "1985-W15-8T10:15Z",
        "1985-W15-0T10:15Z",
        "19850230T1015Z",
        "19850412T2401Z",
    ],
)
def test_days_and_weeks_that_a_year_has_not_are_refused(text):
    assert one(text) == IMPOSSIBLE


def test_years_of_53_weeks_and_366_days_have_them():
    assert one("2020-W53-7T12:00Z") == "2021-01-03T12:00:00+00:00"
    assert one("2024-366T12:00Z") == "2024-12-31T12:00:00+00:00"


@settings(max_examples=60, deadline=None)
@given(st.lists(st.dates(date(1600, 1, 1), date(2400, 12, 31)), min_size=1, max_size=30))
def test_week_and_ordinal_dates_agree_with_datetime(days):
    week = ["{}-W{:02d}-{}T00:00Z".format(*day.isocalendar()) for day in days]
    ordinal = [day.strftime("%Y-%jT00:00Z").rjust(15, "0") for day in days]
    expected = [(day - date(1970, 1, 1)).days * 86_400_000 for day in days]
    for texts in (week, ordinal):
        found = read(*texts)
        assert found.problem.tolist() == [None] * len(days)
        assert found.ms.tolist() == expected


def test_the_leap_second_at_the_end_of_2016_is_read_as_the_second_before_and_noted():
    found = read("2016-12-31T23:59:60Z", "2017-01-01T00:59:60+01:00", "2016-12-31T23:59:59Z")
    assert found.problem.tolist() == [None] * 3
    assert found.ms.tolist() == [found.ms[2]] * 3
    assert found.repair.tolist() == [LEAP_SECOND, LEAP_SECOND, None]


@pytest.mark.parametrize(
    "text", ["2016-12-31T23:58:60Z", "2016-12-30T23:59:60Z", "2017-01-01T23:59:60+01:00", "2016-12-31T23:59:61Z"]
)
def test_second_60_elsewhere_is_no_time(text):
    assert one(text) == IMPOSSIBLE


def test_a_leap_second_in_local_time_is_known_by_its_utc():
    assert one("2017-01-01T00:59:60", zone="Europe/Berlin") == "2016-12-31T23:59:59+00:00"
    assert one("2016-12-31T23:59:60", zone="Europe/Berlin") == IMPOSSIBLE


def test_fault_15_a_date_alone_among_times_is_the_midnight_that_a_spreadsheet_hid():
    found = read("2026-09-03 23:50", "2026-09-04", "2026-09-04 00:10", zone="Etc/GMT-1")
    assert found.problem.tolist() == [None] * 3
    assert found.ms[1] - found.ms[0] == found.ms[2] - found.ms[1] == 600_000
    assert found.repair.tolist() == [None, MIDNIGHT, None]


def test_fault_15_is_not_applied_where_dates_alone_are_many_or_times_carry_offsets():
    assert read("2026-09-03", "2026-09-04", "2026-09-04T00:10", zone="Etc/GMT-1").problem.tolist() == [SPAN, SPAN, None]
    found = read("2026-09-03T23:50Z", "2026-09-04", "2026-09-04T00:10Z")
    assert found.problem.tolist() == [None, MIXED_WITH, None]
    assert read("2026-02-30", "2026-09-04T00:10", "2026-09-04T00:20", zone="Etc/GMT-1").problem[0] == SPAN


@pytest.mark.parametrize(
    "text", ["1985-4-12T10:15Z", "85-04-12T10:15Z", "1985-04-12t10:15z", "1985/04/12T10:15Z", "+1985-04-12T10:15Z"]
)
def test_what_only_resembles_the_standard_is_unreadable(text):
    assert one(text) == UNREADABLE


PARTS = ("ms", "offset", "has_offset", "problem", "repair", "leap")
MODELS = [
    "2026-09-03T08:15",
    "2026-09-03 08:15:30",
    "2026-12-31T23:59:60Z",
    "2026-09-03T24:00:00.000+02:00",
    "2026-02-28T08:15:30,5-0330",
    "2026-09-03T08:15:30.123456789Z",
    "2026-09-03T08:15+05:45",
]


@settings(max_examples=150, deadline=None)
@given(
    st.sampled_from(MODELS),
    st.lists(st.lists(st.tuples(st.integers(0, 30), st.sampled_from("0123456789-+:.,TZ é")), max_size=3), max_size=12),
)
def test_the_short_way_reads_as_the_regular_expression_does(model, changes):
    """Cells written alike, with some characters changed: what the short way takes, it takes to the same numbers."""
    cells = [model]
    for change in changes:
        letters = list(model)
        for place, letter in change:
            letters[place % len(letters)] = letter
        cells.append("".join(letters))
    column = pa.array(["", *cells, "", *cells]).slice(1)  # a slice, as pieces of files are
    short, whole = read_uniform(column), from_parts(pc.extract_regex(column, _EXTENDED))
    assert short.fits[0]
    assert not (short.fits & ~whole.fits).any()
    for name in PARTS:
        assert getattr(short, name)[short.fits].tolist() == getattr(whole, name)[short.fits].tolist(), name


def test_the_short_way_takes_all_cells_that_differ_in_digits_alone():
    cells = [
        f"20{n:02d}-0{n % 9 + 1}-{n % 28 + 1:02d}T{n % 24:02d}:{n:02d}:{n:02d}.{n:03d}+0{n % 9}:30" for n in range(60)
    ]
    found = read_uniform(pa.array(cells))
    assert found.fits.all()
    expected = [(datetime.fromisoformat(cell) - EPOCH) // timedelta(milliseconds=1) for cell in cells]
    assert (found.ms - found.offset * 60_000).tolist() == expected


@pytest.mark.parametrize("cells", [[], [""], ["x"], ["２０２６-09-03T08:15Z"], ["2026-09-03T08:15Z", None]])
def test_the_short_way_leaves_the_rest_alone(cells):
    assert not read_uniform(pa.array(cells, type=pa.string())).fits.any()
