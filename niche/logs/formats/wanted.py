"""What a reader needs to know of the study while it opens one file: its name, its form, and which columns mean what."""

from __future__ import annotations

from dataclasses import dataclass

from niche.logs.labels import key
from niche.logs.ledger import Action, Entry, Ledger
from niche.study.log_model import STANDARD_COLUMNS, FileForm
from niche.study.model import Study

_NUMBERS_FOR_TIMES = ("spreadsheet", "unix_seconds", "unix_milliseconds", "elapsed", "frames")


@dataclass(frozen=True)
class Wanted:
    """One file as the study declares it.

    Attributes
    ----------
    name : str
        The file as messages and the ledger call it.
    ledger : Ledger
        Takes every row that does not reach a rule.
    form : FileForm
    fields : dict
        Field (key of ``logs.columns``) to heading, for the fields that the study names.
    known : frozenset of str
        Keys of all names that the study lists: zones, species, labels of out of sight, and their aliases.
    numbers : frozenset of str
        Fields whose cells are plain numbers.
    tallied : frozenset of str
        Keys of the headings under which tallies stand, which are numbers too.
    duration_unit : str
    """

    name: str
    ledger: Ledger
    form: FileForm
    fields: dict[str, str]
    known: frozenset[str] = frozenset()
    numbers: frozenset[str] = frozenset({"duration", "count"})
    tallied: frozenset[str] = frozenset()
    duration_unit: str = "s"

    @classmethod
    def of(cls, name: str, ledger: Ledger, study: Study | None) -> Wanted:
        """As a study declares it; without one, a file with the standard headings."""
        if study is None:
            return cls(name, ledger, FileForm(), {heading: heading for heading in STANDARD_COLUMNS})
        logs = study.logs
        fields = {field: heading for field, heading in logs.columns.model_dump().items() if isinstance(heading, str)}
        numbers = {"duration", "count"}
        if logs.clock.format in _NUMBERS_FOR_TIMES:
            numbers |= {"start", "end", "time"}
        if logs.duration_unit in ("h:m:s", "h:m", "m:s"):
            numbers -= {"duration"}
        zones = {key(zone) for zone in (*study.zones.names, *logs.aliases.zones)}
        unseen = {key(label) for label in logs.out_of_sight}
        species = {key(s.name) for s in study.species} | {key(alias) for alias in logs.aliases.species}
        tallied = zones | unseen if logs.rule == "tallies" else set()
        return cls(
            name,
            ledger,
            logs.file,
            fields,
            frozenset(zones | unseen | species),
            frozenset(numbers),
            frozenset(tallied),
            logs.duration_unit,
        )

    def field_of(self, heading: str) -> str:
        """Field that a heading stands for; the heading itself where the study gives it no meaning."""
        return next((field for field, named in self.fields.items() if named == heading), heading)

    def is_number(self, heading: str) -> bool:
        """Whether plain numbers are expected under a heading."""
        return self.field_of(heading) in self.numbers or key(heading) in self.tallied

    def named_in(self, headings: list[str]) -> int:
        """How many of the headings that the study names are among these."""
        return len(set(self.fields.values()) & set(headings))

    def drop(self, row: int, value: str, reason: str, problem: str, action: Action, field: str = "") -> None:
        """Account for one row that does not reach a rule."""
        self.ledger.come_in(self.name, 1)
        self.ledger.dispose([Entry(self.name, row, field, value[:80], reason, problem, action)])

    def note(
        self, row: int | None, value: str, reason: str, problem: str, action: Action = "flagged", field: str = ""
    ) -> None:
        """Add a line about the file to the ledger, which moves no row."""
        self.ledger.note(Entry(self.name, row, field, value[:80], reason, problem, action))
