"""Names that a spreadsheet has turned into numbers or dates. What was written cannot be got back from them."""

from __future__ import annotations

import re

_EXPONENT = re.compile(r"[+-]?\d+(?:[.,]\d+)?[eE]\+\d{1,3}")
_MONTH = (
    "(?:"
    "(?:jan|jän|janv|ene|gen|feb|févr|fev|mar|mär|mrz|mars|mrt|apr|avr|abr|may|mai|mag|mei|maj|jun|juin|giu|jul|juil|lug|aug|"
    "août|ago|sep|sept|set|oct|okt|ott|out|nov|dec|déc|dez|dic)\\.?"
    "|january|february|march|april|june|july|august|september|october|november|december"
    "|januar|februar|märz|juni|juli|oktober|dezember"
    ")"
)
"""Names of months in the languages of common spreadsheets."""

_DATE = re.compile(
    rf"\d{{1,2}}(?:[-/]|\. ?){_MONTH}(?:[-/. ]\d{{2,4}})?"  # 1-Feb, 1. Feb 2026
    rf"|\d{{1,2}} {_MONTH}(?: \d{{4}})?"  # 3 March
    rf"|{_MONTH}(?:[-/]\d{{1,4}}| \d{{4}})"  # Feb-01, Feb 2026
    r"|\d{4}-\d{1,2}-\d{1,2}(?:[T ]00:00(?::00(?:\.0+)?)?)?"  # 2026-02-01
    r"|\d{1,2}[/.]\d{1,2}[/.]\d{2,4}(?: 00:00(?::00)?)?",  # 01/02/2026, 1.2.2026
    re.IGNORECASE,
)

ID = (
    "a spreadsheet has turned this id into a rounded number, and its last digits are lost; take the ids anew from where "
    "they were first written, with the column set to text"
)


def is_rounded_id(text: str) -> bool:
    """Whether a name is a number in exponent form, such as ``9.0E+14``."""
    return len(text) < 40 and _EXPONENT.fullmatch(text.strip()) is not None


def is_date(text: str) -> bool:
    """Whether a name is a date, such as ``1-Feb``, ``Feb-01``, ``2026-02-01`` or ``01/02/2026``."""
    return len(text) < 40 and _DATE.fullmatch(text.strip()) is not None


def short_ids(names: list[str]) -> dict[str, str | None]:
    """Ids of digits alone that are shorter than nearly all others, as if zeros in front had been lost.

    Parameters
    ----------
    names : list of str
        Distinct ids.

    Returns
    -------
    dict
        Each short id, with the id among the names that it would be with its zeros, or None.
    """
    digits = [name for name in names if name.isascii() and name.isdigit() and len(name) >= 4]
    if len(digits) < 3:
        return {}
    lengths = [len(name) for name in digits]
    usual = max(set(lengths), key=lambda n: (lengths.count(n), n))
    if usual < 6 or lengths.count(usual) * 3 < len(digits) * 2:
        return {}
    there = set(digits)
    return {n: n.zfill(usual) if n.zfill(usual) in there else None for n in digits if len(n) < usual}
