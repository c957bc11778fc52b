"""How often intervals hold the truth: a simulation by hand, results in docs/coverage.csv and docs/coverage.md.

Run ``python tests/studies/coverage.py --sets 2000 --cells 0:40 > part.csv``. Each data set draws a true use for two species
with a given Pianka overlap, animals around it (Dirichlet; how different, by the concentration), and watches of each animal
(visits with lengths), and asks every method for every index.

The design is a fraction of the full crossing of animals, concentration, zones, overlap, watching and imbalance: each level
of each factor stands in several cells, and cells are listed in `CELLS`.
"""

from __future__ import annotations

import argparse
import csv
import sys
from itertools import product

import numpy as np

from niche.analysis.estimates import Estimator
from niche.analysis.evidence import gather
from niche.analysis.results import Options
from niche.analysis.statistics import INDICES, Material
from niche.resampling import INTERVALS, Strata, streams
from niche.usage import Usage

ANIMALS = (4, 6, 8, 12, 20, 30, 50)
OVERLAPS = (0.0, 0.1, 0.3, 0.6, 0.85, 0.95, 1.0)
CONCENTRATIONS = (1.0, 3.0, 20.0, np.inf)
ZONES = (4, 12, 40)
VISITS = (5, 20, 80)
NAMES = (
    "breadth.levins",
    "breadth.shannon",
    "overlap.pianka",
    "overlap.morisita_horn",
    "overlap.schoener",
    "overlap.horn",
)
RESAMPLES = 199
MOST_WATCHED_SPREAD = 0.8
"""Standard deviation of the logarithm of watching time, where watching is unequal."""


def cells() -> list[tuple[int, int, float, float, int, int, bool]]:
    """(animals of species 1, of species 2, overlap, concentration, zones, visits, unequal watching), one a cell."""
    chosen = [(n, n, o, 3.0, 12, 20, False) for n, o in product(ANIMALS, OVERLAPS)]
    chosen += [
        (n, n, o, c, 12, 20, False) for n, o, c in product((6, 12, 30), (0.1, 0.6, 0.95), CONCENTRATIONS) if c != 3
    ]
    chosen += [(n, n, o, 3.0, z, 20, False) for n, o, z in product((6, 12), (0.3, 0.85), ZONES) if z != 12]
    chosen += [
        (n, n, o, 3.0, 12, v, u)
        for n, o, v, u in product((6, 12), (0.3, 0.85), VISITS, (False, True))
        if (v, u) != (20, False)
    ]
    chosen += [(6, 20, o, 3.0, 12, 20, True) for o in OVERLAPS]
    return chosen


CELLS = cells()


def true_use(zones: int, overlap: float, rng: np.random.Generator) -> np.ndarray:
    """Use of two species with this Pianka overlap, shape (2, Z): a mixture of a shared part and two disjoint ones."""
    shared = rng.dirichlet(np.full(zones, 0.7))
    half = zones // 2
    own = np.zeros((2, zones))
    own[0, :half], own[1, half:] = rng.dirichlet(np.ones(half)), rng.dirichlet(np.ones(zones - half))
    low, high = 0.0, 1.0
    for _ in range(50):
        weight = (low + high) / 2
        p, q = (1 - weight) * own + weight * shared
        low, high = (weight, high) if p @ q / np.sqrt((p @ p) * (q @ q)) < overlap else (low, weight)
    weight = {0.0: 0.0, 1.0: 1.0}.get(overlap, weight)
    return (1 - weight) * own + weight * shared


def watched(
    p: np.ndarray, animals: int, concentration: float, visits: int, unequal: bool, rng: np.random.Generator
) -> np.ndarray:
    """Seconds by animal and zone: each animal's own use around ``p``, visits of gamma length."""
    use = np.tile(p, (animals, 1))
    if np.isfinite(concentration):
        drawn = rng.gamma(np.maximum(concentration * p, 1e-12), size=use.shape)
        total = drawn.sum(axis=1, keepdims=True)
        use = np.where(total > 1e-200, drawn / np.maximum(total, 1e-200), use)
    many = np.full(animals, visits)
    if unequal:
        many = np.maximum(2, rng.lognormal(np.log(visits), MOST_WATCHED_SPREAD, animals).astype(int))
    counts = np.array([rng.multinomial(n, u / u.sum()) for n, u in zip(many, use, strict=True)])
    return rng.gamma(2.0 * counts) * 60.0


def truth_of(use: np.ndarray) -> dict[str, float]:
    """True values of the indices of species 1, or of the pair."""
    material = Material([u[None] for u in use], None, None)
    values = material.pooled(NAMES, np.ones(2))
    return {name: float(values[name][0] if values[name].ndim == 1 else values[name][0, 1]) for name in NAMES}


def run(cell: tuple[int, int, float, float, int, int, bool], sets: int, seed: int) -> list[dict[str, object]]:
    """One row an index and method: coverage, mean width, bias of the estimate, sets without an interval."""
    first, second, overlap, concentration, zones, visits, unequal = cell
    rng = np.random.default_rng(seed)
    inside: dict[tuple[str, str], list[tuple[float, float]]] = {(n, m): [] for n in NAMES for m in INTERVALS}
    errors: dict[str, list[float]] = {n: [] for n in NAMES}
    for _ in range(sets):
        use = true_use(zones, overlap, rng)
        tables = [watched(p, n, concentration, visits, unequal, rng) for p, n in zip(use, (first, second), strict=True)]
        usage = Usage.from_units({"1": tables[0], "2": tables[1]}, zones=[str(z) for z in range(zones)]).with_use()
        material, strata = Material.of(usage, "time"), Strata.of(usage.units, shared=False)
        ones = [np.ones(n) for n in usage.unit_counts]
        point = material.statistics(ones, NAMES, np.ones(2))
        pooled = material.pooled(NAMES, np.ones(2))
        draws, left = gather(material, strata, NAMES, np.ones(2), RESAMPLES, streams(int(rng.integers(2**31)), 2), None)
        truth = truth_of(use)
        for method in INTERVALS:
            estimator = Estimator(usage, Options(interval=method), strata.owner)
            for name in NAMES:
                index = INDICES[name]
                e = estimator.estimate(
                    point[name],
                    pooled[name],
                    draws[name],
                    left[name],
                    estimator.units(point[name].ndim),
                    index.scale,
                    (index.lower, index.upper(zones)),
                )
                at = (0,) if point[name].ndim == 1 else (0, 1)
                ends = float(e.low[at]), float(e.high[at])
                held = ends[0] - 1e-9 <= truth[name] <= ends[1] + 1e-9 if np.isfinite(ends).all() else np.nan
                inside[name, method].append((held, ends[1] - ends[0]))
                if method == "jackknife_t":
                    errors[name].append(float(e.value[at]) - truth[name])
    rows = []
    for (name, method), found in inside.items():
        held, width = np.array(found, dtype=float).T
        rows.append(
            dict(
                zip(
                    ("animals_1", "animals_2", "overlap", "concentration", "zones", "visits", "unequal"),
                    cell,
                    strict=True,
                )
            )
            | {
                "index": name.split(".")[1],
                "method": method,
                "sets": sets,
                "coverage": round(float(np.nanmean(held)), 4),
                "width": round(float(np.nanmean(width)), 4),
                "bias": round(float(np.nanmean(errors[name])), 4),
                "without_interval": int(np.isnan(held).sum()),
            }
        )
    return rows


def main() -> None:
    parser = argparse.ArgumentParser()
    parser.add_argument("--sets", type=int, default=2000)
    parser.add_argument("--cells", default=f"0:{len(CELLS)}")
    options = parser.parse_args()
    start, stop = (int(part) for part in options.cells.split(":"))
    writer = None
    for number in range(start, min(stop, len(CELLS))):
        with np.errstate(all="ignore"):
            rows = run(CELLS[number], options.sets, seed=1000 + number)
        if writer is None:
            writer = csv.DictWriter(sys.stdout, list(rows[0]), lineterminator="\n")
            writer.writeheader()
        writer.writerows(rows)
        sys.stdout.flush()


if __name__ == "__main__":
    main()
