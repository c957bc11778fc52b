"""Sheets with zones as columns: which headings are zones, which zones have no column, what the other numbers are."""

from __future__ import annotations

import difflib
from dataclasses import dataclass, field

import numpy as np
import pyarrow.compute as pc

from niche.errors import LogError
from niche.logs.labels import key, listing
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.visits import OUT_OF_SIGHT
from niche.logs.zone_names import zones_by_key
from niche.study.model import Study

_NUMBER = r"^\s*-?\d+([.,]\d+)?\s*%?\s*$"


@dataclass
class ZoneColumns:
    """Headings of each file, looked at once."""

    study: Study
    ledger: Ledger
    looked: set[str] = field(default_factory=set)
    """Zones that have a column in any file."""
    _by_file: dict[str, dict[str, str]] = field(default_factory=dict)
    _numeric: dict[tuple[str, str], bool] = field(default_factory=dict)

    def of(self, piece: Piece) -> dict[str, str]:
        """Heading of each zone that has a column; `OUT_OF_SIGHT` for the column of time out of sight.

        Raises
        ------
        LogError
            No heading is a zone, two headings are the same zone, or a heading is nearly one.
        """
        if piece.file not in self._by_file:
            self._by_file[piece.file] = self._headings(piece)
        found = self._by_file[piece.file]
        named = {*self.study.logs.columns.model_dump().values(), *found.values()}
        for heading in piece.columns:
            if heading and heading not in named:
                self._look_at_numbers(piece, heading)
        return found

    def note_strangers(self) -> None:
        """Note the columns of numbers that are no zone; to be called after the last piece."""
        for (file, heading), numeric in self._numeric.items():
            if numeric:
                problem = "a column of numbers that is no zone and that `logs.columns` does not name; left out"
                self.ledger.note(Entry(file, None, "heading", heading, "numbers under no zone", problem, "flagged"))

    def _headings(self, piece: Piece) -> dict[str, str]:
        known = zones_by_key(self.study)
        found: dict[str, str] = {}
        named = set(self.study.logs.columns.model_dump().values())
        for heading in piece.columns:
            zone = known.get(key(heading))
            if zone is None or heading in named:
                continue
            if zone in found:
                raise LogError(
                    f"{piece.file}: headings {found[zone]!r} and {heading!r} are the same zone "
                    f"{zone or 'out of sight'!r}; put their numbers into one column."
                )
            found[zone] = heading
        if not found.keys() - {OUT_OF_SIGHT}:
            there = ", ".join(repr(h) for h in piece.columns if h)
            raise LogError(
                f"{piece.file}: no heading is a zone. A tally sheet has a column for each zone, headed by its name as the "
                f"study lists it: {', '.join(self.study.zones.names)}. Headings there: {there}."
            )
        self._refuse_near_misses(piece, {*named, *found.values()}, set(found))
        for zone in self.study.zones.names:
            if zone not in found:
                problem = f"no column for zone {zone!r}: it counts as not looked at"
                self.ledger.note(Entry(piece.file, None, "zone", zone, "zone without a column", problem, "flagged"))
        self.looked |= found.keys() - {OUT_OF_SIGHT}
        return found

    def _refuse_near_misses(self, piece: Piece, named: set[str], found: set[str]) -> None:
        """A heading close to a zone that has no column is most likely that zone, and its numbers would be lost."""
        missing = listing(zone for zone in self.study.zones.names if zone not in found)
        if self.study.logs.problems.unknown_zone != "stop":
            return
        for heading in piece.columns:
            close = difflib.get_close_matches(key(heading), list(missing), n=1, cutoff=0.75)
            if close and heading not in named:
                zone = missing[close[0]]
                raise LogError(
                    f"{piece.file}: heading {heading!r} is no zone; did you mean {zone!r}? Correct the heading, say "
                    f'`"{heading}" = "{zone}"` under `logs.aliases.zones`, or set `logs.problems.unknown_zone` to '
                    '"set_aside" to leave the column out.'
                )

    def _look_at_numbers(self, piece: Piece, heading: str) -> None:
        column = piece.columns[heading]
        filled = np.asarray(pc.not_equal(pc.utf8_trim_whitespace(column), ""))
        if filled.any():
            numbers = np.asarray(pc.match_substring_regex(column, _NUMBER))
            place = (piece.file, heading)
            self._numeric[place] = self._numeric.get(place, True) and bool(numbers[filled].all())
