"""Two species under Lotka–Volterra competition: outcome, densities, coexistence window.

    dN₁/dt = r₁ N₁ (K₁ − N₁ − α N₂) / K₁        α: effect of one individual of species 2 on species 1
    dN₂/dt = r₂ N₂ (K₂ − N₂ − β N₁) / K₂        β: effect of one individual of species 1 on species 2

Species 1 grows when rare beside species 2 at K₂ iff ``α K₂ < K₁``; species 2 beside species 1 at K₁ iff
``β K₁ < K₂``. The four strict cases follow from these two comparisons alone; an equality is a boundary case, named so
and never called a winner. r changes how fast the end is reached, not which end.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from niche.errors import ValueRuleError
from niche.indices.products import Floats

OUTCOMES = ("species_1_excludes", "species_2_excludes", "coexistence", "priority_effect", "boundary")
"""Names of the outcomes; `classify` gives their positions in this list."""

UNDEFINED = -1
"""What `classify` gives where an input is undefined."""


def classify(alpha: ArrayLike, beta: ArrayLike, k1: ArrayLike, k2: ArrayLike) -> NDArray[np.int8]:
    """Outcome of each set of numbers, as a position in `OUTCOMES`.

    Parameters
    ----------
    alpha, beta, k1, k2 : array_like, shapes that broadcast
        α and β at least 0, K above 0. Not checked: this is the kernel; `outcome` checks.

    Returns
    -------
    array of int8, the broadcast shape
        -1 where an input is NaN. Comparisons are exact: equality gives ``boundary``.

    Examples
    --------
    >>> [OUTCOMES[i] for i in classify([0.5, 2.0, 0.5, 2.0, 1.0], [0.5, 0.5, 2.0, 2.0, 0.5], 100, 100)]
    ['coexistence', 'species_2_excludes', 'species_1_excludes', 'priority_effect', 'boundary']
    """
    alpha, beta, k1, k2 = (np.asarray(x, dtype=np.float64) for x in (alpha, beta, k1, k2))
    pressure_1, pressure_2 = alpha * k2, beta * k1
    first = pressure_1 < k1  # species 1 grows when rare
    second = pressure_2 < k2
    result = np.select(
        [
            np.isnan(pressure_1) | np.isnan(pressure_2) | np.isnan(k1) | np.isnan(k2),
            (pressure_1 == k1) | (pressure_2 == k2),
            first & second,
            first & ~second,
            ~first & second,
        ],
        [UNDEFINED, 4, 2, 0, 1],
        default=3,
    )
    return result.astype(np.int8)


def equilibrium(alpha: ArrayLike, beta: ArrayLike, k1: ArrayLike, k2: ArrayLike) -> tuple[Floats, Floats]:
    """Numbers at the end, where the end does not depend on the start.

    Parameters
    ----------
    alpha, beta, k1, k2 : array_like, shapes that broadcast

    Returns
    -------
    n1, n2 : arrays, the broadcast shape
        The interior equilibrium for coexistence; (K₁, 0) or (0, K₂) after exclusion; NaN for a priority effect or a
        boundary case, where the end depends on the start.

    Examples
    --------
    >>> n1, n2 = equilibrium(0.5, 0.5, 500.0, 500.0)
    >>> round(float(n1), 4), round(float(n2), 4)
    (333.3333, 333.3333)
    """
    alpha, beta, k1, k2 = np.broadcast_arrays(*(np.asarray(x, dtype=np.float64) for x in (alpha, beta, k1, k2)))
    case = classify(alpha, beta, k1, k2)
    with np.errstate(divide="ignore", invalid="ignore"):
        determinant = 1.0 - alpha * beta
        inside_1, inside_2 = (k1 - alpha * k2) / determinant, (k2 - beta * k1) / determinant
    cases = [case == 0, case == 1, case == 2]
    return (
        np.select(cases, [k1, np.zeros_like(k1), inside_1], default=np.nan),
        np.select(cases, [np.zeros_like(k2), k2, inside_2], default=np.nan),
    )


def coexistence_window(alpha: ArrayLike, beta: ArrayLike) -> tuple[Floats, Floats]:
    """Range of K₁/K₂ in which both species persist: ``α < K₁/K₂ < 1/β``.

    Parameters
    ----------
    alpha, beta : array_like, shapes that broadcast
        At least 0.

    Returns
    -------
    low, high : arrays
        ``high`` is infinite for β = 0. With ``αβ > 1`` low exceeds high: no ratio lets both persist, and between the
        two the outcome is a priority effect.

    Examples
    --------
    >>> low, high = coexistence_window(0.6, 0.4)
    >>> float(low), float(high)
    (0.6, 2.5)
    """
    with np.errstate(divide="ignore"):
        return np.asarray(alpha, dtype=np.float64), 1.0 / np.asarray(beta, dtype=np.float64)


@dataclass(frozen=True)
class TwoSpecies:
    """Outcome for one pair of species with given numbers.

    Attributes
    ----------
    outcome : str
        One of `OUTCOMES`.
    detail : str
        The same in words, with the comparison that decides it.
    n1, n2 : float
        Numbers at the end; NaN where they depend on the start.
    window : tuple of float
        Range of K₁/K₂ in which both would persist.
    rho : float
        ``√(αβ)``, niche overlap in Chesson's sense.
    fitness_ratio : float
        ``(K₁/K₂) √(β/α)``; both persist iff it lies between rho and 1/rho. NaN where α = β = 0.

    References
    ----------
    Chesson, P. (2000) Mechanisms of maintenance of species diversity. *Annual Review of Ecology and Systematics* 31,
    343–366.
    """

    alpha: float
    beta: float
    k1: float
    k2: float
    outcome: str
    detail: str
    n1: float
    n2: float
    window: tuple[float, float]
    rho: float
    fitness_ratio: float


def outcome(*, alpha: float, beta: float, k1: float, k2: float) -> TwoSpecies:
    """What two species with these coefficients would come to: a scenario under the model, not a forecast.

    Parameters
    ----------
    alpha : float
        Effect of one individual of species 2 on species 1, in individuals of species 1; at least 0.
    beta : float
        Effect of one individual of species 1 on species 2, in individuals of species 2; at least 0.
    k1, k2 : float
        Carrying capacities in individuals (or any density), above 0.

    Returns
    -------
    TwoSpecies

    Raises
    ------
    ValueRuleError
        A number is not finite, a coefficient is negative, or a K is not above 0.

    References
    ----------
    Lotka, A. J. (1932) The growth of mixed populations. *Journal of the Washington Academy of Sciences* 22, 461–469.
    Volterra, V. (1926) Fluctuations in the abundance of a species considered mathematically. *Nature* 118, 558–560.

    Examples
    --------
    >>> outcome(alpha=0.5, beta=0.8, k1=100, k2=100).outcome
    'coexistence'
    """
    for name, value, lowest, rule in (
        ("alpha", alpha, 0.0, "at least 0"),
        ("beta", beta, 0.0, "at least 0"),
        ("k1", k1, math.ulp(0.0), "above 0"),
        ("k2", k2, math.ulp(0.0), "above 0"),
    ):
        if not math.isfinite(value) or value < lowest:
            raise ValueRuleError(f"{name} is {value!r}; it must be a finite number {rule}.")
    case = int(classify(alpha, beta, k1, k2))
    n1, n2 = equilibrium(alpha, beta, k1, k2)
    low, high = coexistence_window(alpha, beta)
    balance = beta / alpha if alpha > 0 else (math.inf if beta > 0 else math.nan)
    return TwoSpecies(
        alpha,
        beta,
        k1,
        k2,
        OUTCOMES[case],
        _detail(case, alpha, beta, k1, k2),
        float(n1),
        float(n2),
        (float(low), float(high)),
        math.sqrt(alpha * beta),
        k1 / k2 * math.sqrt(balance),
    )


def _detail(case: int, alpha: float, beta: float, k1: float, k2: float) -> str:
    """The outcome in words."""
    if OUTCOMES[case] == "boundary":
        if alpha * k2 == k1 and beta * k1 == k2:
            return "Neutral: the two isoclines are one line and every point on it is an equilibrium."
        rare = "1" if alpha * k2 == k1 else "2"
        return f"Boundary: species {rare} neither grows nor declines when rare, so the linear rule gives no winner."
    return {
        "species_1_excludes": "Species 1 grows when rare and species 2 does not: species 1 excludes species 2.",
        "species_2_excludes": "Species 2 grows when rare and species 1 does not: species 2 excludes species 1.",
        "coexistence": "Each species grows when rare: both persist at a stable equilibrium.",
        "priority_effect": "Neither species grows when rare: the one that starts with enough individuals stays.",
    }[OUTCOMES[case]]
