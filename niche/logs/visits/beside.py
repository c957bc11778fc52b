"""Observer and site of each row, kept beside the visits until rows have been compared with each other.

Rules need not carry them along: a visit knows the file and row that it came from.
"""

from __future__ import annotations

from collections import defaultdict

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.labels import Labels, key, tidy
from niche.logs.pieces import Piece
from niche.logs.sessions import read_sessions
from niche.study.model import Study

_Held = tuple[NDArray[np.int64], NDArray[np.object_]]
"""Rows of a piece, and the name in each."""


class Beside:
    """What rows say of observer and site, by file and row."""

    def __init__(self, study: Study) -> None:
        columns = study.logs.columns
        self._headings = {
            name: h for name, h in (("observer", columns.observer), ("site", columns.site)) if h is not None
        }
        self._held: dict[str, defaultdict[str, list[_Held]]] = {name: defaultdict(list) for name in self._headings}
        self._names: dict[str, str] = {}
        self._sessions = {} if "observer" in self._headings else read_sessions(study)

    def note(self, piece: Piece) -> None:
        """Keep the observers and sites of a piece."""
        for name, heading in self._headings.items():
            if heading in piece.columns and len(piece.rows):
                labels = Labels.of(piece.columns[heading])
                tidied = labels.spread(self._names.setdefault(key(text), tidy(text)) for text in labels.written)
                self._held[name][piece.file].append((piece.rows, tidied))

    def attach(self, visits: pd.DataFrame) -> pd.DataFrame:
        """The visits with a column ``observer`` and ``site`` where the study tells them; empty text where a row does not."""
        for name, held in self._held.items():
            found = np.full(len(visits), "", dtype=object)
            files, which = np.unique(visits["file"].to_numpy(dtype=str), return_inverse=True)
            for number, file in enumerate(files.tolist()):
                if held[file]:
                    rows = np.concatenate([rows for rows, _ in held[file]])
                    names = np.concatenate([names for _, names in held[file]])
                    mine = np.flatnonzero(which == number)
                    found[mine] = _looked_up(rows, names, visits["row"].to_numpy(dtype=np.int64)[mine])
            visits = visits.assign(**{name: found})
        if any(session.observer for session in self._sessions.values()):
            observers = {name: session.observer for name, session in self._sessions.items()}
            visits = visits.assign(observer=visits["session"].map(observers).fillna("").to_numpy(dtype=object))
        return visits


def _looked_up(rows: NDArray[np.int64], names: NDArray[np.object_], wanted: NDArray[np.int64]) -> NDArray[np.object_]:
    """Name in each wanted row; empty text for a row that is not there."""
    order = np.argsort(rows, kind="stable")
    place = np.minimum(np.searchsorted(rows[order], wanted), len(rows) - 1)
    return np.where(rows[order][place] == wanted, names[order][place], "")
