"""Usage: time in each zone by sampling unit and species, the whole of what the numeric side needs to know.

A Usage is a sum. Two Usages over the same zones add, unit by unit, so a log can be tallied in pieces of any size.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal, cast

import numpy as np
from numpy.typing import ArrayLike, NDArray

from niche.errors import StudyError, ValueRuleError

if TYPE_CHECKING:
    import pandas as pd

    from niche.study.model import Study

Unit = Literal["animal", "session"]


@dataclass(frozen=True)
class Usage:
    """Use of zones by sampling units.

    Attributes
    ----------
    species : tuple of S str
    zones : tuple of Z str
        Every zone that could be used, in the order of the layout, used or not.
    units : tuple of S tuples of str
        Names of the sampling units of each species, sorted; numbers in them by size.
    time : tuple of S arrays, each (U_s, Z)
        Milliseconds in each zone (whole numbers), or whatever amounts were given to `from_units`.
    visits : tuple of S arrays, each (U_s, Z), or None
        Number of visits; None where only amounts are known.
    unit : {"animal", "session"}
        What a sampling unit is.
    availability : array, shape (Z,), or None
        Share of the habitat that each zone makes up; sums to 1.
    """

    species: tuple[str, ...]
    zones: tuple[str, ...]
    units: tuple[tuple[str, ...], ...]
    time: tuple[NDArray[np.number], ...]
    visits: tuple[NDArray[np.number], ...] | None = None
    unit: Unit = "animal"
    availability: NDArray[np.float64] | None = None

    @classmethod
    def from_units(
        cls,
        use: Mapping[str, ArrayLike],
        *,
        zones: Sequence[str],
        visits: Mapping[str, ArrayLike] | None = None,
        unit: Unit = "animal",
        availability: ArrayLike | None = None,
    ) -> Usage:
        """Usage from arrays, without files.

        Parameters
        ----------
        use : mapping of species name to array_like, shape (units, zones)
            Time or counts, finite and at least 0.
        zones : sequence of str
        visits : mapping of species name to array_like, shape (units, zones), optional
            Counts of visits, for Morisita's index.
        unit : {"animal", "session"}
        availability : array_like, shape (zones,), optional
            Amounts, of which the shares are taken.

        Raises
        ------
        ValueRuleError
            A shape, a sign or a name does not fit.

        Examples
        --------
        >>> usage = Usage.from_units({"dunlin": [[3, 1], [0, 2]], "redshank": [[1, 1]]}, zones=["mud", "sand"])
        >>> usage.time[0].sum(axis=0)
        array([3., 3.])
        """
        names = tuple(str(zone) for zone in zones)
        if len(set(names)) != len(names):
            raise ValueRuleError(f"zones are {list(names)}; each zone has a name of its own.")
        if not use:
            raise ValueRuleError("use names no species; give at least one.")
        if unit not in ("animal", "session"):
            raise ValueRuleError(f"unit is {unit!r}; it must be 'animal' or 'session'.")
        strangers = [species for species in visits or {} if species not in use]
        if strangers:
            raise ValueRuleError(f"visits names {strangers[0]!r}, which use does not.")
        time, counts, labels = [], [], []
        for species, given in use.items():
            amounts = _checked(given, species, "use", len(names))
            time.append(amounts)
            labels.append(tuple(str(i + 1) for i in range(len(amounts))))
            if visits is not None:
                if species not in visits:
                    raise ValueRuleError(
                        f"visits has no counts for {species!r}; give them for every species or for none."
                    )
                count = _checked(visits[species], species, "visits", len(names))
                if count.shape != amounts.shape:
                    raise ValueRuleError(f"visits of {species!r} has shape {count.shape}; use has {amounts.shape}.")
                counts.append(count)
        shares = None
        if availability is not None:
            row = cast("ArrayLike", [availability])  # as the one row of a table
            shares = _shares(_checked(row, "all zones", "availability", len(names))[0])
        return cls(
            tuple(use), names, tuple(labels), tuple(time), tuple(counts) if visits is not None else None, unit, shares
        )

    @classmethod
    def from_visits(cls, visits: pd.DataFrame, study: Study) -> Usage:
        """Tally visits.

        Parameters
        ----------
        visits : DataFrame
            Columns of `niche.logs.visits.COLUMNS`; visits out of sight are not tallied.
        study : Study
            Gives the species and zones with their order, the unit and the availability.

        Raises
        ------
        StudyError
            The unit is ``session`` and the study names no column for it.
        """
        unit = study.analysis.unit
        if getattr(study.logs.columns, unit) is None:
            raise StudyError(
                f"analysis.unit is {unit!r}, and logs.columns names no {unit} column; name it, or choose the other unit."
            )
        zones = study.zones.names
        species = tuple(s.name for s in study.species) or tuple(sorted(visits["species"].unique()))
        seen = visits[visits["zone"] != ""]
        place = {zone: number for number, zone in enumerate(zones)}
        column = seen["zone"].map(place).to_numpy(dtype=np.intp)
        length = (seen["end"] - seen["start"]).to_numpy(dtype=np.int64)
        names, who = seen[unit].to_numpy(dtype=object), seen["species"].to_numpy(dtype=object)
        units, time, counts = [], [], []
        for name in species:
            mine = who == name
            labels = sorted(set(names[mine]), key=_natural)
            at = {label: number for number, label in enumerate(labels)}
            row = np.array([at[label] for label in names[mine]], dtype=np.intp)
            tally = np.zeros((len(labels), len(zones)), dtype=np.int64)
            count = np.zeros_like(tally)
            np.add.at(tally, (row, column[mine]), length[mine])
            np.add.at(count, (row, column[mine]), 1)
            units.append(tuple(labels))
            time.append(tally)
            counts.append(count)
        return cls(species, zones, tuple(units), tuple(time), tuple(counts), unit, study_availability(study))

    def __add__(self, other: Usage) -> Usage:
        """Sum of two Usages over the same species and zones: units of the same name are added."""
        if (self.species, self.zones, self.unit) != (other.species, other.zones, other.unit):
            raise ValueRuleError("Usages add only over the same species, zones and unit.")
        if (self.visits is None) != (other.visits is None):
            raise ValueRuleError("Usages add only if both or neither count visits.")
        if not np.array_equal(_or_none(self.availability), _or_none(other.availability)):
            raise ValueRuleError("Usages add only over the same availability.")
        units: list[tuple[str, ...]] = []
        time: list[NDArray[np.number]] = []
        counts: list[NDArray[np.number]] = []
        for s in range(len(self.species)):
            names = sorted({*self.units[s], *other.units[s]}, key=_natural)
            row = {name: number for number, name in enumerate(names)}
            units.append(tuple(names))
            for gathered, field in ((time, "time"), (counts, "visits")):
                if getattr(self, field) is None:
                    continue
                mine, theirs = getattr(self, field)[s], getattr(other, field)[s]
                total = np.zeros((len(names), len(self.zones)), dtype=np.result_type(mine, theirs))
                total[[row[name] for name in self.units[s]]] += mine
                total[[row[name] for name in other.units[s]]] += theirs
                gathered.append(total)
        return Usage(
            self.species,
            self.zones,
            tuple(units),
            tuple(time),
            tuple(counts) if self.visits is not None else None,
            self.unit,
            self.availability,
        )

    def with_use(self) -> Usage:
        """The same without units that have no use: they tell nothing about zones, and are no unit of a resample."""
        used = [t.sum(axis=1) > 0 for t in self.time]
        return replace(
            self,
            units=tuple(
                tuple(n for n, u in zip(names, us, strict=True) if u)
                for names, us in zip(self.units, used, strict=True)
            ),
            time=tuple(t[u] for t, u in zip(self.time, used, strict=True)),
            visits=None if self.visits is None else tuple(v[u] for v, u in zip(self.visits, used, strict=True)),
        )

    @property
    def unit_counts(self) -> NDArray[np.int64]:
        """Number of sampling units of each species, shape (S,)."""
        return np.array([len(names) for names in self.units], dtype=np.int64)


def _natural(name: str) -> list[tuple[int, str, str]]:
    """Sorting key under which ``2`` comes before ``10``: of two numbers the one with more digits is the larger."""
    parts = ((part, part.lstrip("0")) for part in re.split(r"([0-9]+)", name))
    return [(len(bare), bare, part) if part.isdigit() and part.isascii() else (-1, part, "") for part, bare in parts]


def study_availability(study: Study) -> NDArray[np.float64] | None:
    """Availability of the study's zones as shares, in the order of the layout."""
    given = study.zones.availability
    if given is None:
        return None
    return _shares(np.array([given.amounts[zone] for zone in study.zones.names]))


def _or_none(shares: NDArray[np.float64] | None) -> NDArray[np.float64]:
    """Shares, none as an empty array, so that two can be compared."""
    return np.empty(0) if shares is None else shares


def _shares(amounts: NDArray[np.float64]) -> NDArray[np.float64]:
    if amounts.max(initial=0) <= 0:
        raise ValueRuleError("availability adds up to 0; at least one zone must be available.")
    amounts = amounts / amounts.max()  # or the sum of very large amounts is infinite
    return np.asarray(amounts / amounts.sum())


def _checked(given: ArrayLike, species: str, what: str, zones: int) -> NDArray[np.float64]:
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
