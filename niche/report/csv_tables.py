"""Tables as CSV files: RFC 4180, UTF-8, every digit, and safe to open in a spreadsheet."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

from niche.effort import effort, effort_by_day
from niche.report.assumptions import assumptions
from niche.report.folder import write_text
from niche.tables import COLUMNS

if TYPE_CHECKING:
    from niche.analysis import Run

_FORMULA = ("=", "+", "-", "@", "\t", "\r")
"""What a spreadsheet may take for the begin of a formula."""


CAPACITY = {"species": "string", "k_low": "float64", "k_high": "float64", "distribution": "string", "source": "string"}
ASSUMPTIONS = {"assumption": "string", "standing": "string", "why": "string"}
INPUTS = {"file": "string", "rows": "int64", "bytes": "int64", "sha256": "string"}


def report_tables(run: Run) -> dict[str, pd.DataFrame]:
    """All tables of a report by name, in the order of the report."""
    analysis = run.analysis
    visits, species = run.log.visits, analysis.usage.species
    return {
        **{name: analysis.table(name) for name in COLUMNS},
        "effort": effort(visits, species, run.log.measure),
        "effort_by_day": _long(by_day(run), run),
        "ledger": run.log.ledger.table(),
        "capacity": _frame(
            CAPACITY,
            [(s.name, s.k.low, s.k.high, s.k.distribution, s.k.source) for s in run.study.species if s.k is not None],
        ),
        "assumptions": _frame(ASSUMPTIONS, [(a.name, a.status, a.why) for a in assumptions(run)]),
        "inputs": _frame(INPUTS, [(f.name, f.rows, f.size, f.sha256) for f in run.log.files]),
    }


def by_day(run: Run) -> pd.DataFrame:
    """Hours in view, or how many were seen, by date (rows) and species (columns, in the order of the study, all of them)."""
    frame = effort_by_day(run.log.visits, run.study.logs.time_zone, run.log.measure)
    return frame.reindex(columns=pd.Index(run.analysis.usage.species, name="species"), fill_value=0.0)


def _long(frame: pd.DataFrame, run: Run) -> pd.DataFrame:
    """A row a date and species: hours where use is measured in time, else how many were seen."""
    timed = run.log.measure == "time"
    table = frame.reset_index().melt("date", var_name="species", value_name="hours" if timed else "seen")
    table["seen" if timed else "hours"] = np.nan
    return table[["date", "species", "hours", "seen"]]


def _frame(types: Mapping[str, str], rows: Sequence[tuple[Any, ...]]) -> pd.DataFrame:
    """Rows as a table whose columns have their types even where there are no rows."""
    return pd.DataFrame(rows, columns=list(types)).astype(dict(types))


def csv_text(frame: pd.DataFrame) -> str:
    r"""A table as CSV.

    Numbers keep every digit, a missing value is an empty cell, truth is ``true`` or ``false``, an infinite number
    ``INF``. A text that a spreadsheet would take for a formula gets an apostrophe in front; numbers are left alone.

    Examples
    --------
    >>> csv_text(pd.DataFrame({"species": ["=dunlin", "redshank"], "low": [-0.5, float("nan")]}))
    "species,low\r\n'=dunlin,-0.5\r\nredshank,\r\n"
    """
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow([_cell(str(name)) for name in frame.columns])
    for row in zip(*(frame[name].tolist() for name in frame.columns), strict=True):
        writer.writerow([_cell(value) for value in row])
    return stream.getvalue()


def write_tables(tables: Mapping[str, pd.DataFrame], folder: Path) -> dict[str, Path]:
    """Write each table to ``folder/name.csv``; the folder is made if it is not there.

    Returns
    -------
    dict of str to Path
        Where each table is.
    """
    folder.mkdir(parents=True, exist_ok=True)
    paths = {name: folder / f"{name}.csv" for name in tables}
    for name, path in paths.items():
        write_text(path, csv_text(tables[name]))
    return paths


def _cell(value: Any) -> str:
    if value is None or value is pd.NA:
        return ""
    if isinstance(value, bool | np.bool_):
        return "true" if value else "false"
    if isinstance(value, int | np.integer):
        return str(int(value))
    if isinstance(value, float):
        if math.isnan(value):
            return ""
        return repr(float(value)) if math.isfinite(value) else ("INF" if value > 0 else "-INF")
    text = str(value)
    return f"'{text}" if text.startswith(_FORMULA) else text
