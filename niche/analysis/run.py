"""A study from its file to its results: read the logs, tally, analyse."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass

from niche.analysis.compute import analyse
from niche.analysis.results import Analysis
from niche.logs import Log, read_logs
from niche.study import Study
from niche.usage import Usage


@dataclass(frozen=True)
class Run:
    """One run over a study: what was read and what came out."""

    study: Study
    log: Log
    analysis: Analysis


def run_study(
    study: Study,
    *,
    indices: Collection[str] | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> Run:
    """Read a study's logs and analyse them by its settings.

    Parameters
    ----------
    study : Study
    indices : collection of str, optional
        What to compute (see `analyse`); everything by default.
    progress : callable, optional
        Called with resamples done and resamples in all.

    Raises
    ------
    StudyError, LogError
        A log cannot be read, or holds something that stops the work.
    """
    log = read_logs(study)
    log.require_usable()
    usage = Usage.from_visits(log.visits, study, log.looked_at)
    settings = study.analysis
    analysis = analyse(
        usage,
        resamples=settings.resamples,
        confidence=settings.confidence,
        seed=settings.seed,
        weighting=settings.weighting,
        core=settings.core,
        interval=settings.interval,
        demand={name: study.demand_of(name) for name in usage.species},
        capacity={s.name: (s.k.low, s.k.high, s.k.distribution) for s in study.species if s.k is not None},
        indices=indices,
        progress=progress,
    )
    return Run(study, log, analysis)
