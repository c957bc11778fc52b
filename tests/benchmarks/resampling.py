"""How long resampling takes, beside ``scipy.stats.bootstrap`` on the same question.

Run ``python tests/benchmarks/resampling.py``. The question: Pianka's overlap between animals for all pairs of 20 species,
50 animals a species, 24 zones, with 95 % percentile intervals from 10,000 resamples of animals.

``niche.analyse`` answers it for all 190 pairs at once. SciPy answers one pair a call, so a few pairs are timed and their
mean is multiplied by 190. SciPy's statistic is as fast as its interface allows: it gets row numbers of the drawn animals,
for a whole batch of resamples together, and takes the same-animal terms away through counts of how often each animal was
drawn, a matrix product like ours; no loop over pairs of animals, no loop over resamples. Batches are chosen so that
memory stays modest. Both run in one process with whatever threads the linear algebra library takes.
"""

from __future__ import annotations

import resource
import sys
import time
from itertools import combinations, islice

import numpy as np
from scipy import stats

import niche

SPECIES, ANIMALS, ZONES, RESAMPLES = 20, 50, 24, 10_000
PAIRS_TIMED = 4
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


def main() -> None:
    use = made_up_use()
    usage = niche.Usage.from_units(use, zones=[f"zone {z + 1}" for z in range(ZONES)])
    niche.analyse(usage, resamples=10, indices={"pianka"})  # imports and first calls are not the question
    before = peak_mib()
    clock = time.perf_counter()
    result = niche.analyse(usage, resamples=RESAMPLES, indices={"pianka"}, seed=1)
    ours = time.perf_counter() - clock
    peak = peak_mib()

    names = list(use)
    pairs = list(combinations(range(SPECIES), 2))
    timed = list(islice(pairs, 0, None, len(pairs) // PAIRS_TIMED))[:PAIRS_TIMED]
    pianka = result.overlap["pianka"]
    farthest, each = 0.0, []
    for s, t in timed:
        clock = time.perf_counter()
        low, high = scipy_pair(use[names[s]], use[names[t]])
        each.append(time.perf_counter() - clock)
        width = pianka.high[s, t] - pianka.low[s, t]
        farthest = max(farthest, abs(low - pianka.low[s, t]) / width, abs(high - pianka.high[s, t]) / width)
    loop = float(np.mean(each)) * len(pairs)

    sys.stdout.write(
        f"{SPECIES} species, {ANIMALS} animals each, {ZONES} zones, {RESAMPLES} resamples, {len(pairs)} pairs\n\n"
        f"{'':<44}{'seconds':>10}{'peak MiB':>10}\n"
        f"{'niche.analyse, all pairs':<44}{ours:>10.2f}{peak:>10.0f}\n"
        f"{'  of which before resampling':<44}{'':>10}{before:>10.0f}\n"
        f"{f'scipy.stats.bootstrap, one pair (mean of {len(timed)})':<44}{np.mean(each):>10.3f}\n"
        f"{f'  times {len(pairs)} pairs':<44}{loop:>10.1f}\n"
        f"{'ratio':<44}{loop / ours:>10.1f}\n\n"
        f"Ends of the intervals of the pairs timed differ by at most {farthest:.1%} of their width (random error).\n"
    )


if __name__ == "__main__":
    main()
