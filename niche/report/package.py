"""``datapackage.json``: what each table and each column holds, in the words of the Data Package standard, version 2."""

from __future__ import annotations

import hashlib
import re
import unicodedata
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

import pandas as pd
from pandas.api import types

from niche.cautions import BY_TABLE, SCOPE
from niche.tables import DESCRIPTIONS

if TYPE_CHECKING:
    from niche.study import Study

PROFILE = "https://datapackage.org/profiles/2.0/datapackage.json"

TITLES = {
    "usage": "Use of each zone by each species",
    "breadth": "Niche breadth of each species",
    "overlap": "Overlap of each pair of species",
    "coefficients": "Competition coefficients and coexistence window of each pair",
    "outcome": "Outcome of the two-species scenario by pair",
    "draws": "Resamples without a value or at the edge of the range",
    "effort": "Effort by species",
    "effort_by_day": "Hours in view on each date",
    "ledger": "What became of each row of the logs",
    "capacity": "Carrying capacities given in the study",
    "assumptions": "Assumptions, each as met, not met or unknown",
    "inputs": "Log files read",
}

_OWN = {
    "animals": "Animals seen.",
    "sessions": "Watch sessions.",
    "visits": "Stays in a zone.",
    "zones_used": "Zones in which the species was seen.",
    "seconds_in_view": "Time in a zone, in seconds.",
    "seconds_out_of_sight": "Time out of sight, in seconds.",
    "most_watched_share": "Share of the time in view that the most-watched animal makes up, 0 to 1.",
    "seconds_least": "Time in view of the least-watched animal, in seconds.",
    "seconds_median": "Median time in view of an animal, in seconds.",
    "seconds_most": "Time in view of the most-watched animal, in seconds.",
    "date": "Date on which the visit began, in the time zone of the study.",
    "hours": "Time in view, in hours; empty where use is not measured in time.",
    "seen": "How many were seen, where use is not measured in time.",
    "k_low": "Lower end of the range of carrying capacity, in individuals or any density.",
    "k_high": "Upper end of the range of carrying capacity, in individuals or any density.",
    "distribution": "How values are drawn between the ends.",
    "source": "Where the range comes from.",
    "assumption": "What the results rest on.",
    "standing": "met, not met or unknown.",
    "why": "What the logs and the study say about it.",
    "rows": "Rows below the header.",
    "bytes": "Size of the file.",
    "sha256": "SHA-256 of the file.",
}

_OF_TABLE = {("ledger", "seconds"): "Time of the row, or of the rows counted, in seconds."}

_CELLS = "An empty cell is a value that is not defined. Text that begins with = + - or @ has an apostrophe in front."


def data_package(study: Study, tables: Mapping[str, pd.DataFrame], paths: Mapping[str, Path], created: str) -> Any:
    """The descriptor of a folder of tables, ready for JSON.

    Parameters
    ----------
    study : Study
    tables : mapping of name to DataFrame
    paths : mapping of name to Path
        Where each table was written: a file in a folder beside the descriptor.
    created : str
        RFC 3339 time.
    """
    note = f" {study.note}" if study.note else ""
    return {
        "$schema": PROFILE,
        "name": slug(study.title),
        "title": study.title,
        "description": f"Use of zones by watched animals, and what follows from it.{note} {SCOPE}",
        "created": created,
        "resources": [_resource(name, tables[name], path, study) for name, path in paths.items()],
    }


def slug(title: str) -> str:
    """A title as a name for machines: lower-case letters, digits and hyphens."""
    plain = unicodedata.normalize("NFKD", title).encode("ascii", "ignore").decode().lower()
    return re.sub(r"[^a-z0-9]+", "-", plain).strip("-") or "study"


def describe(table: str, column: str) -> str:
    """What a column of a table holds."""
    return _OF_TABLE.get((table, column)) or DESCRIPTIONS.get(column) or _OWN[column]


def _resource(name: str, frame: pd.DataFrame, path: Path, study: Study) -> dict[str, Any]:
    content = path.read_bytes()
    cautions = BY_TABLE.get(name, (SCOPE,))
    return {
        "name": name,
        "path": f"{path.parent.name}/{path.name}",
        "type": "table",
        "title": TITLES[name],
        "description": " ".join([f"{TITLES[name]}.", *([study.note] if study.note else []), *cautions, _CELLS]),
        "format": "csv",
        "mediatype": "text/csv",
        "encoding": "utf-8",
        "bytes": len(content),
        "hash": f"sha256:{hashlib.sha256(content).hexdigest()}",
        "dialect": {"delimiter": ",", "lineTerminator": "\r\n", "quoteChar": '"', "doubleQuote": True},
        "schema": {
            "fields": [
                {"name": column, "type": _type(column, frame[column]), "description": describe(name, column)}
                for column in frame.columns
            ],
            "missingValues": [""],
        },
    }


def _type(name: str, column: pd.Series[Any]) -> str:
    if name == "date":
        return "date"
    if types.is_bool_dtype(column) or name == "core":
        return "boolean"
    if types.is_integer_dtype(column):
        return "integer"
    return "number" if types.is_float_dtype(column) else "string"
