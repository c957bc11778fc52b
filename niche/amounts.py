"""Amounts by zone: checked once as they are handed to the library, and as a study gives them."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from niche.errors import ValueRuleError

if TYPE_CHECKING:
    from niche.study.model import Study


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
