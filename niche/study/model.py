"""The study file: what was watched, where the logs are, how to read them, what to compute.

A study is one TOML file. Every key is checked: an unknown key, a wrong type or a value outside its rule stops the work
with the key's path, what was found and what is allowed. `docs/study_file.md` describes each key.
"""

from __future__ import annotations

import math
from pathlib import Path
from typing import Annotated, Literal, Self

from pydantic import Field, model_validator

from niche.study.log_model import Logs
from niche.study.names import badly_spaced, key, named_twice
from niche.study.section import Positive, Section, Text


class Availability(Section):
    """How much of the habitat each zone makes up, and how that is known."""

    source: Text
    unit: Text = "share"
    amounts: dict[str, Annotated[float, Field(ge=0, allow_inf_nan=False)]]


class Zones(Section):
    """The zones, as a grid of names (top row first) or as a zone sheet: a CSV of zone, row, column, availability."""

    rows: Annotated[tuple[Text, ...], Field(strict=False)] = ()
    columns: Annotated[tuple[Text, ...], Field(strict=False)] = ()
    layout: Annotated[tuple[Annotated[tuple[str, ...], Field(strict=False)], ...], Field(strict=False)] = ()
    sheet: Text | None = None
    availability: Availability | None = None
    availability_source: Text | None = None
    effort: dict[str, Annotated[float, Field(ge=0, allow_inf_nan=False)]] | None = None
    """Hours that each zone was looked at, or that its antenna was on; 0 for a zone that was not looked at."""
    same_across_sites: bool | None = None
    """Whether a zone label means the same zone at every site; asked for where sites share labels. With false, the layout
    names each zone as ``site: zone``."""

    @model_validator(mode="after")
    def _layout_fits(self) -> Self:
        if bool(self.layout) == (self.sheet is not None):
            raise ValueError("give the zones either as `layout` or as `sheet`, and not both")
        if self.sheet is not None and (self.rows or self.columns or self.availability):
            raise ValueError("with a zone sheet, rows, columns and availability stand in the sheet, not here")
        if self.sheet is None and self.availability_source is not None:
            raise ValueError("`availability_source` goes with a zone sheet; here use `zones.availability.source`")
        if self.layout:
            check_layout(self.rows, self.columns, self.layout)
            if self.availability is not None:
                check_amounts(self.names, self.availability.amounts)
        return self

    @property
    def names(self) -> tuple[str, ...]:
        """Zone names in the order of the layout, row by row."""
        return tuple(zone for row in self.layout for zone in row if zone)


def check_layout(rows: tuple[str, ...], columns: tuple[str, ...], layout: tuple[tuple[str, ...], ...]) -> None:
    """Raise ValueError unless the layout is a full grid that names each zone once."""
    if len(rows) != len(layout):
        raise ValueError(f"the layout has {len(layout)} rows and `rows` names {len(rows)}; they must be as many")
    for number, row in enumerate(layout, 1):
        if len(row) != len(columns):
            raise ValueError(
                f"row {number} of the layout has {len(row)} cells and `columns` names {len(columns)}; "
                'write "" where there is no zone'
            )
    names = [zone for row in layout for zone in row if zone]
    if not names:
        raise ValueError("the layout names no zone")
    if (spaced := badly_spaced(names)) is not None:
        raise ValueError(f"zone {spaced!r} has spaces at an end or in a row, or not plain ones; write single spaces")
    if (twice := named_twice(names)) is not None:
        raise ValueError(f"zone {twice!r} is named twice, spelling aside; each zone has one place and one name")


def check_amounts(zones: tuple[str, ...], amounts: dict[str, float]) -> None:
    """Raise ValueError unless every zone and nothing else has an amount, and one amount is above 0."""
    strangers = [zone for zone in amounts if zone not in zones]
    if strangers:
        raise ValueError(f"availability names {strangers[0]!r}, which is no zone of the layout")
    missing = [zone for zone in zones if zone not in amounts]
    if missing:
        raise ValueError(
            f"availability has no amount for zone {missing[0]!r}; give one for each zone, 0 if there is none"
        )
    if not any(amounts.values()):
        raise ValueError("all amounts of availability are 0; at least one must be above")


class Capacity(Section):
    """Carrying capacity K as a range with its source."""

    low: Positive
    high: Positive
    source: Text
    distribution: Literal["log-uniform", "uniform"] = "log-uniform"

    @model_validator(mode="after")
    def _low_first(self) -> Self:
        if self.low > self.high:
            raise ValueError(f"low is {self.low:g} and high is {self.high:g}; low must not be above high")
        return self


class Species(Section):
    """One species; everything but its name is optional."""

    name: Text
    scientific_name: Text | None = None
    body_mass: Positive | None = None
    intake: Positive | None = None
    k: Capacity | None = None
    r: Positive | None = None
    start: Positive | None = None


class Settings(Section):
    """What to compute and how."""

    resamples: Annotated[int, Field(ge=100, le=1_000_000)] = 9999
    confidence: Annotated[float, Field(gt=0.5, lt=1)] = 0.95
    seed: Annotated[int, Field(ge=0, lt=2**63)] = 1
    unit: Literal["animal", "session"] = "animal"
    weighting: Literal["time", "animal"] = "time"
    interval: Literal["jackknife_t", "percentile", "widened_percentile", "bca"] = "jackknife_t"
    core: Annotated[float, Field(gt=0, lt=1)] = 0.5
    demand: Literal["intake", "body_mass", "equal"] | None = None
    mass_exponent: Annotated[float, Field(gt=0, le=2)] = 0.75
    effort: Literal["ignore", "divide"] = "ignore"
    """Whether use is divided by the hours that each zone was looked at (``zones.effort``) before proportions are taken."""


class ReportText(Section):
    """What only people know: printed in the report as given."""

    permits: str = ""
    competent_person: str = ""
    ethics: str = ""


class Study(Section):
    """A whole study file."""

    title: Text
    site: str = ""
    note: str = ""
    logs: Logs
    zones: Zones
    species: Annotated[tuple[Species, ...], Field(strict=False)] = ()
    analysis: Settings = Settings()
    report: ReportText = ReportText()

    _folder: Path = Path()

    @model_validator(mode="after")
    def _names_are_unambiguous(self) -> Self:
        listed = [s.name for s in self.species]
        if (spaced := badly_spaced(listed)) is not None:
            raise ValueError(
                f"species {spaced!r} has spaces at an end or in a row, or not plain ones; write single spaces"
            )
        if (twice := named_twice(listed)) is not None:
            raise ValueError(f"species {twice!r} is listed twice, spelling aside; each species has one table")
        unseen = {key(label) for label in self.logs.out_of_sight}
        both = next((zone for zone in self.zones.names if key(zone) in unseen), None)
        if both is not None:
            raise ValueError(f"{both!r} is a zone and stands in `logs.out_of_sight` too; it can be only one of them")
        demand = self.analysis.demand
        if demand in ("intake", "body_mass"):
            without = [s.name for s in self.species if getattr(s, demand) is None]
            if without or not self.species:
                named = without[0] if without else "any species"
                raise ValueError(f"analysis.demand is {demand!r}, but there is no `{demand}` for {named}")
        return self

    @property
    def folder(self) -> Path:
        """Folder of the study file; paths in the study are relative to it."""
        return self._folder

    def demand_basis(self) -> Literal["intake", "body_mass", "equal"]:
        """What relative demand rests on: as set, else the best that every species has."""
        if self.analysis.demand is not None:
            return self.analysis.demand
        bases: tuple[Literal["intake", "body_mass"], ...] = ("intake", "body_mass")
        for basis in bases:
            if self.species and all(getattr(s, basis) is not None for s in self.species):
                return basis
        return "equal"

    def demand_of(self, name: str) -> float:
        """Per-capita demand of a species, in the units of `demand_basis` (mass to the exponent for body mass).

        Source of the exponent: Kleiber, M. (1932) Body size and metabolism. *Hilgardia* 6, 315–353.
        """
        basis = self.demand_basis()
        found = next((s for s in self.species if s.name == name), None)
        if basis == "equal" or found is None:
            return 1.0
        value = found.intake if basis == "intake" else found.body_mass
        if value is None:
            return math.nan
        return value if basis == "intake" else value**self.analysis.mass_exponent
