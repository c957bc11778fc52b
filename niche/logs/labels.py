"""Names of zones and species as written to names as listed.

Two labels are the same if they agree after Unicode compatibility form (NFKC), trimming, single spaces and case folding.
That repair is safe and is noted. A name that is merely close is proposed in the message, and never applied.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.study.names import key, tidy

__all__ = ["Labels", "key", "listing", "propose", "tidy"]


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


def listing(names: Iterable[str]) -> dict[str, str]:
    """Look-up table from `key` to the name as listed."""
    return {key(name): name for name in names}


def propose(text: str, names: Mapping[str, str]) -> str:
    """Words that name the closest listed name, or what is allowed."""
    close = difflib.get_close_matches(key(text), list(names), n=1, cutoff=0.75)
    if close:
        return f"did you mean {names[close[0]]!r}?"
    listed = ", ".join(names.values())
    return f"listed are: {listed if len(listed) <= 160 else listed[:157] + '...'}"
