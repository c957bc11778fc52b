"""Zone names where they stand outside a zone column: headings, small tables, the study file."""

from __future__ import annotations

from niche.logs.labels import key, listing
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study


def zones_by_key(study: Study) -> dict[str, str]:
    """Listed name by `niche.logs.labels.key` of every spelling that stands for it; `OUT_OF_SIGHT` for its labels."""
    listed = listing(study.zones.names)
    known = {key(label): OUT_OF_SIGHT for label in study.logs.out_of_sight}
    aliases = {key(text): listed[key(zone)] for text, zone in study.logs.aliases.zones.items() if key(zone) in listed}
    return known | aliases | listed
