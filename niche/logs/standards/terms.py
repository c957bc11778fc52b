"""Darwin Core terms that the program reads or writes, by their names in the term lists of 2025-07-10 and 2026-05-26."""

from __future__ import annotations

import re
from collections.abc import Iterable

from niche.errors import LogError

DWC = "http://rs.tdwg.org/dwc/terms/"
ECO = "http://rs.tdwg.org/eco/terms/"
EVENT, OCCURRENCE = f"{DWC}Event", f"{DWC}Occurrence"

ZONE_TERMS = ("habitat", "locationID", "locality")
"""What can carry the zone, the likeliest first."""

READ = (
    "scientificName", "scientificNameAuthorship", "vernacularName", "identificationQualifier", "organismID",
    "organismScope", "eventID", "parentEventID", "habitat", "locationID", "locality", "eventDate", "eventTime",
    "sampleSizeValue", "sampleSizeUnit", "individualCount", "organismQuantity", "organismQuantityType",
    "occurrenceID", "occurrenceStatus", "recordedBy",
)  # fmt: skip
"""Terms that decide something; every other column is carried along."""

INHERITED = (
    "habitat", "locationID", "locality", "verbatimLocality", "siteNumber", "samplingProtocol", "decimalLatitude",
    "decimalLongitude", "geodeticDatum", "coordinateUncertaintyInMeters",
)  # fmt: skip
"""What an event has from its parent where it says nothing itself; dates too, but those with a note."""

PRESENCE = {"": True, "present": True, "detected": True, "absent": False, "notdetected": False}
"""``occurrenceStatus`` in lower case, in the words of both term lists, to whether an animal was there."""

SINGLE = ("", "multicellular organism", "organism", "individual", "single organism")
"""``organismScope`` of one animal; others, such as a pack, tell of several."""

_PREFIX = re.compile(r"^(?:dwc|dcterms|dc|eco|ac):|^https?://\S*[/#]", re.IGNORECASE)
_BY_LOWER = {term.lower(): term for term in (*READ, *INHERITED)}


def term_of(heading: str) -> str:
    """The term that a heading names, without namespace and in the standard's own capitals; other headings as they are."""
    bare = _PREFIX.sub("", heading.strip())
    return _BY_LOWER.get(bare.lower(), bare or heading)


def terms_of(headings: Iterable[str], label: str) -> dict[str, str]:
    """Term to heading.

    Raises
    ------
    LogError
        Two headings name one term.
    """
    found: dict[str, str] = {}
    for heading in headings:
        term = term_of(heading)
        if term in found:
            raise LogError(
                f"{label}: the headings {found[term]!r} and {heading!r} are the same term of Darwin Core. Keep one of them."
            )
        found[term] = heading
    return found
