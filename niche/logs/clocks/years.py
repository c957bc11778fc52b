"""Years that a watch cannot have: outside the study's window, or where a clock starts after its battery was out."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from niche.logs.clocks.written import DAY

START_YEARS = (1970, 2000, 2012)
"""Years at which clocks of loggers and cameras begin again."""

_EPOCHS_APART = 1462
"""Days between the two epochs of spreadsheets."""


def years_of(ms: NDArray[np.int64]) -> NDArray[np.int64]:
    """Calendar year of each time."""
    return ms.astype("datetime64[ms]").astype("datetime64[Y]").astype(np.int64) + 1970


def outside(ms: NDArray[np.int64], fine: NDArray[np.bool_], first: int | None, last: int | None) -> NDArray[np.object_]:
    """Words for times outside the years ``first`` to ``last``, None for others."""
    said = np.full(len(ms), None, dtype=object)
    if first is None and last is None:
        return said

    def within(moved: NDArray[np.int64]) -> NDArray[np.bool_]:
        years = years_of(moved)
        low = np.ones(len(ms), dtype=bool) if first is None else years >= first
        return low if last is None else low & (years <= last)

    out = fine & ~within(ms)
    if not out.any():
        return said
    window = f"{first if first is not None else '…'} to {last if last is not None else '…'}"
    said[out] = (
        f"outside {window}, as `logs.clock.first_year` and `last_year` say; if the clock was wrong, its whole deployment "
        "needs correcting"
    )
    for days, epoch in ((_EPOCHS_APART, 1904), (-_EPOCHS_APART, 1900)):
        said[out & within(ms + days * DAY)] = (
            f"outside {window}, and inside with the other epoch of spreadsheets, 1,462 days away: set `logs.clock.epoch` to "
            f"{epoch}, or copy the dates anew"
        )
    return said


def restarted(ms: NDArray[np.int64], fine: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Times in a year at which clocks begin again, while most of the others are more than a year away."""
    years = years_of(ms)
    suspect = fine & np.isin(years, START_YEARS)
    if not suspect.any():
        return suspect
    others = years[fine & ~suspect]
    if len(others) <= suspect.sum():
        return np.zeros(len(ms), dtype=bool)
    near = np.array([(np.abs(others - year) <= 1).mean() > 0.5 for year in START_YEARS])
    return suspect & ~np.isin(years, np.array(START_YEARS)[near])


def day_zero(ms: NDArray[np.int64], fine: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Times in the first 60 days of a spreadsheet's calendar: no dates, but times of day or durations shown as one."""
    start_1900, start_1904 = (int(np.datetime64(day, "ms").astype(np.int64)) for day in ("1899-12-30", "1904-01-01"))
    return fine & (
        ((ms >= start_1900) & (ms < start_1900 + 62 * DAY)) | ((ms >= start_1904) & (ms < start_1904 + 60 * DAY))
    )
