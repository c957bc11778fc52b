"""SciPy as an oracle: distances between rows of proportions, and a bootstrap of pairs of animals on the same draws."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
import pytest
from published_tables import KREBS, LIZARDS_JOINT, pooled, waders
from register import Check, require
from scipy import stats
from scipy.spatial import distance

from niche.indices import pianka, proportions, schoener
from niche.resampling import Interval, percentile, sum_units

TABLES: dict[str, np.ndarray] = {
    "seeds (Krebs)": np.array(KREBS, dtype=float),
    "lizards": LIZARDS_JOINT,
    "knot and sanderling": np.array([waders()["S13"], waders()["S14"]]),
}


@dataclass(frozen=True)
class Bootstrapped:
    """SciPy's distribution and interval, and the draws that gave them."""

    distribution: np.ndarray
    low: float
    high: float
    weights: tuple[np.ndarray, np.ndarray]


def _animals(seed: int, animals: int, zones: int) -> np.ndarray:
    """Whole minutes in each zone of made-up animals that differ from one another."""
    rng = np.random.default_rng(seed)
    return rng.multinomial(60, rng.dirichlet(np.full(zones, 0.8), animals)).astype(float)


A, B = _animals(1, 9, 6), _animals(2, 7, 6)


def pairwise_pianka(drawn_a: np.ndarray, drawn_b: np.ndarray) -> np.ndarray:
    """Pianka between animals from drawn row numbers, by all pairs of draws that are different animals."""

    def within(use: np.ndarray, drawn: np.ndarray) -> np.ndarray:
        rows = use[drawn]
        different = drawn[..., :, None] != drawn[..., None, :]
        totals = rows.sum(axis=-1)
        shared = np.einsum("...uz,...vz->...uv", rows, rows)
        return np.asarray(
            (different * shared).sum((-1, -2)) / (different * totals[..., :, None] * totals[..., None, :]).sum((-1, -2))
        )

    first, second = A[drawn_a], B[drawn_b]
    across = np.einsum("...uz,...vz->...", first, second) / (first.sum((-1, -2)) * second.sum((-1, -2)))
    return np.asarray(across / np.sqrt(within(A, drawn_a) * within(B, drawn_b)))


@cache
def bootstrapped() -> Bootstrapped:
    """``scipy.stats.bootstrap`` over row numbers, in one batch, its draws kept."""
    draws: list[tuple[np.ndarray, np.ndarray]] = []

    def statistic(a: np.ndarray, b: np.ndarray, axis: int = -1) -> np.ndarray:
        assert axis == -1
        rows_a, rows_b = a.astype(int), b.astype(int)
        draws.append((rows_a, rows_b))
        return pairwise_pianka(rows_a, rows_b)

    resamples = 2000
    result = stats.bootstrap(
        (np.arange(len(A)), np.arange(len(B))),
        statistic,
        n_resamples=resamples,
        batch=resamples,
        vectorized=True,
        method="percentile",
        confidence_level=0.9,
        rng=np.random.default_rng(10),
    )
    drawn = next(pair for pair in draws if pair[0].shape[0] == resamples)
    weights = tuple(
        np.stack([np.bincount(row, minlength=units) for row in rows]).astype(float)
        for rows, units in zip(drawn, (len(A), len(B)), strict=True)
    )
    interval = result.confidence_interval
    return Bootstrapped(
        result.bootstrap_distribution, float(interval.low), float(interval.high), (weights[0], weights[1])
    )


@cache
def ours() -> np.ndarray:
    """The same statistic on the same draws, as weights over animals."""
    return np.asarray(pianka(sum_units(bootstrapped().weights, (A, B)).between())[:, 0, 1])


def _interval() -> Interval:
    return percentile(ours(), 0.9)


def _oracles(name: str, use: np.ndarray) -> list[Check]:
    p = use / use.sum(axis=1, keepdims=True)
    return [
        Check(
            f"Pianka, {name}",
            "1 − scipy.spatial.distance.cosine",
            "derived here",
            1 - float(distance.cosine(*p)),
            1e-12,
            lambda: float(pianka(pooled(*use))[0, 1]),
        ),
        Check(
            f"Schoener, {name}",
            "1 − scipy.spatial.distance.braycurtis of proportions",
            "derived here",
            1 - float(distance.braycurtis(*p)),
            1e-12,
            lambda: float(schoener(proportions(use))[0, 1]),
        ),
    ]


CHECKS = [
    *(check for name, use in TABLES.items() for check in _oracles(name, use)),
    Check(
        "between-animal Pianka of 9 and 7 made-up animals: largest difference over 2,000 resamples, same draws",
        "scipy.stats.bootstrap, all pairs of animals",
        "derived here",
        0,
        1e-10,
        lambda: float(np.abs(ours() - bootstrapped().distribution).max()),
    ),
    Check(
        "the same: largest difference of an end of the 90 % percentile interval",
        "scipy.stats.bootstrap, method percentile",
        "derived here",
        0,
        1e-10,
        lambda: max(abs(_interval().low - bootstrapped().low), abs(_interval().high - bootstrapped().high)),
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_the_draws_differ_and_repeat_animals() -> None:
    """The comparison above would mean little on draws that are all alike."""
    weights = bootstrapped().weights[0]
    assert (weights.max(axis=1) > 1).any()
    assert len(np.unique(weights, axis=0)) > 1000


@pytest.mark.parametrize("confidence", [0.5, 0.8, 0.95, 0.99])
def test_quantiles_equal_scipys_at_any_confidence(confidence: float) -> None:
    tail = 100 * (1 - confidence) / 2
    low, high, undefined = percentile(bootstrapped().distribution, confidence)
    assert low == pytest.approx(stats.scoreatpercentile(bootstrapped().distribution, tail), rel=1e-12)
    assert high == pytest.approx(stats.scoreatpercentile(bootstrapped().distribution, 100 - tail), rel=1e-12)
    assert undefined == 0
