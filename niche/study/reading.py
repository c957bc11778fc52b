"""Reads a study file, and turns whatever is wrong with it into a message that helps.

A message gives the path of the key, what was found there and what is allowed. All problems of a file are told at once.
"""

from __future__ import annotations

import difflib
import re
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any, get_args

from pydantic import BaseModel, ValidationError

from niche.errors import StudyError
from niche.study.checked_names import check_names
from niche.study.model import Study
from niche.study.sheet import zones_from_sheet

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
    file = path
    try:
        file = path / STUDY_FILE if path.is_dir() else path
        text = file.read_text(encoding="utf-8-sig")
    except FileNotFoundError:
        what = f"the folder has no {STUDY_FILE}" if path.is_dir() else "there is no such file"
        raise StudyError(f"{file}: {what}. `niche start DIR` writes a study to begin from.") from None
    except UnicodeDecodeError as error:
        raise StudyError(f"{file}: byte {error.start} is not UTF-8. Save the study file as UTF-8.") from None
    except OSError as error:
        raise StudyError(f"{file}: cannot be read ({error.strerror}).") from None
    except ValueError as error:  # a path with a NUL in it
        raise StudyError(f"{str(file)!r}: cannot be read ({error}).") from None
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
            zones = zones_from_sheet(study.folder / study.zones.sheet, study.zones)
            study = Study.model_validate({**content, "zones": zones})
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
        elif kind == "too_short" and found:
            continue  # its entries are wrong, and have been told
        elif kind == "literal_error":
            yield f"{path}: found {_shown(found)}; allowed: {context['expected']}."
        elif kind in _TYPES:
            yield f"{path}: found {_shown(found)}; allowed: {_TYPES[kind]}."
        elif kind in ("greater_than", "greater_than_equal", "less_than", "less_than_equal"):
            word = {"gt": "above", "ge": "at least", "lt": "below", "le": "at most"}
            rule = " and ".join(f"{word[key]} {limit:,.10g}" for key, limit in context.items())
            yield f"{path}: found {_shown(found)}; allowed: a number {rule}."
        else:
            yield f"{path}: found {_shown(found)}; {problem['msg']}."


def _path(location: tuple[int | str, ...]) -> str:
    """Path of a key as a person would write it: ``species[2].k.low``, entries counted from 1."""
    path = ""
    for part in location:
        if isinstance(part, int):
            path += f"[{part + 1}]"
        else:
            path += ("." if path else "") + (part if re.fullmatch(r"[\w .-]+", part) else repr(part))
    return path or "the study as a whole"


def _shown(value: Any) -> str:
    """A value as found, short enough for one line."""
    kinds = {str: "text", bool: "true/false", int: "a whole number", float: "a number", list: "a list", dict: "a table"}
    try:
        text = repr(value)
    except (RecursionError, ValueError):  # tables in tables without end; a number of thousands of digits
        text = "what is too long to show"
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
