"""Effort: who was watched for how long, and how much of it out of sight."""

from __future__ import annotations

import numpy as np
import pandas as pd

from niche.logs.visits import OUT_OF_SIGHT


def effort(visits: pd.DataFrame, species: tuple[str, ...]) -> pd.DataFrame:
    """Effort by species.

    Parameters
    ----------
    visits : DataFrame
        Columns of `niche.logs.visits.COLUMNS`, out-of-sight visits included.
    species : tuple of str
        Species to list, in this order; one without visits gets zeros.

    Returns
    -------
    DataFrame
        A row a species: animals, sessions, visits (in a zone), zones used, seconds in view, seconds out of sight, share
        of the time in view that the most-watched animal makes up, and least, median and most seconds in view of an
        animal.
    """
    length = (visits["end"] - visits["start"]) / 1000
    view = visits["zone"] != OUT_OF_SIGHT
    rows = []
    for name in species:
        mine = visits["species"] == name
        each = length[mine & view].groupby(visits["animal"]).sum()
        inside = float(each.sum())
        rows.append(
            {
                "species": name,
                "animals": int(visits.loc[mine, "animal"].nunique()),
                "sessions": int(visits.loc[mine, "session"].nunique()),
                "visits": int((mine & view).sum()),
                "zones_used": int(visits.loc[mine & view, "zone"].nunique()),
                "seconds_in_view": inside,
                "seconds_out_of_sight": float(length[mine & ~view].sum()),
                "most_watched_share": float(each.max() / inside) if inside else np.nan,
                "seconds_least": float(each.min()) if inside else np.nan,
                "seconds_median": float(each.median()) if inside else np.nan,
                "seconds_most": float(each.max()) if inside else np.nan,
            }
        )
    return pd.DataFrame(rows)


def effort_by_day(visits: pd.DataFrame, time_zone: str | None) -> pd.DataFrame:
    """Hours in view on each date for each species (rows dates, columns species); dates local where a zone is declared."""
    start = pd.to_datetime(visits["start"].to_numpy(dtype=np.int64), unit="ms", utc=True)
    local = start.tz_convert(time_zone) if time_zone else start
    view = (visits["zone"] != OUT_OF_SIGHT).to_numpy()
    hours = ((visits["end"] - visits["start"]) / 3_600_000).to_numpy()
    frame = pd.DataFrame({"date": local.strftime("%Y-%m-%d")[view], "species": visits["species"].to_numpy()[view]})
    frame["hours"] = hours[view]
    return frame.pivot_table(index="date", columns="species", values="hours", aggfunc="sum", fill_value=0.0)
