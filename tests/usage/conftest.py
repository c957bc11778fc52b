"""Visits without files, and a study that knows their zones."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from niche.logs.visits import COLUMNS
from niche.study import study_from_text

STUDY = """\
title = "two waders on a flat"
[logs]
files = ["*.csv"]
[logs.columns]
animal = "animal"
{session}
end = "end"
[zones]
rows = ["upper", "lower"]
columns = ["sand", "mud"]
layout = [["upper sand", "upper mud"], ["", "lower mud"]]
{availability}
{species}
[analysis]
unit = "{unit}"
"""
ZONES = ("upper sand", "upper mud", "lower mud")


class Made:
    """Studies and visits made up for a test."""

    zones = ZONES

    @staticmethod
    def study(*, species=("dunlin", "redshank"), unit="animal", session='session = "session"', amounts=None):
        availability = ""
        if amounts is not None:
            pairs = "\n".join(f'"{zone}" = {amount}' for zone, amount in amounts.items())
            availability = f'[zones.availability]\nsource = "s"\n[zones.availability.amounts]\n{pairs}'
        tables = "\n".join(f'[[species]]\nname = "{name}"' for name in species)
        text = STUDY.format(session=session, availability=availability, species=tables, unit=unit)
        return study_from_text(text, Path("study.toml"))

    @staticmethod
    def visits(*rows):
        """Visits from (species, animal, session, zone, start, end), times in milliseconds."""
        cells = [(*row, row[5] - row[4], "a.csv", number) for number, row in enumerate(rows, 2)]
        table = pd.DataFrame(cells, columns=COLUMNS)
        return table.astype({"start": np.int64, "end": np.int64, "amount": np.int64, "row": np.int64})

    @staticmethod
    def random_visits(seed, count):
        rng = np.random.default_rng(seed)
        length = rng.integers(0, 10_000, count) * rng.integers(0, 2, count)
        start = rng.integers(0, 10**12, count)
        return pd.DataFrame(
            {
                "species": rng.choice(["dunlin", "redshank"], count),
                "animal": rng.choice(["RW", "GY", "NB", "YY", "RB"], count),
                "session": rng.choice(["s1", "s2", "s10"], count),
                "zone": rng.choice([*ZONES, ""], count),
                "start": start,
                "end": start + length,
                "amount": length,
                "file": "a.csv",
                "row": np.arange(2, count + 2),
            }
        )


@pytest.fixture(scope="session")
def made():
    return Made
