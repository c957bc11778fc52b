"""Usage: use of each zone by sampling unit and species, the whole of what the numeric side needs to know.

A Usage is a sum. Two Usages over the same zones add, unit by unit, so a log can be tallied in pieces of any size.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from niche.amounts import (
    check_addable,
    checked,
    checked_counts,
    checked_row,
    divided,
    natural,
    refuse_strangers,
    shares,
    study_availability,
    study_effort,
    used_unseen,
)
from niche.errors import StudyError, ValueRuleError

if TYPE_CHECKING:
    import pandas as pd

    from niche.study.log_model import Measure
    from niche.study.model import Study

Unit = Literal["animal", "session"]
Zero = Literal["", "not looked at", "not there", "not used"]
"""Why a species has no use of a zone; empty text where it has."""


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
        Milliseconds in each zone (whole numbers) or numbers of what ``measure`` says, or whatever amounts were given to
        `from_units`. Never divided by effort: see `use`.
    visits : tuple of S arrays, each (U_s, Z), or None
        Number of visits; None where only amounts are known.
    unit : {"animal", "session"}
        What a sampling unit is.
    availability : array, shape (Z,), or None
        Share of the habitat that each zone makes up; sums to 1.
    effort : array, shape (Z,), or None
        Hours that each zone was looked at, 0 for one that was not, NaN where hours are not known; None where all were
        looked at alike.
    measure : {"time", "scans", "events", "counts", "percent", "occurrences"}
        What ``time`` holds.
    by_effort : bool
        Whether `use` is ``time`` divided by effort.
    placed : bool
        Whether people, not animals, chose the zone of each unit, as with cameras: units then tell nothing of how animals
        differ, and results have no interval.
    """

    species: tuple[str, ...]
    zones: tuple[str, ...]
    units: tuple[tuple[str, ...], ...]
    time: tuple[NDArray[np.number], ...]
    visits: tuple[NDArray[np.number], ...] | None = None
    unit: Unit = "animal"
    availability: NDArray[np.float64] | None = None
    effort: NDArray[np.float64] | None = None
    measure: Measure = "time"
    by_effort: bool = False
    placed: bool = False

    @classmethod
    def from_units(
        cls,
        use: Mapping[str, ArrayLike],
        *,
        zones: Sequence[str],
        visits: Mapping[str, ArrayLike] | None = None,
        unit: Unit = "animal",
        availability: ArrayLike | None = None,
        effort: ArrayLike | None = None,
        measure: Measure = "time",
        by_effort: bool = False,
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
        effort : array_like, shape (zones,), optional
            Hours that each zone was looked at; a zone with 0 must have no use.
        measure : str
            What the numbers of use are.
        by_effort : bool
            Whether proportions are of use divided by effort.

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
        time = {species: checked(given, species, "use", len(names)) for species, given in use.items()}
        share = None if availability is None else shares(checked_row(availability, "availability", len(names)))
        hours = None if effort is None else checked_row(effort, "effort", len(names))
        usage = cls(
            tuple(time),
            names,
            tuple(tuple(str(number) for number in range(1, len(amounts) + 1)) for amounts in time.values()),
            tuple(time.values()),
            None if visits is None else checked_counts(visits, time),
            unit,
            share,
            hours,
            measure,
            by_effort,
        )
        if (contradiction := used_unseen(usage.zones, usage.effort, usage.time)) is not None:
            raise ValueRuleError(contradiction)
        return usage

    @classmethod
    def from_visits(cls, visits: pd.DataFrame, study: Study, looked_at: Mapping[str, bool] | None = None) -> Usage:
        """Tally visits.

        Parameters
        ----------
        visits : DataFrame
            Columns of `niche.logs.visits.COLUMNS`; visits out of sight are not tallied.
        study : Study
            Gives the species and zones with their order, the unit, the availability and the effort.
        looked_at : mapping of zone to bool, optional
            Zones that the logs cannot have missed, from `niche.logs.effort_by_zone`, where the study gives no effort.

        Raises
        ------
        StudyError
            The unit is ``session`` and the study names no column for it, or a zone with use was not looked at.
        ValueRuleError
            A visit is in a zone, or of a species, that the study does not have.
        """
        unit = study.analysis.unit
        if not study.logs.tells(unit):
            raise StudyError(
                f"analysis.unit is {unit!r}, and logs.columns names no {unit} column; name it, or choose the other unit."
            )
        zones = study.zones.names
        species = tuple(s.name for s in study.species) or tuple(sorted(visits["species"].unique()))
        seen = visits[visits["zone"] != ""]
        refuse_strangers(seen, zones, species)
        place = {zone: number for number, zone in enumerate(zones)}
        column = seen["zone"].map(place).to_numpy(dtype=np.intp)
        amount = seen["amount"].to_numpy(dtype=np.int64)
        names, who = seen[unit].to_numpy(dtype=object), seen["species"].to_numpy(dtype=object)
        units, time, counts = [], [], []
        for name in species:
            mine = who == name
            labels = sorted(set(names[mine]), key=natural)
            at = {label: number for number, label in enumerate(labels)}
            row = np.array([at[label] for label in names[mine]], dtype=np.intp)
            tally = np.zeros((len(labels), len(zones)), dtype=np.int64)
            count = np.zeros_like(tally)
            np.add.at(tally, (row, column[mine]), amount[mine])
            np.add.at(count, (row, column[mine]), 1)
            units.append(tuple(labels))
            time.append(tally)
            counts.append(count)
        effort = study_effort(study, looked_at)
        usage = cls(
            species,
            zones,
            tuple(units),
            tuple(time),
            None if study.logs.rule == "tallies" else tuple(counts),  # a sum tells of no visits
            unit,
            study_availability(study),
            effort,
            study.logs.measure,
            study.analysis.effort == "divide",
            placed=study.logs.rule == "camera",
        )
        if (contradiction := used_unseen(usage.zones, usage.effort, usage.time)) is not None:
            raise StudyError(f"zones.effort: {contradiction}")
        return usage

    def __add__(self, other: Usage) -> Usage:
        """Sum of two Usages over the same species and zones: units of the same name are added."""
        check_addable(self, other)
        units: list[tuple[str, ...]] = []
        time: list[NDArray[np.number]] = []
        counts: list[NDArray[np.number]] = []
        for s in range(len(self.species)):
            names = sorted({*self.units[s], *other.units[s]}, key=natural)
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
        return replace(
            self, units=tuple(units), time=tuple(time), visits=tuple(counts) if self.visits is not None else None
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
    def use(self) -> tuple[NDArray[np.number], ...]:
        """What proportions are taken of: S arrays, each (U_s, Z).

        That is ``time``, or where ``by_effort`` is set ``time`` divided by effort, which is scaled to a mean of 1 over
        the zones looked at. A zone that was not looked at has no use.
        """
        if not self.by_effort or self.effort is None:
            return self.time
        return tuple(divided(amount, self.effort) for amount in self.time)

    def zeros(self) -> NDArray[np.object_]:
        """The three kinds of zero: why a species has no use of a zone.

        Returns
        -------
        array of str, shape (S, Z)
            ``"not looked at"`` where effort is 0, else ``"not there"`` where availability is 0, else ``"not used"``; empty
            text where there is use.

        Examples
        --------
        >>> usage = Usage.from_units({"dunlin": [[3, 0, 0]]}, zones=["mud", "sand", "creek"], effort=[2, 2, 0])
        >>> usage.zeros().tolist()
        [['', 'not used', 'not looked at']]
        """
        kinds = np.full((len(self.species), len(self.zones)), "", dtype=object)
        for s, amount in enumerate(self.time):
            unused = np.asarray(amount.sum(axis=0) == 0)
            kinds[s, unused] = "not used"
            if self.availability is not None:
                kinds[s, unused & (self.availability == 0)] = "not there"
            if self.effort is not None:
                kinds[s, unused & (self.effort == 0)] = "not looked at"
        return kinds

    @property
    def unit_counts(self) -> NDArray[np.int64]:
        """Number of sampling units of each species, shape (S,)."""
        return np.array([len(names) for names in self.units], dtype=np.int64)
