"""Effort over time: hours in view on each date, one strip a species."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from matplotlib.dates import AutoDateLocator, DateFormatter, date2num
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator

from niche.errors import ValueRuleError
from niche.figures.drawing import INK, PALETTE, Drawing, look
from niche.figures.words import count, number, wrapped

if TYPE_CHECKING:
    import pandas as pd


def effort_timeline(by_day: pd.DataFrame, seen: str = "hours in view") -> Drawing:
    """Bars of hours in view, or of what else was seen, by date: a strip a species, so that gaps in the watching show.

    Parameters
    ----------
    by_day : DataFrame
        Amounts; rows are dates ``YYYY-MM-DD``, columns species (as `niche.effort.effort_by_day` gives).
    seen : str
        What the amounts are, as a plural.

    Returns
    -------
    Drawing

    Raises
    ------
    ValueRuleError
        There are no dates or no species.
    """
    if by_day.empty:
        raise ValueRuleError("a timeline needs at least one date and one species; the table of effort is empty.")
    names = [str(name) for name in by_day.columns]
    days = date2num(np.array(by_day.index, dtype="datetime64[D]"))  # type: ignore[no-untyped-call]
    # Over a long study a bar of one day would be thinner than its outline.
    width = max(0.8, (days.max() - days.min()) / 250)
    with look():
        figure = Figure(figsize=(8.2, 0.9 + 1.05 * len(names)), layout="constrained")
        strips = figure.subplots(len(names), 1, sharex=True, sharey=True, squeeze=False)[:, 0]
        for s, (axes, name) in enumerate(zip(strips, names, strict=True)):
            hours = by_day[by_day.columns[s]].to_numpy(dtype=np.float64)
            axes.bar(
                days[hours > 0],
                hours[hours > 0],
                width,
                facecolor=PALETTE[s % len(PALETTE)],
                edgecolor=INK,
                linewidth=0.8,
            )
            axes.set_title(wrapped(name, 50, 2), loc="left", fontsize=10)
            axes.set_title(_amount(hours, seen), loc="right", fontsize=9)
            axes.grid(axis="y")
            axes.spines[["top", "right"]].set_visible(False)
            axes.yaxis.set_major_locator(MaxNLocator(3, integer=True))
        last = strips[-1]
        last.set_xlim(days.min() - max(1.0, width), days.max() + max(1.0, width))
        last.set_ylim(bottom=0)
        locator = AutoDateLocator(minticks=2, maxticks=7, interval_multiples=False)  # type: ignore[no-untyped-call]
        last.xaxis.set_major_locator(locator)
        last.xaxis.set_major_formatter(DateFormatter("%Y-%m-%d"))  # type: ignore[no-untyped-call]
        figure.supylabel(seen, fontsize=10)
    told = "; ".join(
        f"{name}: {_amount(by_day[column].to_numpy(dtype=np.float64), seen)}"
        for name, column in zip(names, by_day, strict=True)
    )
    alt = f"Bars of {seen} on each date from {by_day.index[0]} to {by_day.index[-1]}, one strip a species. {told}."
    return Drawing("effort_timeline", f"{seen.capitalize()} on each date", alt, figure)


def _amount(hours: np.ndarray[tuple[int, ...], np.dtype[np.float64]], seen: str) -> str:
    dates = int((hours > 0).sum())
    if seen != "hours in view":
        return f"{hours.sum():,.0f} on {count(dates, 'date')}, {hours.max():,.0f} at most"
    return f"{number(float(hours.sum()), 1)} h on {count(dates, 'date')}, {number(float(hours.max()), 1)} h at most"
