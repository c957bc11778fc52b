"""Small tables beside the logs (sessions, tags, deployments): CSV files that a person writes once, read whole.

A study cannot go on with half of such a table, so whatever is wrong with one is an error that names file and line.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import pyarrow as pa

from niche.errors import StudyError
from niche.logs.clocks import DAY, read_times
from niche.logs.labels import tidy
from niche.study.model import Study

_DATE = re.compile(r"\d{4}-\d{2}-\d{2}")


@dataclass(frozen=True)
class Record:
    """A filled line of a small table: its number, with the header as line 1, and its cells by heading, trimmed."""

    line: int
    cells: dict[str, str]


@dataclass(frozen=True)
class SmallTable:
    """Records of one table, in order."""

    name: str
    records: tuple[Record, ...]
    time_zone: str | None

    def wrong(self, record: Record, problem: str) -> StudyError:
        """The error that names the line."""
        return StudyError(f"{self.name}: line {record.line}: {problem}")

    def named(self, record: Record, heading: str) -> str:
        """A cell that must not be empty."""
        text = record.cells[heading]
        if not text:
            raise self.wrong(record, f"{heading} is empty; fill it in, or take the line out.")
        return text

    def instant(self, record: Record, heading: str, *, last: bool = False) -> int | None:
        """A time in milliseconds since 1970-01-01T00:00Z, None where the cell is empty.

        A date alone is its first moment, or with ``last`` the moment after it has ended.

        Raises
        ------
        StudyError
            The time cannot be read.
        """
        text = record.cells.get(heading, "")
        if not text:
            return None
        whole_day = _DATE.fullmatch(text) is not None
        found = read_times(pa.array([f"{text}T00:00" if whole_day else text]), self.time_zone)
        problem = found.problem[0]
        if problem is not None:
            raise self.wrong(record, f"{heading} {text!r}: {problem}.")
        return int(found.ms[0]) + (DAY if whole_day and last else 0)


def read_small_table(study: Study, file: str, key: str, needed: Sequence[str], known: Sequence[str]) -> SmallTable:
    """Read a small table.

    Parameters
    ----------
    study : Study
        Its folder is where the table is looked for; its time zone holds for times without an offset.
    file : str
        Path as the study gives it, under the key path ``key``.
    needed, known : sequences of str
        Headings that must be there, and others that are understood. Further columns are left alone.

    Raises
    ------
    StudyError
        There is no such file, it is not UTF-8 CSV, a heading is missing, or a line has more or fewer cells than the
        header.
    """
    path = study.folder / Path(file)
    try:
        with path.open(encoding="utf-8-sig", newline="") as stream:
            reader = csv.reader(stream, strict=True)
            lines = [(reader.line_num, cells) for cells in reader]
    except FileNotFoundError:
        raise StudyError(f"{path}: `{key}` names this file, and there is no such file.") from None
    except (OSError, ValueError, csv.Error) as error:  # ValueError: not UTF-8, or a path with a NUL in it
        raise StudyError(f"{str(path)!r}: cannot be read as UTF-8 CSV ({error}).") from None
    headings = [tidy(cell).casefold() for cell in lines[0][1]] if lines else []
    for heading in needed:
        if heading not in headings:
            others = ", ".join(repr(h) for h in known)
            raise StudyError(
                f"{file}: line 1: no heading {heading!r}. `{key}` needs {', '.join(map(repr, needed))}"
                f"{f'; {others} are understood too' if others else ''}."
            )
    for heading in (*needed, *known):
        if headings.count(heading) > 1:
            raise StudyError(f"{file}: line 1: the heading {heading!r} stands twice; each column needs its own name.")
    records = []
    for line, cells in lines[1:]:
        if not any(cell.strip() for cell in cells):
            continue
        if len(cells) != len(headings):
            raise StudyError(f"{file}: line {line}: {len(cells)} cells where the header has {len(headings)}.")
        records.append(Record(line, {h: tidy(cell) for h, cell in zip(headings, cells, strict=True)}))
    return SmallTable(file, tuple(records), study.logs.time_zone)
