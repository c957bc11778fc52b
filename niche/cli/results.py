"""The commands that print one table. Heavy imports wait until a command needs them."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from niche.cli.console import errors_translated, progress, say
from niche.cli.options import (
    Chosen,
    Format,
    FormatOption,
    OutFile,
    Quiet,
    StudyPath,
    with_settings,
)
from niche.cli.program import app


def _table(
    name: str,
    study: Path,
    form: Format,
    out: Path | None,
    quiet: bool,
    chosen: Chosen,
    indices: tuple[str, ...],
) -> None:
    """What the commands that print one table share."""
    from niche.analysis import run_study
    from niche.analysis.notes import cores_in_words, interval_rests_on
    from niche.cautions import BY_TABLE
    from niche.cli.render import render, write
    from niche.logs import open_study

    set_study = chosen.put_into(open_study(study))
    with progress("Resampling", quiet) as report_progress:
        analysis = run_study(set_study, indices=indices, progress=report_progress).analysis
    cores = cores_in_words(analysis) if name == "usage" else ()
    notes = (*cores, interval_rests_on(analysis.usage, analysis.options), *analysis.notes)
    write(render(analysis.table(name), name, form, notes, BY_TABLE[name]), out)
    for line in () if quiet else notes:
        say(line)
    for line in BY_TABLE[name]:
        say(f"Caution: {line}")


@app.command()
@with_settings
@errors_translated()
def usage(
    study: StudyPath,
    form: FormatOption = Format.table,
    out: OutFile = None,
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Time by zone for each species, with intervals and core zones.

    The core is the fewest zones, most used first, that hold at least half of the use: a display convention.

    Example: niche usage sample_logs/tidal_flat
    """
    _table("usage", study, form, out, quiet, chosen, ())


@app.command()
@with_settings
@errors_translated()
def breadth(
    study: StudyPath,
    form: FormatOption = Format.table,
    out: OutFile = None,
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Niche breadth of each species, with intervals and pooled values.

    Example: niche breadth sample_logs/tidal_flat --format csv
    """
    from niche.indices.catalogue import BREADTH

    _table("breadth", study, form, out, quiet, chosen, tuple(BREADTH))


@app.command()
@with_settings
@errors_translated()
def overlap(
    study: StudyPath,
    form: FormatOption = Format.table,
    out: OutFile = None,
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Niche overlap of each pair of species, with intervals and pooled values.

    Overlap is similarity of use. It is not competition.

    Example: niche overlap sample_logs/tidal_flat --resamples 2000
    """
    from niche.indices.catalogue import OVERLAP

    _table("overlap", study, form, out, quiet, chosen, tuple(OVERLAP))


@app.command()
@with_settings
@errors_translated()
def compete(
    study: StudyPath,
    form: FormatOption = Format.table,
    out: OutFile = None,
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Competition coefficients α, β that the overlap implies, and the range of K1/K2 in which both species persist.

    They hold only where the resource is limiting, demand is as stated, and species compete through shared use alone.

    Example: niche compete sample_logs/tidal_flat
    """
    _table("coefficients", study, form, out, quiet, chosen, ("alpha",))


@app.command()
@with_settings
@errors_translated()
def outcome(
    study: Annotated[Path | None, typer.Argument(metavar="STUDY", help="Study; or give all four numbers.")] = None,
    alpha: Annotated[float | None, typer.Option(help="Effect of one of species 2 on species 1.")] = None,
    beta: Annotated[float | None, typer.Option(help="Effect of one of species 1 on species 2.")] = None,
    k1: Annotated[float | None, typer.Option(help="Carrying capacity of species 1.")] = None,
    k2: Annotated[float | None, typer.Option(help="Carrying capacity of species 2.")] = None,
    form: FormatOption = Format.table,
    out: OutFile = None,
    quiet: Quiet = False,
    *,
    chosen: Chosen,
) -> None:
    """Two-species Lotka–Volterra outcome: shares over resamples and ranges of K, or the case of four given numbers.

    A scenario, not a forecast. Do not use it alone to justify control, removal or translocation.

    Example: niche outcome sample_logs/tidal_flat

    Example: niche outcome --alpha 0.6 --beta 0.4 --k1 900 --k2 700
    """
    numbers = (alpha, beta, k1, k2)
    if study is None and all(number is None for number in numbers):
        raise typer.BadParameter("give a STUDY, or --alpha, --beta, --k1 and --k2.")
    if study is not None and any(number is not None for number in numbers):
        raise typer.BadParameter("give either a STUDY or the four numbers, not both.")
    if study is not None:
        _table("outcome", study, form, out, quiet, chosen, ("alpha",))
        return
    if any(number is None for number in numbers):
        raise typer.BadParameter("--alpha, --beta, --k1 and --k2 go together; one is missing.")
    from niche.cautions import OUTCOME, REVIEW
    from niche.cli.render import render, window_in_words, write
    from niche.dynamics import outcome as decide
    from niche.tables import outcome_of_numbers

    result = decide(alpha=alpha, beta=beta, k1=k1, k2=k2)  # type: ignore[arg-type]
    notes = (result.detail, window_in_words(result))
    write(render(outcome_of_numbers(result), "outcome", form, notes, (OUTCOME, REVIEW)), out)
    for line in () if quiet else notes:
        say(line)
    for line in (OUTCOME, REVIEW):
        say(f"Caution: {line}")
