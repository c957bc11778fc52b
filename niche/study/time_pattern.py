"""Patterns of strptime codes for dates and times that are not ISO 8601: which are complete and without two readings."""

from __future__ import annotations

import re

MEANINGS = {
    "Y": "year, four digits",
    "y": "year, two digits (69 to 99 are 1969 to 1999)",
    "m": "month",
    "d": "day",
    "j": "day of the year",
    "H": "hour, 0 to 24",
    "I": "hour, 1 to 12, with %p",
    "p": "AM or PM",
    "M": "minute",
    "S": "second",
    "f": "fraction of a second",
    "z": "offset from UTC",
    "%": "a percent sign",
}
"""Codes that are read."""


def split_pattern(pattern: str) -> list[tuple[str, str]]:
    """Parts of a pattern in order: (code, "") or ("", literal text)."""
    parts = re.findall(r"%(.?)|([^%]+)", pattern, flags=re.DOTALL)
    return [("", "%") if code == "%" else (code, text) for code, text in parts]


def check_pattern(pattern: str) -> None:
    """Raise unless the pattern gives a date and a time of day to the minute, in one reading.

    Raises
    ------
    ValueError
        A code is unknown, stands twice, is missing, or does not go with another.
    """
    codes = [code for code, text in split_pattern(pattern) if not text]
    known = ", ".join(f"%{code}" for code in MEANINGS)
    for code in codes:
        if code not in MEANINGS:
            hint = " (names of months and days differ by language: write numbers)" if code in tuple("aAbB") else ""
            raise ValueError(f"`%{code}` in the pattern {pattern!r} is not read{hint}; codes are {known}")
        if codes.count(code) > 1:
            raise ValueError(f"`%{code}` stands twice in the pattern {pattern!r}")
    there = set(codes)
    if "I" in there and "p" not in there:
        raise ValueError(
            f"{pattern!r} has a 12-hour clock, %I, without AM or PM, %p: morning and afternoon cannot be told apart. If the "
            "log does not write them, find out which times are after noon and write 24-hour times"
        )
    if "p" in there and "I" not in there:
        raise ValueError(f"{pattern!r} has AM or PM, %p, which goes with the 12-hour clock %I and not with %H")
    wanted = (
        (len(there & {"Y", "y"}) == 1, "one year, %Y or %y"),
        (there & {"m", "d", "j"} in ({"m", "d"}, {"j"}), "month and day, %m and %d, or the day of the year, %j"),
        (len(there & {"H", "I"}) == 1, "one hour, %H or %I"),
        ("M" in there, "minutes, %M: an hour alone is a span of time"),
        ("f" not in there or "S" in there, "seconds, %S, where there is a fraction, %f"),
    )
    for fine, what in wanted:
        if not fine:
            raise ValueError(f"the pattern {pattern!r} needs {what}")
