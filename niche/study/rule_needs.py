"""What a recording rule and a form of time cannot do without in the ``[logs]`` table."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from niche.study.log_model import Logs


def check_needs(logs: Logs) -> None:
    """Raise ValueError unless the table has what its rule, its clock and its unit of duration need."""
    columns = logs.columns
    if not logs.files and logs.file.database is None:
        raise ValueError("`files` names no log; give at least one file, or a database under `logs.file`")
    if logs.file.standard == "camtrap-dp" and logs.rule != "camera":
        raise ValueError("`file.standard` is 'camtrap-dp', which goes with rule = \"camera\": events are not stays")
    if logs.rule == "bouts":
        _bouts_have_an_end(logs)
    dated, form = columns.date is not None, logs.clock.format
    if dated and form in ("unix_seconds", "unix_milliseconds", "elapsed", "frames"):
        raise ValueError(f"`clock.format` is {form!r}, which needs no date: leave `columns.date` out")
    if form == "decimal_hours" and not dated:
        raise ValueError("`clock.format` is 'decimal_hours': name the column of the date as `columns.date`")
    if form in ("elapsed", "frames") and (logs.sessions is None or columns.session is None):
        raise ValueError(
            f"`clock.format` is {form!r}, counted from the start of each session: give `logs.sessions.file` and "
            "`columns.session`"
        )
    if logs.rule == "reads" and logs.reads is None:
        raise ValueError("the rule 'reads' needs `logs.reads.gap`: the seconds without a read that end a visit")
    if logs.rule == "tallies" and logs.tallies is None:
        raise ValueError("the rule 'tallies' needs `logs.tallies.unit`: s, min, h, percent or count")
    if logs.duration_unit == "frames" and logs.clock.frames_per_second is None:
        raise ValueError("duration_unit is 'frames': give `logs.clock.frames_per_second` too")


def _bouts_have_an_end(logs: Logs) -> None:
    columns = logs.columns
    if (needed := next((n for n in ("species", "zone", "start") if getattr(columns, n) is None), None)) is not None:
        raise ValueError(f"the rule 'bouts' needs the heading of its {needed} column as `columns.{needed}`")
    if columns.animal is None and columns.session is None:
        raise ValueError("`animal` is empty and there is no `session`; one of them must be named, as the sampling unit")
    if columns.end is not None and columns.duration is not None:
        raise ValueError("a bout ends by its `end` or its `duration` column: name one of the two under `logs.columns`")
    if columns.end is None and columns.duration is None and (logs.clock.format != "iso" or columns.date is not None):
        raise ValueError(
            "a bout ends by its `end` or its `duration` column: name one of the two under `logs.columns`. Only with "
            "`clock.format` = 'iso' and no `columns.date` may both be left out: then each start cell holds an "
            "interval such as 2026-09-03T08:15/08:40"
        )
