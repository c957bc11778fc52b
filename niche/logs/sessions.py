"""The sessions table: when each watch began and ended, and who kept it."""

from __future__ import annotations

from dataclasses import dataclass

from niche.logs.small_tables import read_small_table
from niche.study.model import Study


@dataclass(frozen=True)
class Session:
    """One continuous watch, half-open: ``[start_ms, end_ms)`` in milliseconds since 1970-01-01T00:00Z."""

    start_ms: int
    end_ms: int | None
    """None where the table leaves the end empty."""
    observer: str


def read_sessions(study: Study) -> dict[str, Session]:
    """Sessions by name, as ``logs.sessions.file`` lists them; empty where the study names no such table.

    The table is a CSV with the headings session, start and end, and observer where known; times as ISO 8601. Names are
    trimmed, with single spaces, as they are in the logs.

    Raises
    ------
    StudyError
        The table cannot be read, names a session twice, leaves a start empty, or ends a session before it starts.
    """
    if study.logs.sessions is None:
        return {}
    table = read_small_table(
        study, study.logs.sessions.file, "logs.sessions.file", ("session", "start", "end"), ("observer",)
    )
    sessions: dict[str, Session] = {}
    lines: dict[str, int] = {}
    for record in table.records:
        name = table.named(record, "session")
        if name in sessions:
            raise table.wrong(record, f"session {name!r} stands on line {lines[name]} already; each has one line.")
        table.named(record, "start")
        start, end = table.instant(record, "start"), table.instant(record, "end")
        assert start is not None  # the cell is filled
        if end is not None and end < start:
            raise table.wrong(
                record, f"session {name!r} ends {record.cells['end']}, before it starts {record.cells['start']}."
            )
        lines[name] = record.line
        sessions[name] = Session(start, end, record.cells.get("observer", ""))
    return sessions
