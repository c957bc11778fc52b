"""What `niche check` prints: what became of the rows and the time, then every problem."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from niche.logs import Log

_SUM_LABELS = {
    "read": "read",
    "used": "used",
    "out_of_sight": "out of sight",
    "set_aside": "set aside",
    "stop": "stops the work",
}

_HEADINGS = {
    "stop": "Stops the work",
    "set_aside": "Set aside",
    "repaired": "Repaired",
    "flagged": "Used, but look again",
}


def summary(log: Log) -> str:
    """The whole text of a check."""
    return "\n".join([*_sums(log), "", *_problems(log)]) + "\n"


def _sums(log: Log) -> Iterator[str]:
    files = len(log.files)
    yield f"{files} file{'' if files == 1 else 's'}"
    yield ""
    yield f"{'':<16}{'rows':>10}{'seconds':>16}"
    for name, rows, milliseconds in log.ledger.sums():
        yield f"{_SUM_LABELS[name]:<16}{rows:>10}{_seconds(milliseconds):>16}"
    yield ""
    yield "Rows and time close: what was read is used, out of sight, set aside, or stops the work."
    yield "A row whose time cannot be read counts as a row without time."


def _seconds(milliseconds: int) -> str:
    """Seconds exactly, to the millisecond where there are any."""
    whole, rest = divmod(milliseconds, 1000)
    return f"{whole}.{rest:03d}" if rest else str(whole)


def _problems(log: Log) -> Iterator[str]:
    found = False
    for action, heading in _HEADINGS.items():
        entries = sorted((e for e in log.ledger.entries if e.action == action), key=lambda e: (e.file, e.row or 0))
        if not entries:
            continue
        found = True
        yield f"{heading} ({len(entries)})"
        for entry in entries:
            place = f"{entry.file}: " if entry.row is None else f"{entry.file}, row {entry.row}: "
            what = f"{entry.field} {entry.value!r}: " if entry.field else (f"{entry.value!r}: " if entry.value else "")
            yield f"  {place}{what}{entry.problem}"
        yield ""
    if not found:
        yield "No problem found."
