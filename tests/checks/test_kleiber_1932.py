"""Kleiber, M. (1932) *Hilgardia* 6:315–353: what an animal takes goes with its mass to the power of 3/4."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from register import Check, require

from niche.study.reading import study_from_text

STUDY = """
title = "demand from body mass"
[logs]
files = ["log.csv"]
columns = {{ species = "species", animal = "animal", zone = "zone", start = "start", end = "end" }}
[zones]
rows = ["a"]
columns = ["b"]
layout = [["ab"]]
[[species]]
name = "light"
body_mass = 48
[[species]]
name = "heavy"
body_mass = {mass}
"""


def _ratio(of_mass: float) -> Callable[[], float]:
    def got() -> float:
        study = study_from_text(STUDY.format(mass=48 * of_mass), Path("study.toml"))
        return study.demand_of("heavy") / study.demand_of("light")

    return got


CHECKS = [
    Check(
        f"demand ratio of species whose masses stand {ratio} to 1",
        "exponent 0.75: Kleiber 1932, from memory",
        "derived here",
        expected,
        5e-7,
        _ratio(ratio),
    )
    for ratio, expected in ((2, 1.681793), (8, 4.756828), (10, 5.623413), (16, 8.0))
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)
