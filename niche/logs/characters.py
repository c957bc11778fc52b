"""Characters that look like others or like nothing: found by code point, named, never replaced by guess."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable

_WORD = re.compile(r"[^\W\d_]+")
_MICRO = "\u03bc"
"""Greek mu is also the sign for micro, as in μm, and poses as no Latin letter."""


def described(character: str) -> str:
    """Code point and Unicode name, such as ``U+043E CYRILLIC SMALL LETTER O``."""
    return f"U+{ord(character):04X} {unicodedata.name(character, 'without a name')}"


def look_alikes(text: str) -> list[str]:
    """Cyrillic and Greek letters inside a word that also has Latin letters, each once."""
    if text.isascii():
        return []
    found: dict[str, None] = {}
    for word in _WORD.findall(unicodedata.normalize("NFKC", text)):
        scripts = {letter: _script(letter) for letter in word}
        if "LATIN" in scripts.values():
            odd = [c for c, script in scripts.items() if script in ("CYRILLIC", "GREEK") and c != _MICRO]
            found.update(dict.fromkeys(odd))
    return list(found)


def hidden(text: str) -> list[str]:
    """Characters that show nothing and are no space, each once: zero-width ones, byte-order marks, control codes."""
    if text.isascii() and text.isprintable():
        return []
    inside = " ".join(text.split())  # what is a space is told as a matter of spelling
    return list(dict.fromkeys(c for c in inside if unicodedata.category(c) in ("Cf", "Cc", "Co", "Cn")))


def peculiar(text: str, names: Iterable[str]) -> list[str]:
    """Characters of an unknown name that no listed name has, and that a reader may take for others."""
    if text.isascii() and text.isprintable():
        return []
    known = set().union(*(unicodedata.normalize("NFKC", name).casefold() for name in names))
    found = dict.fromkeys(hidden(text))
    for character in " ".join(unicodedata.normalize("NFKC", text).split()):
        odd = _script(character) in ("CYRILLIC", "GREEK") or unicodedata.category(character) in ("Pi", "Pf", "Pd")
        if odd and not character.isascii() and character.casefold() not in known:
            found[character] = None
    return list(found)


def holding(characters: Iterable[str], most: int = 3) -> str:
    """Words that name characters, the first few of many."""
    names = [described(character) for character in characters]
    return "holds " + ", ".join(names[:most]) + (f" and {len(names) - most} more" if len(names) > most else "")


def _script(character: str) -> str:
    """First word of the name of a letter, which is its script for those that matter here."""
    return unicodedata.name(character, "").partition(" ")[0] if character.isalpha() else ""
