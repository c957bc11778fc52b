"""Names in a study that stand for other names in it: aliases and hours of effort. Checked once the zones are known."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING

from niche.errors import StudyError
from niche.study.names import key, listing

if TYPE_CHECKING:
    from pathlib import Path

    from niche.study.model import Study


def check_names(study: Study, file: Path) -> None:
    """Raise unless every alias leads to a listed name and every zone with effort is a zone.

    Raises
    ------
    StudyError
        All problems of this kind at once, a line each.
    """
    problems = list(_problems(study))
    if problems:
        raise StudyError("\n".join(f"{file}: {line}" for line in problems))


def _problems(study: Study) -> Iterator[str]:
    aliases = study.logs.aliases
    unseen = study.logs.out_of_sight
    yield from _aliases("zones", aliases.zones, listing([*study.zones.names, *unseen]), "a zone of the layout")
    names = listing(s.name for s in study.species)
    yield from _aliases("species", aliases.species, names, "listed under `species`")
    yield from _aliases("animals", aliases.animals, {}, "")
    effort = study.zones.effort
    if effort is not None:
        zones = study.zones.names
        strangers = [zone for zone in effort if zone not in zones]
        missing = [zone for zone in zones if zone not in effort]
        if strangers:
            yield f"zones.effort: names {strangers[0]!r}, which is no zone of the layout."
        elif missing:
            yield f"zones.effort: has no hours for zone {missing[0]!r}; give them for each zone, 0 if it was not looked at."
        elif not any(effort.values()):
            yield "zones.effort: all hours are 0; at least one zone must have been looked at."
    elif study.analysis.effort == "divide":
        yield "analysis.effort: found 'divide', and there is no `zones.effort` to divide by; give the hours of each zone."


def _aliases(table: str, aliases: Mapping[str, str], listed: Mapping[str, str], where: str) -> Iterator[str]:
    """Problems of one table of aliases; ``listed`` is empty where any target may be given."""
    found: dict[str, str] = {}
    for written, target in aliases.items():
        path = f"logs.aliases.{table}.{written!r}"
        spelling = key(written)
        if not spelling:
            yield f"{path}: an alias needs letters; a blank cell is counted as missing or out of sight."
        elif spelling in listed:
            yield f"{path}: is itself {where}; an alias is another spelling, or it would rename what is listed."
        elif listed and key(target) not in listed:
            yield f"{path}: leads to {target!r}, which is not {where}. Listed are: {', '.join(listed.values())}."
        elif spelling == key(target):
            yield f"{path}: leads to itself; case and spaces never matter."
        elif found.get(spelling, target) != target:
            yield f"{path}: the same spelling, case and spaces aside, leads to {found[spelling]!r} as well."
        found[spelling] = target
    if not listed:
        for written, target in aliases.items():
            if key(target) in found and key(target) != key(written):
                yield f"logs.aliases.{table}.{written!r}: leads to {target!r}, which is an alias too; lead to the last name."
