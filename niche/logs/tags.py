"""The tag table: which animal wore which tag, from when to when."""

from __future__ import annotations

from collections import defaultdict
from dataclasses import dataclass
from itertools import pairwise

from niche.logs.labels import Names
from niche.logs.small_tables import Record, SmallTable, read_small_table
from niche.study.model import Study

_EARLIEST, _LATEST = -(2**62), 2**62


@dataclass(frozen=True)
class Wearing:
    """One animal with one tag over ``[from_ms, to_ms)``, milliseconds since 1970-01-01T00:00Z."""

    animal: str
    species: str
    from_ms: int
    to_ms: int
    line: int


@dataclass(frozen=True)
class TagTable:
    """Tags by name, each with its wearings in order of time; they do not overlap."""

    file: str
    tags: dict[str, tuple[Wearing, ...]]

    def wearer(self, tag: str, ms: int) -> Wearing | None:
        """Who wore a tag at a time; None outside every validity, or for an unknown tag."""
        return next((w for w in self.tags.get(tag, ()) if w.from_ms <= ms < w.to_ms), None)


def read_tags(study: Study) -> TagTable | None:
    """The table that ``logs.tags.file`` names; None where the study names none.

    It is a CSV with the headings tag, animal and species, and valid_from and valid_to where tags were worn by turns. An
    empty end is open. A date alone as valid_from is its first moment, as valid_to its last.

    Raises
    ------
    StudyError
        The table cannot be read, names a species that the study does not list, or lets two animals wear one tag at once.
    """
    if study.logs.tags is None:
        return None
    needed, known = ("tag", "animal", "species"), ("valid_from", "valid_to")
    table = read_small_table(study, study.logs.tags.file, "logs.tags.file", needed, known)
    worn: defaultdict[str, list[Wearing]] = defaultdict(list)
    for record in table.records:
        start, end = table.instant(record, "valid_from"), table.instant(record, "valid_to", last=True)
        wearing = Wearing(
            table.named(record, "animal"),
            _species(table, record, study),
            _EARLIEST if start is None else start,
            _LATEST if end is None else end,
            record.line,
        )
        if wearing.to_ms <= wearing.from_ms:
            raise table.wrong(record, "valid_to is not after valid_from.")
        worn[table.named(record, "tag")].append(wearing)
    for tag, wearings in worn.items():
        wearings.sort(key=lambda w: w.from_ms)
        for earlier, later in pairwise(wearings):
            if later.from_ms < earlier.to_ms:
                first, second = sorted((earlier, later), key=lambda w: w.line)
                where = next(record for record in table.records if record.line == second.line)
                raise table.wrong(
                    where,
                    f"tag {tag!r} is on {second.animal!r} while it is still on {first.animal!r} (line {first.line}); "
                    "give valid_from and valid_to that do not overlap, with the time of day where the tag changed "
                    "animals within a day.",
                )
    return TagTable(table.name, {tag: tuple(wearings) for tag, wearings in worn.items()})


def _species(table: SmallTable, record: Record, study: Study) -> str:
    """Species of a line, by its listed name where the study lists species."""
    written = table.named(record, "species")
    names = Names.species(study)
    found = names.find(written)
    if found is None:
        advice = names.unknown([written], "not listed under `species`")[written]
        raise table.wrong(record, f"species {written!r}: {advice}.")
    return found
