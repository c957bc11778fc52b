"""The lizard counts as a study on disk, put through the whole command line.

Each lizard is an animal of its own, seen for one second in one of the 24 cells of light, perch and time of day. Dates and
times of the bouts are made up; only the cell and the species of each sighting are data.
"""

from __future__ import annotations

import csv
import json
from dataclasses import dataclass
from functools import cache
from itertools import product
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

from published_tables import LIZARDS
from typer.testing import CliRunner

from niche.cli import app

SPECIES = ("Anolis grahami", "Anolis opalinus")
LIGHT, DIAMETER = ("sun", "shade"), ("thin", "thick")
HEIGHT, TIME = ("low", "high"), ("early", "midday", "late")

ROWS = [" ".join(pair) for pair in product(LIGHT, DIAMETER)]
COLUMNS = [" ".join(pair) for pair in product(HEIGHT, TIME)]

_STUDY = """
title = "Two species of lizard at Whitehouse, Jamaica"
note = "Counts of Schoener 1970, Ecology 51:408-418; each sighting stands as a bout of one second, at a made-up time."
[logs]
files = ["sightings.csv"]
[logs.columns]
species = "species"
animal = "animal"
zone = "zone"
start = "start"
end = "end"
[zones]
rows = {rows}
columns = {columns}
layout = {layout}
[[species]]
name = "Anolis grahami"
[[species]]
name = "Anolis opalinus"
[analysis]
resamples = 200
seed = 1970
"""


@dataclass(frozen=True)
class Reply:
    """What a command printed, and what it left behind in its folder."""

    tables: dict[str, list[dict[str, Any]]]
    cautions: dict[str, list[str]]
    report: str
    report_tables: dict[str, list[dict[str, str]]]
    check: str


def _write(folder: Path) -> None:
    layout = [[f"{row}, {column}" for column in COLUMNS] for row in ROWS]
    as_toml = json.dumps  # lists of plain text are written alike in both
    text = _STUDY.format(rows=as_toml(ROWS), columns=as_toml(COLUMNS), layout=as_toml(layout))
    (folder / "study.toml").write_text(text, encoding="utf-8")
    zones = [zone for row in layout for zone in row]
    with (folder / "sightings.csv").open("w", encoding="utf-8", newline="") as stream:
        sheet = csv.writer(stream)
        sheet.writerow(["species", "animal", "zone", "start", "end"])
        for species, counts in zip(SPECIES, LIZARDS.reshape(2, 24).astype(int).tolist(), strict=True):
            number = 0
            for zone, count in zip(zones, counts, strict=True):
                for _ in range(count):
                    number += 1
                    sheet.writerow([species, number, zone, "2000-01-01T08:00:00Z", "2000-01-01T08:00:01Z"])


def _run(*arguments: str) -> str:
    result = CliRunner().invoke(app, arguments)
    assert result.exit_code == 0, (arguments, result.output, result.exception)
    return result.stdout


@cache
def replies() -> Reply:
    """Run every command once on the study."""
    with TemporaryDirectory() as place:
        folder = Path(place)
        _write(folder)
        tables, cautions = {}, {}
        for command in ("usage", "breadth", "overlap", "compete"):
            reply = json.loads(_run(command, place, "--format", "json"))
            tables[reply["table"]], cautions[reply["table"]] = reply["rows"], reply["cautions"]
        made = folder / "made" / "report"
        _run("report", place, "--out", str(made))
        (page,) = made.rglob("*.html")
        sheets = {}
        for path in made.rglob("*.csv"):
            with path.open(encoding="utf-8-sig", newline="") as stream:
                sheets[path.stem] = list(csv.DictReader(stream))
        return Reply(
            tables,
            cautions,
            page.read_text(encoding="utf-8"),
            sheets,
            _run("check", place),
        )


def cell(table: str, column: str, **where: str) -> float:
    """One number of one table as the command line printed it."""
    (row,) = (row for row in replies().tables[table] if all(row[key] == value for key, value in where.items()))
    return float(row[column])
