"""Two species under Lotka–Volterra competition: published parameters, the outcome recomputed by hand.

Invasion ratios s₁ = α K₂/K₁ and s₂ = β K₁/K₂: species i grows when rare iff sᵢ < 1. In Chesson's terms both persist iff
ρ = √(αβ) < κ₁/κ₂ = (K₁/K₂) √(β/α) < 1/ρ.
"""

from __future__ import annotations

import math

import pytest
from register import Check, Status, require

from niche.dynamics import OUTCOMES, TwoSpecies, outcome

WYOMING = "McDonald, Population Ecology, Univ. Wyoming, Fig. 21.1"
MICHIGAN = "Malcolm, BIOS 615, W. Michigan Univ."
PRIMER = "Stevens 2009, A Primer of Ecology with R, Fig. 5.2"

Numbers = tuple[float, float, float, float]

GAUSE: Numbers = (3.15, 0.439, 13.0, 5.8)
GAUSE_SOURCE = "Gause 1932, J Exp Biol 9:389-402, as in Enns & McGuire, Computer Algebra Recipes, p. 157"
# The same experiments in discrete form, n' = a n / (1 + b n + c m), as printed by the University of British Columbia.
_A1, _A2, _B1, _B2, _C1, _C2 = 1.2439, 1.0626, 0.0188, 0.0108, 0.0591, 0.0047
GAUSE_DISCRETE: Numbers = (_C1 / _B1, _C2 / _B2, (_A1 - 1) / _B1, (_A2 - 1) / _B2)
PARAMECIUM: Numbers = (1.64, 0.61, 105, 64)
MCDONALD: Numbers = (0.9, 1.0, 1200, 1000)
MALCOLM: Numbers = (0.5, 0.5, 500, 500)
STEVENS: Numbers = (0.005 / 0.01, 0.008 / 0.01, 1 / 0.01, 1 / 0.01)
JACOBIAN: Numbers = (1.4, 1.2, 1, 1)
GOTELLI: Numbers = (2, 3, 100, 150)


def _of(numbers: Numbers) -> TwoSpecies:
    alpha, beta, k1, k2 = numbers
    return outcome(alpha=alpha, beta=beta, k1=k1, k2=k2)


def _case(label: str, source: str, status: Status, numbers: Numbers, expected: str) -> Check:
    return Check(
        f"{label}: outcome is {expected} (its place in the list of outcomes, from 0)",
        source,
        status,
        OUTCOMES.index(expected),
        0.0,
        lambda: OUTCOMES.index(_of(numbers).outcome),
    )


def _number(label: str, source: str, numbers: Numbers, field: str, expected: float, tolerance: float) -> Check:
    return Check(f"{label}: {field}", source, "derived here", expected, tolerance, lambda: getattr(_of(numbers), field))


CHECKS = [
    _case("Gause’s yeasts", GAUSE_SOURCE, "derived here", GAUSE, "species_2_excludes"),
    _number("Gause’s yeasts", GAUSE_SOURCE, GAUSE, "rho", 1.1759, 5e-5),
    _number("Gause’s yeasts", GAUSE_SOURCE, GAUSE, "fitness_ratio", 0.8367, 5e-5),
    _number("Gause’s yeasts", GAUSE_SOURCE, GAUSE, "n2", 5.8, 1e-12),
    _case(
        "Gause’s yeasts from the discrete form",
        "Gause 1932, as in Univ. British Columbia, Bio301",
        "derived here",
        GAUSE_DISCRETE,
        "species_2_excludes",
    ),
    _case(
        "Gause’s yeasts, α as misprinted in some copies (3.5)",
        GAUSE_SOURCE,
        "derived here",
        (3.5, *GAUSE[1:]),
        "species_2_excludes",
    ),
    _case(
        "Gause’s yeasts, β higher by 2 %",
        GAUSE_SOURCE,
        "derived here",
        (3.15, 0.439 * 1.02, 13.0, 5.8),
        "priority_effect",
    ),
    _case("K = 1200 and 1000, α = 0.9, β = 1", WYOMING, "seen in the source", MCDONALD, "species_1_excludes"),
    _number("K = 1200 and 1000, α = 0.9, β = 1", WYOMING, MCDONALD, "rho", 0.9487, 5e-5),
    _number("K = 1200 and 1000, α = 0.9, β = 1", WYOMING, MCDONALD, "fitness_ratio", 1.2649, 5e-5),
    _case("K = 500, α = β = 0.5", MICHIGAN, "derived here", MALCOLM, "coexistence"),
    _number("K = 500, α = β = 0.5", MICHIGAN, MALCOLM, "n1", 333.3333, 5e-5),
    _number("K = 500, α = β = 0.5", MICHIGAN, MALCOLM, "n2", 333.3333, 5e-5),
    _case("equal self-limitation, α < β < 1", PRIMER, "derived here", STEVENS, "coexistence"),
    _number("equal self-limitation, α < β < 1", PRIMER, STEVENS, "n1", 83.33333, 5e-6),
    _number("equal self-limitation, α < β < 1", PRIMER, STEVENS, "n2", 33.33333, 5e-6),
    _number("equal self-limitation, α < β < 1", PRIMER, STEVENS, "rho", 0.6325, 5e-5),
    _number("equal self-limitation, α < β < 1", PRIMER, STEVENS, "fitness_ratio", 1.2649, 5e-5),
    _case("defaults of a public Jacobian routine", "seen in its code", "derived here", JACOBIAN, "priority_effect"),
    _number("defaults of a public Jacobian routine", "seen in its code", JACOBIAN, "rho", 1.2961, 5e-5),
    _number("defaults of a public Jacobian routine", "seen in its code", JACOBIAN, "fitness_ratio", 0.9258, 5e-5),
    _case("problem with scorpions", "Gotelli, A Primer of Ecology, ch. 5", "from memory", GOTELLI, "priority_effect"),
    _number("problem with scorpions", "Gotelli, A Primer of Ecology, ch. 5, from memory", GOTELLI, "rho", 2.4495, 5e-5),
    _number(
        "problem with scorpions",
        "Gotelli, A Primer of Ecology, ch. 5, from memory",
        GOTELLI,
        "fitness_ratio",
        0.8165,
        5e-5,
    ),
    _case("Gause’s Paramecium, near neutral", "Gause 1934", "from memory", PARAMECIUM, "species_1_excludes"),
    _number("Gause’s Paramecium, near neutral", "Gause 1934, numbers from memory", PARAMECIUM, "rho", 1.0002, 5e-5),
    _case(
        "Gause’s Paramecium, α = K₁/K₂ and β = K₂/K₁ in full",
        "Gause 1934, numbers from memory",
        "derived here",
        (105 / 64, 64 / 105, 105, 64),
        "boundary",
    ),
    _case("one line of equilibria, N₁ + N₂ = K", "algebra", "derived here", (1, 1, 100, 100), "boundary"),
    _case("one line of equilibria, N₁ + 2 N₂ = 100", "algebra", "derived here", (2, 0.5, 100, 50), "boundary"),
    _case("s₁ = 1 alone, s₂ < 1", "algebra", "derived here", (2, 0.25, 100, 50), "boundary"),
    _case("s₂ = 1 alone, s₁ > 1", "algebra", "derived here", (3, 0.5, 100, 50), "boundary"),
    _case("α = 0, s₂ < 1", "algebra", "derived here", (0, 0.5, 100, 100), "coexistence"),
    _number("α = 0, s₂ < 1", "algebra", (0, 0.5, 100, 100), "n2", 50, 1e-12),
    _case("α = 0, s₂ > 1", "algebra", "derived here", (0, 1.5, 100, 100), "species_1_excludes"),
    _case("β = 0, s₁ > 1", "algebra", "derived here", (1.5, 0, 100, 100), "species_2_excludes"),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_meets_the_source(check: Check) -> None:
    require(check)


def test_without_effect_on_one_side_the_ratio_says_so() -> None:
    assert _of((0, 0.5, 100, 100)).fitness_ratio == math.inf
    assert _of((0.5, 0, 100, 100)).fitness_ratio == 0
    assert math.isnan(_of((0, 0, 100, 100)).fitness_ratio)


@pytest.mark.parametrize("numbers", [(1, 1, 100, 100), (2, 0.5, 100, 50)])
def test_a_line_of_equilibria_is_neutral_and_has_no_end(numbers: Numbers) -> None:
    result = _of(numbers)
    assert result.detail.startswith("Neutral")
    assert math.isnan(result.n1)
    assert math.isnan(result.n2)
