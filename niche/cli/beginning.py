"""The commands before any result: start a study, check its logs."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from niche.cli.console import Exit, errors_translated, progress, say
from niche.cli.options import (
    Format,
    FormatOption,
    OutFile,
    Quiet,
    StudyPath,
)
from niche.cli.program import app


@app.command()
@errors_translated()
def start(directory: Annotated[Path, typer.Argument(metavar="DIR", help="New folder for the study.")]) -> None:
    """Write a starter study: a commented study.toml, an empty log sheet and a zone sheet.

    Example: niche start autumn_flat
    """
    from niche.study.starter import write_starter

    for path in write_starter(directory):
        typer.echo(path)
    say(f"Fill in the sheets, then: niche check {directory}")


@app.command()
@errors_translated()
def check(
    study: StudyPath,
    form: FormatOption = Format.table,
    out: OutFile = None,
    clean: Annotated[
        Path | None,
        typer.Option("--clean", metavar="DIR", help="Save the cleaned visits there, as a Data Package with a study."),
    ] = None,
    quiet: Quiet = False,
) -> None:
    """Read the logs and print the ledger and every problem with file, row, value and remedy. Computes nothing.

    With --format csv or json the ledger itself is written. Exit status 1 if a problem stops the work; then --clean saves
    nothing.

    Example: niche check sample_logs/spoiled

    Example: niche check sample_logs/tidal_flat --clean cleaned
    """
    from niche.cli.checking import summary
    from niche.cli.render import render, write
    from niche.logs import open_study, read_logs

    with progress("Reading logs", quiet) as report_progress:
        opened = open_study(study)
        log = read_logs(opened, report_progress)
    if form is Format.table:
        write(summary(log), out)
    else:
        write(render(log.ledger.table(), "ledger", form), out)
    if log.ledger.stops:
        if clean is not None:
            say(f"niche: {clean}: nothing is saved, because problems stop the work.")
        raise typer.Exit(Exit.STOPPED)
    if clean is not None:
        from niche.logs.clean import write_clean

        say(f"Saved: {write_clean(log, opened, clean)}")
