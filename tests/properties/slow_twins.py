"""Every index once more, one number at a time, in plain Python: slow and obvious.

Animals are drawn by number; a pair of draws counts only if it is of two different animals. Nothing here knows of weights,
squares or array axes.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

Table = Sequence[Sequence[float]]
NAN = math.nan


def drawn_units(weights: Sequence[float]) -> list[int]:
    """Weights as a list of the unit numbers drawn."""
    return [unit for unit, times in enumerate(weights) for _ in range(int(times))]


def own_product(use: Table, drawn: Sequence[int]) -> float:
    """``C_ss`` by all ordered pairs of draws of different units."""
    above = below = 0.0
    for u in drawn:
        for v in drawn:
            if u != v:
                above += sum(a * b for a, b in zip(use[u], use[v], strict=True))
                below += sum(use[u]) * sum(use[v])
    return above / below if below > 0 else NAN


def cross_product(use_s: Table, drawn_s: Sequence[int], use_t: Table, drawn_t: Sequence[int]) -> float:
    """``C_st`` by all pairs of a draw of s and a draw of t."""
    above = below = 0.0
    for u in drawn_s:
        for v in drawn_t:
            above += sum(a * b for a, b in zip(use_s[u], use_t[v], strict=True))
            below += sum(use_s[u]) * sum(use_t[v])
    return above / below if below > 0 else NAN


def products(use: Sequence[Table], drawn: Sequence[Sequence[int]]) -> list[list[float]]:
    """The whole matrix."""
    species = range(len(use))
    return [
        [
            own_product(use[s], drawn[s]) if s == t else cross_product(use[s], drawn[s], use[t], drawn[t])
            for t in species
        ]
        for s in species
    ]


def visits_one_by_one(counts: Table) -> tuple[list[list[float]], list[list[int]]]:
    """Counts of visits as observations of their own: their use, and which observations each unit made."""
    use: list[list[float]] = []
    made: list[list[int]] = []
    for row in counts:
        made.append([])
        for zone, count in enumerate(row):
            for _ in range(int(count)):
                made[-1].append(len(use))
                use.append([float(z == zone) for z in range(len(row))])
    return use, made


def visit_products(counts: Sequence[Table], drawn: Sequence[Sequence[int]]) -> list[list[float]]:
    """The matrix by all pairs of different visits; a unit drawn twice brings the same visits twice."""
    use, observed = [], []
    for table, units in zip(counts, drawn, strict=True):
        single, made = visits_one_by_one(table)
        use.append(single)
        observed.append([visit for unit in units for visit in made[unit]])
    return products(use, observed)


def proportions(use: Table, drawn: Sequence[int]) -> list[float]:
    """Share of each zone in the summed use of the units drawn."""
    totals = [sum(use[u][z] for u in drawn) for z in range(len(use[0]))]
    return [total / sum(totals) for total in totals]


def divided(a: float, b: float) -> float:
    """Quotient, with x/0 infinite and 0/0 undefined."""
    if math.isnan(a) or math.isnan(b) or (a == 0 and b == 0):
        return NAN
    return math.inf if b == 0 else a / b


def levins(c: Table, s: int) -> float:
    return divided(1.0, c[s][s])


def levins_standardized(c: Table, s: int, zones: int) -> float:
    return (levins(c, s) - 1) / (zones - 1)


def shannon(p: Sequence[float], noise: Sequence[float]) -> float:
    return NAN if math.isnan(sum(p) + sum(noise)) else -sum(map(_entropy_term, p, noise))


def pianka(c: Table, s: int, t: int) -> float:
    return divided(c[s][t], math.sqrt(c[s][s] * c[t][t]))


def morisita_horn(c: Table, s: int, t: int) -> float:
    return divided(2 * c[s][t], c[s][s] + c[t][t])


def variances(table: Table, drawn: Sequence[int]) -> list[float]:
    """Sampling variance of each proportion: its square less the product of different units, at least 0."""
    total = sum(sum(table[u]) for u in drawn)
    pairs = sum(sum(table[u]) * sum(table[v]) for u in drawn for v in drawn if u != v)
    result = []
    for z in range(len(table[0]) if table else 0):
        p = divided(sum(table[u][z] for u in drawn), total)
        square = (
            divided(sum(table[u][z] * table[v][z] for u in drawn for v in drawn if u != v), pairs) if pairs else NAN
        )
        result.append(max(p * p - square, 0.0) if not math.isnan(square) else NAN)
    return result


def schoener(
    p: Sequence[float], q: Sequence[float], p_noise: Sequence[float], q_noise: Sequence[float], same: bool
) -> float:
    """Shared share, less what noise is expected to add to each distance: the mean of a folded normal, by its formula."""
    if same:
        return NAN if math.isnan(sum(p)) else 1.0
    shared = 1.0
    for a, b, v, w in zip(p, q, p_noise, q_noise, strict=True):
        apart, variance = abs(a - b), v + w
        if variance > 0:
            true, spread = math.sqrt(max(apart * apart - variance, 0.0)), math.sqrt(variance)
            folded = spread * math.sqrt(2 / math.pi) * math.exp(-true * true / (2 * variance))
            folded += true * math.erf(true / (spread * math.sqrt(2)))
            apart -= min(folded - true, apart)
        elif math.isnan(variance):
            return NAN
        shared -= apart / 2
    return shared


def _entropy_term(x: float, variance: float) -> float:
    return x * math.log(x) - min(variance / (2 * x), x / 2) if x > 0 else 0.0


def horn(
    p: Sequence[float], q: Sequence[float], p_noise: Sequence[float], q_noise: Sequence[float], same: bool
) -> float:
    if math.isnan(sum(p) + sum(q) + sum(p_noise) + sum(q_noise)):
        return NAN
    if same:
        return 1.0
    joint = sum(_entropy_term(a + b, v + w) for a, b, v, w in zip(p, q, p_noise, q_noise, strict=True))
    own = sum(map(_entropy_term, p, p_noise)) + sum(map(_entropy_term, q, q_noise))
    return (joint - own) / (2 * math.log(2))


def alpha(c: Table, s: int, t: int, demand_s: float, demand_t: float) -> float:
    """Effect of t on s, the overlap held at 1 at most; undefined where that cannot be."""
    if not c[s][s] > 0:
        return NAN
    if s == t:
        return 1.0
    overlap = pianka(c, s, t)
    if math.isinf(overlap):
        return NAN
    shared = c[s][t] / overlap if overlap > 1 else c[s][t]
    return divided(shared, c[s][s]) * demand_t / demand_s


def clipped(value: float, low: float, high: float) -> float:
    return value if math.isnan(value) else min(max(value, low), high)


def core(amounts: Sequence[float], share: float) -> list[bool]:
    """Take zones, most used first and in their order where tied, until the share is reached."""
    member = [False] * len(amounts)
    inside = 0.0
    for zone in sorted(range(len(amounts)), key=lambda z: (-amounts[z], z)):
        if inside >= share * sum(amounts):
            break
        member[zone] = True
        inside += amounts[zone]
    return member


def outcome(a: float, b: float, k1: float, k2: float) -> str:
    """Two-species outcome by who grows when rare."""
    if a * k2 == k1 or b * k1 == k2:
        return "boundary"
    first, second = a * k2 < k1, b * k1 < k2
    if first and second:
        return "coexistence"
    if first:
        return "species_1_excludes"
    return "species_2_excludes" if second else "priority_effect"
