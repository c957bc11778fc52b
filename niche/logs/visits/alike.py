"""Names without a list that are nearly alike: perhaps one animal under two names. Proposed, never applied."""

from __future__ import annotations

from collections import defaultdict

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.labels import alias_line
from niche.logs.ledger import Entry, Ledger
from niche.logs.mangled import short_ids
from niche.study.names import key

REASON = "names nearly alike"
SHORT = "zeros in front may be lost"
_RARE = 2
"""A slip of the pen happens once or twice."""
_COMMON = 10
"""The right name stands at least this many times."""
_LONGEST = 60
_SHORT_ID = 6
"""Shorter names that differ in a digit alone are taken for different numbers."""


def flag_alike(visits: pd.DataFrame, ledger: Ledger, column: str, table: str) -> None:
    """Flag names of one species that differ by one letter, a swap or case, one of them rare; and ids that are too short.

    Parameters
    ----------
    visits : DataFrame
    ledger : Ledger
    column : {"animal", "species"}
    table : {"animals", "species"}
        The table of ``logs.aliases`` that accepts them.
    """
    number, names = pd.factorize(visits[column])
    count = np.bincount(number, minlength=len(names))
    words = [str(name) for name in names]
    again = {word: other for word, other in short_ids(words).items() if other is not None}
    if again or short_ids(words):
        _flag_short(visits, number, words, ledger, column, table)
    for rare, common in _pairs(words, count.tolist()):
        if words[rare] in again:
            continue
        position = int(np.argmax(number == rare))
        row = visits.iloc[position]
        if column == "animal" and row["species"] != visits.iloc[int(np.argmax(number == common))]["species"]:
            continue
        problem = (
            f"stands {_times(count[rare])}, and {words[common]!r} {_times(count[common])}; if it is the same {column}, mend "
            f"the log or accept the name under `logs.aliases.{table}`: {alias_line(words[rare], words[common])}"
        )
        ledger.note(Entry(row["file"], int(row["row"]), column, words[rare], REASON, problem, "flagged"))


def _flag_short(
    visits: pd.DataFrame, number: NDArray[np.intp], words: list[str], ledger: Ledger, column: str, table: str
) -> None:
    for word, whole in short_ids(words).items():
        row = visits.iloc[int(np.argmax(number == words.index(word)))]
        problem = "shorter than the other ids, as if a spreadsheet had taken zeros from its front; "
        problem += (
            f"{whole!r} stands in the logs too; if it is the same {column}, accept the name under `logs.aliases.{table}`: "
            f"{alias_line(word, whole)}"
            if whole is not None
            else "compare it with where it was first written"
        )
        ledger.note(Entry(row["file"], int(row["row"]), column, word, SHORT, problem, "flagged"))


def _pairs(words: list[str], count: list[int]) -> list[tuple[int, int]]:
    """(rare, common) pairs of places in ``words``, by the letters that are left when one is taken out."""
    spelled = [key(word) for word in words]
    by_key: defaultdict[str, list[int]] = defaultdict(list)
    for place, text in enumerate(spelled):
        by_key[text].append(place)
    found: dict[int, int] = {}
    for places in by_key.values():  # the same but for case
        places.sort(key=lambda place: -count[place])
        found.update(dict.fromkeys(places[1:], places[0]))
    rare = [place for place, times in enumerate(count) if times <= _RARE and len(spelled[place]) <= _LONGEST]
    common = [place for place, times in enumerate(count) if times >= _COMMON and len(spelled[place]) <= _LONGEST]
    if rare and common:
        shortened: defaultdict[str, list[int]] = defaultdict(list)
        for place in common:
            for text in _shortened(spelled[place]):
                shortened[text].append(place)
        for place in rare:
            near = {c for text in _shortened(spelled[place]) for c in shortened.get(text, ())}
            near = {c for c in near if one_slip(spelled[place], spelled[c])}
            if near and place not in found:
                found[place] = max(near, key=lambda c: (count[c], words[c]))
    return sorted(found.items())


def _shortened(text: str) -> set[str]:
    return {text, *(text[:i] + text[i + 1 :] for i in range(len(text)))}


def one_slip(a: str, b: str) -> bool:
    """Whether one letter more, one less, one other, or two neighbours swapped make two names the same.

    In short names a digit for a digit is no slip, for that is how animals are numbered.
    """
    if a == b or abs(len(a) - len(b)) > 1:
        return False
    if len(a) > len(b):
        a, b = b, a
    i = next((n for n, (x, y) in enumerate(zip(a, b, strict=False)) if x != y), len(a))
    if len(a) < len(b):
        slip, letters = a[i:] == b[i + 1 :], b[i]
    else:
        swapped = a[i : i + 2] == b[i : i + 2][::-1] and a[i + 2 :] == b[i + 2 :]
        slip, letters = swapped or a[i + 1 :] == b[i + 1 :], a[i] + b[i]
    return slip and not (letters.isdigit() and len(b) < _SHORT_ID)


def _times(count: int) -> str:
    return "once" if count == 1 else f"{count} times"
