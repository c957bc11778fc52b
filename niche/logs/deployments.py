"""The deployments table: where each camera stood, from when to when."""

from __future__ import annotations

from dataclasses import dataclass

from niche.logs.labels import key as label_key
from niche.logs.labels import listing, propose
from niche.logs.small_tables import read_small_table
from niche.logs.zone_names import zones_by_key
from niche.study.model import Study


@dataclass(frozen=True)
class Deployment:
    """One camera in one zone over ``[start_ms, end_ms)``, milliseconds since 1970-01-01T00:00Z; None is not known."""

    zone: str
    start_ms: int | None
    end_ms: int | None


def read_deployments(study: Study) -> dict[str, Deployment]:
    """Deployments by name, as ``logs.camera.deployments`` lists them; empty where the study names no such table.

    The table is a CSV with the headings deployment and zone, and start and end, which tell the effort.

    Raises
    ------
    StudyError
        The table cannot be read, names a deployment twice or a zone that is not listed, or ends one before it starts.
    """
    file = study.logs.camera.deployments
    if file is None:
        return {}
    table = read_small_table(study, file, "logs.camera.deployments", ("deployment", "zone"), ("start", "end"))
    known = zones_by_key(study)
    found: dict[str, Deployment] = {}
    for record in table.records:
        name, zone = table.named(record, "deployment"), table.named(record, "zone")
        if name in found:
            raise table.wrong(record, f"deployment {name!r} is there already; give each its own name and line.")
        if label_key(zone) not in known:
            raise table.wrong(record, f"zone {zone!r}: no such zone; {propose(zone, listing(study.zones.names))}")
        start, end = table.instant(record, "start"), table.instant(record, "end", last=True)
        if start is not None and end is not None and end < start:
            raise table.wrong(record, f"deployment {name!r} ends before it starts.")
        found[name] = Deployment(known[label_key(zone)], start, end)
    return found
