"""Write docs/commands.md from the commands themselves. Run: python tests/docs/write_commands.py."""

import inspect
from collections.abc import Iterator
from enum import EnumType
from pathlib import Path
from typing import Any, get_args

from typer.models import OptionInfo

from niche.cli import app

PAGE = Path(__file__).parents[2] / "docs" / "commands.md"


def page() -> str:
    """The page as it should stand."""
    lines = ["# Commands", "", "Written from the commands themselves by `tests/docs/write_commands.py`.", ""]
    for command in app.registered_commands:
        lines += _section(command.name or command.callback.__name__, command.callback)
    return "\n".join(lines)


def _section(name: str, callback: Any) -> Iterator[str]:
    parameters = inspect.signature(callback, eval_str=True).parameters.values()
    described = [(p, *get_args(p.annotation)) for p in parameters]
    arguments = [info.metavar for _, _, info in described if not isinstance(info, OptionInfo)]
    yield f"## niche {' '.join([name, *arguments])}"
    yield ""
    for paragraph in inspect.getdoc(callback).split("\n\n"):
        yield " ".join(paragraph.split())
        yield ""
    options = [(p, kind, info) for p, kind, info in described if isinstance(info, OptionInfo)]
    if options:
        yield "| option | meaning |"
        yield "|---|---|"
    for parameter, kind, info in options:
        choices = next((k for k in (kind, *get_args(kind)) if isinstance(k, EnumType)), ())
        allowed = f" One of {', '.join(f'`{choice}`' for choice in choices)}." if choices else ""
        # Inside Annotated, typer keeps the first spelling of an option where a default would stand.
        names = [n for n in (info.default, *(info.param_decls or ()), f"--{parameter.name}") if isinstance(n, str)]
        yield f"| `{names[0]}` | {info.help}{allowed} |"
    if options:
        yield ""


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
