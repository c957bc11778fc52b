"""What makes two spellings of a name the same: nothing but case, spaces and Unicode form."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable


def tidy(text: str) -> str:
    """Compatibility form (NFKC), trimmed, single spaces; letters keep their case."""
    return " ".join(unicodedata.normalize("NFKC", text).split())


def key(text: str) -> str:
    """What two spellings of one name share."""
    return tidy(text).casefold()


def listing(names: Iterable[str]) -> dict[str, str]:
    """Look-up table from `key` to the name as listed."""
    return {key(name): name for name in names}
