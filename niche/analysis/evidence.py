"""Values of every statistic under resamples and with each unit left out, gathered block by block."""

from __future__ import annotations

from collections.abc import Callable, Collection, Sequence

import numpy as np

from niche.analysis.statistics import Material
from niche.indices.products import Floats
from niche.resampling import Strata

_BLOCK = 4_000_000
"""Numbers that one block may hold; any size gives the same results."""


def gather(
    material: Material,
    strata: Strata,
    wanted: Collection[str],
    demand: Floats,
    resamples: int,
    generators: Sequence[np.random.Generator],
    progress: Callable[[int, int], None] | None,
    block: int = _BLOCK,
) -> tuple[dict[str, Floats], dict[str, Floats]]:
    """Statistics in every resample (first axis B) and with each unit left out (first axis N).

    Returns
    -------
    draws, left_out : dict of arrays
        By name as in `Material.statistics`.
    """
    species, zones = len(material.time), material.time[0].shape[1]
    step = max(1, block // (species * (zones + species + 1)))
    draws: dict[str, Floats] = {}
    for begin in range(0, resamples, step):
        size = min(step, resamples - begin)
        rows = slice(begin, begin + size)
        _store(draws, rows, resamples, material.statistics(strata.draw(size, generators), wanted, demand))
        if progress is not None:
            progress(begin + size, resamples)
    left_out: dict[str, Floats] = {}
    for rows, weights in strata.leave_one_out(step):
        _store(left_out, rows, len(strata.owner), material.statistics(weights, wanted, demand))
    return draws, left_out


def _store(into: dict[str, Floats], rows: slice, count: int, values: dict[str, Floats]) -> None:
    for name, block in values.items():
        if name not in into:
            into[name] = np.empty((count, *block.shape[1:]))
        into[name][rows] = block
