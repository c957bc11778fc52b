"""Amounts by zone: checked once as they are handed to the library, and as a study gives them."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, cast

import numpy as np
from numpy.typing import ArrayLike, NDArray

from niche.errors import ValueRuleError

if TYPE_CHECKING:
    import pandas as pd

    from niche.study.model import Study
    from niche.usage import Usage


def same(a: NDArray[np.float64] | None, b: NDArray[np.float64] | None) -> bool:
    """Whether two arrays, either of which may be missing, are equal."""
    return a is b or (a is not None and b is not None and np.array_equal(a, b, equal_nan=True))


def shares(amounts: NDArray[np.float64]) -> NDArray[np.float64]:
    """Amounts over their sum."""
    if amounts.max(initial=0) <= 0:
        raise ValueRuleError("availability adds up to 0; at least one zone must be available.")
    amounts = amounts / amounts.max()  # or the sum of very large amounts is infinite
    return np.asarray(amounts / amounts.sum())


def checked(given: ArrayLike, species: str, what: str, zones: int) -> NDArray[np.float64]:
    """Amounts as a (units, zones) array of finite numbers at least 0."""
    try:
        amounts = np.array(given, dtype=np.float64)
    except (TypeError, ValueError) as error:
        raise ValueRuleError(f"{what} of {species!r} is no table of numbers: {error}.") from None
    if amounts.ndim != 2 or amounts.shape[1] != zones:
        raise ValueRuleError(f"{what} of {species!r} has shape {amounts.shape}; it must be (units, {zones}).")
    if not np.isfinite(amounts).all() or (amounts < 0).any():
        worst = amounts[~(np.isfinite(amounts) & (amounts >= 0))][0]
        raise ValueRuleError(f"{what} of {species!r} holds {worst}; amounts must be finite and at least 0.")
    return amounts


def checked_counts(
    visits: Mapping[str, ArrayLike], time: Mapping[str, NDArray[np.float64]]
) -> tuple[NDArray[np.float64], ...]:
    """Counts of visits of each species, in the order and of the shape of its use."""
    strangers = [species for species in visits if species not in time]
    if strangers:
        raise ValueRuleError(f"visits names {strangers[0]!r}, which use does not.")
    counts = []
    for species, amounts in time.items():
        if species not in visits:
            raise ValueRuleError(f"visits has no counts for {species!r}; give them for every species or for none.")
        count = checked(visits[species], species, "visits", amounts.shape[1])
        if count.shape != amounts.shape:
            raise ValueRuleError(f"visits of {species!r} has shape {count.shape}; use has {amounts.shape}.")
        counts.append(count)
    return tuple(counts)


def checked_row(given: ArrayLike, what: str, zones: int) -> NDArray[np.float64]:
    """One amount a zone, finite and at least 0."""
    row: NDArray[np.float64] = checked(cast("ArrayLike", [given]), "all zones", what, zones)[0]
    return row


def check_addable(a: Usage, b: Usage) -> None:
    """Raise unless two Usages are of one study, so that their sum means something."""
    if (a.species, a.zones, a.unit) != (b.species, b.zones, b.unit):
        raise ValueRuleError("Usages add only over the same species, zones and unit.")
    if a.measure != b.measure:
        raise ValueRuleError(f"{a.measure} and {b.measure} do not add.")
    if a.by_effort != b.by_effort or not same(a.effort, b.effort):
        raise ValueRuleError("Usages add only with the same effort; give the effort of all logs together to both.")
    if (a.visits is None) != (b.visits is None):
        raise ValueRuleError("Usages add only if both or neither count visits.")
    if not same(a.availability, b.availability):
        raise ValueRuleError("Usages add only over the same availability.")


def refuse_strangers(visits: pd.DataFrame, zones: Sequence[str], species: Sequence[str]) -> None:
    """Raise on a zone or species that the study does not have: a look-up would drop it, and its time with it."""
    for what, known in (("zone", zones), ("species", species)):
        strangers = sorted(set(visits[what].unique()) - set(known))
        if strangers:
            raise ValueRuleError(f"visits hold {what} {strangers[0]!r}, which the study does not have.")


def divided(amount: NDArray[np.number], effort: NDArray[np.float64]) -> NDArray[np.float64]:
    """Amounts, shape (U, Z), over effort scaled to a mean of 1 over the zones looked at; 0 in the others."""
    looked = effort > 0
    if not looked.any():
        return np.zeros(amount.shape)
    hours = effort / effort[looked].max()  # or the sum of very large hours is infinite
    scale = np.where(looked, hours, 1.0) / hours[looked].mean()
    return np.asarray(np.where(looked, amount / scale, 0.0))


def used_unseen(
    zones: Sequence[str], effort: NDArray[np.float64] | None, time: Sequence[NDArray[np.number]]
) -> str | None:
    """Words on a zone that has use and was not looked at, if there is one."""
    if effort is None:
        return None
    total = np.sum([amount.sum(axis=0) for amount in time], axis=0)
    wrong = np.flatnonzero((effort == 0) & (total > 0))
    if not len(wrong):
        return None
    zone = zones[int(wrong[0])]
    return f"zone {zone!r} has use and 0 hours; a zone that was not looked at has no use. Correct its hours."


def study_availability(study: Study) -> NDArray[np.float64] | None:
    """Availability of the study's zones as shares, in the order of the layout."""
    given = study.zones.availability
    if given is None:
        return None
    return shares(np.array([given.amounts[zone] for zone in study.zones.names]))


def study_effort(study: Study, looked_at: Mapping[str, bool] | None = None) -> NDArray[np.float64] | None:
    """Hours that the study's zones were looked at, in the order of the layout.

    Without hours in the study, zones that the logs tell were not looked at have 0 and the others NaN; None where the logs
    tell of no such zone.
    """
    hours = study.zones.effort
    if hours is not None:
        return np.array([hours[zone] for zone in study.zones.names], dtype=np.float64)
    if looked_at is None or all(looked_at.values()):
        return None
    return np.array([np.nan if looked_at.get(zone, True) else 0.0 for zone in study.zones.names])


def natural(name: str) -> list[tuple[int, str, str]]:
    """Sorting key under which ``2`` comes before ``10``: of two numbers the one with more digits is the larger."""
    parts = ((part, part.lstrip("0")) for part in re.split(r"([0-9]+)", name))
    return [(len(bare), bare, part) if part.isdigit() and part.isascii() else (-1, part, "") for part, bare in parts]
