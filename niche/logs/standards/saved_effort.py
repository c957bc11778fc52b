"""Effort by zone from cleaned visits: it was worked out from the whole log and is not worked out again."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from niche.errors import LogError
from niche.logs.standards.clean_tables import EFFORT, zone_term
from niche.logs.standards.containers import Folder, read_descriptor
from niche.logs.standards.delimited import header_of, records
from niche.logs.standards.descriptors import resource_of
from niche.logs.standards.formulas import unescape
from niche.study.model import Study

if TYPE_CHECKING:
    import pandas as pd


def saved_effort(study: Study) -> pd.DataFrame | None:
    """Effort of each zone, from the zones table of a package that `niche check --clean` wrote; None for other logs.

    Returns
    -------
    DataFrame or None
        A row a zone, in the order of the layout, with the columns of `niche.logs.effort_by_zone`.

    Raises
    ------
    LogError
        The package or its zones table cannot be read.
    """
    import pandas as pd

    name = study.logs.file.descriptor
    if name is None:
        return None
    place = Folder((study.folder / name).parent, "")
    with place.open((study.folder / name).name) as stream:
        descriptor = read_descriptor(stream, name)
    if "niche:files" not in descriptor:
        return None
    zones = resource_of(descriptor, name, "zones.csv")
    with place.open(zones.path or "zones.csv") as stream:
        found = records(stream, zones.dialect, "zones.csv")
        headings = header_of(found, zones.dialect, "zones.csv")
        cells = [dict(zip(headings, map(unescape, record), strict=False)) for _, record in found]
    if not set(EFFORT) <= set(headings):
        return None
    by_zone = {row.get(zone_term(study), ""): row for row in cells}
    missing = next((zone for zone in study.zones.names if zone not in by_zone), None)
    if missing is not None:
        raise LogError(
            f"zones.csv: no row for zone {missing!r}, which the study lists; add it, or save the visits anew."
        )
    rows = [by_zone[zone] for zone in study.zones.names]
    try:
        amounts = [float(row["samplingEffortValue"] or math.nan) for row in rows]
    except (KeyError, ValueError):
        raise LogError("zones.csv: samplingEffortValue is not a number in every row.") from None
    return pd.DataFrame(
        {
            "zone": study.zones.names,
            "looked_at": [row.get("lookedAt") == "true" for row in rows],
            "effort": amounts,
            "unit": [row.get("samplingEffortUnit", "") for row in rows],
            "basis": [row.get("samplingEffortProtocol", "") for row in rows],
        }
    )
