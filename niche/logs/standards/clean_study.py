"""The study file that reads cleaned visits back, and TOML to write it in."""

from __future__ import annotations

import json
import re
from collections.abc import Mapping
from typing import Any

from niche.logs.standards.clean_tables import OUT_OF_SIGHT_CELL, has, has_counts, rule_of, zone_term
from niche.study.model import Study

_BARE = re.compile(r"[A-Za-z0-9_-]+")

HEAD = """\
# Study file for the cleaned visits beside it, written by `niche check --clean`.
# Rows set aside are not in them; times are in UTC; names are spelled as the study listed them.

"""


def clean_study(study: Study) -> str:
    """Text of a study file that reads ``visits.csv`` and its descriptor to the same usage.

    What the logs were asked (policies, aliases, clocks) is settled in the cleaned visits and not asked again; zones,
    species and settings are the study's own.
    """
    whole = study.model_dump(mode="python", exclude_none=True, exclude_defaults=True)
    whole.pop("logs", None)
    logs: dict[str, Any] = {
        "files": ["visits.csv"],
        "rule": rule_of(study),
        "out_of_sight": [OUT_OF_SIGHT_CELL],
        "nameless": [],
        "columns": _columns(study),
        "file": {"descriptor": "datapackage.json"},
    }
    if study.logs.time_zone is not None:
        logs["time_zone"] = study.logs.time_zone
    if study.logs.rule == "tallies" and study.logs.tallies is not None:
        unit = study.logs.tallies.unit
        logs["tallies"] = {"unit": "s" if unit in ("min", "h") else unit, "adds_to_100": "keep"}
    else:
        logs["file"]["standard"] = "darwin-core"
    if study.logs.rule == "camera":
        logs["camera"] = {"gap": 0.0}
    first: dict[str, Any] = {key: whole.pop(key) for key in ("title", "site", "note") if key in whole}
    return HEAD + to_toml({**first, "logs": logs, **whole})


def _columns(study: Study) -> dict[str, str]:
    columns = {
        "species": "vernacularName",
        "animal": "organismID" if has(study, "animal") else "",
        "session": "eventID" if has(study, "session") else "",
    }
    if study.logs.rule == "tallies":
        return columns
    return {
        **columns,
        "zone": zone_term(study),
        "count": "individualCount" if has_counts(study) else "",
        "observer": "",
    }


def to_toml(content: Mapping[str, Any]) -> str:
    """A mapping as TOML: text, numbers, truth values, lists, tables and lists of tables."""
    return "\n".join(_table(content, ())).strip("\n") + "\n"


def _table(content: Mapping[str, Any], path: tuple[str, ...]) -> list[str]:
    lines = [f"{_key(key)} = {_value(value)}" for key, value in content.items() if not _is_table(value)]
    for key, value in content.items():
        place = (*path, key)
        name = ".".join(map(_key, place))
        if isinstance(value, Mapping):
            lines += ["", f"[{name}]", *_table(value, place)]
        elif _is_table(value):
            for item in value:
                lines += ["", f"[[{name}]]", *_table(item, place)]
    return lines


def _is_table(value: Any) -> bool:
    return isinstance(value, Mapping) or (
        isinstance(value, (list, tuple)) and bool(value) and all(isinstance(item, Mapping) for item in value)
    )


def _key(key: str) -> str:
    return key if _BARE.fullmatch(key) else _text(key)


def _value(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, (int, float)):
        return repr(value)
    if isinstance(value, str):
        return _text(value)
    return f"[{', '.join(_value(item) for item in value)}]"


def _text(text: str) -> str:
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")
