"""The events of a Darwin Core archive: what an event leaves out it has from its parent, and the parent from its own."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

from niche.errors import LogError
from niche.logs.ledger import Entry, Ledger
from niche.logs.standards.terms import INHERITED

DATES = ("eventDate", "eventTime")


@dataclass
class Events:
    """Events by the id that occurrences give, each with its terms.

    Attributes
    ----------
    label : str
        The file of the events, as messages call it.
    terms : dict
        Id to the filled terms of the event.
    rows : dict
        Id to the row.
    """

    label: str
    terms: dict[str, dict[str, str]] = field(default_factory=dict)
    rows: dict[str, int] = field(default_factory=dict)
    _by_event: dict[str, str] = field(default_factory=dict)
    """``eventID``, or the id itself where an event has none, to the id."""

    def add(self, name: str, row: int, terms: dict[str, str]) -> None:
        """Add an event.

        Raises
        ------
        LogError
            An earlier event has its id, so occurrences would have two.
        """
        event = terms.get("eventID") or name
        for known, text in ((self.rows, name), (self._by_event, event)):
            if text in known:
                first = self.rows[self._by_event.get(text, text)]
                raise LogError(
                    f"{self.label}: row {row}: the event {text!r} stands in row {first} already; an id is for one."
                )
        self.terms[name], self.rows[name], self._by_event[event] = terms, row, name

    def inherit(self, ledger: Ledger) -> None:
        """Give each event what it leaves out, from the nearest event above that says it.

        Times taken from above are noted: the watch's times are seldom the bout's.

        Raises
        ------
        LogError
            Events are each other's parents.
        """
        done: set[str] = set()
        for name in self.terms:
            chain: list[str] = []
            on_chain: set[str] = set()
            current: str | None = name
            while current is not None and current not in done:
                if current in on_chain:
                    loop = " → ".join(map(repr, [*chain[chain.index(current) :][:8], current]))
                    raise LogError(
                        f"{self.label}: row {self.rows[current]}: parentEventID goes round in a circle: {loop}. An event "
                        "lies within a wider one, and no event within itself."
                    )
                chain.append(current)
                on_chain.add(current)
                current = self._parent(current, ledger)
            for child in reversed(chain):
                self._take(child, ledger)
                done.add(child)

    def _parent(self, name: str, ledger: Ledger) -> str | None:
        parent = self.terms[name].get("parentEventID")
        if parent is None:
            return None
        found = self._by_event.get(parent)
        if found is None:
            problem = "no event of the archive has this id, so nothing is inherited from it"
            ledger.note(
                Entry(self.label, self.rows[name], "parentEventID", parent, "parent not there", problem, "flagged")
            )
        return found

    def _take(self, name: str, ledger: Ledger) -> None:
        own = self.terms[name]
        above = self.terms.get(self._by_event.get(own.get("parentEventID", ""), ""), {})
        for term in INHERITED:
            if term not in own and term in above:
                own[term] = above[term]
        if not any(term in own for term in DATES) and any(term in above for term in DATES):
            own.update({term: above[term] for term in DATES if term in above})
            problem = f"the event has no date; that of {own['parentEventID']!r}, in which it lies, holds for it"
            ledger.note(Entry(self.label, self.rows[name], "eventDate", "", "date of the parent", problem, "flagged"))

    def without(self, named: Iterable[str]) -> list[str]:
        """Events that no occurrence names and that hold no other event, in the order of the file."""
        parents = {self._by_event.get(terms.get("parentEventID", ""), "") for terms in self.terms.values()}
        used = {*named, *parents}
        return [name for name in self.terms if name not in used]
