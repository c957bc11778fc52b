"""What a recording rule says about columns, so that a study need not: those it does without, and a bout's start."""

from __future__ import annotations

from typing import Any


def with_rule_columns(logs: Any) -> Any:
    """The ``[logs]`` table with what its rule says about columns that the study does not name.

    A bout begins in the column ``start``; for a column that the rule does without, None stands.

    A tally sheet has zones as headings and no zone column; a tag table tells animal and species of a read; a map of
    antennas or a deployments table tells the zone; at a camera animals are mostly not told apart.

    Parameters
    ----------
    logs : object
        The table as read, before it is checked; anything that is not of its form is returned as it is.
    """
    if not isinstance(logs, dict) or not isinstance(named := logs.get("columns", {}), dict):
        return logs
    absent: dict[str, str | None] = {}
    rule = logs.get("rule", "bouts")
    if rule == "bouts" and _key(logs.get("file"), "standard") is None:
        absent["start"] = "start"
    if rule == "tallies":
        absent["zone"] = None
    if rule == "reads":
        if logs.get("tags") is not None:
            absent |= {"species": None, "animal": None}
        elif "tag" in named:
            absent["animal"] = None
        if _key(logs.get("reads"), "zones"):
            absent["zone"] = None
    if rule == "camera":
        absent["animal"] = None
        if _key(logs.get("camera"), "deployments") is not None:
            absent["zone"] = None
    return {**logs, "columns": {**absent, **named}} if absent else logs


def _key(table: Any, name: str) -> Any:
    """A key of a table that may be a dict still or a checked section already."""
    return table.get(name) if isinstance(table, dict) else getattr(table, name, None)
