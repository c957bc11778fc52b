"""Published data that several checks share, and the few lines that put them through the program."""

from __future__ import annotations

import csv
from functools import cache
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from niche.indices import products
from niche.resampling import sum_units

Floats = NDArray[np.float64]

MAGURRAN_145 = (35, 26, 25, 21, 16, 11, 6, 5, 3, 3, 3, 3, 3, 2, 2, 2, 1, 1, 1, 1)
MAGURRAN_152 = (752, 276, 194, 126, 121, 97, 95, 83, 72, 44, 39, 16, 15, 13, 9, 9, 9, 8, 7, 4, 2, 2, 1, 1, 1)
MAGURRAN_63 = (
    *(1, 3, 2, 1, 4, 5, 1, 1, 18, 1, 2, 63, 2, 1, 1, 1, 16, 15),
    *(60, 1, 1, 8, 16, 127, 9, 18, 3, 4, 3, 11, 6, 7, 8, 63, 17),
)
KREBS = ((7, 1, 286, 71, 0, 0, 0), (0, 0, 38, 24, 30, 140, 5))
"""Seeds of seven kinds taken by two species: Krebs 1999, Box 13.2."""

KREBS_AVAILABILITY = (0.10, 0.10, 0.30, 0.20, 0.10, 0.15, 0.05)
"""Invented for these checks; the source gives none."""

# Anolis grahami / A. opalinus, Whitehouse, Jamaica. Counts of sightings by light (sun, shade), perch diameter (at most
# 2 inches, more), perch height (below 5 feet, at least) and time of day (early, midday, late). Schoener 1970, Ecology
# 51:408-418; Fienberg 1970, Ecology 51:419-433; McCullagh & Nelder 1989, Generalized Linear Models, p. 128-129.
_GRAHAMI = (20, 8, 4, 13, 8, 12, 8, 4, 5, 6, 0, 1, 34, 69, 18, 31, 55, 13, 17, 60, 8, 12, 21, 4)
_OPALINUS = (2, 1, 4, 0, 0, 0, 3, 1, 3, 0, 0, 1, 11, 20, 10, 5, 4, 3, 15, 32, 8, 1, 5, 4)
LIZARDS = np.array([_GRAHAMI, _OPALINUS], dtype=np.float64).reshape(2, 2, 2, 2, 3)
"""Axes: species, light, diameter, height, time."""

LIZARD_AXES = ("light", "diameter", "height", "time")
LIZARDS_JOINT = LIZARDS.reshape(2, 24)


def lizards_along(axis: str) -> Floats:
    """The lizard counts summed over all axes but one, shape (2, classes)."""
    others = tuple(i + 1 for i, name in enumerate(LIZARD_AXES) if name != axis)
    return np.asarray(LIZARDS.sum(axis=others))


@cache
def waders() -> dict[str, Floats]:
    """Counts of 19 species of wader at 15 sites, by species code; the source is named in the first lines of the file."""
    with (Path(__file__).parent / "waders_1987.csv").open(encoding="utf-8", newline="") as stream:
        records = list(csv.reader(line for line in stream if not line.startswith("#")))
    heading, rows = records[0], records[1:]
    return {code: np.array([float(row[i]) for row in rows]) for i, code in enumerate(heading) if i > 0}


def pooled(*species: object) -> Floats:
    """Textbook product matrix of counts, a row a species."""
    return products(np.array(species, dtype=np.float64))


def counted(*species: object) -> Floats:
    """Product matrix between different observations, each count of 1 an observation of its own."""
    use = [np.array(s, dtype=np.float64)[None] for s in species]
    return sum_units([np.ones(1)] * len(use), use, single=True).between()


def as_animals(counts: object) -> Floats:
    """Counts by zone as animals seen once each: a row an animal, a 1 in its zone."""
    numbers = np.asarray(counts, dtype=np.intp)
    return np.repeat(np.eye(len(numbers)), numbers, axis=0)
