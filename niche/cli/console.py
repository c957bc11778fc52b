"""Streams, exit statuses and the translation of errors. Data go to stdout, everything else to stderr."""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from enum import IntEnum

import typer

from niche.errors import NicheError, ValueRuleError


class Exit(IntEnum):
    """Exit statuses."""

    DONE = 0
    STOPPED = 1
    """The log or the study stops the work; the message says how."""
    WRONG_ARGUMENTS = 2
    INTERRUPTED = 130


def say(text: str) -> None:
    """Tell the user something that is not data."""
    typer.echo(text, err=True)


@contextmanager
def errors_translated() -> Iterator[None]:
    """Turn what the library raises into a message on stderr and an exit status."""
    try:
        yield
        sys.stdout.flush()
    except ValueRuleError as error:
        say(f"niche: {error}")
        raise typer.Exit(Exit.WRONG_ARGUMENTS) from None
    except NicheError as error:
        say(f"niche: {error}")
        raise typer.Exit(Exit.STOPPED) from None
    except BrokenPipeError:
        # Whoever read our output has had enough, as `head` does. Keep Python from complaining again when it exits.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        raise typer.Exit(Exit.DONE) from None
    except OSError as error:
        place = f"{error.filename}: " if error.filename else ""
        say(f"niche: {place}{error.strerror or error}.")
        raise typer.Exit(Exit.STOPPED) from None
    except KeyboardInterrupt:
        say("niche: interrupted; nothing half-written is left.")
        raise typer.Exit(Exit.INTERRUPTED) from None


@contextmanager
def progress(what: str, quiet: bool) -> Iterator[Callable[[int, int], None] | None]:
    """Progress bar on stderr, where that is a terminal; otherwise None."""
    if quiet or not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import Progress

    with Progress(console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task(what, total=None)
        yield lambda done, total: bar.update(task, completed=done, total=total)
