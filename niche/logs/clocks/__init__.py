"""Times as written to whole milliseconds of UTC, and durations to milliseconds.

One module a way of writing them. Nothing is guessed: what does not fit the declared form is returned as a problem in words.
"""

from __future__ import annotations

from typing import Any

from niche.logs.clocks.iso import MIXED_FORM, SPAN, read_iso
from niche.logs.clocks.local import (
    MISSING_HOUR,
    MIXED_WITH,
    MIXED_WITHOUT,
    NO_OFFSET,
    REPEATED_HOUR,
    Instants,
    to_utc,
)
from niche.logs.clocks.written import DAY, END_OF_DAY, IMPOSSIBLE, LEAP_SECOND, MIDNIGHT, UNREADABLE, Written
from niche.study.time_zone import time_zone as zone_named

__all__ = [
    "DAY",
    "END_OF_DAY",
    "IMPOSSIBLE",
    "LEAP_SECOND",
    "MIDNIGHT",
    "MISSING_HOUR",
    "MIXED_FORM",
    "MIXED_WITH",
    "MIXED_WITHOUT",
    "NO_OFFSET",
    "REPEATED_HOUR",
    "SPAN",
    "UNREADABLE",
    "Instants",
    "Written",
    "read_times",
]


def read_times(text: Any, time_zone: str | None, has_offset: bool | None = None) -> Instants:
    """Read ISO 8601 times.

    Parameters
    ----------
    text : pyarrow string array, length n
        Cells as written. A blank cell is not this function's business and comes back as `UNREADABLE`.
    time_zone : str, optional
        IANA name, or a fixed offset such as ``+01:00``, for times without an offset.
    has_offset : bool, optional
        Whether earlier times of the same file carry an offset; the rest must follow.

    Returns
    -------
    Instants
    """
    written = read_iso(text)
    written.mend_midnights(has_offset is not None)
    return to_utc(written, None if time_zone is None else zone_named(time_zone), has_offset)
