"""Time and peak memory to read bouts from one CSV, against a bare scan-and-group of the same file by DuckDB.

Run from the top of the repository, with the numbers of rows wanted::

    python tests/benchmarks/reading.py 1000000 5000000

Each reading runs in a process of its own, so that its peak memory is its own; what Python and the imports take before it
is shown beside it. DuckDB is timed where it is installed: it groups the seconds by species and zone, and checks nothing.
"""

from __future__ import annotations

import json
import resource
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np

ANIMALS = 200
ZONES = [
    "upper sand",
    "upper mud",
    "middle sand",
    "middle mud",
    "lower sand",
    "lower mud",
    "mussel bed",
    "channel edge",
]
SPECIES = ["dunlin", "redshank", "ringed plover", "turnstone"]
SECONDS = 45
ROWS_AT_ONCE = 200_000
STUDY = """\
title = "bouts to time reading"
[logs]
files = ["log.csv"]
[logs.columns]
session = "session"
start = "start"
end = "end"
[zones]
rows = ["flat"]
columns = {numbers}
layout = [{zones}]
"""


def write_study(folder: Path, rows: int) -> None:
    """Invented bouts, one animal after another in time, without a fault."""
    numbers = json.dumps([str(i) for i in range(len(ZONES))])
    (folder / "study.toml").write_text(STUDY.format(numbers=numbers, zones=json.dumps(ZONES)), encoding="utf-8")
    rng = np.random.default_rng(1)
    first = np.datetime64("2026-04-01T06:00:00")
    with (folder / "log.csv").open("w", encoding="utf-8", newline="") as file:
        file.write("species,animal,session,zone,start,end,behaviour,notes\n")
        for begin in range(0, rows, ROWS_AT_ONCE):
            number = np.arange(begin, min(begin + ROWS_AT_ONCE, rows))
            animal, turn = number % ANIMALS, number // ANIMALS
            start = np.datetime_as_string(first + turn * SECONDS)
            end = np.datetime_as_string(first + (turn + 1) * SECONDS)
            zone = rng.integers(0, len(ZONES), len(number))
            quoted = rng.random(len(number)) < 0.01
            file.writelines(
                f"{SPECIES[a % 4]},A{a},s{t // 50}-{a},{ZONES[z]},{s}Z,{e}Z,foraging,"
                + ('"ran, then stood"\n' if q else "\n")
                for a, t, z, s, e, q in zip(
                    animal.tolist(), turn.tolist(), zone.tolist(), start, end, quoted.tolist(), strict=True
                )
            )


def peak_mib() -> float:
    """Peak resident memory of this process so far."""
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024


def pieces(folder: Path) -> int:
    """Read the file to pieces, as every rule gets them."""
    from niche.logs.formats import open_pieces
    from niche.logs.ledger import Ledger
    from niche.study import read_study

    study = read_study(folder)
    return sum(len(piece.rows) for piece in open_pieces(folder / "log.csv", "log.csv", study, Ledger()))


def logs(folder: Path) -> int:
    """Read the file to visits, with the ledger closed."""
    from niche.logs import read_logs
    from niche.study import read_study

    return len(read_logs(read_study(folder)).visits)


def duckdb(folder: Path) -> int:
    """Scan the file and group its seconds by species and zone."""
    import duckdb as engine

    query = (
        'SELECT sum(n)::BIGINT FROM (SELECT species, zone, sum(epoch("end") - epoch(start)), count(*) AS n '
        f"FROM read_csv('{folder / 'log.csv'}') GROUP BY ALL)"
    )
    return int(engine.sql(query).fetchall()[0][0])


READINGS = {"pieces": pieces, "logs": logs, "duckdb": duckdb}


def measure(what: str, folder: Path) -> dict[str, float]:
    """Run one reading in a process of its own."""
    command = [sys.executable, __file__, "--one", what, str(folder)]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    return json.loads(done.stdout) if done.returncode == 0 else {}


def one(what: str, folder: Path) -> None:
    """The process that reads: prints rows, seconds, and peak memory before and after."""
    if what == "duckdb":
        import duckdb as _  # noqa: F401 - its import is not what is timed
    else:
        import niche.logs.engine as _engine  # noqa: F401
    before, clock = peak_mib(), time.perf_counter()
    rows = READINGS[what](folder)
    sys.stdout.write(json.dumps({"rows": rows, "s": time.perf_counter() - clock, "before": before, "peak": peak_mib()}))


def main(sizes: list[int]) -> None:
    """Measure each size and print a table."""
    sys.stdout.write(f"{'rows':>10}  {'reading':<24}{'seconds':>9}{'rows/s':>12}{'peak MiB':>10}{'at start':>10}\n")
    for rows in sizes:
        with tempfile.TemporaryDirectory() as place:
            folder = Path(place)
            write_study(folder, rows)
            for what in READINGS:
                found = measure(what, folder)
                if not found:
                    sys.stdout.write(f"{rows:>10}  {what:<24}{'not run':>9}\n")
                    continue
                if found["rows"] != rows:
                    raise SystemExit(f"{what}: {found['rows']} rows of {rows}")
                sys.stdout.write(
                    f"{rows:>10}  {what:<24}{found['s']:>9.2f}{rows / found['s']:>12.0f}"
                    f"{found['peak']:>10.0f}{found['before']:>10.0f}\n"
                )


if __name__ == "__main__":
    if sys.argv[1:2] == ["--one"]:
        one(sys.argv[2], Path(sys.argv[3]))
    else:
        main([int(argument) for argument in sys.argv[1:]] or [1_000_000])
