"""Writes a report, or maps alone, into a folder of their own."""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

from niche.figures import (
    Drawing,
    coexistence_windows,
    effort_timeline,
    overlap_intervals,
    overlap_matrix,
    png_bytes,
    svg_text,
    zone_maps,
)
from niche.report.csv_tables import by_day, report_tables, write_tables
from niche.report.folder import RECORD, check_folder, files_below, whole_folder, write_text
from niche.report.measures import SEEN
from niche.report.package import data_package
from niche.report.page import capacities, page
from niche.report.record import now, run_record

if TYPE_CHECKING:
    from niche.analysis import Run

PAGE = "report.html"


def write_report(
    run: Run, folder: Path, *, command: str, study_file: Path | None = None, created: str | None = None
) -> Path:
    """Write page, tables, figures, data package and run record.

    Parameters
    ----------
    run : Run
    folder : Path
        New, empty, or an earlier report, which is replaced; written whole or not at all.
    command : str
        Command line that makes the same report again.
    study_file : Path, optional
        Study file, folder or bare log as it was named; by default the study's folder.
    created : str, optional
        RFC 3339 time to print; now by default.

    Returns
    -------
    Path
        The page.

    Raises
    ------
    OutputError
        The folder holds something else, or cannot be written.
    """
    check_folder(folder)
    created = created or now()
    drawings = report_figures(run)
    with whole_folder(folder) as new:
        tables = report_tables(run)
        paths = write_tables(tables, new / "tables")
        _write_json(new / "datapackage.json", data_package(run.study, tables, paths, created))
        figures = _write_figures(drawings, new / "figures")
        files = sorted([*files_below(new), PAGE])
        record = run_record(run, command=command, created=created, study_file=study_file, files=files)
        write_text(new / PAGE, page(run, figures, record))
        _write_json(new / RECORD, record)
    return folder / PAGE


def write_maps(
    run: Run, folder: Path, *, command: str, study_file: Path | None = None, created: str | None = None
) -> Path:
    """Write the maps of zone use, their table and the run record.

    Parameters, errors: see `write_report`.

    Returns
    -------
    Path
        The maps as SVG.
    """
    check_folder(folder)
    created = created or now()
    drawing = zone_maps(run.analysis, run.study.zones)
    with whole_folder(folder) as new:
        tables = {"usage": run.analysis.table("usage")}
        paths = write_tables(tables, new / "tables")
        _write_json(new / "datapackage.json", data_package(run.study, tables, paths, created))
        _write_figures([drawing], new / "figures")
        files = files_below(new)
        _write_json(new / RECORD, run_record(run, command=command, created=created, study_file=study_file, files=files))
    return folder / "figures" / f"{drawing.name}.svg"


def report_figures(run: Run) -> list[Drawing]:
    """The figures that a run has the numbers for, in the order of the report."""
    analysis = run.analysis
    figures = []
    days = by_day(run)
    if not days.empty:
        figures.append(effort_timeline(days, SEEN[run.log.measure]))
    figures.append(zone_maps(analysis, run.study.zones))
    if len(analysis.usage.species) > 1:
        if "pianka" in analysis.overlap:
            figures += [overlap_matrix(analysis), overlap_intervals(analysis)]
        if analysis.coefficients is not None:
            figures.append(coexistence_windows(analysis, capacities(run)))
    return figures


def _write_figures(drawings: list[Drawing], folder: Path) -> dict[str, tuple[Drawing, str]]:
    """Write each figure as SVG and PNG; give back each with its SVG."""
    folder.mkdir()
    written = {}
    for drawing in drawings:
        svg = svg_text(drawing)
        write_text(folder / f"{drawing.name}.svg", svg)
        (folder / f"{drawing.name}.png").write_bytes(png_bytes(drawing))
        written[drawing.name] = (drawing, svg)
    return written


def _write_json(file: Path, content: Any) -> None:
    write_text(file, json.dumps(content, ensure_ascii=False, indent=2, allow_nan=False) + "\n")
