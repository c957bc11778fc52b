"""A CSV that a Table Schema and a Table Dialect describe."""

from __future__ import annotations

from collections.abc import Collection, Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc

from niche.errors import LogError
from niche.logs.labels import Labels, key, listing
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.standards.containers import read_descriptor, readable
from niche.logs.standards.delimited import header_of, pieces, records, without
from niche.logs.standards.descriptors import Field, Resource, Schema, resource_of, whole
from niche.logs.standards.formulas import unescape
from niche.logs.standards.values import Cell, converter
from niche.study.model import Study


def read_described(path: Path, name: str, study: Study, ledger: Ledger, used: Collection[str]) -> Iterator[Piece]:
    """Pieces of the CSV, read as the descriptor under ``logs.file.descriptor`` says.

    Parameters
    ----------
    path, name
        The CSV (gzip where its name ends in ``.gz``), and what messages call it.
    used : collection of str
        Headings that matter to the study. A cell there that breaks the schema follows ``logs.problems.unreadable``;
        elsewhere it is flagged.

    Raises
    ------
    LogError
        The descriptor or the file breaks its standard, or they do not go together.
    """
    descriptor = study.logs.file.descriptor or ""
    try:
        with (study.folder / descriptor).open("rb") as stream:
            resource = resource_of(read_descriptor(stream, descriptor), descriptor, path.name)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise LogError(
            f"{descriptor}: `logs.file.descriptor` names this file, and it cannot be read ({reason})."
        ) from None
    try:
        raw = path.open("rb")
    except OSError as error:
        raise LogError(f"{name}: cannot be read ({error.strerror}).") from None
    with raw, readable(raw, name, packed=path.name.lower().endswith(".gz")) as plain:
        found = records(plain, resource.dialect, name)
        headings = headings_of(found, resource, name, descriptor)
        typed = Typed(resource, study, ledger, used) if resource.schema is not None else None
        for piece in pieces(found, headings, name, ledger):
            yield typed.piece(piece) if typed is not None else piece


def headings_of(found: Iterator[tuple[int, list[str]]], resource: Resource, name: str, descriptor: str) -> list[str]:
    """Headings of the table, by its header or, where it has none, by its schema."""
    schema = resource.schema
    if not resource.dialect.header_rows:
        if schema is None:
            raise LogError(f"{descriptor}: `header` is false and there is no schema, so nothing names the columns.")
        return [field.name for field in schema.fields]
    headings = header_of(found, resource.dialect, name)
    if resource.formula_escape:
        headings = [unescape(heading) for heading in headings]
    if schema is not None:
        _match(headings, schema, name, descriptor)
    return headings


def _match(headings: list[str], schema: Schema, name: str, descriptor: str) -> None:
    """Raise unless headings and fields go together as the schema says."""
    fields, there = [field.name for field in schema.fields], [heading for heading in headings if heading]
    missing = [field for field in fields if field not in there]
    extra = [heading for heading in there if heading not in fields]
    rule = schema.fields_match
    wrong = None
    if missing and rule in ("exact", "equal", "subset"):
        wrong = f"no heading {missing[0]!r}, which the schema lists"
    elif extra and rule in ("exact", "equal", "superset"):
        wrong = f"the heading {extra[0]!r} is not in the schema"
    elif rule == "exact" and there != fields:
        wrong = "the headings are those of the schema in another order"
    elif rule == "partial" and len(missing) == len(fields):
        wrong = "none of the headings is in the schema"
    if wrong is not None:
        raise LogError(
            f"{name}: {wrong}. {descriptor} says fieldsMatch {rule!r}; correct one of the two, or allow it there with "
            "fieldsMatch: equal (any order), subset (the file may have more), superset (fewer) or partial."
        )


@dataclass
class Typed:
    """Turns the cells of pieces into canonical text and tells what breaks the schema."""

    resource: Resource
    study: Study
    ledger: Ledger
    used: Collection[str]
    _unseen: str = field(default="", init=False)

    def __post_init__(self) -> None:
        self._unseen = next(iter(self.study.logs.out_of_sight), "")

    def piece(self, raw: Piece) -> Piece:
        """The piece with canonical cells; rows that break the schema where it matters are accounted for."""
        schema = self.resource.schema
        if schema is None:
            return raw
        columns = dict(raw.columns)
        found: dict[int, list[Entry]] = {}
        for described in schema.fields:
            if described.name in columns:
                columns[described.name] = self._column(raw, described, schema, found)
        return without(Piece(raw.file, raw.rows, columns), self.ledger, found)

    def _column(self, raw: Piece, described: Field, schema: Schema, found: dict[int, list[Entry]]) -> Any:
        labels = Labels.of(raw.columns[described.name])
        missing = schema.missing_of(described)
        convert = converter(described, keep_times=self.study.logs.clock.format != "iso")
        cells = []
        for text in labels.written:
            if text in missing:
                required = bool((described.constraints or {}).get("required"))
                problem = "empty, and the schema requires a value" if required else None
                cells.append(Cell(self._absent(missing[text]), problem))
            else:
                cells.append(convert(unescape(text) if self.resource.formula_escape else text))
        self._constrain(described, labels, missing, cells)
        for number, cell in enumerate(cells):
            if cell.problem is not None:
                self._tell(raw, described, np.flatnonzero(labels.index == number), labels.written[number], cell, found)
        return pa.array(labels.spread(cell.text for cell in cells), type=pa.string())

    def _absent(self, label: str) -> str:
        """Text for a missing value: the study's own word where its label means out of sight, else none."""
        means = listing(("out of sight", *self.study.logs.out_of_sight))
        return self._unseen if key(label) in means else ""

    def _constrain(self, described: Field, labels: Labels, missing: Any, cells: list[Cell]) -> None:
        """Add what breaks a constraint to the cells that have no problem yet."""
        rules = dict(described.constraints or {})
        rules.pop("required", None)
        if not rules:
            return
        fits = None
        if isinstance(rules.get("pattern"), str):
            distinct = pa.array(labels.written, type=pa.string())
            fits = pc.match_substring_regex(distinct, whole(rules["pattern"])).to_pylist()
        for number, (text, cell) in enumerate(zip(labels.written, cells, strict=True)):
            if cell.problem is not None or text in missing:
                continue
            problem = _broken(rules, text, cell.text, described)
            if problem is None and fits is not None and not fits[number]:
                problem = f"does not match the pattern {rules['pattern']!r} of the schema"
            if problem is not None:
                cells[number] = Cell(cell.text, problem)

    def _tell(
        self, raw: Piece, described: Field, where: Any, written: str, cell: Cell, found: dict[int, list[Entry]]
    ) -> None:
        matters = described.name in self.used
        action = self.study.logs.problems.unreadable if matters else "flagged"
        problem = f"{cell.problem}; correct the cell or the schema" if matters else f"{cell.problem}; not used here"
        for position in where.tolist():
            row = int(raw.rows[position])
            entry = Entry(raw.file, row, described.name, written, "breaks the schema", problem, action)
            if matters:
                found.setdefault(position, []).append(entry)
            else:
                self.ledger.note(entry)


def _broken(rules: dict[str, Any], written: str, text: str, described: Field) -> str | None:
    """What constraint a value breaks, in words."""
    allowed = rules.get("enum")
    if isinstance(allowed, list) and not any(text == _plain(value, described) or written == value for value in allowed):
        return f"not one of the values that the schema allows: {', '.join(map(str, allowed))[:160]}"
    limits = (("minLength", len(text), -1), ("maxLength", len(text), 1))
    for name, size, sign in limits:
        if isinstance(rules.get(name), int) and sign * size > sign * rules[name]:
            return f"has {size} characters; {name} of the schema is {rules[name]}"
    if described.type in ("number", "integer", "year"):
        try:
            value = float(text)
            for name, sign, strict in _BOUNDS:
                if name in rules:
                    beyond = sign * (value - float(rules[name]))
                    if beyond > 0 or (strict and beyond == 0):
                        return f"{name} of the schema is {rules[name]}"
        except (TypeError, ValueError):
            return None
    return None


_BOUNDS = (
    ("minimum", -1, False),
    ("maximum", 1, False),
    ("exclusiveMinimum", -1, True),
    ("exclusiveMaximum", 1, True),
)


def _plain(value: Any, described: Field) -> str:
    """A value of `enum` as canonical text."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return converter(described, keep_times=False)(value).text
    return str(value)
