"""The zone sheet: a CSV of zone, row, column and, if known, availability; one line a zone."""

from __future__ import annotations

import csv
import difflib
import math
from pathlib import Path

from pydantic import ValidationError

from niche.errors import StudyError
from niche.study.model import Availability, Zones

_NEEDED = ("zone", "row", "column")
_AMOUNT = "availability"


def zones_from_sheet(file: Path, declared: Zones) -> Zones:
    """Zones from a zone sheet; rows and columns of the map in the order in which the sheet first names them.

    Raises
    ------
    StudyError
        The sheet cannot be read, or a line of it breaks a rule.
    """
    cells: dict[tuple[str, str], str] = {}
    amounts: dict[str, float] = {}
    for line, record in _records(file):
        zone, row, column = (record[heading] for heading in _NEEDED)
        for heading in _NEEDED:
            if not record[heading]:
                raise StudyError(f"{file}: line {line}: {heading} is empty; every zone needs a name and a place.")
        if (row, column) in cells:
            raise StudyError(
                f"{file}: line {line}: zones {cells[row, column]!r} and {zone!r} both stand in row {row!r}, column "
                f"{column!r}; each place holds one zone."
            )
        cells[row, column] = zone
        if written := record.get(_AMOUNT, ""):
            amounts[zone] = _amount(file, line, written)
    if declared.availability_source is not None and not amounts:
        raise StudyError(f"{file}: zones.availability_source is given, and the sheet has no {_AMOUNT}.")
    rows, columns = (tuple(dict.fromkeys(place[axis] for place in cells)) for axis in (0, 1))
    source = declared.availability_source or "not given"
    try:
        return Zones(
            rows=rows,
            columns=columns,
            layout=tuple(tuple(cells.get((row, column), "") for column in columns) for row in rows),
            availability=Availability(source=source, unit="as in the zone sheet", amounts=amounts) if amounts else None,
        )
    except ValidationError as error:
        told = "; ".join(str(problem.get("ctx", {}).get("error", problem["msg"])) for problem in error.errors())
        raise StudyError(f"{file}: {told}.") from None


def _records(file: Path) -> list[tuple[int, dict[str, str]]]:
    """Lines of the sheet that are not blank, each with its number, cells trimmed."""
    records = []
    try:
        with file.open(encoding="utf-8-sig", newline="") as stream:
            reader = csv.reader(stream, strict=True)
            headings = [cell.strip() for cell in next(reader, [])]
            _check_headings(file, headings)
            line = reader.line_num + 1
            for row in reader:
                cells = [cell.strip() for cell in row]
                if any(cells[len(headings) :]):
                    raise StudyError(
                        f"{file}: line {line}: {len(cells)} cells where the header has {len(headings)}; a comma inside a "
                        "cell needs quotes round the cell."
                    )
                if any(cells):
                    cells += [""] * (len(headings) - len(cells))
                    records.append((line, dict(zip(headings, cells, strict=False))))
                line = reader.line_num + 1
    except FileNotFoundError:
        raise StudyError(f"{file}: zones.sheet names this file, and there is no such file.") from None
    except (OSError, ValueError, csv.Error) as error:  # ValueError: text that is not UTF-8, a path with a NUL
        raise StudyError(f"{str(file)!r}: the zone sheet cannot be read as UTF-8 CSV ({error}).") from None
    if not records:
        raise StudyError(f"{file}: line 1: no zone below it. {_FORM}")
    return records


_FORM = f"A zone sheet has the headings zone, row, column and, if known, {_AMOUNT}, and one line a zone."


def _check_headings(file: Path, headings: list[str]) -> None:
    for heading in _NEEDED:
        if heading not in headings:
            raise StudyError(f"{file}: line 1: no heading {heading!r}. {_FORM}")
    for heading in (*_NEEDED, _AMOUNT):
        if headings.count(heading) > 1:
            raise StudyError(f"{file}: line 1: the heading {heading!r} stands twice.")
    others = [heading for heading in headings if heading not in _NEEDED]
    if _AMOUNT not in others and (close := difflib.get_close_matches(_AMOUNT, others, n=1, cutoff=0.75)):
        raise StudyError(f"{file}: line 1: the heading {close[0]!r} is not known; did you mean {_AMOUNT!r}?")


def _amount(file: Path, line: int, written: str) -> float:
    """An amount of availability, as a plain number."""
    try:
        amount = math.nan if "_" in written else float(written)
    except ValueError:
        amount = math.nan
    if not 0 <= amount < math.inf:
        raise StudyError(f"{file}: line {line}: {_AMOUNT} is {written!r}; it must be a number, 0 or above.")
    return amount
