"""Table Dialect and Table Schema (Data Package 2.0, and 1.0 as far as it agrees) from JSON, checked as they are read."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any, Literal, cast, get_args

from niche.errors import LogError
from niche.logs.standards.delimited import Dialect

FieldType = Literal[
    "string", "number", "integer", "boolean", "object", "array", "list", "datetime", "date", "time", "year",
    "yearmonth", "duration", "geopoint", "geojson", "any",
]  # fmt: skip
FieldsMatch = Literal["exact", "equal", "subset", "superset", "partial"]

_MOST_COLUMNS = 10_000


@dataclass(frozen=True)
class Field:
    """One column as a schema describes it."""

    name: str
    type: FieldType = "any"
    format: str = "default"
    decimal_char: str = "."
    group_char: str = ""
    bare_number: bool = True
    true_values: tuple[str, ...] = ("true", "True", "TRUE", "1")
    false_values: tuple[str, ...] = ("false", "False", "FALSE", "0")
    missing: Mapping[str, str] | None = None
    """Cell that stands for no value, to its label; None where the schema's hold."""
    categories: Mapping[str, str] | None = None
    """Cell to its label, in order; the label is the cell itself where none is given."""
    constraints: Mapping[str, Any] | None = None


@dataclass(frozen=True)
class Schema:
    """The columns of a table."""

    fields: tuple[Field, ...]
    fields_match: FieldsMatch = "exact"
    missing: Mapping[str, str] | None = None

    def missing_of(self, field: Field) -> Mapping[str, str]:
        """Cells that stand for no value in a field, each with its label."""
        return field.missing if field.missing is not None else (self.missing if self.missing is not None else {"": ""})


@dataclass(frozen=True)
class Resource:
    """A table as a descriptor describes it."""

    path: str | None
    dialect: Dialect
    schema: Schema | None
    formula_escape: bool = False
    """Whether text that a spreadsheet would take for a formula has an apostrophe in front."""


class Reader:
    """Takes values of a kind out of a JSON object; a wrong kind becomes a LogError that names the place."""

    def __init__(self, value: Any, place: str) -> None:
        if not isinstance(value, dict):
            raise LogError(f"{place}: must be a JSON object, in curly brackets.")
        self.value, self.place = value, place

    def get(self, key: str, kind: type | tuple[type, ...], default: Any = None) -> Any:
        """A value of this kind, or the default where the key is missing or null."""
        found = self.value.get(key)
        if found is None:
            return default
        number = kind is int or (isinstance(kind, tuple) and int in kind)
        if not isinstance(found, kind) or (number and isinstance(found, bool)):
            raise LogError(
                f"{self.place}.{key}: found {short(found)}; {_WORDS.get(kind, 'another kind of value')} expected."
            )
        return found

    def texts(self, key: str, default: tuple[str, ...] = ()) -> tuple[str, ...]:
        """A list of text."""
        found = self.get(key, list)
        if found is None:
            return default
        if not all(isinstance(item, str) for item in found):
            raise LogError(f"{self.place}.{key}: found {short(found)}; a list of text expected.")
        return tuple(found)

    def numbers(self, key: str, default: tuple[int, ...] = ()) -> tuple[int, ...]:
        """A list of row numbers."""
        found = self.get(key, list)
        if found is None:
            return default
        fine = all(isinstance(n, int) and not isinstance(n, bool) and 1 <= n <= 1000 for n in found)
        if not fine:
            raise LogError(f"{self.place}.{key}: found {short(found)}; a list of row numbers from 1 to 1000 expected.")
        return tuple(found)

    def labelled(self, key: str, named: str) -> dict[str, str] | None:
        """A list of values, or of objects with `value` and `label`; None where the key is missing."""
        found = self.get(key, list)
        if found is None:
            return None
        result = {}
        for number, item in enumerate(found, 1):
            if isinstance(item, dict):
                part = Reader(item, f"{self.place}.{key}[{number}]")
                value = part.get("value", (str, int, float))
                if value is None:
                    raise LogError(f"{part.place}.value: missing.")
                result[str(value)] = part.get("label", str, str(value) if named == "value" else "")
            elif isinstance(item, (str, int, float)) and not isinstance(item, bool):
                result[str(item)] = str(item) if named == "value" else ""
            else:
                raise LogError(f"{self.place}.{key}[{number}]: found {short(item)}; text expected.")
        return result


_WORDS: dict[Any, str] = {str: "text", list: "a list", dict: "an object", bool: "true or false", int: "a whole number"}


def short(value: Any) -> str:
    """A value in few letters."""
    text = repr(value)
    return text if len(text) <= 60 else text[:57] + "..."


def resource_of(descriptor: dict[str, Any], label: str, path: str | None = None) -> Resource:
    """The one table that a descriptor describes.

    Parameters
    ----------
    descriptor : dict
        A package with one table (or one whose path is ``path``), a resource, an object with ``schema`` and ``dialect``,
        or a bare schema.
    label : str
        The descriptor as messages call it.
    path : str, optional
        File name that tells which resource of several is meant.

    Raises
    ------
    LogError
        The descriptor breaks the standard, or describes several tables.
    """
    top = Reader(descriptor, label)
    resources = top.get("resources", list)
    if resources is None:
        return _resource(top) if "fields" not in descriptor else Resource(None, Dialect(), schema_of(descriptor, label))
    read = [Reader(item, f"{label}: resources[{number}]") for number, item in enumerate(resources, 1)]
    named = [item for item in read if path is not None and item.value.get("path") in (path, [path])]
    chosen = named or [item for item in read if _tabular(item)]
    if len(chosen) != 1:
        raise LogError(
            f"{label}: describes {len(chosen)} tables, and one must be meant. Let `logs.files` name the path of one, "
            "or give a descriptor with a single table."
        )
    return _resource(chosen[0])


def _tabular(item: Reader) -> bool:
    return (
        item.value.get("type") == "table"
        or item.value.get("profile") == "tabular-data-resource"
        or "schema" in item.value
    )


def _resource(item: Reader) -> Resource:
    path = item.value.get("path")
    if isinstance(path, list):
        if len(path) != 1:
            raise LogError(f"{item.place}.path: found {len(path)} paths; a table in several files is not read.")
        path = path[0]
    if path is not None and not isinstance(path, str):
        raise LogError(f"{item.place}.path: found {short(path)}; text expected.")
    for key in ("schema", "dialect"):
        if isinstance(item.value.get(key), str):
            raise LogError(f"{item.place}.{key}: names another file or address; write the {key} out here instead.")
    dialect = dialect_of(item.get("dialect", dict, {}), f"{item.place}.dialect")
    encoding = item.get("encoding", str)
    schema = item.get("schema", dict)
    return Resource(
        path,
        dialect if encoding is None else replace(dialect, encoding=encoding),
        None if schema is None else schema_of(schema, f"{item.place}.schema"),
        item.get("niche:formulaEscape", bool, False),
    )


def dialect_of(value: Any, place: str) -> Dialect:
    """A Table Dialect; keys that concern other forms of file are passed over."""
    item = Reader(value, place)
    header = item.get("header", bool, True)
    rows = item.numbers("headerRows", (1,))
    if header and not rows:
        raise LogError(f"{place}.headerRows: names no row; write `header` false where there is no header.")
    dialect = Dialect(
        delimiter=item.get("delimiter", str, ","),
        quote_char=item.get("quoteChar", str, '"') or None,
        double_quote=item.get("doubleQuote", bool, True),
        escape_char=item.get("escapeChar", str) or None,
        skip_initial_space=item.get("skipInitialSpace", bool, False),
        header_rows=rows if header else (),
        header_join=item.get("headerJoin", str, " "),
        comment_rows=item.numbers("commentRows"),
        comment_char=item.get("commentChar", str) or None,
        null_sequence=item.get("nullSequence", str),
    )
    dialect.check(place)
    return dialect


def schema_of(value: Any, place: str) -> Schema:
    """A Table Schema."""
    item = Reader(value, place)
    listed = item.get("fields", list)
    if not listed:
        raise LogError(f"{place}.fields: missing or empty; a schema lists its fields.")
    if len(listed) > _MOST_COLUMNS:
        raise LogError(f"{place}.fields: lists {len(listed)} fields; at most {_MOST_COLUMNS} are read.")
    match = item.value.get("fieldsMatch", "exact")
    match = match[0] if isinstance(match, list) and match else match  # a list was the form of early drafts
    if match not in get_args(FieldsMatch):
        raise LogError(f"{place}.fieldsMatch: found {short(match)}; allowed: {', '.join(get_args(FieldsMatch))}.")
    fields = tuple(_field(field, f"{place}.fields[{number}]") for number, field in enumerate(listed, 1))
    names = [field.name for field in fields]
    twice = next((name for name in names if names.count(name) > 1), None)
    if twice is not None:
        raise LogError(f"{place}.fields: the name {twice!r} stands twice.")
    return Schema(fields, match, item.labelled("missingValues", "label"))


def _field(value: Any, place: str) -> Field:
    item = Reader(value, place)
    name = item.get("name", str)
    if not name:
        raise LogError(f"{place}.name: missing; each field has a name.")
    kind = item.get("type", str, "any")
    if kind not in get_args(FieldType):
        raise LogError(f"{place}.type: found {kind!r}; allowed: {', '.join(get_args(FieldType))}.")
    constraints = item.get("constraints", dict, {})
    _check_pattern(constraints.get("pattern"), f"{place}.constraints.pattern")
    return Field(
        name=" ".join(name.split()),
        type=cast(FieldType, kind),
        format=item.get("format", str, "default"),
        decimal_char=item.get("decimalChar", str, "."),
        group_char=item.get("groupChar", str, ""),
        bare_number=item.get("bareNumber", bool, True),
        true_values=item.texts("trueValues", Field("").true_values),
        false_values=item.texts("falseValues", Field("").false_values),
        missing=item.labelled("missingValues", "label"),
        categories=item.labelled("categories", "value"),
        constraints=constraints,
    )


def _check_pattern(pattern: Any, place: str) -> None:
    """Refuse a pattern that is not text or that the linear-time engine cannot take."""
    import pyarrow as pa
    import pyarrow.compute as pc

    if pattern is None:
        return
    if not isinstance(pattern, str):
        raise LogError(f"{place}: found {short(pattern)}; text expected.")
    try:
        pc.match_substring_regex(pa.array([""]), whole(pattern))
    except pa.ArrowInvalid as error:
        raise LogError(f"{place}: {pattern!r} is not a pattern that can be used ({error}).") from None


def whole(pattern: str) -> str:
    """A pattern of XML Schema, which is to match a value as a whole, as RE2 writes it."""
    return rf"^(?:{pattern})\z"
