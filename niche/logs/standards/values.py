"""Cells as a schema describes them to canonical text: numbers with a point, times in ISO 8601, categories by their label."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime
from decimal import Decimal
from functools import partial

from niche.logs.standards.descriptors import Field

_DECIMAL = re.compile(r"[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d{1,2})?")
_INTEGER = re.compile(r"[+-]?\d+")
_AROUND = re.compile(r"^[^\d+\-.,]*(.*?)[^\d]*$", re.DOTALL)
_LONGEST_NUMBER = 100


@dataclass(frozen=True)
class Cell:
    """A cell read: canonical text, and what is wrong with it (None if nothing)."""

    text: str
    problem: str | None = None


def converter(field: Field, *, keep_times: bool) -> Callable[[str], Cell]:
    """What turns the cells of a field, missing values apart, into canonical text.

    Parameters
    ----------
    field : Field
    keep_times : bool
        Leave times as written, because the study's own ``logs.clock.format`` says how to read them.
    """
    if field.categories is not None:
        return partial(_category, field)
    if field.type in ("number", "integer"):
        return partial(_number, field)
    if field.type == "boolean":
        return partial(_boolean, field)
    if field.type in ("datetime", "date", "time") and field.format not in ("default", "any") and not keep_times:
        return partial(_time, field)
    return Cell


def _category(field: Field, text: str) -> Cell:
    categories = field.categories or {}
    if text in categories:
        return Cell(categories[text])
    return Cell(text, f"not one of the categories of the schema: {', '.join(categories)[:160]}")


def _number(field: Field, text: str) -> Cell:
    plain = text.strip()
    if not field.bare_number and len(plain) <= _LONGEST_NUMBER:
        found = _AROUND.match(plain)
        plain = found[1] if found else plain
    group, decimal = field.group_char, field.decimal_char
    if group and group in plain:
        # 1.5 with groups by points is no 15: groups have three digits, or it is not what the schema says.
        groups = rf"[+-]?\d{{1,3}}(?:{re.escape(group)}\d{{3}})+(?!\d|{re.escape(group)})"
        if not re.match(groups, plain):
            return Cell(text, f"not a number with groups of three digits parted by {group!r}, as the schema says")
        plain = plain.replace(group, "")
    if decimal != ".":
        plain = "," if "." in plain else plain.replace(decimal, ".")
    fits = _DECIMAL if field.type == "number" else _INTEGER
    if len(plain) > _LONGEST_NUMBER or not fits.fullmatch(plain) or not plain.isascii():
        kind = "a whole number" if field.type == "integer" else f"a number with the decimal mark {decimal!r}"
        return Cell(text, f"not {kind}, as the schema says")
    if "e" in plain.lower() or plain.startswith((".", "+", "-.")) or plain.endswith("."):
        plain = format(Decimal(plain), "f")
    return Cell(plain)


def _boolean(field: Field, text: str) -> Cell:
    if text in field.true_values:
        return Cell("true")
    if text in field.false_values:
        return Cell("false")
    allowed = ", ".join((*field.true_values, *field.false_values))
    return Cell(text, f"neither true nor false; the schema allows {allowed[:160]}")


def _time(field: Field, text: str) -> Cell:
    pattern = field.format.removeprefix("fmt:")
    try:
        moment = datetime.strptime(text.strip(), pattern)  # noqa: DTZ007 - the offset, if any, is in the pattern
        if field.type == "datetime":
            return Cell(_iso(moment))
        return Cell(moment.date().isoformat() if field.type == "date" else _iso(moment)[11:])
    except (ValueError, re.error, KeyError, IndexError, OverflowError):
        return Cell(text, f"does not fit the pattern {pattern!r} of the schema")


def _iso(moment: datetime) -> str:
    """Whole seconds without a fraction, others to the millisecond or finer as written."""
    text = moment.isoformat()
    return re.sub(r"(\.\d{3})000(?!\d)", r"\1", text)
