"""``eventDate`` and its companions to the text of a start and of an end.

The forms of ISO 8601 that Darwin Core allows: an instant, ``start/end``, ``start/duration`` and ``duration/end``; an end
may leave out the leading parts that it shares with the start, and the offset of the start holds for an end without one.
Nothing becomes more exact than it was written: a date alone stays a date, which no rule takes for a time.
"""

from __future__ import annotations

import re
from datetime import UTC, datetime, timedelta
from decimal import Decimal

from niche.study.time_zone import time_zone as zone_named

_DATE = r"\d{4}-\d{2}-\d{2}"
_TIME = r"\d{2}:\d{2}(?::\d{2}(?:[.,]\d+)?)?"
_OFFSET = r"(?:Z|[+-]\d{2}(?::?\d{2})?)"
_WHOLE = re.compile(rf"({_DATE})(?:[T ]({_TIME})({_OFFSET})?)?")
_SHORT_END = re.compile(rf"(?:(\d{{1,2}}(?:-\d{{2}})?)T)?({_TIME})({_OFFSET})?")
_DURATION = re.compile(r"P(?:(\d+)D)?(?:T(?:(\d+)H)?(?:(\d+)M)?(?:(\d+(?:[.,]\d+)?)S)?)?")
_ONE_FRACTION = re.compile(r"P(?:T)?(\d+[.,]\d+)([DHM])|P(\d+(?:[.,]\d+)?)W")
_MOST_DIGITS = 15
_LEAST_WHOLE = len("2026-09-03T08:15Z")

UNIT_SECONDS = {
    "second": 1, "seconds": 1, "s": 1, "sec": 1, "minute": 60, "minutes": 60, "min": 60,
    "hour": 3600, "hours": 3600, "h": 3600, "day": 86400, "days": 86400, "d": 86400,
}  # fmt: skip
"""What ``sampleSizeUnit`` may be where it is a time."""


def split(text: str, time_of_day: str = "") -> tuple[str, str]:
    """Start and end of an ``eventDate`` as text, each empty where it gives none.

    Parameters
    ----------
    text : str
        ``eventDate`` as written.
    time_of_day : str
        ``eventTime`` as written; it counts where ``eventDate`` is a date alone.

    Examples
    --------
    >>> split("2026-09-03T08:15+02:00/08:40")
    ('2026-09-03T08:15+02:00', '2026-09-03T08:40+02:00')
    >>> split("2026-09-03", "08:15:00Z/08:40:00Z")
    ('2026-09-03T08:15:00Z', '2026-09-03T08:40:00Z')
    """
    text, time_of_day = text.strip(), time_of_day.strip()
    if time_of_day and re.fullmatch(_DATE, text):
        first, slash, last = time_of_day.partition("/")
        text = f"{text}T{first.strip()}" + (f"/{last.strip()}" if slash else "")
    first, slash, last = text.partition("/")
    first, last = first.strip(), last.strip()
    if len(last) >= _LEAST_WHOLE and last.endswith("Z") and not first.startswith("P"):
        return first, last  # most are written so, and there is nothing to complete
    if not slash:
        return first, ""
    if first.startswith("P"):
        length = seconds_of(first)
        return (first, last) if length is None else (shift(last, -length), last)
    if last.startswith("P"):
        length = seconds_of(last)
        return first, last if length is None else shift(first, length)
    return first, _completed(first, last)


def _completed(start: str, end: str) -> str:
    """The end with what it leaves out because the start has it."""
    begun, whole = _WHOLE.fullmatch(start), _WHOLE.fullmatch(end)
    if begun is None:
        return end
    if whole is not None:
        return end + (begun[3] or "") if whole[2] and not whole[3] else end
    short = _SHORT_END.fullmatch(end)
    if short is None:
        return end
    day = short[1] or ""
    date = begun[1][: len(begun[1]) - len(day)] + day
    return f"{date}T{short[2]}{short[3] or begun[3] or ''}"


def seconds_of(duration: str) -> Decimal | None:
    """Seconds of an ISO 8601 duration; None where it is none or holds years or months, whose length is not fixed."""
    if len(duration) > 4 * _MOST_DIGITS:
        return None
    found = _DURATION.fullmatch(duration)
    if found is not None and any(found.groups()) and not duration.endswith("T"):
        parts = [Decimal((part or "0").replace(",", ".")) for part in found.groups()]
        return ((parts[0] * 24 + parts[1]) * 60 + parts[2]) * 60 + parts[3]
    lone = _ONE_FRACTION.fullmatch(duration)
    if lone is None:
        return None
    if lone[3]:
        return Decimal(lone[3].replace(",", ".")) * 7 * 86400
    if ("T" in duration) == (lone[2] == "D"):  # hours and minutes stand after the T, days before
        return None
    return Decimal(lone[1].replace(",", ".")) * {"D": 86400, "H": 3600, "M": 60}[lone[2]]


def sampled_seconds(value: str, unit: str) -> Decimal | None:
    """Seconds of ``sampleSizeValue`` in ``sampleSizeUnit``; None where they give no length of time."""
    factor = UNIT_SECONDS.get(unit.strip().lower())
    if factor is None or not re.fullmatch(r"\d{1,12}(\.\d{1,9})?", value.strip()):
        return None
    return Decimal(value.strip()) * factor


def shift(moment: str, seconds: Decimal, time_zone: str | None = None) -> str:
    """A written time so many seconds later, in the same offset or, without one, in the declared time zone.

    A time that cannot be read comes back empty: the rule has said what is wrong with it.
    """
    found = _WHOLE.fullmatch(moment)
    if found is None or not found[2]:
        return ""
    offset = found[3] or ""
    clock = found[2].replace(",", ".")
    try:
        day = timedelta(days=1) if clock.startswith("24:00") else timedelta()
        begun = datetime.fromisoformat(f"{found[1]}T{'00' + clock[2:] if day else clock}") + day
        change = timedelta(milliseconds=int((seconds * 1000).to_integral_value()))
        if offset or time_zone is None:
            return _written(begun + change) + offset
        zone = zone_named(time_zone)
        return _written((begun.replace(tzinfo=zone).astimezone(UTC) + change).astimezone(zone).replace(tzinfo=None))
    except (ValueError, OverflowError):
        return ""


def _written(moment: datetime) -> str:
    return moment.isoformat(timespec="milliseconds" if moment.microsecond else "seconds")
