"""When two spellings are one name.

Two names are the same if they agree after Unicode compatibility form (NFKC), trimming, single spaces and case folding.
"""

from __future__ import annotations

import unicodedata
from collections import Counter
from collections.abc import Iterable


def tidy(text: str) -> str:
    """Compatibility form, trimmed, single spaces; letters keep their case."""
    return " ".join(unicodedata.normalize("NFKC", text).split())


def key(text: str) -> str:
    """What two spellings of one name share."""
    return tidy(text).casefold()


def named_twice(names: Iterable[str]) -> str | None:
    """The first name of which another is a mere spelling, or None."""
    listed = list(names)
    times = Counter(key(name) for name in listed)
    return next((name for name in listed if times[key(name)] > 1), None)


def badly_spaced(names: Iterable[str]) -> str | None:
    """The first name with spaces at an end, in a row, or of another kind than the plain one; or None."""
    return next((name for name in names if name != " ".join(name.split())), None)
