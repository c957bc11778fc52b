"""Darwin Core archives: a core and its extensions in a zip or a folder, joined into rows of occurrences."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pyarrow as pa

from niche.errors import LogError
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.standards.containers import Package, inside, open_package, opened, read_small
from niche.logs.standards.delimited import PIECE_ROWS, piece_of, records, set_aside, without
from niche.logs.standards.events import DATES, Events
from niche.logs.standards.meta_xml import Table, read_meta
from niche.logs.standards.terms import EVENT, OCCURRENCE
from niche.study.model import Study

META = "meta.xml"

_ID = "\x00id"
"""Heading of the column by which core and extension are joined; no term has this name."""


def read_archive(path: Path, name: str, study: Study, ledger: Ledger) -> Iterator[Piece]:
    """Pieces of an archive under Darwin Core terms, a row an occurrence with the terms of its event.

    Parameters
    ----------
    path, name
        A zip, a folder, or its ``meta.xml``, and what messages call it.

    Raises
    ------
    LogError
        It is no archive that holds occurrences, or its parts do not go together.
    """
    package = open_package(path, name, META)
    core, extensions = _described(package)
    label = package.label(META)
    if core.row_type != EVENT:
        # An occurrence core carries its events' terms itself.
        yield from (_without_id(piece) for piece in _rows(package, core, ledger))
        return
    found = [table for table in extensions if table.row_type == OCCURRENCE]
    if len(found) > 1:
        raise LogError(f"{label}: {len(found)} extensions of occurrences; one is read.")
    if not found:
        if "scientificName" in {*core.index, *core.constant} or "vernacularName" in {*core.index, *core.constant}:
            yield from (_without_id(piece) for piece in _rows(package, core, ledger))
            return
        raise LogError(f"{label}: a core of events and no extension of occurrences, so no row tells of an animal.")
    yield from _joined(package, core, found[0], study, ledger)


def files_of(path: Path, name: str) -> list[str]:
    """Files of an archive that are read, relative to its ``meta.xml``."""
    package = open_package(path, name, META)
    core, extensions = _described(package)
    tables = [core, *(table for table in extensions if table.row_type == OCCURRENCE)]
    return [str(inside(table.file, package.name)) for table in tables]


def _described(package: Package) -> tuple[Table, list[Table]]:
    label = package.label(META)
    with opened(package, META) as stream:
        return read_meta(read_small(stream, label), label)


def _joined(package: Package, core: Table, extension: Table, study: Study, ledger: Ledger) -> Iterator[Piece]:
    events = _events(package, core, ledger)
    terms = {*core.index, *core.constant, *DATES, *(term for event in events.terms.values() for term in event)}
    named: set[str] = set()
    for piece in _rows(package, extension, ledger):
        found: dict[int, list[Entry]] = {}
        ids = piece.columns[_ID].to_pylist()
        for position, event in enumerate(ids):
            if event not in events.terms:
                problem = (
                    f"no event of {events.label} has this id, so nothing tells when and where; correct one of the two"
                )
                row = int(piece.rows[position])
                found[position] = [Entry(piece.file, row, "coreid", event, "event not there", problem, "stop")]
        named.update(ids)
        yield _with_events(without(piece, ledger, found), events, terms)
    yield from _empty_events(events, named, study, ledger)


def _events(package: Package, core: Table, ledger: Ledger) -> Events:
    """The events, inherited. Their rows are places and times of the log's rows, not rows of their own."""
    events = Events(package.label(core.file))
    for piece in _rows(package, core, ledger):
        cells = {term: column.to_pylist() for term, column in piece.columns.items()}
        ids = cells.pop(_ID)
        for position, (name, row) in enumerate(zip(ids, piece.rows.tolist(), strict=True)):
            if not name:
                set_aside(ledger, piece.file, row, "id", "", "event without id", "no occurrence can name it", "stop")
                continue
            events.add(name, row, {term: column[position] for term, column in cells.items() if column[position]})
    events.inherit(ledger)
    return events


def _with_events(piece: Piece, events: Events, terms: set[str]) -> Piece:
    """The occurrences with the terms of their events, wherever they do not have them themselves."""
    columns = dict(piece.columns)
    of = [events.terms[event] for event in columns.pop(_ID).to_pylist()]
    for term in sorted(terms):
        own = columns[term].to_pylist() if term in columns else [""] * len(of)
        if term in DATES:  # date and time of day go together
            dated = [any(columns[t][i].as_py() for t in DATES if t in piece.columns) for i in range(len(of))]
            own = [o if d else event.get(term, "") for o, d, event in zip(own, dated, of, strict=True)]
        else:
            own = [o or event.get(term, "") for o, event in zip(own, of, strict=True)]
        columns[term] = pa.array(own, type=pa.string())
    return Piece(piece.file, piece.rows, columns)


def _empty_events(events: Events, named: set[str], study: Study, ledger: Ledger) -> Iterator[Piece]:
    """Events without occurrences: rows of scans without animals; else effort, and accounted for as such."""
    empty = events.without(named)
    if not empty:
        return
    if study.logs.rule == "scans":
        terms = sorted({"eventDate", *(term for event in empty for term in events.terms[event])})
        cells = [[*(events.terms[event].get(term, "") for term in terms), "", "absent"] for event in empty]
        headings = [*terms, "scientificName", "occurrenceStatus"]
        yield piece_of(events.label, headings, cells, [events.rows[event] for event in empty])
        return
    for event in empty:
        problem = "no occurrence belongs to it: effort, not use"
        set_aside(ledger, events.label, events.rows[event], "eventID", event, "event without occurrence", problem)


def _rows(package: Package, table: Table, ledger: Ledger) -> Iterator[Piece]:
    """Pieces of one table under its terms, with the joining id under `_ID`."""
    label = package.label(table.file)
    headings = [*table.index, *(term for term in table.constant if term not in table.index), _ID]
    wanted = list(table.index.values())
    least = max([*wanted, table.id_index or 0]) + 1
    kept: list[list[str]] = []
    lines: list[int] = []
    begun = False
    with opened(package, table.file) as stream:
        for number, (line, record) in enumerate(records(stream, table.dialect, label)):
            if number < table.header_lines:
                continue
            if not any(record):
                set_aside(ledger, label, line, "", "", "blank row", "no cell is filled")
            elif len(record) < least:
                problem = f"{len(record)} cells where meta.xml describes {least}; each row needs one cell a column"
                set_aside(ledger, label, line, "", " ".join(record)[:80], "wrong number of cells", problem, "stop")
            else:
                kept.append(_cells(record, table))
                lines.append(line)
            if len(kept) == PIECE_ROWS:
                yield piece_of(label, headings, kept, lines)
                kept, lines, begun = [], [], True
    if kept or not begun:
        yield piece_of(label, headings, kept, lines)


def _cells(record: list[str], table: Table) -> list[str]:
    found = [record[index] or table.constant.get(term, "") for term, index in table.index.items()]
    constants = [value for term, value in table.constant.items() if term not in table.index]
    return [*found, *constants, "" if table.id_index is None else record[table.id_index].strip()]


def _without_id(piece: Piece) -> Piece:
    return Piece(piece.file, piece.rows, {term: column for term, column in piece.columns.items() if term != _ID})
