"""What use is measured in, in words: a log of scans holds no hours."""

from __future__ import annotations

from typing import TYPE_CHECKING

from niche.figures.words import number

if TYPE_CHECKING:
    from niche.analysis import Run
    from niche.study.log_model import Measure

SEEN: dict[Measure, str] = {
    "time": "hours in view",
    "scans": "animals in scans",
    "events": "events at cameras",
    "counts": "animals counted",
    "percent": "rows of percentages",
    "occurrences": "ticks",
}
"""What a log holds, as a plural."""


def holds(run: Run, hours: float) -> str:
    """How much the logs hold, for a sentence."""
    measure = run.log.measure
    if measure == "time":
        return f"{number(hours, 1)} {SEEN[measure]}"
    seen = run.log.visits[run.log.visits["zone"] != ""]
    many = len(seen) if measure == "percent" else int(seen["amount"].sum())
    return f"{many:,} {SEEN[measure]}"
