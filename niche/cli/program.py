"""The program: its help, its version; commands join it from their own modules."""

from __future__ import annotations

from typing import Annotated

import typer

from niche import __version__

app = typer.Typer(
    help="From a log of which zone each animal used, when, to how species share the habitat: use, breadth, overlap, "
    "competition coefficients, outcome, report. Each with how sure it is.",
    epilog="Overlap is similarity of use, not competition. Have a qualified ecologist review results before decisions.",
    add_completion=False,
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)


def main() -> None:
    """Entry point of the command ``niche``."""
    app()


def _version(asked: bool) -> None:
    if asked:
        typer.echo(f"niche {__version__}")
        raise typer.Exit


@app.callback()
def _common(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Print the version.")
    ] = False,
) -> None: ...
