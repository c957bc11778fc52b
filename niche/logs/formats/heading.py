"""The header of a table: which rows it takes, what the columns are called, and what to ask where that is not clear."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from niche.errors import LogError
from niche.logs.formats.wanted import Wanted

SEARCHED_ROWS = 20
"""How far down a header is looked for, to name its row in the message; it is never taken from there unasked."""

_UNIT = re.compile(
    r"\s*[\[(]?\s*(s|sec|seconds|min|minutes|h|hr|hours|d|days|ms|m|cm|mm|km|m²|ha|g|kg|°c|%|n|no\.?|text|code"
    r"|h+:mm?(:ss?)?|mm:ss|yyyy-mm-dd([t ]hh:mm(:ss)?)?|dd[./]mm[./]yyyy( hh:mm(:ss)?)?|utc|iso 8601)\s*[\])]?\s*",
    re.IGNORECASE,
)


@dataclass(frozen=True)
class Heading:
    """The header of a file.

    Attributes
    ----------
    names : list of str
        Heading of each column; columns without one are called "".
    written : list of list of str
        The rows that are no data wherever they stand: the header row or rows and, if declared, the units row.
    rows : list of int
        Row numbers of ``written``.
    """

    names: list[str]
    written: list[list[str]]
    rows: list[int]

    @property
    def width(self) -> int:
        """Number of columns."""
        return len(self.names)


def rows_needed(wanted: Wanted) -> int:
    """How many rows from the top `find_heading` wants to see."""
    form = wanted.form
    return max((form.header_row or 1) + form.header_rows, SEARCHED_ROWS)


def find_heading(top: Sequence[tuple[int, list[str]]], wanted: Wanted) -> tuple[Heading, int]:
    """Header of a table, and how many of the top rows it uses up.

    Parameters
    ----------
    top : sequence of (row number, cells)
        The first rows of the file, at least `rows_needed` where there are so many.
    wanted : Wanted
        Takes the note about rows above the header, and the account of the units row.

    Raises
    ------
    LogError
        There is no header, it stands elsewhere, it takes two rows, it repeats a name, or a units row is not declared.
    """
    form, name = wanted.form, wanted.name
    first = next((i for i, (row, _) in enumerate(top) if row >= (form.header_row or 1)), len(top))
    used = [(row, [tidy_heading(cell) for cell in cells]) for row, cells in top[first : first + form.header_rows]]
    if len(used) < form.header_rows or not any(any(cells) for _, cells in used):
        raise LogError(f"{name}: line {form.header_row or 1}: no header. The first line names the columns.")
    number, names = used[0]
    if form.header_rows == 2:
        names = joined(names, used[1][1])
    if form.header_row is None:
        _ask_for_row(top, first, names, wanted)
    elif first:
        problem = f"rows above the header, which `logs.file.header_row` puts in row {form.header_row}, are not read"
        wanted.note(None, f"{first} rows", "above the header", problem)
    twice = [heading for heading, times in Counter(names).items() if heading and times > 1]
    if twice:
        raise LogError(
            f"{name}: line {number}: the heading {twice[0]!r} stands twice. Each column needs a name of its own."
        )
    taken = first + form.header_rows
    written, rows = [cells for _, cells in used], [row for row, _ in used]
    if form.units_row and taken < len(top):
        row, units = top[taken]
        wanted.drop(row, ", ".join(filter(None, units)), "units row", "it gives units, no observation", "set_aside")
        written.append([tidy_heading(cell) for cell in units])
        rows.append(row)
        taken += 1
    elif taken < len(top):
        _ask_for_units(*top[taken], wanted)
    return Heading(names, written, rows), taken


def tidy_heading(cell: str) -> str:
    """A heading with single spaces and none at its ends."""
    return " ".join(cell.split())


def joined(upper: list[str], lower: list[str]) -> list[str]:
    """Two header rows as one: an empty cell of the upper row has the name to its left, as a merged cell shows it.

    >>> joined(["bird", "watch", ""], ["animal", "start", "end"])
    ['bird animal', 'watch start', 'watch end']
    """
    width = max(len(upper), len(lower))
    upper, lower = (row + [""] * (width - len(row)) for row in (upper, lower))
    filled, last = [], ""
    for cell in upper:
        last = cell or last
        filled.append(last)
    return [tidy_heading(f"{above} {below}") for above, below in zip(filled, lower, strict=True)]


def _ask_for_row(top: Sequence[tuple[int, list[str]]], first: int, names: list[str], wanted: Wanted) -> None:
    """Raise where the headings that the study names are not in the first row and are in a later one."""
    if wanted.named_in(names):
        return
    tidied = [(row, [tidy_heading(cell) for cell in cells]) for row, cells in top[first : first + SEARCHED_ROWS]]
    row, found = max(((row, wanted.named_in(cells)) for row, cells in tidied), key=lambda pair: pair[1])
    if found >= 2:
        raise LogError(
            f"{wanted.name}: line 1 is not the header; line {row} holds {found} of the headings that the study names. "
            f"Set `logs.file.header_row` to {row} if that is the header."
        )
    if wanted.form.header_rows == 1 and len(tidied) > 1 and wanted.named_in(joined(tidied[0][1], tidied[1][1])) >= 2:
        raise LogError(
            f"{wanted.name}: lines 1 and 2 together hold the headings that the study names. Set `logs.file.header_rows` "
            "to 2 if the header takes two lines."
        )


def _ask_for_units(row: int, cells: list[str], wanted: Wanted) -> None:
    """Raise where the row below the header gives units."""
    filled = [cell for cell in cells if cell.strip()]
    if len(filled) >= 2 and all(_UNIT.fullmatch(cell) for cell in filled):
        raise LogError(
            f"{wanted.name}: line {row} looks like units ({', '.join(filled)[:60]}), not like an observation. Set "
            "`logs.file.units_row` to true if it is, or delete the line."
        )
