"""A single log whose columns already bear the standard names can stand in for a study."""

from __future__ import annotations

from pathlib import Path

from niche.errors import LogError
from niche.logs.formats.csv_text import read_csv
from niche.logs.labels import Labels, key, tidy
from niche.logs.ledger import Ledger
from niche.study import Study, read_study
from niche.study.model import STANDARD_COLUMNS, Columns, Logs, Settings, Zones

OUT_OF_SIGHT_LABEL = "out of sight"
"""The one label that a log without a study file may use for an animal that cannot be seen; a blank cell does too."""


def open_study(path: Path) -> Study:
    """Read a study file, a folder that holds one, or a single log with standard column names.

    Raises
    ------
    StudyError, LogError
    """
    try:
        alone = path.exists() and not path.is_dir() and path.suffix.lower() != ".toml"
    except (OSError, ValueError):  # no path can be like that; the reading of a study says so
        alone = False
    return study_of_log(path) if alone else read_study(path)


def study_of_log(path: Path) -> Study:
    """Study that a single log implies.

    The zones are those that the log names, in alphabetical order; an available zone that no animal used is not known
    about and does not count. Times must carry their offset. Animals are the sampling units, or sessions where the log
    has no animals.

    Raises
    ------
    LogError
        A needed column is missing, or the file cannot be read.
    """
    zones: dict[str, str] = {}
    headings: list[str] = []
    for piece in read_csv(path, path.name, Ledger()):
        headings = [heading for heading in STANDARD_COLUMNS if heading in piece.columns]
        _require(path, headings, list(piece.columns))
        for text in Labels.of(piece.columns["zone"]).written:
            zones.setdefault(key(text), tidy(text))
    names = sorted(zone for k, zone in zones.items() if k not in ("", OUT_OF_SIGHT_LABEL))
    if not names:
        raise LogError(f"{path.name}: no row names a zone.")
    chosen = {heading: heading for heading in headings if not (heading == "duration" and "end" in headings)}
    study = Study(
        title=path.name,
        logs=Logs(
            files=(path.name,),
            columns=Columns.model_validate({"animal": None, **chosen}),
            out_of_sight=(OUT_OF_SIGHT_LABEL,),
        ),
        zones=Zones(rows=tuple(names), columns=("zone",), layout=tuple((name,) for name in names)),
        analysis=Settings(unit="animal" if "animal" in headings else "session"),
    )
    study._folder = path.parent
    return study


def _require(path: Path, headings: list[str], there: list[str]) -> None:
    """Raise unless the standard columns that a log needs are there."""
    wrong = None
    if missing := [heading for heading in ("species", "zone", "start") if heading not in headings]:
        wrong = f"no heading {missing[0]!r}"
    elif "animal" not in headings and "session" not in headings:
        wrong = "no heading 'animal' and none 'session'"
    elif "end" not in headings and "duration" not in headings:
        wrong = "no heading 'end' and none 'duration'"
    if wrong is not None:
        raise LogError(
            f"{path.name}: line 1: {wrong}. A log can be read by itself only if its columns are named species, zone, "
            f"animal or session, start, and end or duration (in seconds); this one has "
            f"{', '.join(repr(h) for h in there)}. `niche start DIR` writes a study file, in which any heading can be named."
        )
