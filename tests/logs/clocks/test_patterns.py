"""Declared patterns of strptime codes, against `datetime.strptime` itself."""

import re
from datetime import UTC, datetime

import numpy as np
import pyarrow as pa
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs.clocks.patterns import misfit, read_pattern
from niche.logs.clocks.written import END_OF_DAY, IMPOSSIBLE
from niche.study.time_pattern import check_pattern

PATTERNS = [
    "%d.%m.%Y %H:%M:%S",
    "%d.%m.%Y %H:%M",
    "%m/%d/%Y %I:%M %p",
    "%d/%m/%y %H.%M",
    "%Y%m%d%H%M%S",
    "%Y-%j %H:%M",
    "%H:%M %d-%m-%Y",
    "%Y-%m-%dT%H:%M:%S.%f%z",
    "%Y/%m/%d at %Hh%M",
    "%d.%m.%Y, %H:%M Uhr",
    "%I:%M:%S%p on %d %m %Y",
    "%Y-%m-%d%%%H:%M (+)",
]


def read(pattern, *texts):
    return read_pattern(pa.array(texts, type=pa.string()), pattern)


def one(pattern, text):
    found = read(pattern, text)
    return found.problem[0] or str(np.datetime64(int(found.ms[0]), "ms"))


def by_python(text, pattern):
    """Local milliseconds, or None where strptime refuses."""
    try:
        when = datetime.strptime(text, pattern)  # noqa: DTZ007 - what is tested against
    except ValueError:
        return None
    offset = when.utcoffset()
    whole = (when.replace(tzinfo=UTC) - datetime(1970, 1, 1, tzinfo=UTC)).total_seconds()
    return int(np.floor(round(whole * 1e6) / 1000)), None if offset is None else offset.total_seconds() / 60


@pytest.mark.parametrize("pattern", PATTERNS)
def test_patterns_are_complete_and_times_written_by_strftime_come_back(pattern):
    check_pattern(pattern)
    rng = np.random.default_rng(8)
    whens = [datetime.fromtimestamp(int(s), UTC) for s in rng.integers(10**9, 2 * 10**9, 200)]
    texts = [when.strftime(pattern) for when in whens]
    found = read(pattern, *texts)
    assert found.problem.tolist() == [None] * 200
    assert found.ms.tolist() == [by_python(text, pattern)[0] for text in texts]


@settings(max_examples=300, deadline=None)
@given(st.sampled_from(PATTERNS), st.data())
def test_text_near_a_pattern_is_read_exactly_when_strptime_reads_it(pattern, data):
    """Any numbers in the places of the codes: one or two digits, in range or not."""
    number = st.integers(0, 66).map(str) | st.integers(0, 12).map("{:02d}".format)
    values = {
        "Y": st.integers(1, 9999).map("{:04d}".format) | number,
        "z": st.sampled_from(["Z", "+0200", "-03:30", "+2", "+0275"]),
        "p": st.sampled_from(["AM", "pm", "am", "PM", "p.m.", ""]),
        "j": st.integers(0, 380).map(str),
        "f": st.integers(0, 9_999_999).map(str),
        "%": st.just("%"),
    }
    text, rest = "", pattern
    while rest:
        if rest[0] == "%":
            text, rest = text + data.draw(values.get(rest[1], number)), rest[2:]
        else:
            text, rest = text + rest[0], rest[1:]
    expected, found = by_python(text, pattern), read(pattern, text)
    if found.problem[0] is None and found.repair[0] is None:
        assert expected is not None
        assert int(found.ms[0]) == expected[0]
        assert (float(found.offset[0]) if found.has_offset[0] else None) == expected[1]
    elif expected is not None and found.problem[0] is not None:
        assert pattern == "%Y%m%d%H%M%S"  # codes that touch take two digits each; strptime guesses
        assert len(text) != 14


def test_24_00_is_the_end_of_the_day_where_strptime_gives_up():
    found = read("%d.%m.%Y %H:%M", "31.12.2026 24:00", "01.01.2027 00:00", "31.12.2026 24:01")
    assert found.ms[0] == found.ms[1]
    assert found.repair.tolist() == [END_OF_DAY, None, None]
    assert found.problem.tolist() == [None, None, IMPOSSIBLE]


def test_noon_and_midnight_on_a_12_hour_clock():
    pattern = "%d.%m.%Y %I:%M %p"
    assert one(pattern, "03.09.2026 12:05 AM") == "2026-09-03T00:05:00.000"
    assert one(pattern, "03.09.2026 12:05 pm") == "2026-09-03T12:05:00.000"
    assert one(pattern, "03.09.2026 13:05 PM") == IMPOSSIBLE
    assert one(pattern, "03.09.2026 00:05 AM") == IMPOSSIBLE


def test_two_digit_years_turn_over_where_strptime_does():
    texts = ["03/09/68 06.05", "03/09/69 06.05", "03/09/99 06.05", "03/09/00 06.05"]
    found = read("%d/%m/%y %H.%M", *texts)
    assert found.ms.tolist() == [by_python(text, "%d/%m/%y %H.%M")[0] for text in texts]


def test_a_pattern_is_strict():
    pattern = "%d.%m.%Y %H:%M"
    assert one(pattern, "3.9.2026 6:05") == "2026-09-03T06:05:00.000"
    for text in (
        "03/09/2026 06:05",
        "03.09.26 06:05",
        "2026-09-03T06:05",
        "03.09.2026 06:05:00",
        "03.09.2026 06:05 x",
        "",
    ):
        assert one(pattern, text) == misfit(pattern)
    assert one(pattern, "30.02.2026 06:05") == IMPOSSIBLE
    assert one(pattern, "09.13.2026 06:05") == IMPOSSIBLE
    assert "'%d.%m.%Y %H:%M'" in misfit(pattern)
    assert "`logs.clock.format`" in misfit(pattern)


def test_fault_15_dates_alone_in_a_pattern():
    found = read("%d.%m.%Y %H:%M", "03.09.2026 23:50", "04.09.2026", "04.09.2026 00:10", "05.09.")
    assert found.whole_day.tolist() == [False, True, False, False]
    found.mend_midnights(False)
    assert found.problem.tolist() == [None, None, None, misfit("%d.%m.%Y %H:%M")]
    assert found.ms[2] - found.ms[1] == 600_000


@pytest.mark.parametrize(
    ("pattern", "words"),
    [
        ("%d.%m.%Y %I:%M", "12-hour clock, %I, without AM or PM, %p: morning and afternoon cannot be told apart"),
        ("%d.%m.%Y %H:%M %p", "goes with the 12-hour clock %I and not with %H"),
        ("%d.%m.%Y %H", "needs minutes, %M"),
        ("%d.%m.%Y", "needs one hour"),
        ("%H:%M", "needs one year"),
        ("%m.%Y %H:%M", "needs month and day"),
        ("%d.%m.%j.%Y %H:%M", "needs month and day, %m and %d, or the day of the year"),
        ("%d.%m.%Y%y %H:%M", "needs one year"),
        ("%d.%m.%Y %H:%M.%f", "needs seconds"),
        ("%d %b %Y %H:%M", "`%b` in the pattern '%d %b %Y %H:%M' is not read (names of months"),
        ("%d.%m.%Y %T", "`%T` in the pattern"),
        ("%d.%m.%Y %H:%M %", "is not read"),
        ("%d.%d.%Y %H:%M", "`%d` stands twice"),
    ],
)
def test_a_pattern_that_leaves_something_open_is_refused_when_it_is_declared(pattern, words):
    with pytest.raises(ValueError, match=re.escape(words)):
        check_pattern(pattern)
