"""Times in a declared pattern of strptime codes, read strictly and whole columns at a time.

The codes mean what they mean to `datetime.datetime.strptime`. Two things differ: 24:00 is the end of the day, and two codes
that touch take two digits each, so that a value has one reading.
"""

from __future__ import annotations

import re
from functools import lru_cache
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.clocks.diagnose import MIXED_ORDERS, Question, listed
from niche.logs.clocks.written import DAY, Written, from_parts
from niche.study.time_pattern import split_pattern

_GROUPS = {
    "Y": r"(?P<year>\d{4})",
    "y": r"(?P<short_year>\d{2})",
    "m": r"(?P<month>\d{1,2})",
    "d": r"(?P<day>\d{1,2})",
    "j": r"(?P<ordinal>\d{1,3})",
    "H": r"(?P<hour>\d{1,2})",
    "I": r"(?P<half_hour>\d{1,2})",
    "p": r"(?P<half>[Aa][Mm]|[Pp][Mm])",
    "M": r"(?P<minute>\d{1,2})",
    "S": r"(?P<second>\d{1,2})",
    "f": r"(?P<fraction>\d{1,6})",
    "z": r"(?P<offset>Z|[+-]\d{2}:?[0-5]\d)",
}
_TIME_CODES = frozenset("HIMSfpz")


@lru_cache(maxsize=64)
def _expressions(pattern: str) -> tuple[str, str | None]:
    """Regular expressions of the whole pattern, and of its date alone where the date stands first."""
    parts = split_pattern(pattern)
    pieces = []
    for number, (code, text) in enumerate(parts):
        if not code or code == "%":
            pieces.append(re.sub(r"(\\\s|\s)+", r"\\s+", re.escape(text or "%")))
            continue
        touches = any(0 <= n < len(parts) and parts[n][0] in tuple("YymdjHIMSf") for n in (number - 1, number + 1))
        group = _GROUPS[code]
        if touches:
            group = group.replace(r"\d{1,2}", r"\d{2}").replace(r"\d{1,3}", r"\d{3}")
        pieces.append(group)
    first = next(n for n, (code, _) in enumerate(parts) if code in _TIME_CODES)
    later = {code for code, _ in parts[first:]}
    date = None
    if first and not later & set("Yymdj"):
        date = "".join(pieces[:first] if parts[first - 1][0] else pieces[: first - 1])
    return rf"^\s*{''.join(pieces)}\s*$", None if date is None else rf"^\s*{date}\s*$"


def read_pattern(text: Any, pattern: str) -> Written:
    """Read times in one declared pattern.

    Parameters
    ----------
    text : pyarrow string array, length n
    pattern : str
        Checked by `niche.study.time_pattern.check_pattern`.

    Returns
    -------
    Written
        Cells that do not fit have the problem that `misfit` words.
    """
    whole, date = _expressions(pattern)
    written = from_parts(pc.extract_regex(text, whole))
    left = ~written.fits
    if not left.any():
        return written
    written.problem[left] = misfit(pattern)
    if date is not None:
        dates = from_parts(pc.extract_regex(pc.filter(text, pa.array(left)), date))
        real = dates.fits & (dates.problem == None)  # noqa: E711 - elementwise
        written.ms[left] = np.where(real, dates.ms, 0)
        written.whole_day[left] = real
    return written


def misfit(pattern: str) -> str:
    """What is wrong with a cell that does not fit."""
    return f"not in the form {pattern!r} that `logs.clock.format` declares; one form holds for every row"


def exchanged(text: Any, rows: NDArray[np.int64], written: Written, pattern: str) -> dict[str, Question]:
    """Questions about cells that fit only with day and month exchanged, while others fit only as declared."""
    codes = {code for code, _ in split_pattern(pattern)}
    if not {"d", "m"} <= codes:
        return {}
    wrong = np.flatnonzero(written.fits & (written.problem != None))  # noqa: E711 - elementwise
    if not wrong.size:
        return {}
    cells = pc.take(text, pa.array(wrong))
    swap = {"d": "m", "m": "d"}
    parts = (swap.get(code, code) for code, _ in split_pattern(pattern))
    literal = (part for _, part in split_pattern(pattern))
    other = "".join(f"%{code}" if code else part.replace("%", "%%") for code, part in zip(parts, literal, strict=True))
    turned = read_pattern(cells, other)
    only = turned.fits & (turned.problem == None)  # noqa: E711 - elementwise
    if not only.any():
        return {}
    day_first = pattern.index("%d") < pattern.index("%m")
    words = ("day first", "month first") if day_first else ("month first", "day first")
    fine = written.fits & (written.problem == None)  # noqa: E711 - elementwise
    day = (written.ms // DAY).astype("datetime64[D]")
    proof = rows[fine & ((day - day.astype("datetime64[M]")).astype(np.int64) >= 12)].tolist()
    advice = (
        f"{listed(rows[wrong[only]].tolist())} can only be {words[1]}"
        + (f" and {listed(proof)} only {words[0]}" if proof else f", where {pattern!r} is declared")
        + "; one form holds for a whole file, so write all its dates one way"
    )
    return {cell: Question(MIXED_ORDERS, advice) for cell in pc.filter(cells, pa.array(only)).to_pylist()}
