"""The page: everything the template needs, gathered, then filled in."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from jinja2 import Environment, PackageLoader, StrictUndefined
from markupsafe import Markup

from niche import cautions
from niche.analysis.notes import interval_rests_on
from niche.figures.drawing import Drawing
from niche.figures.saving import inline_svg
from niche.figures.windows import windows
from niche.figures.words import isolated, no_interval
from niche.report import pair_rows, rows
from niche.report.fieldwork import fieldwork
from niche.report.references import references
from niche.report.summary import summarise
from niche.resampling.intervals import FEWEST_UNITS

if TYPE_CHECKING:
    from niche.analysis import Run

_POINTS_PER_REM = 12
"""A rem is 16 CSS pixels, 12 points."""


@dataclass(frozen=True)
class Figure:
    """A figure of the page: its element, its width in rem, and the tables with its numbers."""

    name: str
    title: str
    svg: Markup
    width: float
    tables: tuple[str, ...]


_DATA = {
    "zone_maps": ("usage",),
    "effort_timeline": ("effort_by_day",),
    "coexistence_windows": ("coefficients",),
}


def page(run: Run, figures: Mapping[str, tuple[Drawing, str]], record: Mapping[str, Any]) -> str:
    """The report as HTML, complete in itself.

    Parameters
    ----------
    run : Run
    figures : mapping of name to (Drawing, SVG text)
    record : mapping
        Record of the run, as in ``run.json``.
    """
    environment = Environment(
        loader=PackageLoader("niche.report"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_finished,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    return environment.get_template("report.html").render(**_content(run, figures, record))


def _finished(value: Any) -> Any:
    """What is put into the page: text with its right-to-left names set apart."""
    return isolated(value) if type(value) is str else value


def _content(run: Run, figures: Mapping[str, tuple[Drawing, str]], record: Mapping[str, Any]) -> dict[str, Any]:
    analysis, study = run.analysis, run.study
    several = len(analysis.usage.species) > 1
    competing = several and analysis.coefficients is not None
    return {
        "study": study,
        "summary": summarise(run),
        "limits": _limits(several, competing, bool(analysis.outcomes)),
        "notes": analysis.notes,
        "cautions": cautions,
        "figures": {name: _figure(drawing, svg) for name, (drawing, svg) in figures.items()},
        "effort": rows.effort_table(run),
        "ledger": rows.ledger_table(run),
        "reasons": rows.reasons_table(run),
        "closes": rows.closes(run),
        "usage": rows.usage_table(run),
        "unused": bool((analysis.use.amount == 0).any()),
        "core": rows.core_table(run),
        "core_share": f"{100 * analysis.options.core:g}%",
        "breadth": rows.breadth_table(run) if analysis.breadth else None,
        "several": several,
        "overlap": pair_rows.overlap_table(run) if several else None,
        "other_overlap": pair_rows.other_overlap_table(run) if several else None,
        "competing": competing,
        "coefficients": pair_rows.coefficients_table(run) if competing else None,
        "windows": pair_rows.windows_table(run, windows(analysis, capacities(run))) if competing else None,
        "capacity": pair_rows.capacity_table(run),
        "outcome": pair_rows.outcome_table(run),
        "rests_on": interval_rests_on(analysis.usage, analysis.options),
        "without": _without(run),
        "assumptions": rows.assumptions_table(run),
        "fieldwork": fieldwork(run),
        "compliance": _compliance(run),
        "inputs": rows.input_table(run),
        "record": record,
        "references": references(run),
    }


def capacities(run: Run) -> dict[str, tuple[float, float]]:
    """Range of K by species, where the study gives one."""
    return {s.name: (s.k.low, s.k.high) for s in run.study.species if s.k is not None}


def _figure(drawing: Drawing, svg: str) -> Figure:
    tables = _DATA.get(drawing.name, ("overlap",))
    width = float(drawing.figure.get_figwidth()) * 72 / _POINTS_PER_REM
    # The text of the figure is escaped where the element is made.
    return Figure(drawing.name, drawing.title, Markup(inline_svg(drawing, svg)), round(width, 2), tables)


def _limits(several: bool, competing: bool, outcomes: bool) -> Sequence[str]:
    """What the results do not show, as far as the results are there."""
    told = [cautions.SCOPE]
    if several:
        told.append(cautions.OVERLAP)
    if competing:
        told.append(cautions.COEFFICIENTS)
    if outcomes:
        told.append(cautions.OUTCOME)
    return [*told, cautions.REVIEW]


def _without(run: Run) -> str | None:
    """Which species have too few units for intervals."""
    usage = run.analysis.usage
    counts = usage.unit_counts.tolist()
    if all(n >= FEWEST_UNITS for n in counts):
        return None
    return no_interval(counts, usage.species, usage.unit, placed=usage.placed)


def _compliance(run: Run) -> list[tuple[str, str]]:
    given = run.study.report
    return [
        ("Permits and licences", given.permits or "none supplied"),
        ("Competent person", given.competent_person or "none supplied"),
        ("Ethics approval", given.ethics or "none supplied"),
    ]
