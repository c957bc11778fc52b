"""``meta.xml``: what the files of a Darwin Core archive hold (Darwin Core text guide).

The file is parsed with every document type declaration refused, so that no entity is ever declared, expanded or fetched.
"""

from __future__ import annotations

import codecs
from collections.abc import Mapping
from dataclasses import dataclass, field
from xml.parsers import expat

from niche.errors import LogError
from niche.logs.standards.delimited import Dialect
from niche.logs.standards.terms import DWC, term_of

NAMESPACE = "http://rs.tdwg.org/dwc/text/"
_MOST_BYTES = 1 << 20
_MOST_DEPTH = 20
_MOST_ELEMENTS = 10_000
_MOST_COLUMNS = 10_000
_LINE_ENDS = ("\n", "\r\n", "\r")


@dataclass(frozen=True)
class Table:
    """A core or an extension: its file, how that is written, and which column holds which term."""

    row_type: str
    file: str
    dialect: Dialect
    header_lines: int
    id_index: int | None
    index: Mapping[str, int]
    """Term to column, counted from 0."""
    constant: Mapping[str, str]
    """Term to the value of every row (a field without index), or of every empty cell (a field with both)."""


@dataclass
class _Element:
    name: str
    attributes: dict[str, str]
    children: list[_Element] = field(default_factory=list)
    parts: list[str] = field(default_factory=list)

    @property
    def text(self) -> str:
        return "".join(self.parts)

    def all(self, name: str) -> list[_Element]:
        return [child for child in self.children if child.name == name]


def read_meta(content: bytes, label: str) -> tuple[Table, list[Table]]:
    """Core and extensions of an archive.

    Raises
    ------
    LogError
        It is not well-formed, declares a document type, or does not say what the guide requires.
    """
    top = _parse(content, label)
    if top.name != "archive":
        raise LogError(f"{label}: the outermost element is {top.name!r}; an archive begins with <archive>.")
    cores = top.all("core")
    if len(cores) != 1:
        raise LogError(f"{label}: {len(cores)} elements <core>; an archive has exactly one.")
    return _table(cores[0], "id", label), [_table(element, "coreid", label) for element in top.all("extension")]


def _parse(content: bytes, label: str) -> _Element:
    if len(content) > _MOST_BYTES:
        raise LogError(f"{label}: {len(content)} bytes; no archive needs more than {_MOST_BYTES} to describe itself.")
    parser = expat.ParserCreate(namespace_separator="}")
    parser.buffer_text = True
    root = _Element("", {})
    stack, count = [root], 0

    def start(name: str, attributes: dict[str, str]) -> None:
        nonlocal count
        count += 1
        if len(stack) > _MOST_DEPTH or count > _MOST_ELEMENTS:
            raise LogError(f"{label}: nested or long beyond what an archive needs; it is not read.")
        namespace, _, bare = name.rpartition("}")
        element = _Element(bare if namespace in ("", NAMESPACE) else name, attributes)
        stack[-1].children.append(element)
        stack.append(element)

    def refuse(*_: object) -> None:
        raise LogError(
            f"{label}: declares a document type (<!DOCTYPE …>), which an archive does not need; take it out."
        )

    def text(data: str) -> None:
        stack[-1].parts.append(data)

    parser.StartElementHandler, parser.CharacterDataHandler = start, text
    parser.EndElementHandler = lambda _: stack.pop() and None
    parser.StartDoctypeDeclHandler = refuse
    try:
        parser.Parse(content, True)
    except expat.ExpatError as error:
        raise LogError(f"{label}: not well-formed XML ({error}).") from None
    except (LookupError, ValueError) as error:
        raise LogError(f"{label}: cannot be read ({error}).") from None
    return root.children[0]


def _table(element: _Element, id_name: str, label: str) -> Table:
    place = f"{label}: <{element.name}>"
    given = element.attributes
    if not given.get("rowType"):
        raise LogError(f"{place}: no rowType; it tells what a row is, such as {DWC}Occurrence.")
    files = [location.text.strip() for files in element.all("files") for location in files.all("location")]
    if len(files) != 1:
        raise LogError(f"{place}: names {len(files)} files under <files><location>; a table in one file is read.")
    line_end = _plain(given.get("linesTerminatedBy", "\n"))
    if line_end not in _LINE_ENDS:
        raise LogError(f"{place}: linesTerminatedBy is {line_end!r}; lines end with \\n, \\r\\n or \\r.")
    dialect = Dialect(
        delimiter=_plain(given.get("fieldsTerminatedBy", ",")),
        quote_char=_plain(given.get("fieldsEnclosedBy", '"')) or None,
        null_sequence="\\N",
        encoding=given.get("encoding", "UTF-8"),
    )
    dialect.check(place)
    ids = [_index(child, place) for child in element.all(id_name)]
    index, constant = _fields(element, place)
    return Table(
        given["rowType"].strip(),
        files[0],
        dialect,
        _number(given.get("ignoreHeaderLines", "0") or "0", f"{place}: ignoreHeaderLines"),
        ids[0] if ids else None,
        index,
        constant,
    )


def _fields(element: _Element, place: str) -> tuple[dict[str, int], dict[str, str]]:
    index: dict[str, int] = {}
    constant: dict[str, str] = {}
    of_dwc: set[str] = set()
    for child in element.all("field"):
        iri = child.attributes.get("term", "").strip()
        if not iri:
            raise LogError(f"{place}: a <field> without term.")
        term = term_of(iri)
        if term in index or term in constant:
            # Two vocabularies may share a short name; Darwin Core's own term is meant.
            if term in of_dwc and iri.startswith(DWC):
                raise LogError(f"{place}: the term {term!r} stands twice.")
            if term in of_dwc:
                continue
            index.pop(term, None)
            constant.pop(term, None)
        if iri.startswith(DWC):
            of_dwc.add(term)
        if "index" in child.attributes:
            index[term] = _index(child, place) or 0
        if "default" in child.attributes:
            constant[term] = child.attributes["default"]
    return index, constant


def _index(element: _Element, place: str) -> int | None:
    text = element.attributes.get("index")
    return None if text is None else _number(text, f"{place}: index")


def _number(text: str, place: str) -> int:
    if not (text.isascii() and text.isdigit() and len(text) < 6 and int(text) < _MOST_COLUMNS):
        raise LogError(f"{place} is {text!r}; a whole number from 0 expected.")
    return int(text)


def _plain(text: str) -> str:
    """A written escape, such as that of a tab, as the character it stands for."""
    if "\\" not in text or len(text) > 8:
        return text
    try:
        return codecs.decode(text.encode("ascii"), "unicode_escape")
    except (UnicodeError, ValueError):
        return text
