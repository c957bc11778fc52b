"""The starter study: a commented study file, an empty log sheet, a zone sheet."""

from __future__ import annotations

from pathlib import Path

from niche.errors import OutputError

STUDY = """\
# A study for niche. Lines that begin with # are comments; remove the # to use a setting.
# Check it at any time with:  niche check .

title = "Untitled study"
site = ""
note = ""                        # printed at the top of the report

[logs]
files = ["logs/*.csv"]           # relative to this file; * stands for any letters of a name
rule = "bouts"                   # one row = one stay of one animal in one zone
# time_zone = "Europe/Berlin"    # for times written without an offset such as +02:00
out_of_sight = ["out of sight"]  # zone labels that mean the animal could not be seen

[logs.columns]                   # what the program needs = the heading in your logs
species = "species"
animal = "animal"
session = "session"              # one continuous watch
zone = "zone"
start = "start"                  # 2026-09-03T08:15:30+02:00
end = "end"                      # or, instead of end:  duration = "duration"

# [logs.problems]                # "stop" (the default) or "set_aside"
# unknown_zone = "set_aside"
# overlap = "set_aside"

[zones]
sheet = "zones.csv"              # one line a zone: zone, row, column, availability
availability_source = "not surveyed yet: all zones entered as equal"

# One table a species. Only the name is required.
# [[species]]
# name = "dunlin"
# scientific_name = "Calidris alpina"
# body_mass = 48                 # g; demand is body mass to the power 0.75 ...
# intake = 5.1                   # ... or, better, measured intake of one animal, any unit common to all species
# k = { low = 700, high = 1100, source = "winter counts" }   # carrying capacity, as a range

[analysis]
resamples = 9999
confidence = 0.95
seed = 1                         # equal seeds give equal results
unit = "animal"                  # what is resampled: "animal", or "session" where animals are not told apart
weighting = "time"               # "time": a second counts once; "animal": each animal counts once

[report]                         # printed in the report as given
permits = ""
competent_person = ""
ethics = ""
"""

LOG_SHEET = "species,animal,session,zone,start,end,behaviour,observer,notes\n"

ZONE_SHEET = """\
zone,row,column,availability
upper sand,upper shore,sand,1
upper mud,upper shore,mud,1
lower sand,lower shore,sand,1
lower mud,lower shore,mud,1
"""

FILES = {"study.toml": STUDY, "zones.csv": ZONE_SHEET, "logs/log.csv": LOG_SHEET}


def write_starter(folder: Path) -> list[Path]:
    """Write a starter study into a new or empty folder.

    Returns
    -------
    list of Path
        The files written.

    Raises
    ------
    OutputError
        The folder holds something already, or cannot be written.
    """
    written = []
    try:
        if folder.exists() and (not folder.is_dir() or any(folder.iterdir())):
            raise OutputError(
                f"{folder} is there already and not empty; name a new folder, so that nothing is overwritten."
            )
        for name, text in FILES.items():
            path = folder / name
            path.parent.mkdir(parents=True, exist_ok=True)
            path.write_text(text, encoding="utf-8", newline="\n")
            written.append(path)
    except OSError as error:
        raise OutputError(f"{folder}: cannot be written ({error.strerror}).") from None
    except ValueError as error:  # a path with a NUL in it
        raise OutputError(f"{str(folder)!r}: cannot be written ({error}).") from None
    return written
