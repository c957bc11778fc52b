"""How long resampling takes, beside ``scipy.stats.bootstrap`` on the same question.

Run ``python tests/benchmarks/resampling.py``. The question: Pianka's overlap between animals for all pairs of 20 species,
50 animals a species, 24 zones, with 95 % percentile intervals from 10,000 resamples of animals.

``niche.analyse`` answers it for all 190 pairs at once. SciPy answers one pair a call, so a few pairs are timed and their
median is multiplied by 190. SciPy's statistic is as fast as its interface allows: it gets row numbers of the drawn animals,
for a whole batch of resamples together, and takes the same-animal terms away through counts of how often each animal was
drawn, a matrix product like ours; no loop over pairs of animals, no loop over resamples. Batches are chosen so that
memory stays modest. `analyse` also gives use by zone with intervals and core zones, unasked.

Linear algebra runs on one thread: with several, small products wait for threads that a busy machine has set aside, and
SciPy's time then grows up to eightfold for no reason of its own. Times are medians after a first call that is not timed,
and the ratio is one of processor time, which other work on the machine disturbs least.
"""

from __future__ import annotations

import os
import resource
import sys
import time
from collections.abc import Callable
from itertools import combinations, islice
from typing import Any

for _name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "OMP_NUM_THREADS"):
    os.environ[_name] = "1"  # read when NumPy is first imported

import numpy as np  # noqa: E402
from scipy import stats  # noqa: E402

import niche  # noqa: E402

SPECIES, ANIMALS, ZONES, RESAMPLES = 20, 50, 24, 10_000
PAIRS_TIMED = 12
REPEATS = 5
BATCH = 1_000


def made_up_use() -> dict[str, np.ndarray]:
    """Seconds by animal and zone: animals scattered around a species mean, watched for unequal times."""
    rng = np.random.default_rng(20)
    use = {}
    for s in range(SPECIES):
        mean = rng.dirichlet(np.full(ZONES, 1.0))
        shares = rng.dirichlet(8 * mean + 0.05, ANIMALS)
        use[f"species {s + 1:02d}"] = np.rint(shares * rng.integers(1800, 7200, (ANIMALS, 1)))
    return use


def counts(rows: np.ndarray) -> np.ndarray:
    """How often each animal stands in each row of drawn numbers, shape (B, U)."""
    batch = rows.shape[0]
    flat = (rows + ANIMALS * np.arange(batch)[:, None]).ravel()
    return np.bincount(flat, minlength=batch * ANIMALS).reshape(batch, ANIMALS).astype(float)


def scipy_pair(a: np.ndarray, b: np.ndarray) -> tuple[float, float]:
    """95 % percentile interval of one pair by SciPy."""
    products = [(t, (t * t).sum(axis=1), t.sum(axis=1) ** 2) for t in (a, b)]

    def statistic(drawn_a: np.ndarray, drawn_b: np.ndarray, axis: int = -1) -> np.ndarray:
        del axis  # always the last
        sums, own = [], []
        for drawn, (t, same_product, same_total) in zip((drawn_a, drawn_b), products, strict=True):
            w = counts(np.atleast_2d(drawn).astype(np.intp))
            total = w @ t
            squares = w * w
            own.append(
                ((total * total).sum(axis=1) - squares @ same_product) / (total.sum(axis=1) ** 2 - squares @ same_total)
            )
            sums.append(total)
        across = (sums[0] * sums[1]).sum(axis=1) / (sums[0].sum(axis=1) * sums[1].sum(axis=1))
        overlap = across / np.sqrt(own[0] * own[1])
        return overlap if drawn_a.ndim > 1 else overlap[0]

    result = stats.bootstrap(
        (np.arange(ANIMALS), np.arange(ANIMALS)),
        statistic,
        n_resamples=RESAMPLES,
        batch=BATCH,
        vectorized=True,
        method="percentile",
        rng=np.random.default_rng(1),
    )
    return float(result.confidence_interval.low), float(result.confidence_interval.high)


def peak_mib() -> float:
    """Peak memory of this process so far, in MiB."""
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return peak / (1024 if sys.platform != "darwin" else 1024**2)


def timed(work: Callable[[], Any]) -> tuple[Any, float, float]:
    """What the work gives, and its wall and processor seconds."""
    wall, processor = time.perf_counter(), time.process_time()
    result = work()
    return result, time.perf_counter() - wall, time.process_time() - processor


def main() -> None:
    use = made_up_use()
    usage = niche.Usage.from_units(use, zones=[f"zone {z + 1}" for z in range(ZONES)])
    niche.analyse(usage, resamples=10, indices={"pianka"})  # imports and first calls are not the question
    before = peak_mib()
    result, *times = timed(lambda: niche.analyse(usage, resamples=RESAMPLES, indices={"pianka"}, seed=1))
    peak = peak_mib()
    runs = [times]
    for _ in range(REPEATS - 1):
        _, *times = timed(lambda: niche.analyse(usage, resamples=RESAMPLES, indices={"pianka"}, seed=1))
        runs.append(times)
    wall, processor = np.median(runs, axis=0)

    names = list(use)
    pairs = list(combinations(range(SPECIES), 2))
    chosen = list(islice(pairs, 0, None, len(pairs) // PAIRS_TIMED))[:PAIRS_TIMED]
    pianka = result.overlap["pianka"]
    scipy_pair(use[names[0]], use[names[1]])
    farthest, runs = 0.0, []
    for s, t in chosen:
        (low, high), *times = timed(lambda s=s, t=t: scipy_pair(use[names[s]], use[names[t]]))
        runs.append(times)
        width = pianka.high[s, t] - pianka.low[s, t]
        farthest = max(farthest, abs(low - pianka.low[s, t]) / width, abs(high - pianka.high[s, t]) / width)
    wall_pair, processor_pair = np.median(runs, axis=0)

    heading = f"{'':<44}{'wall s':>10}{'proc. s':>10}{'peak MiB':>10}"
    sys.stdout.write(
        f"{SPECIES} species, {ANIMALS} animals each, {ZONES} zones, {RESAMPLES} resamples, {len(pairs)} pairs\n\n"
        f"{heading}\n"
        f"{'niche.analyse, all pairs':<44}{wall:>10.2f}{processor:>10.2f}{peak:>10.0f}\n"
        f"{'  of which before resampling':<44}{'':>20}{before:>10.0f}\n"
        f"{f'scipy.stats.bootstrap, one pair (of {len(chosen)})':<44}{wall_pair:>10.3f}{processor_pair:>10.3f}\n"
        f"{f'  times {len(pairs)} pairs':<44}{wall_pair * len(pairs):>10.1f}{processor_pair * len(pairs):>10.1f}\n"
        f"{'ratio':<44}{'':>10}{processor_pair * len(pairs) / processor:>10.1f}\n\n"
        f"Ends of the intervals of the pairs timed differ by at most {farthest:.1%} of their width (random error).\n"
    )


if __name__ == "__main__":
    main()
