"""Cleaned visits as a table under Darwin Core terms, each column described with the term that it is."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from decimal import Decimal
from typing import TYPE_CHECKING, Any

import numpy as np

from niche.errors import OutputError
from niche.logs.sessions import Session
from niche.logs.standards.terms import DWC, ECO, ZONE_TERMS
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

if TYPE_CHECKING:
    import pandas as pd

OUT_OF_SIGHT_CELL = "out of sight"
EFFORT = ("lookedAt", "samplingEffortValue", "samplingEffortUnit", "samplingEffortProtocol")
"""Columns of the zones table that tell effort."""

_MISSING = [
    {"value": "", "label": "not recorded"},
    {"value": OUT_OF_SIGHT_CELL, "label": "out of sight"},
]
_SCALE = {"s": 1000, "min": 1000, "h": 1000, "percent": 1000, "count": 1}
"""What an amount of a tally is divided by: times are written in seconds."""


@dataclass(frozen=True)
class Column:
    """A column to be written: its cells as text, and its description as a field of a Table Schema."""

    name: str
    cells: list[str]
    description: str
    type: str = "string"
    is_term: bool = True
    more: dict[str, Any] | None = None
    namespace: str = DWC

    def field(self) -> dict[str, Any]:
        """The column as a Table Schema describes it."""
        match = {"skos:exactMatch": f"{self.namespace}{self.name}"} if self.is_term else {}
        return {"name": self.name, "type": self.type, "description": self.description, **match, **(self.more or {})}


def rule_of(study: Study) -> str:
    """The recording rule by which the cleaned visits read back: stays are bouts, however they were found."""
    return "bouts" if study.logs.rule in ("switches", "reads") else study.logs.rule


def zone_term(study: Study) -> str:
    """The term that carries the zone: that of the log, else a place for antennas and cameras, a habitat for others."""
    named = study.logs.columns.zone
    if named in ZONE_TERMS:
        return str(named)
    return "locationID" if study.logs.rule in ("reads", "camera") else "habitat"


def has(study: Study, unit: str) -> bool:
    """Whether animals (sessions) have names of their own in this log."""
    return getattr(study.logs.columns, unit) is not None or study.logs.tells(unit)  # type: ignore[arg-type]


def has_counts(study: Study) -> bool:
    """Whether a visit counts animals."""
    return study.logs.rule in ("scans", "camera") and study.logs.columns.count is not None


def visit_columns(visits: pd.DataFrame, study: Study) -> list[Column]:
    """Columns of the visits table.

    Raises
    ------
    OutputError
        A visit adds another time than that between its start and its end, which no column can tell.
    """
    if study.logs.rule == "tallies":
        return _tally_columns(visits, study)
    zone = [text if text != OUT_OF_SIGHT else OUT_OF_SIGHT_CELL for text in visits["zone"].tolist()]
    columns = [*_who(visits, study), _zone(zone_term(study), zone, study)]
    if rule_of(study) == "bouts":
        if (visits["amount"] != visits["end"] - visits["start"]).any():
            raise OutputError("a visit adds another time than that from its start to its end, which cannot be saved.")
        spans = [f"{instant(s)}/{instant(e)}" for s, e in zip(visits["start"], visits["end"], strict=True)]
        description = "Start and end of the stay in UTC, as an ISO 8601 interval; the end is not part of it."
        columns.append(Column("eventDate", spans, description))
    else:
        times = [instant(time) for time in visits["start"]]
        columns.append(Column("eventDate", times, "Moment of the observation in UTC, ISO 8601.", "datetime"))
    if has_counts(study):
        counts = [str(int(amount)) for amount in visits["amount"]]
        columns.append(Column("individualCount", counts, "Number of animals.", "integer"))
    return [*columns, *_origin(visits)]


def zone_columns(study: Study, effort: pd.DataFrame | None) -> list[Column]:
    """Columns of the zones table: name, place on the map and, where known, availability and effort."""
    zones = study.zones
    places = [
        (zone, row, column)
        for row, line in zip(zones.rows, zones.layout, strict=True)
        for column, zone in zip(zones.columns, line, strict=True)
        if zone
    ]
    names, rows, columns = (list(cells) for cells in zip(*places, strict=True))
    term = zone_term(study)
    written = [
        Column(term, names, "Zone, as the visits name it.", more={"constraints": {"required": True, "unique": True}}),
        Column("row", rows, "Row of the map on which the zone lies.", is_term=False),
        Column("column", columns, "Column of the map on which the zone lies.", is_term=False),
    ]
    if zones.availability is not None:
        amounts = [repr(float(zones.availability.amounts[zone])) for zone in names]
        unit, source = zones.availability.unit, zones.availability.source
        description = f"How much of the habitat the zone makes up, in {unit}. Source: {source}"
        written.append(Column("availability", amounts, description, "number", is_term=False))
    return written if effort is None else [*written, *_effort_columns(effort)]


def _effort_columns(effort: pd.DataFrame) -> list[Column]:
    """How much each zone was looked at, in the order of the layout, under terms of the Humboldt extension."""
    looked = ["true" if seen else "false" for seen in effort["looked_at"]]
    amounts = ["" if math.isnan(amount) else repr(float(amount)) for amount in effort["effort"]]
    texts = [
        (looked, "Whether the zone was looked at.", "boolean", ""),
        (amounts, "How much it was looked at; empty where that is not known.", "number", ECO),
        (effort["unit"].tolist(), "Unit of the effort.", "string", ECO),
        (effort["basis"].tolist(), "What the effort rests on.", "string", ECO),
    ]
    return [
        Column(name, cells, description, kind, is_term=bool(namespace), namespace=namespace)
        for name, (cells, description, kind, namespace) in zip(EFFORT, texts, strict=True)
    ]


def session_columns(sessions: dict[str, Session]) -> list[Column]:
    """Columns of the sessions table."""
    spans = [instant(s.start_ms) + (f"/{instant(s.end_ms)}" if s.end_ms is not None else "") for s in sessions.values()]
    required = {"constraints": {"required": True, "unique": True}}
    return [
        Column("eventID", list(sessions), "Session: one continuous watch.", more=required),
        Column("eventDate", spans, "Start and, where known, end of the watch in UTC, ISO 8601."),
        Column("recordedBy", [s.observer for s in sessions.values()], "Who kept the log."),
    ]


def instant(milliseconds: int) -> str:
    """UTC in ISO 8601, with milliseconds only where there are any."""
    text = str(np.datetime64(int(milliseconds), "ms"))
    return text.removesuffix(".000") + "Z"


def _who(visits: pd.DataFrame, study: Study) -> list[Column]:
    required = {"constraints": {"required": True}}
    scientific = {s.name: s.scientific_name for s in study.species if s.scientific_name is not None}
    species = visits["species"].tolist()
    columns = [Column("vernacularName", species, "Species, by the name that the study gives it.", more=required)]
    if scientific and set(species) <= set(scientific):
        names = [str(scientific[name]) for name in species]
        columns.append(Column("scientificName", names, "Scientific name of the species, as the study gives it."))
    if has(study, "animal"):
        columns.append(Column("organismID", visits["animal"].tolist(), "The animal.", more=required))
    if has(study, "session"):
        what = "Deployment of the camera." if study.logs.rule == "camera" else "Session: one continuous watch."
        columns.append(Column("eventID", visits["session"].tolist(), what, more=required))
    return columns


def _zone(term: str, cells: list[str], study: Study) -> Column:
    description = f"Zone in which the animal was; {OUT_OF_SIGHT_CELL!r} where it could not be seen."
    return Column(term, cells, description, more={"categories": list(study.zones.names), "missingValues": _MISSING})


def _origin(visits: pd.DataFrame) -> list[Column]:
    return [
        Column("file", visits["file"].tolist(), "Log from which the row was read.", is_term=False),
        Column("row", [str(int(row)) for row in visits["row"]], "Row of that log.", "integer", is_term=False),
    ]


def _tally_columns(visits: pd.DataFrame, study: Study) -> list[Column]:
    """Zones as columns again, a row of the tally sheet in one row."""
    unit = study.logs.tallies.unit if study.logs.tallies is not None else "count"
    keys = list(zip(visits["file"], visits["row"], strict=True))
    first = ~visits[["file", "row"]].duplicated()
    heads = visits[first.to_numpy()]
    place = {key: number for number, key in enumerate(zip(heads["file"], heads["row"], strict=True))}
    zones = [*study.zones.names, OUT_OF_SIGHT]  # those without a column too: the effort tells which were not looked at
    amounts: dict[str, list[int]] = {zone: [0] * len(place) for zone in zones}
    for key, zone, amount in zip(keys, visits["zone"], visits["amount"], strict=True):
        amounts[zone][place[key]] += int(amount)
    what = {"count": "Number", "percent": "Percentage"}.get(unit, "Seconds")
    write = _number(_SCALE[unit])
    kind = "integer" if unit == "count" else "number"
    tallied = [
        Column(
            zone or OUT_OF_SIGHT_CELL,
            [write(amount) for amount in amounts[zone]],
            f"{what} in the zone." if zone else f"{what} out of sight.",
            kind,
            is_term=False,
        )
        for zone in zones
        if zone or any(amounts[zone])
    ]
    return [*_who(heads, study), *tallied, *_origin(heads)]


def _number(scale: int) -> Callable[[int], str]:
    return lambda amount: str(amount) if scale == 1 else format((Decimal(amount) / scale).normalize(), "f")
