"""Reads a study file, and turns whatever is wrong with it into a message that helps.

A message gives the path of the key, what was found there and what is allowed. All problems of a file are told at once.
"""

from __future__ import annotations

import csv
import difflib
import tomllib
from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

from niche.errors import StudyError
from niche.study.checked_names import check_names
from niche.study.model import Availability, Study, Zones

STUDY_FILE = "study.toml"

_TYPES = {
    "string_type": "text in quotes",
    "int_type": "a whole number",
    "int_from_float": "a whole number",
    "float_type": "a number",
    "bool_type": "true or false",
    "tuple_type": "a list in square brackets",
    "dict_type": "a table of names and numbers",
    "model_type": "a table",
    "model_attributes_type": "a table",
    "finite_number": "a finite number",
    "string_too_short": "text that is not empty",
    "too_short": "a list with at least one entry",
}


def read_study(path: Path) -> Study:
    """Read and check a study.

    Parameters
    ----------
    path : Path
        A study file, or a folder that holds ``study.toml``.

    Returns
    -------
    Study
        Its ``folder`` is the folder of the file; a zone sheet is read into the layout.

    Raises
    ------
    StudyError
        There is no such file, it is not TOML, or a key breaks a rule.
    """
    file = path / STUDY_FILE if path.is_dir() else path
    try:
        text = file.read_text(encoding="utf-8-sig")
    except FileNotFoundError:
        what = f"the folder has no {STUDY_FILE}" if path.is_dir() else "there is no such file"
        raise StudyError(f"{file}: {what}. `niche start DIR` writes a study to begin from.") from None
    except UnicodeDecodeError as error:
        raise StudyError(f"{file}: byte {error.start} is not UTF-8. Save the study file as UTF-8.") from None
    except OSError as error:
        raise StudyError(f"{file}: cannot be read ({error.strerror}).") from None
    return study_from_text(text, file)


def study_from_text(text: str, file: Path) -> Study:
    """Check the text of a study file; ``file`` is where it came from or will stand."""
    try:
        content = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise StudyError(f"{file}: not valid TOML: {error}. Text stands in quotes; lists in square brackets.") from None
    except (RecursionError, ValueError) as error:
        raise StudyError(f"{file}: not valid TOML: {error}") from None
    try:
        study = Study.model_validate(content)
        study._folder = file.parent
        if study.zones.sheet is not None:
            zones = _zones_from_sheet(study.folder / study.zones.sheet, study.zones)
            study = study.model_copy(update={"zones": zones})
            study._folder = file.parent
    except ValidationError as error:
        raise StudyError("\n".join(f"{file}: {line}" for line in _explain(error))) from None
    check_names(study, file)
    return study


def _explain(error: ValidationError) -> Iterator[str]:
    """One line a problem: path of the key, what was found, what is allowed."""
    for problem in error.errors(include_url=False):
        path = _path(problem["loc"])
        found, kind, context = problem["input"], problem["type"], problem.get("ctx", {})
        if kind == "extra_forbidden":
            allowed = _keys_beside(problem["loc"])
            close = difflib.get_close_matches(str(problem["loc"][-1]), allowed, n=1)
            hint = f" Did you mean `{close[0]}`?" if close else ""
            yield f"{path}: unknown key.{hint} Allowed here: {', '.join(allowed)}."
        elif kind == "missing":
            yield f"{path}: missing. This key is required."
        elif kind == "value_error":
            yield f"{path}: {context['error']}."
        elif kind == "literal_error":
            yield f"{path}: found {_shown(found)}; allowed: {context['expected']}."
        elif kind in _TYPES:
            yield f"{path}: found {_shown(found)}; allowed: {_TYPES[kind]}."
        elif kind in ("greater_than", "greater_than_equal", "less_than", "less_than_equal"):
            word = {"gt": "above", "ge": "at least", "lt": "below", "le": "at most"}
            rule = " and ".join(f"{word[key]} {limit:g}" for key, limit in context.items())
            yield f"{path}: found {_shown(found)}; allowed: a number {rule}."
        else:
            yield f"{path}: found {_shown(found)}; {problem['msg']}."


def _path(location: tuple[int | str, ...]) -> str:
    """Path of a key as a person would write it: ``species[2].k.low``, entries counted from 1."""
    path = ""
    for part in location:
        path += f"[{part + 1}]" if isinstance(part, int) else ("." if path else "") + part
    return path or "the study as a whole"


def _shown(value: Any) -> str:
    """A value as found, short enough for one line."""
    kinds = {str: "text", bool: "true/false", int: "a whole number", float: "a number", list: "a list", dict: "a table"}
    text = repr(value)
    return f"{text if len(text) <= 60 else text[:57] + '...'} ({kinds.get(type(value), 'a date or time')})"


def _keys_beside(location: tuple[int | str, ...]) -> list[str]:
    """Keys allowed in the table where an unknown key was met."""
    model: type[BaseModel] = Study
    for part in location[:-1]:
        if isinstance(part, str):
            found = _model_in(model.model_fields[part].annotation)
            if found is None:
                break
            model = found
    return list(model.model_fields)


def _model_in(annotation: Any) -> type[BaseModel] | None:
    """The table class inside an annotation such as ``tuple[Species, ...]`` or ``Capacity | None``."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return annotation
    return next((model for part in get_args(annotation) if (model := _model_in(part))), None)


def _zones_from_sheet(file: Path, declared: Zones) -> Zones:
    """Zones from a zone sheet; rows and columns of the map in the order in which the sheet first names them."""
    try:
        with file.open(encoding="utf-8-sig", newline="") as stream:
            records = list(csv.DictReader(stream))
    except FileNotFoundError:
        raise StudyError(f"{file}: zones.sheet names this file, and there is no such file.") from None
    except (OSError, UnicodeDecodeError, csv.Error) as error:
        raise StudyError(f"{file}: the zone sheet cannot be read as UTF-8 CSV ({error}).") from None
    needed = ("zone", "row", "column")
    for heading in needed:
        if not records or heading not in records[0]:
            raise StudyError(
                f"{file}: line 1: no heading {heading!r}, or no zone below it. A zone sheet has the headings zone, row, "
                "column and, if known, availability, and one line a zone."
            )
    cells: dict[tuple[str, str], str] = {}
    amounts: dict[str, float] = {}
    for line, record in enumerate(records, 2):
        zone, row, column = ((record[heading] or "").strip() for heading in needed)
        for heading, value in zip(needed, (zone, row, column), strict=True):
            if not value:
                raise StudyError(f"{file}: line {line}: {heading} is empty; every zone needs a name and a place.")
        if (row, column) in cells:
            raise StudyError(
                f"{file}: line {line}: zones {cells[row, column]!r} and {zone!r} both stand in row {row!r}, column "
                f"{column!r}; each place holds one zone."
            )
        cells[row, column] = zone
        _read_amount(file, line, zone, record, amounts)
    rows, columns = (tuple(dict.fromkeys(key[axis] for key in cells)) for axis in (0, 1))
    availability = None
    if amounts:
        source = declared.availability_source or "not given"
        availability = Availability(source=source, unit="as in the zone sheet", amounts=amounts)
    return Zones(
        rows=rows,
        columns=columns,
        layout=tuple(tuple(cells.get((row, column), "") for column in columns) for row in rows),
        availability=availability,
        effort=declared.effort,
        same_across_sites=declared.same_across_sites,
    )


def _read_amount(file: Path, line: int, zone: str, record: Mapping[str, str | None], amounts: dict[str, float]) -> None:
    """Add the zone's availability to ``amounts``, where the sheet gives one."""
    written = (record.get("availability") or "").strip()
    if written:
        try:
            amounts[zone] = float(written)
        except ValueError:
            raise StudyError(f"{file}: line {line}: availability is {written!r}; it must be a number.") from None
