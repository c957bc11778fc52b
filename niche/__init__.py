"""How species divide their habitat: from a raw log of zones used to overlap, competition and a report.

From Python, without files::

    usage = niche.Usage.from_units({"dunlin": a, "redshank": b}, zones=[...])
    result = niche.analyse(usage, resamples=9999, confidence=0.95, seed=1)
    result.overlap["pianka"].value, result.table("overlap")
    niche.outcome(alpha=0.6, beta=0.4, k1=900, k2=700)

Overlap is similarity of use, not competition; an outcome is a scenario under a model, not a forecast.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from niche.analysis import Analysis, analyse, run_study
    from niche.dynamics import outcome
    from niche.errors import NicheError, NicheWarning
    from niche.logs import read_logs
    from niche.study import read_study
    from niche.usage import Usage

__version__ = "0.1.0"

__all__ = [
    "Analysis",
    "NicheError",
    "NicheWarning",
    "Usage",
    "analyse",
    "outcome",
    "read_logs",
    "read_study",
    "run_study",
]

_HOME = {
    "Analysis": "niche.analysis",
    "NicheError": "niche.errors",
    "NicheWarning": "niche.errors",
    "Usage": "niche.usage",
    "analyse": "niche.analysis",
    "outcome": "niche.dynamics",
    "read_logs": "niche.logs",
    "read_study": "niche.study",
    "run_study": "niche.analysis",
}


def __getattr__(name: str) -> Any:
    """Fetch a public name when it is first asked for: the command line must start without NumPy and pandas."""
    if name in _HOME:
        return getattr(import_module(_HOME[name]), name)
    raise AttributeError(f"module 'niche' has no attribute {name!r}")
