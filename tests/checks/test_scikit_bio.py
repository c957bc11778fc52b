"""scikit-bio's diversity functions as oracles of breadth: another program, the same definitions."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from published_tables import KREBS, LIZARDS_JOINT, MAGURRAN_63, MAGURRAN_145, MAGURRAN_152, counted, pooled, waders
from register import Check, require
from skbio.diversity import alpha

from niche.indices import levins, proportions, shannon

DATA: dict[str, np.ndarray] = {
    "Magurran p. 63": np.array(MAGURRAN_63),
    "Magurran p. 145": np.array(MAGURRAN_145),
    "Magurran p. 152": np.array(MAGURRAN_152),
    "Krebs species 1": np.array(KREBS[0]),
    "Krebs species 2": np.array(KREBS[1]),
    "lizards, grahami": LIZARDS_JOINT[0].astype(int),
    "waders, knot": waders()["S13"].astype(int),
}

KINDS: dict[str, tuple[str, Callable[[np.ndarray], float], Callable[[np.ndarray], float]]] = {
    "Levins B, pooled": (
        "inv_simpson",
        lambda x: float(alpha.inv_simpson(x)),
        lambda x: float(levins(pooled(x))[0]),
    ),
    "Shannon H′": (
        "shannon, base e",
        lambda x: float(alpha.shannon(x, base=np.e)),
        lambda x: float(shannon(proportions(x[None].astype(float)))[0]),
    ),
    "Levins B between different observations": (
        "inv_simpson, finite",
        lambda x: float(alpha.inv_simpson(x, finite=True)),
        lambda x: float(levins(counted(x))[0]),
    ),
}

CHECKS = [
    Check(
        f"{kind}, {name}",
        f"scikit-bio, diversity.alpha.{function}",
        "derived here",
        oracle(counts),
        1e-10 * oracle(counts),
        lambda ours=ours, counts=counts: ours(counts),  # type: ignore[misc]
    )
    for kind, (function, oracle, ours) in KINDS.items()
    for name, counts in DATA.items()
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)
