"""The commands that write a folder: maps, report."""

from __future__ import annotations

import sys
from pathlib import Path

import typer

from niche.cli.console import errors_translated, progress, say
from niche.cli.options import (
    Chosen,
    OutFolder,
    Quiet,
    StudyPath,
    with_settings,
)
from niche.cli.program import app


@app.command("map")
@with_settings
@errors_translated()
def draw_map(
    study: StudyPath,
    out: OutFolder = Path("maps"),
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Heatmaps of zone use on the layout of the zones, as PNG and SVG.

    Example: niche map sample_logs/tidal_flat --out maps
    """
    _folder("maps", study, out, quiet, chosen)


@app.command()
@with_settings
@errors_translated()
def report(
    study: StudyPath,
    out: OutFolder = Path("report"),
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Everything in one folder: a page to read, tables, figures, data package, run record.

    Example: niche report sample_logs/tidal_flat --out report
    """
    _folder("report", study, out, quiet, chosen)


def _folder(what: str, study: Path, out: Path, quiet: bool, chosen: Chosen) -> None:
    """What the commands that write a folder share."""
    import shlex

    from niche.analysis import run_study
    from niche.cautions import BY_TABLE
    from niche.logs import open_study
    from niche.report import check_folder, summarise, write_maps, write_report

    check_folder(out)
    set_study = chosen.put_into(open_study(study))
    with progress("Resampling", quiet) as report_progress:
        run = run_study(set_study, progress=report_progress)
    command = shlex.join(["niche", *sys.argv[1:]])
    write_it = write_report if what == "report" else write_maps
    typer.echo(write_it(run, out, command=command, study_file=study))
    if what == "report" and not quiet:
        typer.echo(f"\n{summarise(run).text()}")
    for line in () if quiet else run.analysis.notes:
        say(line)
    for line in dict.fromkeys((*BY_TABLE["usage"], *(BY_TABLE["outcome"] if what == "report" else ()))):
        say(f"Caution: {line}")
