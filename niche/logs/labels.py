"""Names of zones, species and animals as written to names as listed.

Two labels are the same if they agree after Unicode compatibility form (NFKC), trimming, single spaces and case folding.
That repair is safe and is noted. A name that is merely close is proposed in the message, and never applied: a person who
accepts it writes it into ``logs.aliases`` of the study file.
"""

from __future__ import annotations

import difflib
import json
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Literal

import numpy as np
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.logs.characters import hidden, holding, look_alikes, peculiar
from niche.study.model import Study
from niche.study.names import key, listing, tidy

__all__ = ["Labels", "Names", "alias_line", "key", "listing", "propose", "tidy", "toml_text"]

_LONGEST = 80
"""A longer label is no slip of a name: nothing close is looked for."""

_MOST = 200
"""Unknown spellings of a piece that are compared with the list; beyond, the log and the list have little in common."""


@dataclass(frozen=True)
class Labels:
    """A column of labels: each distinct spelling once, and which one each row has."""

    written: list[str]
    index: NDArray[np.int64]

    @classmethod
    def of(cls, column: Any) -> Labels:
        """Labels of a pyarrow string array."""
        coded = pc.dictionary_encode(column)
        return cls(coded.dictionary.to_pylist(), np.asarray(coded.indices, dtype=np.int64))

    def at(self, position: int) -> str:
        """The label of a row as written."""
        return self.written[int(self.index[position])]

    def spread(self, values: Iterable[Any]) -> NDArray[np.object_]:
        """Give every row the value that belongs to its spelling."""
        array = np.empty(len(self.written), dtype=object)
        array[:] = list(values)
        return array[self.index]

    def where(self, chosen: Iterable[bool]) -> NDArray[np.bool_]:
        """Rows whose spelling is among the chosen."""
        return np.array(list(chosen), dtype=bool)[self.index]


@dataclass(frozen=True)
class Names:
    """Names that a study lists, and the spellings that it accepts for them.

    Attributes
    ----------
    table : {"zones", "species", "animals"}
        The table of ``logs.aliases`` that goes with them.
    listed : dict
        `key` to listed name; empty where any name may stand.
    aliases : dict
        `key` of an accepted spelling to the name that it stands for.
    synonyms : dict
        `key` of a scientific name to the species it belongs to.
    """

    table: Literal["zones", "species", "animals"]
    listed: dict[str, str]
    aliases: dict[str, str]
    synonyms: dict[str, str] = field(default_factory=dict)

    @classmethod
    def zones(cls, study: Study) -> Names:
        """Zones of the layout, and labels for out of sight."""
        listed = listing([*study.zones.names, *study.logs.out_of_sight])
        return cls("zones", listed, _aliases(study.logs.aliases.zones, listed))

    @classmethod
    def species(cls, study: Study) -> Names:
        """Species of the study, also by their scientific names."""
        listed = listing(s.name for s in study.species)
        synonyms = {key(s.scientific_name): s.name for s in study.species if s.scientific_name}
        return cls("species", listed, _aliases(study.logs.aliases.species, listed), synonyms)

    @classmethod
    def animals(cls, study: Study) -> Names:
        """Animals, of which there is no list."""
        return cls("animals", {}, _aliases(study.logs.aliases.animals, {}))

    def find(self, text: str) -> str | None:
        """The listed name that a label stands for; None if there is none. Where there is no list, any name stands."""
        spelling = key(text)
        found = self.listed.get(spelling) or self.aliases.get(spelling) or self.synonyms.get(spelling)
        return found if found or self.listed else tidy(text)

    def how(self, text: str) -> str | None:
        """Why a label stands for another name than its own: words for a note, None where it does not."""
        spelling, found = key(text), self.find(text)
        if found is None or spelling in self.listed:
            return None
        if spelling in self.aliases:
            return f"read as {found!r}, by logs.aliases.{self.table}"
        return f"read as {found!r}, whose scientific name it is" if spelling in self.synonyms else None

    def unknown(self, texts: Sequence[str], rule: str) -> dict[str, str]:
        """Messages about labels that stand for nothing listed: the rule, what is close, peculiar letters, the remedy."""
        return {text: f"{rule}; {self._advice(text, number < _MOST)}" for number, text in enumerate(texts)}

    def _advice(self, text: str, look: bool) -> str:
        close = _closest(text, self.listed) if look else None
        odd = peculiar(text, self.listed.values())
        letters = f" It {holding(odd)}." if odd else ""
        table = f"`logs.aliases.{self.table}`"
        if close is not None:
            line = alias_line(text, close)
            return f"did you mean {close!r}?{letters} Mend the log, or accept the name under {table}: {line}"
        return (
            f"{_list(self.listed)}.{letters} Mend the log, add the name to the study, or say under {table} which name it "
            "stands for"
        )


def alias_line(text: str, name: str) -> str:
    """The line of a table of aliases that makes one name stand for another, as TOML.

    Characters that cannot be seen or told apart stand as their code points, so that the line can be copied.
    """
    return f"{toml_text(text)} = {toml_text(name)}"


def toml_text(text: str) -> str:
    """Text in quotes as TOML wants it."""
    quoted = json.dumps(text, ensure_ascii=False)
    for character in {*hidden(text), *look_alikes(text)}:
        if character in quoted:
            code = ord(character)
            quoted = quoted.replace(character, f"\\u{code:04X}" if code < 0x10000 else f"\\U{code:08X}")
    return quoted


def propose(text: str, names: Mapping[str, str]) -> str:
    """Words that name the closest listed name, or what is allowed."""
    close = _closest(text, names)
    return _list(names) if close is None else f"did you mean {close!r}?"


def _closest(text: str, names: Mapping[str, str]) -> str | None:
    spelling = key(text)
    if len(spelling) > _LONGEST:
        return None
    close = difflib.get_close_matches(spelling, list(names), n=1, cutoff=0.75)
    return names[close[0]] if close else None


def _list(names: Mapping[str, str]) -> str:
    listed = ", ".join(names.values())
    return f"listed are: {listed if len(listed) <= 160 else listed[:157] + '...'}"


def _aliases(given: Mapping[str, str], listed: Mapping[str, str]) -> dict[str, str]:
    """Aliases by `key`; a target gets the spelling of the list."""
    return {key(text): listed.get(key(name), tidy(name)) for text, name in given.items()}
