"""Small studies on disk, made to order, run through the whole program."""

from __future__ import annotations

import csv
import json
import warnings
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from niche.analysis import Run, run_study
from niche.errors import NicheWarning
from niche.study import read_study

ZONES = (("upper sand", "upper mud"), ("lower sand", ""))


def text(value: str) -> str:
    return json.dumps(value, ensure_ascii=False)


def names(values) -> str:
    return "[" + ", ".join(map(text, values)) + "]"


class Maker:
    """Writes a study and its log into a folder and runs it."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder

    def study(
        self,
        animals,
        *,
        layout=ZONES,
        k=None,
        note="",
        title="A flat in autumn",
        unit="animal",
        availability=None,
        extra_rows=(),
        species_lines="",
        report="",
        problems="",
    ) -> Path:
        """``animals`` says how many animals of each species are watched; the log is made by a rule, without chance."""
        zones = [zone for row in layout for zone in row if zone]
        (self.folder / "logs").mkdir(parents=True, exist_ok=True)
        with (self.folder / "logs" / "log.csv").open("w", newline="", encoding="utf-8") as stream:
            writer = csv.writer(stream)
            writer.writerow(["species", "animal", "session", "zone", "start", "end"])
            for s, (name, number) in enumerate(animals.items()):
                for i in range(number):
                    start = datetime(2026, 9, 2 + i, 8 + s, tzinfo=UTC)
                    for z, zone in enumerate([*zones, ""]):
                        end = start + timedelta(minutes=3 + 4 * ((2 * i + 3 * z + i * z + 3 * s * z) % 7))
                        writer.writerow([name, f"{s}-{i}", f"{s}-{i}", zone, start.isoformat(), end.isoformat()])
                        start = end
            writer.writerows(extra_rows)
        lines = [
            f"title = {text(title)}",
            f"note = {text(note)}",
            "[logs]",
            'files = ["logs/*.csv"]',
            "[logs.columns]",
            "session = 'session'",
            "end = 'end'",
            "[logs.problems]",
            problems,
            "[zones]",
            f"rows = {names(f'row {i + 1}' for i in range(len(layout)))}",
            f"columns = {names(f'column {i + 1}' for i in range(len(layout[0])))}",
            f"layout = [{', '.join(names(row) for row in layout)}]",
        ]
        if availability:
            lines += ["[zones.availability]", 'source = "a walk"', "[zones.availability.amounts]"]
            lines += [f"{text(zone)} = {amount}" for zone, amount in availability.items()]
        for name in animals:
            lines += ["[[species]]", f"name = {text(name)}", species_lines]
            if k and name in k:
                lines.append(f"k = {{ low = {k[name][0]}, high = {k[name][1]}, source = 'a guess' }}")
        lines += ["[report]", report, "[analysis]", "resamples = 200", "seed = 3", f"unit = {text(unit)}"]
        (self.folder / "study.toml").write_text("\n".join(lines) + "\n", encoding="utf-8")
        return self.folder / "study.toml"

    def run(self, animals, *, with_animal=True, **settings) -> Run:
        study = read_study(self.study(animals, **settings))
        if not with_animal:
            columns = study.logs.columns.model_copy(update={"animal": None})
            study = study.model_copy(update={"logs": study.logs.model_copy(update={"columns": columns})})
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", NicheWarning)
            return run_study(study)


@pytest.fixture
def make(tmp_path):
    return Maker(tmp_path / "study")


@pytest.fixture(scope="session")
def plain(tmp_path_factory) -> Run:
    """Three species with enough animals, K for two of them."""
    maker = Maker(tmp_path_factory.mktemp("plain"))
    return maker.run(
        {"dunlin": 5, "redshank": 4, "turnstone": 6},
        k={"dunlin": (1400, 2100), "redshank": (800, 1100)},
        note="Invented data.",
        availability={"upper sand": 2, "upper mud": 1, "lower sand": 1},
    )
