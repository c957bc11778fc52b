"""Which sign stands between the cells of a text file, where the study does not say."""

from __future__ import annotations

import csv
from collections.abc import Sequence
from itertools import pairwise

from niche.errors import LogError
from niche.logs.formats.heading import joined, tidy_heading
from niche.logs.formats.wanted import Wanted

SIGNS = {",": "comma", ";": "semicolon", "\t": "tab"}
SAMPLE_LINES = 100


def find_delimiter(lines: Sequence[str], wanted: Wanted, suffix: str) -> str:
    """The sign between cells.

    A sign is it if it parts the header into the headings that the study names. Where none does, it is the only sign
    that parts the header into the same number of cells as most lines below.

    Parameters
    ----------
    lines : sequence of str
        The first lines of the file.
    wanted : Wanted
    suffix : str
        Ending of the file's name: under ``.tsv`` a tab is no surprise, under others what is no comma is noted.

    Raises
    ------
    LogError
        More than one sign would do.
    """
    if wanted.form.delimiter is not None:
        return wanted.form.delimiter
    tables = {sign: _cells(lines, sign) for sign in SIGNS}
    scores = {sign: _named(rows, wanted) for sign, rows in tables.items()}
    best = max(scores.values())
    fitting = [sign for sign, score in scores.items() if score == best]
    if best < 2 and len(fitting) > 1:
        start = (wanted.form.header_row or 1) - 1
        fitting = [sign for sign in fitting if _even(tables[sign][start:])] or fitting
        if len(fitting) > 1:
            fitting = [sign for sign in fitting if len(tables[sign]) > start and len(tables[sign][start]) > 1]
    if len(fitting) > 1:
        found = " and ".join(SIGNS[sign] for sign in fitting)
        raise LogError(
            f"{wanted.name}: line {wanted.form.header_row or 1}: {found} would both part it into cells. Set "
            "`logs.file.delimiter` to the sign that stands between cells."
        )
    sign = fitting[0] if fitting else ","
    if sign != "," and not (sign == "\t" and suffix == ".tsv"):
        wanted.note(None, sign, "delimiter", f"cells are parted by a {SIGNS[sign]}, as the header shows", "repaired")
    return sign


def _cells(lines: Sequence[str], sign: str) -> list[list[str]]:
    try:
        return list(csv.reader(lines, delimiter=sign))
    except csv.Error:
        return [line.split(sign) for line in lines]


def _named(rows: list[list[str]], wanted: Wanted) -> int:
    """Most headings of the study that one of the first rows, or two together, hold."""
    tidied = [[tidy_heading(cell) for cell in row] for row in rows[: max(20, (wanted.form.header_row or 1) + 1)]]
    pairs = [joined(*pair) for pair in pairwise(tidied)]
    return max((wanted.named_in(row) for row in tidied + pairs), default=0)


def _even(rows: list[list[str]]) -> bool:
    """Whether a header of several cells is followed mostly by rows of as many."""
    filled = [len(row) for row in rows if row]
    return len(filled) > 0 and filled[0] > 1 and sum(n == filled[0] for n in filled) > 0.9 * len(filled)
