"""Tables as text, CSV or JSON."""

from __future__ import annotations

import io
import json
import os
import sys
import tempfile
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import typer

from niche.cli.options import Format
from niche.tables import csv_text

if TYPE_CHECKING:
    import pandas as pd

    from niche.dynamics import TwoSpecies

_WIDE = 10_000
"""Width for output that no terminal shows: nothing is folded."""


def render(
    frame: pd.DataFrame, name: str, form: Format, notes: Sequence[str] = (), cautions: Sequence[str] = ()
) -> str:
    """A table in the form asked for; JSON carries the notes and cautions with it."""
    if form is Format.csv:
        return csv_text(frame)
    if form is Format.json:
        rows = [{key: _plain(value) for key, value in row.items()} for row in frame.to_dict("records")]
        content = {"table": name, "rows": rows, "notes": list(notes), "cautions": list(cautions)}
        return json.dumps(content, ensure_ascii=False, indent=1) + "\n"
    return _text(frame)


def write(text: str, out: Path | None) -> None:
    """Write to a file, whole or not at all, or to stdout."""
    if out is None:
        typer.echo(text, nl=False)
        return
    folder = out.parent
    folder.mkdir(parents=True, exist_ok=True)
    handle, temporary = tempfile.mkstemp(dir=folder, prefix=f".{out.name}.")
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="") as stream:
            stream.write(text)
        umask = os.umask(0)
        os.umask(umask)
        os.chmod(temporary, 0o666 & ~umask)
        os.replace(temporary, out)
    except BaseException:
        os.unlink(temporary)
        raise


def window_in_words(result: TwoSpecies) -> str:
    """For which K1/K2 both species of a pair would persist."""
    low, high = result.window
    here = f"here it is {result.k1 / result.k2:.4g}"
    if low >= high:
        return f"No K1/K2 lets both persist, for alpha and beta multiply to {result.alpha * result.beta:.4g}; {here}."
    return f"Both would persist for K1/K2 above {low:.4g} and below {high:.4g}; {here}."


def _plain(value: Any) -> Any:
    """A cell as JSON knows it: no NaN, no NumPy, no missing-value marker."""
    import pandas as pd

    if pd.isna(value):
        return None
    value = value.item() if hasattr(value, "item") else value
    return None if value in (float("inf"), float("-inf")) else value


def _text(frame: pd.DataFrame) -> str:
    """Columns side by side for reading; numbers right-aligned, what is undefined as a dash."""
    from pandas.api.types import is_bool_dtype, is_numeric_dtype
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    table = Table(box=None, pad_edge=False, padding=(0, 2, 0, 0))
    columns = []
    for heading in frame.columns:
        column = frame[heading]
        numeric = is_numeric_dtype(column) and not is_bool_dtype(column)
        table.add_column(Text(heading), justify="right" if numeric else "left", overflow="fold")
        columns.append([Text(cell) for cell in _cells(column, heading)])
    for row in zip(*columns, strict=True):
        table.add_row(*row)
    stream = io.StringIO()
    width = None if sys.stdout.isatty() else _WIDE
    console = Console(file=stream, width=width or Console().width, no_color=True, highlight=False, force_terminal=False)
    console.print(table)
    return "\n".join(line.rstrip() for line in stream.getvalue().splitlines()) + "\n"


def _cells(column: pd.Series[Any], heading: str) -> list[str]:
    """Cells as short as their column allows."""
    import pandas as pd

    if heading == "core":
        return ["core" if value else "" for value in column]
    if not pd.api.types.is_float_dtype(column):
        return ["–" if pd.isna(value) else str(value) for value in column]
    places = 3
    if heading in ("n_1", "n_2"):
        places = 0
    elif heading == "seconds":
        places = 0 if (column.dropna() % 1 == 0).all() else 3
    return ["–" if pd.isna(value) else f"{value:.{places}f}" for value in column]
