"""Assumptions behind the numbers, each as met, not met or unknown, with what the logs and the study say about it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from niche.effort import effort
from niche.figures.words import count, percent

if TYPE_CHECKING:
    from niche.analysis import Run

Status = Literal["met", "not met", "unknown"]

OVERLAPPING = "overlaps another bout of the same animal"
UNKNOWN_ZONE = "unknown zone"
"""Reasons in the ledger that bear on an assumption."""


@dataclass(frozen=True)
class Assumption:
    """One assumption, its standing, and why."""

    name: str
    status: Status
    why: str


def assumptions(run: Run) -> list[Assumption]:
    """All assumptions that the results of a run rest on."""
    found = [_exclusive(run), _exhaustive(run), _recognised(run), *_watching(run), _availability(run)]
    if run.analysis.coefficients is not None and len(run.analysis.usage.species) > 1:
        found += [
            Assumption("What the zones offer is in short supply", "unknown", "A log of use cannot show it."),
            Assumption(
                "Species compete through shared use alone", "unknown", "Fighting and displacement are not counted."
            ),
            _demand(run),
        ]
    if run.analysis.outcomes:
        found.append(
            Assumption(
                "K is constant, individuals mix, effects are linear",
                "unknown",
                "The Lotka–Volterra model assumes it; K is as given in the study, by the sources named there.",
            )
        )
    return found


def _set_aside(run: Run, reason: str) -> int:
    return sum(n for (_, why), n in run.log.ledger.reasons.items() if why == reason)


def _exclusive(run: Run) -> Assumption:
    name = "Zones exclude each other: an animal is in one at a time"
    if run.study.logs.columns.animal is None:
        return Assumption(name, "unknown", "Animals are not told apart, so two bouts at once may be two animals.")
    rows = _set_aside(run, OVERLAPPING)
    if rows:
        return Assumption(name, "not met", f"{count(rows, 'row')} overlapped another bout of the animal; set aside.")
    return Assumption(name, "met", "No two bouts of an animal overlap in time.")


def _exhaustive(run: Run) -> Assumption:
    name = "Zones cover every place an animal can be in"
    rows = _set_aside(run, UNKNOWN_ZONE)
    if rows:
        return Assumption(name, "not met", f"{count(rows, 'row')} named a zone that is not listed; set aside.")
    return Assumption(name, "met", "Every bout in view falls in a listed zone; places never watched would not show.")


def _recognised(run: Run) -> Assumption:
    name = "Individuals are recognised"
    if run.study.logs.columns.animal is None:
        return Assumption(name, "not met", "The logs name no animals; sessions stand in for them.")
    if run.analysis.usage.unit == "session":
        return Assumption(
            name, "unknown", "Sessions are resampled, not animals; sessions of one animal count as independent."
        )
    return Assumption(
        name, "met", "Every bout names its animal, and animals are resampled; a mistaken name would not show."
    )


def _watching(run: Run) -> list[Assumption]:
    table = effort(run.log.visits, run.analysis.usage.species, run.log.measure)
    total = table["seconds_in_view"] + table["seconds_out_of_sight"]
    shares = [
        f"{name} {percent(float(unseen / whole))}"
        for name, unseen, whole in zip(table["species"], table["seconds_out_of_sight"], total, strict=True)
        if whole > 0
    ]
    return [
        Assumption(
            "The animals, days and hours watched stand for the population and season",
            "unknown",
            "The logs do not tell how animals and hours were chosen.",
        ),
        Assumption(
            "Animals are seen equally well in every zone",
            "unknown",
            f"Out of sight: {', '.join(shares)} of the watching; where they were then is not known."
            if shares
            else "The logs do not tell how many were missed in each zone.",
        ),
        Assumption("Watching did not change the use of zones", "unknown", "The logs cannot tell."),
        Assumption(
            f"{run.analysis.usage.unit.capitalize()}s are independent of each other",
            "unknown",
            "Animals that move together would make the intervals too narrow.",
        ),
    ]


def _availability(run: Run) -> Assumption:
    given = run.study.zones.availability
    if given is None:
        return Assumption(
            "Zones are equally available",
            "unknown",
            "No availability is given; breadth and overlap count zones as equal.",
        )
    return Assumption(
        "Zones are equally available",
        "not met" if len(set(given.amounts.values())) > 1 else "met",
        f"Availability is given (source: {given.source}) and shown beside use; breadth and overlap count zones as equal.",
    )


def _demand(run: Run) -> Assumption:
    name = "Per-capita demand is as stated"
    return {
        "intake": Assumption(name, "unknown", "Taken as the intake given in the study."),
        "body_mass": Assumption(
            name,
            "unknown",
            f"Taken as body mass to the power {run.study.analysis.mass_exponent:g}, a rule across species.",
        ),
        "equal": Assumption(
            name, "unknown", "Assumed equal; the study gives neither intake nor body mass for all species."
        ),
    }[run.study.demand_basis()]
