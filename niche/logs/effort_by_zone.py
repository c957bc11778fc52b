"""Effort by zone, as far as a log tells: which zones were looked at, and how much.

It is needed to tell three kinds of zero apart: a zone that was not looked at, one that was not there, one that was not
used. Where a watched animal is followed, every zone is looked at as soon as the animal goes there, so bouts and switches
tell nothing here.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import pandas as pd

if TYPE_CHECKING:
    from collections.abc import Mapping

    from niche.logs.deployments import Deployment
    from niche.logs.rules import Rule
    from niche.study.model import Study

COLUMNS = ("zone", "looked_at", "effort", "unit", "basis")
"""Zone; whether it was looked at; how much, NaN where that is not known; in seconds or scans; what this rests on."""


def effort_by_zone(study: Study, rule: Rule) -> pd.DataFrame | None:
    """Effort of each zone after all logs have been read.

    Parameters
    ----------
    study : Study
    rule : Rule
        The recording rule, once it has finished.

    Returns
    -------
    DataFrame or None
        A row a zone, in the order of the layout, with `COLUMNS`; None where the log does not tell.
    """
    from niche.logs.rules.camera import Camera
    from niche.logs.rules.reads import Reads
    from niche.logs.rules.scans import Scans
    from niche.logs.rules.tallies import Tallies
    from niche.logs.standards.camtrap import package_deployments
    from niche.logs.standards.saved_effort import saved_effort

    zones = study.zones.names
    if (saved := saved_effort(study)) is not None:
        return saved
    if study.logs.file.standard == "camtrap-dp":
        return _of_deployments(zones, package_deployments(study))
    match rule:
        case Scans(looked=pd.DataFrame() as looked):
            return _of_scans(zones, looked)
        case Camera() if rule.deployments:
            return _of_deployments(zones, rule.deployments)
        case Reads() if rule.spans:
            return _of_antennas(zones, rule.spans, set(rule.zones.values()))
        case Tallies():
            looked_at = rule.columns.looked
            rows = [(zone, zone in looked_at, math.nan if zone in looked_at else 0.0, "s") for zone in zones]
            return _table(rows, "whether the tally sheet has a column for the zone")
    return None


def _of_scans(zones: tuple[str, ...], looked: pd.DataFrame) -> pd.DataFrame:
    """Scans of each zone: those that name it, where empty scans are written zone by zone; else every scan."""
    moments = looked[["session", "time"]].drop_duplicates()
    if (looked["empty"] & (looked["zone"] != "")).any():
        named = looked[looked["zone"] != ""].drop_duplicates(["session", "time", "zone"])["zone"].value_counts()
        rows = [(zone, zone in named.index, float(named.get(zone, 0)), "scans") for zone in zones]
        return _table(rows, "scans that name the zone, with animals in it or empty")
    return _table([(zone, True, float(len(moments)), "scans") for zone in zones], "every scan takes in all zones")


def _of_antennas(zones: tuple[str, ...], spans: Mapping[str, tuple[int, int]], mapped: set[str]) -> pd.DataFrame:
    """Time from the first to the last read in each zone; an antenna that read nothing may have stood there all the same."""
    seconds = {zone: (last - first) / 1000 for zone, (first, last) in spans.items()}
    rows = []
    for zone in zones:
        there = zone in mapped or zone in seconds
        rows.append((zone, there, seconds.get(zone, math.nan if there else 0.0), "s"))
    return _table(rows, "first to last read of any tag in the zone: the least that it can be")


def _of_deployments(zones: tuple[str, ...], deployments: Mapping[str, Deployment]) -> pd.DataFrame:
    """Time that cameras stood in each zone."""
    seconds: dict[str, float] = {}
    for place in deployments.values():
        length = math.nan
        if place.start_ms is not None and place.end_ms is not None:
            length = (place.end_ms - place.start_ms) / 1000
        seconds[place.zone] = seconds.get(place.zone, 0.0) + length
    rows = [(zone, zone in seconds, seconds.get(zone, 0.0), "s") for zone in zones]
    return _table(rows, "time that cameras stood in the zone, by the deployments table")


def _table(rows: list[tuple[str, bool, float, str]], basis: str) -> pd.DataFrame:
    return pd.DataFrame([(*row, basis) for row in rows], columns=list(COLUMNS))
