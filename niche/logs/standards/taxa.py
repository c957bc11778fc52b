"""The species of a row, from the terms that name a taxon."""

from __future__ import annotations

from niche.errors import LogError
from niche.logs.labels import key, listing, tidy
from niche.logs.ledger import Entry
from niche.logs.pieces import Piece
from niche.study.model import Study


class Taxa:
    """Finds species by ``scientificName`` or ``vernacularName``; a species of the study is known by either of its names."""

    def __init__(self, study: Study) -> None:
        self._study = study
        self._listed = listing(species.name for species in study.species)
        by_science = {key(s.scientific_name): s.name for s in study.species if s.scientific_name is not None}
        # An alias stays as written, for the rule to read and to note.
        aliases = {key(written): written for written in study.logs.aliases.species}
        self._known = {**aliases, **by_science, **self._listed}

    def names(self, cells: dict[str, list[str]], raw: Piece, found: dict[int, list[Entry]]) -> list[str]:
        """Species of each row by its listed name where the study lists it, else as written.

        Raises
        ------
        LogError
            No column names a taxon.
        """
        if self._study.logs.columns.species != "species":
            return [""] * len(raw.rows)
        science, common = cells.get("scientificName"), cells.get("vernacularName")
        if science is None and common is None:
            if "species" in cells:
                return cells["species"]
            raise LogError(
                f"{raw.file}: line 1: no heading scientificName or vernacularName, so nothing tells the species. Name the "
                "column as `logs.columns.species`."
            )
        nothing = [""] * len(raw.rows)
        authors, doubts = (
            cells.get(term) or nothing for term in ("scientificNameAuthorship", "identificationQualifier")
        )
        names: list[str] = []
        seen: dict[tuple[str, ...], tuple[str, bool]] = {}
        for position, row in enumerate(zip(science or nothing, common or nothing, authors, doubts, strict=True)):
            if row not in seen:
                seen[row] = self._name(*row)
            name, clash = seen[row]
            names.append(name)
            if clash:
                self._tell(raw, position, row, found)
        return names

    def _name(self, science: str, common: str, author: str, doubt: str) -> tuple[str, bool]:
        """Name of the species, and whether the two names of the row mean two species."""
        science = tidy(science)
        if author and science.endswith(tidy(author)):
            science = science.removesuffix(tidy(author)).strip()
        found = [self._known.get(key(text)) for text in (science, common)]
        if doubt.strip():
            # A doubtful animal is none of the listed species until a person says so.
            return tidy(f"{science or common} ({doubt})"), False
        clash = None not in found and found[0] != found[1]
        return found[0] or found[1] or science or common, clash

    def _tell(self, raw: Piece, position: int, row: tuple[str, ...], found: dict[int, list[Entry]]) -> None:
        problem = f"scientificName {row[0]!r} and vernacularName {row[1]!r} are two species of the study; correct one"
        entry = Entry(
            raw.file,
            int(raw.rows[position]),
            "scientificName",
            row[0],
            "two species in one row",
            problem,
            self._study.logs.problems.unknown_species,
        )
        found.setdefault(position, []).append(entry)
