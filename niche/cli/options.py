"""Arguments and options that commands share, each declared once."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields
from enum import StrEnum
from functools import wraps
from inspect import Parameter, Signature, signature
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any, get_type_hints

import typer

if TYPE_CHECKING:
    from niche.study import Study


class Format(StrEnum):
    """How a table is written."""

    table = "table"
    csv = "csv"
    json = "json"


class Unit(StrEnum):
    """What is resampled."""

    animal = "animal"
    session = "session"


class Weighting(StrEnum):
    """What counts once."""

    time = "time"
    animal = "animal"


def _confidence(value: float | None) -> float | None:
    if value is not None and not 0.5 < value < 1:
        raise typer.BadParameter(f"{value} is not above 0.5 and below 1; write 0.95 for 95 %.")
    return value


StudyPath = Annotated[
    Path, typer.Argument(metavar="STUDY", help="Study file, folder with a study.toml, or a log with standard columns.")
]
OutFile = Annotated[Path | None, typer.Option("--out", metavar="FILE", help="Write the table to FILE, not to stdout.")]
OutFolder = Annotated[
    Path, typer.Option("--out", metavar="DIR", help="Folder to write; an earlier result is replaced.")
]
FormatOption = Annotated[Format, typer.Option("--format", help="How the table is written.")]
Resamples = Annotated[
    int | None, typer.Option(min=100, max=1_000_000, help="Resamples of sampling units.", show_default="from the study")
]
Confidence = Annotated[
    float | None, typer.Option(callback=_confidence, help="Level of the intervals.", show_default="from the study")
]
Seed = Annotated[
    int | None,
    typer.Option(min=0, help="Start of the random numbers; equal seeds, equal results.", show_default="from the study"),
]
UnitOption = Annotated[Unit | None, typer.Option("--unit", help="What is resampled.", show_default="from the study")]
WeightingOption = Annotated[
    Weighting | None,
    typer.Option("--weighting", help="Whether a second or an animal counts once.", show_default="from the study"),
]
Quiet = Annotated[bool, typer.Option("--quiet", help="No notes and no progress; cautions stay.")]


@dataclass(frozen=True)
class Chosen:
    """Settings given on the command line; None where the study's own holds."""

    resamples: Resamples = None
    confidence: Confidence = None
    seed: Seed = None
    unit: UnitOption = None
    weighting: WeightingOption = None

    def put_into(self, study: Study) -> Study:
        """Study with these settings in place of its own."""
        given = {f.name: getattr(self, f.name) for f in fields(self)}
        changed = {name: str(v) if isinstance(v, StrEnum) else v for name, v in given.items() if v is not None}
        result = study.model_copy(update={"analysis": study.analysis.model_copy(update=changed)})
        result._folder = study.folder
        return result


def with_settings(command: Callable[..., None]) -> Callable[..., None]:
    """Give a command the options of `Chosen`; they reach it as one argument, ``chosen``."""
    own = [p for p in signature(command, eval_str=True).parameters.values() if p.name != "chosen"]
    hints = get_type_hints(Chosen, include_extras=True)
    added = [Parameter(f.name, Parameter.KEYWORD_ONLY, default=None, annotation=hints[f.name]) for f in fields(Chosen)]
    # --quiet stays last, where every command has it.
    parameters = [p.replace(kind=Parameter.KEYWORD_ONLY) for p in own]
    parameters = [*parameters[:-1], *added, parameters[-1]]

    @wraps(command)
    def wrapper(**given: Any) -> None:
        chosen = Chosen(**{f.name: given.pop(f.name) for f in fields(Chosen)})
        command(**given, chosen=chosen)

    wrapper.__signature__ = Signature(parameters)  # type: ignore[attr-defined]
    wrapper.__annotations__ = {p.name: p.annotation for p in parameters}
    return wrapper
