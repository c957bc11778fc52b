"""Columns that a log in an open standard has by itself, so that a study need not name them."""

from __future__ import annotations

from typing import Any

_COMMON = {"species": "species", "session": "session", "zone": "zone", "count": "count"}
_DARWIN_CORE = {**_COMMON, "animal": "animal", "observer": "observer"}
_CAMERA = {**_COMMON, "deployment": "deployment", "time": "time", "end": "end"}


def with_standard_columns(logs: Any) -> Any:
    """The ``[logs]`` table with the columns that its ``file.standard`` implies; what the study names itself stays.

    Parameters
    ----------
    logs : object
        The table as read, before it is checked; anything that is not of its form is returned as it is.
    """
    form = logs.get("file") if isinstance(logs, dict) else None
    standard = form.get("standard") if isinstance(form, dict) else None
    named = logs.get("columns", {}) if isinstance(logs, dict) else None
    if standard not in ("darwin-core", "camtrap-dp") or not isinstance(named, dict):
        return logs
    rule = logs.get("rule", "bouts")
    implied: dict[str, str] = dict(_CAMERA if standard == "camtrap-dp" else _DARWIN_CORE)
    if standard == "darwin-core":
        implied |= {"start": "start", "end": "end"} if rule == "bouts" else {"time": "time"}
        if rule == "camera":
            implied["deployment"] = "session"
        if rule == "reads":
            implied |= {"tag": "tag", "antenna": "antenna"}
    if "duration" in named:
        implied.pop("end", None)
    return {**logs, "columns": {**implied, **named}}
