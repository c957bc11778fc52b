"""Several sites in one log: zone labels and animal names that may not mean the same at each."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from niche.logs.ledger import Entry, Ledger
from niche.logs.visits.table import OUT_OF_SIGHT, codes, listed, move
from niche.study.model import Study

ZONES = "one zone label at several sites"
ANIMALS = "one animal name at several sites"
_SHOWN = 4


def shared_zones(visits: pd.DataFrame, study: Study, ledger: Ledger) -> pd.DataFrame:
    """Stop the work where sites share zone labels and the study does not say whether they are the same zones."""
    if study.zones.same_across_sites is not None:
        return visits
    seen = visits[(visits["zone"] != OUT_OF_SIGHT) & (visits["site"] != "")]
    first = seen.drop_duplicates(["zone", "site"])
    second = first[first.duplicated("zone")]
    if second.empty:
        return visits
    row = listed(second)[0]
    sites = _few(first["site"][first["zone"] == row.zone])
    zones = _few(second["zone"].drop_duplicates())
    problem = (
        f"zone {row.zone!r} stands at the sites {sites} (labels that they share: {zones}); set `zones.same_across_sites` to "
        'true if a label means the same zone everywhere, or to false and list each zone as "site: zone" in the layout'
    )
    move(ledger, row, ZONES, problem, "stop")
    return visits.drop(index=second.index[:1])


def shared_animals(visits: pd.DataFrame, study: Study, ledger: Ledger) -> tuple[pd.DataFrame, NDArray[np.int64]]:
    """Animals whose name stands at several sites, by the policy ``logs.problems.reused_animals``.

    Returns
    -------
    visits : DataFrame
        With an animal of its own at each site where the study says so.
    who : array of int, shape (n,)
        The animal of each visit. Where the work stops, it is another at each site, so that it stops but once.
    """
    policy = study.logs.problems.reused_animals
    who = codes(visits, "species", "animal")
    if policy == "same_animal" or study.logs.columns.animal is None:
        return visits, who
    placed = visits.assign(who=who)[visits["site"] != ""]
    spans = placed.groupby(["who", "site"], sort=False).agg(start=("start", "min"), end=("end", "max")).reset_index()
    spans = spans[spans.duplicated("who", keep=False)].sort_values(["who", "start", "end", "site"])
    if spans.empty:
        return visits, who
    if policy == "keep_apart_by_site":
        return _kept_apart(visits, who, spans, ledger)
    apart, by_site = who.copy(), codes(visits.assign(who=who), "who", "site")
    gone = []
    for animal, mine in spans.groupby("who"):
        later = mine["start"].to_numpy()[1:] <= np.maximum.accumulate(mine["end"].to_numpy())[:-1]
        sites = mine["site"].tolist()
        of = placed[placed["who"] == animal]
        if later.any():
            place = sites[1 + int(np.argmax(later))]
            first = of[(of["site"] == place).to_numpy()].head(1)
            (row,) = listed(first)
            move(ledger, row, ANIMALS, _problem(row.animal, sites, "over the same days"), "stop")
            gone += first.index.tolist()
            apart = np.where(who == animal, len(visits) + by_site, apart)
        else:
            (row,) = listed(of[(of["site"] == sites[1]).to_numpy()].head(1))
            problem = _problem(row.animal, sites, "one after the other")
            ledger.note(Entry(row.file, int(row.row), "animal", row.animal, ANIMALS, problem, "flagged"))
    keep = ~visits.index.isin(gone)
    return visits[keep], pd.factorize(apart[keep])[0].astype(np.int64)


def _kept_apart(
    visits: pd.DataFrame, who: NDArray[np.int64], spans: pd.DataFrame, ledger: Ledger
) -> tuple[pd.DataFrame, NDArray[np.int64]]:
    """Give the animals a name of their own at each site."""
    reused = np.isin(who, spans["who"].unique()) & (visits["site"] != "").to_numpy()
    animal, site = visits["animal"].to_numpy(dtype=object), visits["site"].to_numpy(dtype=object)
    named = np.where(reused, animal + " (" + site + ")", animal)
    first = visits[reused].assign(named=named[reused]).drop_duplicates(["species", "named"])
    for row in listed(first):
        problem = f"counted as {row.named!r} here, for the name stands at other sites too"
        ledger.note(Entry(row.file, int(row.row), "animal", row.animal, "kept apart by site", problem, "repaired"))
    visits = visits.assign(animal=named)
    return visits, codes(visits, "species", "animal")


def _problem(animal: str, sites: list[str], when: str) -> str:
    return (
        f"{animal!r} stands at the sites {_few(pd.Series(sites))} {when}; set `logs.problems.reused_animals` to "
        '"keep_apart_by_site" if these are different animals, or to "same_animal" if one moved between them'
    )


def _few(names: pd.Series[str]) -> str:
    shown = ", ".join(repr(name) for name in names.tolist()[:_SHOWN])
    return shown + (f" and {len(names) - _SHOWN} more" if len(names) > _SHOWN else "")
