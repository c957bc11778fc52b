"""Columns that every recording rule reads alike: species, animal, session, zone, times, durations, counts.

Each function reads one column of a piece, tells the `Rows` what is wrong with it, and returns one value a row. What comes
back for a row with a problem means nothing.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from niche.errors import LogError
from niche.logs import mangled
from niche.logs.characters import hidden, holding, look_alikes
from niche.logs.labels import Labels, Names, key, listing, tidy
from niche.logs.lengths import duration as duration  # times and durations are columns that rules read alike, too
from niche.logs.pieces import Piece
from niche.logs.rows import Rows
from niche.logs.times import instant as instant
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

_DATE = (
    "a spreadsheet has turned a zone name into a date, as it does with 1-2; write the name again with the column set to "
    "text, or, where only one name can be meant, accept it under `logs.aliases.zones`"
)
_NAMELESS = (
    "names no animal, and all such rows would count as one animal; give each its name, set "
    '`logs.problems.nameless_animals` to "set_aside", or `analysis.unit` to "session" where animals are not told apart'
)


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
            remedy = "Put the right one into the study file."
            if name == "zone" and sum(key(h) in listing(study.zones.names) for h in piece.columns) > 1:
                remedy = 'The zones are columns here: set `logs.rule = "tallies"` and `logs.tallies.unit`.'
            raise LogError(
                f"{piece.file}: line 1: no heading {heading!r}, which `logs.columns.{name}` names. Headings there: "
                f"{there}. {remedy}"
            )


def species(rows: Rows, study: Study) -> NDArray[np.object_]:
    """Species of each row, by its listed name where the study lists species."""
    names = Names.species(study)
    labels = Labels.of(rows.piece.column(study.logs.columns.species))
    blank = [not tidy(text) for text in labels.written]
    rows.problem("species", labels.where(blank), labels, "species missing", "fill it in")
    found = [names.find(text) for text in labels.written]
    unknown = [
        text for text, name, empty in zip(labels.written, found, blank, strict=True) if name is None and not empty
    ]
    advice = names.unknown(unknown, "not listed under `species`")
    wrong = labels.where(text in advice for text in labels.written)
    rows.problem("species", wrong, labels, "unknown species", advice, study.logs.problems.unknown_species)
    _note_spellings(rows, "species", labels, names, found)
    return labels.spread(found)


def zone(rows: Rows, study: Study) -> NDArray[np.object_]:
    """Zone of each row by its listed name; `OUT_OF_SIGHT` for a declared label or a blank cell.

    Where the study says that a label means another zone at each site, zones are listed as ``site: zone``.
    """
    names, unseen = Names.zones(study), listing(study.logs.out_of_sight)
    labels, bare = _zone_labels(rows, study)
    blank = [not tidy(text) for text in bare]
    rows.flag("zone", labels.where(blank), labels, "zone blank", "counted as out of sight")
    found = [names.find(zone if key(zone) in unseen else text) for text, zone in zip(labels.written, bare, strict=True)]
    unknown = [i for i, name in enumerate(found) if name is None and not blank[i]]
    dates = {labels.written[i] for i in unknown if mangled.is_date(bare[i])}
    rows.problem(
        "zone", labels.where(text in dates for text in labels.written), labels, "zone turned into a date", _DATE, "stop"
    )
    advice = names.unknown([text for i in unknown if (text := labels.written[i]) not in dates], "no such zone")
    wrong = labels.where(text in advice for text in labels.written)
    rows.problem("zone", wrong, labels, "unknown zone", advice, study.logs.problems.unknown_zone)
    _note_spellings(rows, "zone", labels, names, [None if b else name for name, b in zip(found, blank, strict=True)])
    gone = [empty or (name is not None and key(name) in unseen) for name, empty in zip(found, blank, strict=True)]
    return labels.spread(OUT_OF_SIGHT if out else name for name, out in zip(found, gone, strict=True))


def _zone_labels(rows: Rows, study: Study) -> tuple[Labels, list[str]]:
    """Zone labels as the study lists them, with the site in front if it says so, and each without the site."""
    zones = Labels.of(rows.piece.column(study.logs.columns.zone))
    site = study.logs.columns.site
    if site is None or study.zones.same_across_sites is not False:
        return zones, zones.written
    sites = Labels.of(rows.piece.column(site))
    pairs, index = np.unique(sites.index * max(len(zones.written), 1) + zones.index, return_inverse=True)
    split = [(sites.written[n // len(zones.written)], zones.written[n % len(zones.written)]) for n in pairs.tolist()]
    return Labels([f"{place}: {zone}" for place, zone in split], index), [zone for _, zone in split]


def plain(rows: Rows, heading: str | None, name: str) -> NDArray[np.object_]:
    """Animal, session, tag or the like: any name, but not none. Empty throughout where the study names no such column."""
    return _plain(rows, heading, name, Names("animals", {}, {}))


def _plain(rows: Rows, heading: str | None, name: str, names: Names) -> NDArray[np.object_]:
    labels = Labels.of(rows.piece.column(heading))
    found = [names.find(text) for text in labels.written]
    if heading is not None:
        rows.problem(name, labels.where(not n for n in found), labels, f"{name} missing", "fill it in")
        rounded = labels.where(mangled.is_rounded_id(t) and names.how(t) is None for t in labels.written)
        rows.problem(name, rounded, labels, "id turned into a number", mangled.ID, "stop")
        _note_spellings(rows, name, labels, names, found)
        for reason, scan in (("look-alike letter", look_alikes), ("hidden character", hidden)):
            odd = {text: scan(text) for text in labels.written if not text.isascii() or not text.isprintable()}
            advice = {text: f"{holding(odd[text])}; one {name} spelled two ways counts as two" for text in odd}
            rows.flag(name, labels.where(bool(odd.get(text)) for text in labels.written), labels, reason, advice)
    return labels.spread(found)


def _note_spellings(rows: Rows, name: str, labels: Labels, names: Names, found: list[str | None]) -> None:
    """Note which labels were read as another name: a matter of spelling, or accepted in the study."""
    how = {text: words for text in labels.written if (words := names.how(text)) is not None}
    rows.respelled(name, labels, [None if t in how else f for t, f in zip(labels.written, found, strict=True)])
    rows.repair(name, labels.where(text in how for text in labels.written), labels, "alias", how)


def who(rows: Rows, study: Study) -> tuple[NDArray[np.object_], NDArray[np.object_]]:
    """Animal and session of each row; each stands in for the other where the study names only one column."""
    columns = study.logs.columns
    animal = _plain(rows, columns.animal, "animal", Names.animals(study))
    session = plain(rows, columns.session, "session")
    if columns.animal is None:
        return session, session
    _nameless(rows, study, columns.animal)
    return animal, (animal if columns.session is None else session)


def _nameless(rows: Rows, study: Study, heading: str) -> None:
    """Rows whose animal has a label that stands for no animal in particular."""
    nameless, names = listing(study.logs.nameless), Names.animals(study)
    labels = Labels.of(rows.piece.column(heading))
    which = labels.where(key(names.find(text) or "") in nameless for text in labels.written)
    if study.analysis.unit == "session":
        rows.flag("animal", which, labels, "nameless animal", "names no animal; kept, for the session is the unit")
        return
    rows.problem("animal", which, labels, "nameless animal", _NAMELESS, study.logs.problems.nameless_animals)
