"""Times against Python's own datetime, over many random times, forms and zones; and text that is no time at all."""

from datetime import UTC, datetime, timedelta, timezone
from zoneinfo import ZoneInfo

import numpy as np
import pyarrow as pa
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs.clocks import IMPOSSIBLE, MISSING_HOUR, REPEATED_HOUR, UNREADABLE, read_times

EPOCH = datetime(1970, 1, 1, tzinfo=UTC)
EARLIEST, LATEST = datetime(2, 1, 1), datetime(9998, 12, 31)  # noqa: DTZ001 - local times, on purpose
RECENT = datetime(1975, 1, 1), datetime(2037, 12, 31)  # noqa: DTZ001
ZONES = ["Europe/Berlin", "Pacific/Auckland", "America/Santiago", "Australia/Lord_Howe", "Etc/GMT-1", "Asia/Kathmandu"]


def two_digits(least, most):
    return st.integers(least, most).map("{:02d}".format)


FORM = r"[0-9]{4}-[0-9]{2}-[0-9]{2}[T ][0-9]{2}:[0-9]{2}(:[0-9]{2}([.,][0-9]{1,12})?)?"
digits = st.tuples(
    two_digits(0, 99), two_digits(0, 99), two_digits(0, 13), two_digits(0, 32), two_digits(0, 25), two_digits(0, 61),
    two_digits(0, 61),
) | st.tuples(*[two_digits(0, 99)] * 7)  # fmt: skip
offsets = st.integers(-14 * 60, 14 * 60)


def milliseconds(when):
    return (when - EPOCH) // timedelta(milliseconds=1)


def read(texts, zone=None):
    return read_times(pa.array(texts, type=pa.string()), zone)


@st.composite
def written(draw):
    """A random instant, written in one of the accepted forms; with the instant."""
    when = draw(st.datetimes(EARLIEST, LATEST))
    minutes = draw(offsets)
    seconds, places = draw(st.booleans()), draw(st.integers(0, 6))
    when = when if seconds else when.replace(second=0)
    step = 10 ** (6 - places) if seconds else 1_000_000
    when = when.replace(microsecond=when.microsecond // step * step)
    text = when.strftime("%m-%d") + draw(st.sampled_from("T ")) + when.strftime("%H:%M" + (":%S" if seconds else ""))
    if seconds and places:
        text += draw(st.sampled_from(".,")) + f"{when.microsecond:06d}"[:places]
    hours, rest = divmod(abs(minutes), 60)
    forms = [f"{hours:02d}:{rest:02d}", f"{hours:02d}{rest:02d}"] + ([f"{hours:02d}"] if rest == 0 else [])
    offset = "Z" if minutes == 0 and draw(st.booleans()) else "-+"[minutes >= 0] + draw(st.sampled_from(forms))
    return f"{when.year:04d}-{text}{offset}", when.replace(tzinfo=timezone(timedelta(minutes=minutes)))


@settings(max_examples=100, deadline=None)
@given(st.lists(written(), min_size=1, max_size=30))
def test_times_with_offsets_agree_with_datetime(pairs):
    found = read([text for text, _ in pairs])
    assert found.problem.tolist() == [None] * len(pairs)
    assert found.ms.tolist() == [milliseconds(when) for _, when in pairs]


def test_twenty_thousand_random_times_agree_with_datetime():
    rng = np.random.default_rng(20260903)
    whens = [EPOCH + timedelta(milliseconds=int(ms)) for ms in rng.integers(-(10**13), 10**14, 20_000)]
    shifts = [timezone(timedelta(minutes=int(minutes))) for minutes in rng.integers(-720, 841, 20_000)]
    texts = [
        when.astimezone(shift).isoformat(timespec="milliseconds") for when, shift in zip(whens, shifts, strict=True)
    ]
    found = read(texts)
    assert set(found.problem) == {None}
    assert found.ms.tolist() == [milliseconds(when) for when in whens]


def expected_of_local(local, zone):
    """By the definition: the instants whose local time this is."""
    instants = set()
    for fold in (0, 1):
        instant = local.replace(tzinfo=ZoneInfo(zone), fold=fold).astimezone(UTC)
        if instant.astimezone(ZoneInfo(zone)).replace(tzinfo=None) == local:
            instants.add(instant)
    if len(instants) == 1:
        return milliseconds(instants.pop())
    return REPEATED_HOUR if instants else MISSING_HOUR


@settings(max_examples=100, deadline=None)
@given(
    st.sampled_from(ZONES),
    st.lists(st.datetimes(*RECENT), min_size=1, max_size=30),
)
def test_local_times_agree_with_zoneinfo(zone, locals_):
    locals_ = [local.replace(microsecond=local.microsecond // 1000 * 1000) for local in locals_]
    found = read([local.isoformat(timespec="milliseconds") for local in locals_], zone)
    answers = [problem or int(ms) for problem, ms in zip(found.problem, found.ms, strict=True)]
    assert answers == [expected_of_local(local, zone) for local in locals_]


def test_three_thousand_instants_come_back_from_their_local_time():
    rng = np.random.default_rng(20261025)
    for zone in ZONES:
        whens = [EPOCH + timedelta(seconds=int(s)) for s in rng.integers(2 * 10**8, 2 * 10**9, 500)]
        locals_ = [when.astimezone(ZoneInfo(zone)).replace(tzinfo=None) for when in whens]
        found = read([local.isoformat() for local in locals_], zone)
        for when, problem, ms in zip(whens, found.problem, found.ms, strict=True):
            assert problem == REPEATED_HOUR or (problem is None and ms == milliseconds(when))


@settings(max_examples=300, deadline=None)
@given(digits)
def test_any_digits_in_the_right_places_are_a_time_exactly_when_datetime_says_so(parts):
    century, year, month, day, hour, minute, second = parts
    text = f"{century}{year}-{month}-{day}T{hour}:{minute}:{second}"
    found = read([text + "Z"])
    if text[:4] in ("0000", "9999"):
        return  # beyond the ends of Python's calendar in some zone or other
    try:
        midnight = text.endswith("T24:00:00")
        when = datetime.fromisoformat(text.replace("T24:", "T00:") if midnight else text).replace(tzinfo=UTC)
        expected = milliseconds(when) + 86_400_000 * midnight
    except ValueError:
        expected = IMPOSSIBLE
    assert (found.problem[0] or int(found.ms[0])) == expected


@settings(max_examples=100, deadline=None)
@given(st.lists(st.text(max_size=40), max_size=20), st.sampled_from([None, "Europe/Berlin"]))
def test_any_text_is_unreadable_and_nothing_worse(texts, zone):
    found = read(texts, zone)
    assert found.problem.tolist() == [UNREADABLE] * len(texts)


@settings(max_examples=100, deadline=None)
@given(
    st.lists(st.from_regex(FORM, fullmatch=True)),
    st.sampled_from([None, "Pacific/Apia", "America/St_Johns"]),
    st.sampled_from(["", "Z", "+99:99", "-00:00", "+1830", "-18"]),
)  # fmt: skip
def test_any_digits_with_any_offset_give_an_answer(texts, zone, offset):
    found = read([text + offset for text in texts], zone)
    assert len(found.ms) == len(found.problem) == len(texts)
    assert UNREADABLE not in found.problem.tolist()
