"""What can go wrong between rows that are points in time: exact repeats, and one animal in two zones at one moment."""

from __future__ import annotations

import hashlib
from collections.abc import Iterable

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Mask
from niche.logs.rules.waiting import ALL_LOGS, as_tuples, codes, entry, ordered, together
from niche.study.model import Study

REPEAT = "exact repeat of an earlier row"
CLASH = "in two zones at one moment"


def whole_rows(piece: Piece) -> NDArray[np.object_]:
    """A digest of all cells of each row with their headings, for rows that nothing but all of their cells identifies."""
    headings = sorted(piece.columns)
    head = "\x1f".join(headings) + "\x1e"
    found = np.empty(len(piece.rows), dtype=object)
    for position, cells in enumerate(zip(*(piece.columns[h].to_pylist() for h in headings), strict=True)):
        found[position] = hashlib.blake2b((head + "\x1f".join(cells)).encode(), digest_size=16).digest()
    return found


def without_copies(table: pd.DataFrame, ledger: Ledger, by: Iterable[str]) -> pd.DataFrame:
    """Set aside each row that repeats an earlier row of the logs in all of the columns ``by``, as a second upload does."""
    placed = ordered(table)
    record = together(placed, *by)
    copy = pd.Series(record).duplicated().to_numpy()
    original = pd.Series(np.flatnonzero(~copy), index=record[~copy])
    for position, row in as_tuples(placed, copy):
        earlier = placed.iloc[original[record[position]]]
        problem = f"repeats {earlier.file}, row {earlier.row}, exactly"
        ledger.dispose([entry(row, "", "", REPEAT, problem, "set_aside")])
    kept: pd.DataFrame = placed[~copy].reset_index(drop=True)
    return kept


def without_copies_across_files(table: pd.DataFrame, ledger: Ledger) -> pd.DataFrame:
    """Set aside rows that stand in another file too, where animals have no names.

    Two equal rows of one file may be two animals, so both count. The same rows in a second file are a second upload: of
    each such row the file that has it most often counts. The column ``whole`` tells rows apart.
    """
    placed = ordered(table)
    keys = pd.DataFrame({"whole": codes(placed["whole"]), "file": codes(placed["file"])})
    size = keys.groupby(["whole", "file"]).size().rename("size").reset_index()
    best = size.sort_values(["whole", "size", "file"], ascending=[True, False, True]).drop_duplicates("whole")
    chosen = best.set_index("whole")["file"]
    copy = keys["file"].to_numpy() != chosen.loc[keys["whole"]].to_numpy()
    if copy.any():
        original = placed[~copy].groupby(codes(placed["whole"])[~copy])[["file", "row"]].first()
        for position, row in as_tuples(placed, copy):
            earlier = original.loc[keys["whole"].iloc[position]]
            problem = f"all cells as in {earlier['file']}, row {earlier['row']}: the same record in two files"
            ledger.dispose([entry(row, "", "", REPEAT, problem, "set_aside")])
    kept: pd.DataFrame = placed[~copy].reset_index(drop=True)
    again = kept.duplicated("whole").to_numpy()
    if again.any():
        problem = "rows have all cells as an earlier row of their file; kept, for animals without names may be as many"
        ledger.note(Entry(ALL_LOGS, None, "", f"{int(again.sum())} rows", "equal rows kept", problem, "flagged"))
    return kept


def clashes(table: pd.DataFrame, *by: str) -> Mask:
    """Rows that agree with another row in the columns ``by`` (an animal and a moment) and differ from it in zone."""
    moment = pd.Series(together(table, *by))
    shared = moment.duplicated(keep=False).to_numpy()
    zone = pd.Series(codes(table["zone"]))[shared].groupby(moment[shared], sort=False)
    clash = np.zeros(len(table), dtype=bool)
    clash[shared] = (zone.transform("min") != zone.transform("max")).to_numpy()
    return clash


def clash_action(study: Study) -> Action:
    """What becomes of rows that put an animal into two zones at once; there is no length to trim."""
    return "stop" if study.logs.problems.overlap == "stop" else "set_aside"


def clash_problem(animal: str) -> str:
    """Rule and remedy for such rows."""
    return (
        f"another row has {animal} in another zone at the same moment; correct one of the two, or set "
        '`logs.problems.overlap` to "set_aside" to use neither'
    )
