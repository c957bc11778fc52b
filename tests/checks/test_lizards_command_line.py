"""The lizards of Schoener 1970 through the whole command line: log, study file, JSON tables, report.

Pooled values meet the indices of the published table. Each lizard was seen once, so values between animals are values
between different sightings: products of counts without replacement, as in Morisita 1959.
"""

from __future__ import annotations

from collections.abc import Callable
from math import sqrt

import pytest
from lizard_study import SPECIES, cell, replies
from published_tables import LIZARDS_JOINT
from register import Check, require

from niche.cautions import OVERLAP

GRAHAMI, OPALINUS = (row.astype(int).tolist() for row in LIZARDS_JOINT)
PUBLISHED = "data Schoener 1970, Fienberg 1970; pooled"
BETWEEN = "data Schoener 1970, Fienberg 1970; counts without replacement, as Morisita 1959"


def _own(counts: list[int]) -> float:
    """Chance that two different sightings of a species fall in one cell."""
    return sum(n * (n - 1) for n in counts) / (sum(counts) * (sum(counts) - 1))


OWN = (_own(GRAHAMI), _own(OPALINUS))
SHARED = sum(a * b for a, b in zip(GRAHAMI, OPALINUS, strict=True)) / (sum(GRAHAMI) * sum(OPALINUS))


def _check(name: str, source: str, expected: float, got: Callable[[], float], tolerance: float) -> Check:
    return Check(f"command line, lizards, {name}", source, "derived here", expected, tolerance, got)


def _breadth(index: str, column: str, species: int) -> Callable[[], float]:
    return lambda: cell("breadth", column, index=index, species=SPECIES[species])


def _overlap(index: str, column: str) -> Callable[[], float]:
    return lambda: cell("overlap", column, index=index)


CHECKS = [
    *(
        _check(f"pooled {index} of {SPECIES[s]}", PUBLISHED, expected, _breadth(index, "pooled", s), 5e-6)
        for index, values in (
            ("levins", (11.64719, 8.55781)),
            ("levins_standardized", (0.46292, 0.32860)),
            ("shannon", (2.73221, 2.47320)),
        )
        for s, expected in enumerate(values)
    ),
    *(
        _check(f"pooled {index}", PUBLISHED, expected, _overlap(index, "pooled"), 5e-6)
        for index, expected in (
            ("pianka", 0.84087),
            ("morisita_horn", 0.83099),
            ("schoener", 0.68470),
            ("morisita", 0.86877),
        )
    ),
    *(
        _check(f"levins of {SPECIES[s]} between animals", BETWEEN, 1 / OWN[s], _breadth("levins", "estimate", s), 1e-9)
        for s in (0, 1)
    ),
    *(
        _check(
            f"levins_standardized of {SPECIES[s]} between animals",
            BETWEEN,
            (1 / OWN[s] - 1) / 23,
            _breadth("levins_standardized", "estimate", s),
            1e-9,
        )
        for s in (0, 1)
    ),
    _check("pianka between animals", BETWEEN, SHARED / sqrt(OWN[0] * OWN[1]), _overlap("pianka", "estimate"), 1e-9),
    _check("morisita_horn between animals", BETWEEN, 0.86877, _overlap("morisita_horn", "estimate"), 5e-6),
    _check("α between animals", BETWEEN, SHARED / OWN[0], lambda: cell("coefficients", "alpha"), 1e-9),
    _check("β between animals", BETWEEN, SHARED / OWN[1], lambda: cell("coefficients", "beta"), 1e-9),
    _check(
        "lower end of the window of K₁/K₂", BETWEEN, SHARED / OWN[0], lambda: cell("coefficients", "window_low"), 1e-9
    ),
    _check(
        "upper end of the window of K₁/K₂", BETWEEN, OWN[1] / SHARED, lambda: cell("coefficients", "window_high"), 1e-9
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_use_is_the_counts() -> None:
    rows = replies().tables["usage"]
    assert [row["seconds"] for row in rows] == GRAHAMI + OPALINUS
    assert {row["units"] for row in rows} == {431, 133}
    assert [row["proportion"] for row in rows[:24]] == pytest.approx([n / 431 for n in GRAHAMI], rel=1e-12)


def test_every_estimate_stands_in_its_interval() -> None:
    rows = replies().tables["overlap"] + replies().tables["breadth"]
    assert len(rows) == 11
    for row in rows:
        assert row["low"] < row["high"], row
        assert row["low"] < row["estimate"] < row["high"], row


def test_the_ledger_holds_every_sighting() -> None:
    lines = replies().check.splitlines()
    assert [line.split() for line in lines if line.startswith(("read", "used"))] == [
        ["read", "564", "564"],
        ["used", "564", "564"],
    ]


@pytest.mark.parametrize("name", ["usage", "breadth", "overlap", "coefficients"])
def test_the_report_holds_the_same_tables(name: str) -> None:
    printed, written = replies().tables[name], replies().report_tables[name]
    assert len(printed) == len(written) > 0
    for ours, theirs in zip(printed, written, strict=True):
        assert list(ours) == list(theirs)
        for key, value in ours.items():
            if isinstance(value, float):
                assert float(theirs[key]) == pytest.approx(value, rel=1e-9), key
            else:
                assert theirs[key].lower() == str(value).lower(), key


def test_the_report_shows_the_overlap_beside_its_caution() -> None:
    page = replies().report
    assert all(name in page for name in SPECIES)
    assert OVERLAP in page
    assert f"{SHARED / sqrt(OWN[0] * OWN[1]):.2f}" in page
    assert OVERLAP in replies().cautions["overlap"]
    assert OVERLAP in replies().cautions["coefficients"]
