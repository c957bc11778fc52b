"""Columns that every recording rule reads alike: species, animal, session, zone, times, durations, counts.

Each function reads one column of a piece, tells the `Rows` what is wrong with it, and returns one value a row. What comes
back for a row with a problem means nothing.
"""

from __future__ import annotations

import numpy as np
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.errors import LogError
from niche.logs.clocks import UNREADABLE, read_times
from niche.logs.labels import Labels, key, listing, propose, tidy
from niche.logs.pieces import Piece
from niche.logs.rows import Cells, Mask, Rows
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

_UNIT_MS = {"s": 1000, "min": 60_000, "h": 3_600_000}
_LONGEST = 100 * 366 * 86_400_000
"""A century: a longer bout is a slip of the pen."""


def check_headings(piece: Piece, study: Study, needed: tuple[str, ...]) -> None:
    """Raise unless every column that the study names, and each that the rule needs, is in the file.

    Parameters
    ----------
    needed : tuple of str
        Fields (keys of ``logs.columns``) that the rule cannot do without.

    Raises
    ------
    LogError
    """
    columns = study.logs.columns.model_dump()
    for name in needed:
        if columns[name] is None:
            raise LogError(
                f"logs.columns.{name}: missing. The rule {study.logs.rule!r} needs the heading of this column."
            )
    for name, heading in columns.items():
        if heading is not None and heading not in piece.columns:
            there = ", ".join(repr(h) for h in piece.columns if h)
            raise LogError(
                f"{piece.file}: line 1: no heading {heading!r}, which `logs.columns.{name}` names. Headings there: "
                f"{there}. Put the right one into the study file."
            )


def species(rows: Rows, study: Study) -> NDArray[np.object_]:
    """Species of each row, by its listed name where the study lists species."""
    listed = listing(s.name for s in study.species)
    labels = Labels.of(rows.piece.column(study.logs.columns.species))
    keys = [key(text) for text in labels.written]
    rows.problem("species", labels.where(k == "" for k in keys), labels, "species missing", "fill it in")
    if not listed:
        return labels.spread(tidy(text) for text in labels.written)
    names = [listed.get(k) for k in keys]
    unknown = labels.where(bool(k) and name is None for k, name in zip(keys, names, strict=True))
    advice = {text: f"not listed under `species`; {propose(text, listed)}" for text in labels.written}
    rows.problem("species", unknown, labels, "unknown species", advice, study.logs.problems.unknown_species)
    rows.respelled("species", labels, names)
    return labels.spread(names)


def zone(rows: Rows, study: Study) -> NDArray[np.object_]:
    """Zone of each row by its listed name; `OUT_OF_SIGHT` for a declared label or a blank cell."""
    listed = listing(study.zones.names)
    unseen = listing(study.logs.out_of_sight)
    labels = Labels.of(rows.piece.column(study.logs.columns.zone))
    keys = [key(text) for text in labels.written]
    blank = labels.where(k == "" for k in keys)
    rows.flag("zone", blank, labels, "zone blank", "counted as out of sight")
    allowed = listed | unseen
    unknown = labels.where(bool(k) and k not in allowed for k in keys)
    advice = {text: f"no such zone; {propose(text, allowed)}" for text in labels.written}
    rows.problem("zone", unknown, labels, "unknown zone", advice, study.logs.problems.unknown_zone)
    rows.respelled("zone", labels, [allowed.get(k) for k in keys])
    return labels.spread(OUT_OF_SIGHT if k == "" or k in unseen else listed.get(k) for k in keys)


def plain(rows: Rows, heading: str | None, name: str) -> NDArray[np.object_]:
    """Animal, session or the like: any name, but not none. Empty throughout where the study names no such column."""
    labels = Labels.of(rows.piece.column(heading))
    names = [tidy(text) for text in labels.written]
    if heading is not None:
        rows.problem(name, labels.where(n == "" for n in names), labels, f"{name} missing", "fill it in")
    return labels.spread(names)


def who(rows: Rows, study: Study) -> tuple[NDArray[np.object_], NDArray[np.object_]]:
    """Animal and session of each row; each stands in for the other where the study names only one column."""
    columns = study.logs.columns
    animal = plain(rows, columns.animal, "animal")
    session = plain(rows, columns.session, "session")
    return (session if columns.animal is None else animal), (animal if columns.session is None else session)


def instant(
    rows: Rows, study: Study, heading: str | None, name: str, has_offset: bool | None
) -> tuple[NDArray[np.int64], Mask, bool | None]:
    """Times of a column in milliseconds since 1970-01-01T00:00Z, which of them could be read, and the file's way.

    ``has_offset`` is what earlier pieces of the file returned last: whether its times carry an offset.
    """
    column = rows.piece.column(heading)
    instants = read_times(column, study.logs.time_zone, has_offset)
    blank = np.asarray(pc.equal(pc.utf8_trim_whitespace(column), "")) & (instants.problem == UNREADABLE)
    cells = Cells(column)
    rows.problem(name, blank, cells, f"{name} missing", "a bout without it has no length")
    for problem in {p for p in instants.problem if p is not None}:
        wrong = (instants.problem == problem) & ~blank
        rows.problem(name, wrong, cells, "unreadable time", problem, study.logs.problems.unreadable)
    for repair in {r for r in instants.repair if r is not None}:
        rows.repair(name, instants.repair == repair, cells, "24:00", repair)
    return instants.ms, instants.problem == None, instants.has_offset  # noqa: E711 - elementwise


def duration(rows: Rows, study: Study, heading: str) -> tuple[NDArray[np.int64], Mask]:
    """Durations in milliseconds, and which of them could be read."""
    column = pc.utf8_trim_whitespace(rows.piece.column(heading))
    number = np.asarray(pc.match_substring_regex(column, r"^-?\d{1,15}(\.\d+)?$"))
    value = np.asarray(pc.cast(pc.if_else(pa.array(number), column, "0"), pa.float64()))
    length = np.rint(value * _UNIT_MS[study.logs.duration_unit])
    blank = np.asarray(pc.equal(column, ""))
    cells, policy = Cells(column), study.logs.problems
    rows.problem("duration", blank, cells, "duration missing", "a bout without it has no length")
    advice = "not a plain number, such as 42 or 42.5"
    rows.problem("duration", ~number & ~blank, cells, "unreadable duration", advice, policy.unreadable)
    advice = "a duration is not negative"
    rows.problem("duration", number & (length < 0), cells, "end before start", advice, policy.end_before_start)
    advice = f"longer than a century; is the unit {study.logs.duration_unit!r} right?"
    rows.problem("duration", length > _LONGEST, cells, "unreadable duration", advice, policy.unreadable)
    rows.flag("duration", number & (length == 0), cells, "zero duration", "kept, adds no time")
    fine = number & (length >= 0) & (length <= _LONGEST)
    return np.where(fine, length, 0).astype(np.int64), fine
