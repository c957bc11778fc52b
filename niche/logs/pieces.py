"""A piece of a log: some rows as text, with the place each came from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import pyarrow as pa
from numpy.typing import NDArray


@dataclass(frozen=True)
class Piece:
    """Rows of one file, in order, every cell as written.

    Attributes
    ----------
    file : str
        The file as the study names it.
    rows : array of int64, shape (n,)
        Row of the file as a person finds it: the line, with the header as line 1.
    columns : dict
        Heading to text, each a pyarrow string array of length n.
    """

    file: str
    rows: NDArray[np.int64]
    columns: dict[str, Any]

    def column(self, heading: str | None) -> Any:
        """Text under a heading; empty text throughout where the study names no such column."""
        if heading is None:
            return pa.array([""] * len(self.rows), type=pa.string())
        return self.columns[heading]
