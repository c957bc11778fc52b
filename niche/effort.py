"""Effort: who was watched for how long, and how much of it out of sight."""

from __future__ import annotations

import numpy as np
import pandas as pd

from niche.logs.visits import OUT_OF_SIGHT
from niche.study.log_model import Measure


def effort(visits: pd.DataFrame, species: tuple[str, ...], measure: Measure = "time") -> pd.DataFrame:
    """Effort by species.

    Parameters
    ----------
    visits : DataFrame
        Columns of `niche.logs.visits.COLUMNS`, out-of-sight visits included.
    species : tuple of str
        Species to list, in this order; one without visits gets zeros.
    measure : str
        What use is measured in; where it is not time, all seconds are NaN and shares are of what was counted.

    Returns
    -------
    DataFrame
        A row a species: animals, sessions, visits (in a zone), zones used, seconds in view, seconds out of sight, share
        of the time in view that the most-watched animal makes up, and least, median and most seconds in view of an
        animal.
    """
    timed = measure == "time"
    length = visits["amount"] / (1000 if timed else 1)
    view = visits["zone"] != OUT_OF_SIGHT
    rows = []
    for name in species:
        mine = visits["species"] == name
        each = length[mine & view].groupby(visits["animal"], dropna=False).sum()
        inside = float(each.sum())
        rows.append(
            {
                "species": name,
                "animals": int(visits.loc[mine, "animal"].nunique()),
                "sessions": int(visits.loc[mine, "session"].nunique()),
                "visits": int((mine & view).sum()),
                "zones_used": int(visits.loc[mine & view, "zone"].nunique()),
                "seconds_in_view": inside if timed else np.nan,
                "seconds_out_of_sight": float(length[mine & ~view].sum()) if timed else np.nan,
                "most_watched_share": float(each.max() / inside) if inside else np.nan,
                "seconds_least": float(each.min()) if inside and timed else np.nan,
                "seconds_median": float(each.median()) if inside and timed else np.nan,
                "seconds_most": float(each.max()) if inside and timed else np.nan,
            }
        )
    return pd.DataFrame(rows)


def out_of_sight_by_session(visits: pd.DataFrame, measure: Measure = "time") -> pd.DataFrame:
    """How much of each session each species was out of sight.

    Parameters
    ----------
    visits : DataFrame
        Columns of `niche.logs.visits.COLUMNS`, out-of-sight visits included.
    measure : str
        What use is measured in.

    Returns
    -------
    DataFrame
        A row a species and session, sorted: visits in view, visits out of sight, seconds in view and out of sight (NaN
        where use is not measured in time), and the share out of sight of what was watched, 0 to 1 (NaN where nothing
        was).
    """
    scale = 1000 if measure == "time" else 1
    gone = (visits["zone"] == OUT_OF_SIGHT).to_numpy()
    amount = visits["amount"].to_numpy(dtype=np.int64) / scale
    frame = pd.DataFrame(
        {
            "species": visits["species"].to_numpy(),
            "session": visits["session"].to_numpy(),
            "visits_in_view": (~gone).astype(np.int64),
            "visits_out_of_sight": gone.astype(np.int64),
            "seconds_in_view": np.where(gone, 0.0, amount),
            "seconds_out_of_sight": np.where(gone, amount, 0.0),
        }
    )
    table = frame.groupby(["species", "session"], dropna=False, sort=True).sum().reset_index()
    watched = table["seconds_in_view"] + table["seconds_out_of_sight"]
    table["share_out_of_sight"] = table["seconds_out_of_sight"] / watched.where(watched > 0)
    if measure != "time":
        table[["seconds_in_view", "seconds_out_of_sight"]] = np.nan
    return table


def effort_by_day(visits: pd.DataFrame, time_zone: str | None, measure: Measure = "time") -> pd.DataFrame:
    """What was seen on each date of each species.

    Parameters
    ----------
    visits : DataFrame
        Columns of `niche.logs.visits.COLUMNS`; visits out of sight are left out.
    time_zone : str, optional
        Zone of the dates; UTC by default.
    measure : str
        What use is measured in.

    Returns
    -------
    DataFrame
        Hours in view, or how many were seen where use is not measured in time; rows are dates, columns species. Empty for
        a tally sheet, which tells no dates.
    """
    start = pd.to_datetime(visits["start"].to_numpy(dtype=np.int64), unit="ms", utc=True)
    local = start.tz_convert(time_zone) if time_zone else start
    dated = bool(visits["start"].any())  # a tally sheet does not tell when
    view = (visits["zone"] != OUT_OF_SIGHT).to_numpy() & dated
    amount = (visits["amount"] / (3_600_000 if measure == "time" else 1)).to_numpy()
    frame = pd.DataFrame({"date": local.strftime("%Y-%m-%d")[view], "species": visits["species"].to_numpy()[view]})
    frame["amount"] = amount[view]
    return frame.pivot_table(index="date", columns="species", values="amount", aggfunc="sum", fill_value=0.0)
