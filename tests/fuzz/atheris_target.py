"""Coverage-guided fuzzing with atheris: python tests/fuzz/atheris_target.py -runs=20000 [CORPUS].

The first byte chooses what is fed: a study file, a CSV log, or a column of times.
"""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path

import atheris

with atheris.instrument_imports(include=["niche"]):
    import pyarrow as pa

    from niche.errors import NicheError
    from niche.logs import read_logs
    from niche.logs.clocks import read_times
    from niche.study import study_from_text

STUDY = """
title = "t"
[logs]
files = ["log.csv"]
out_of_sight = ["out of sight"]
[logs.columns]
end = "end"
[zones]
rows = ["r"]
columns = ["1", "2"]
layout = [["mud", "sand"]]
"""
FOLDER = Path(tempfile.mkdtemp())
HEADER = b"species,animal,zone,start,end\n"


def one(data: bytes) -> None:
    """Feed one input; anything but an answer or a NicheError is a finding."""
    if not data:
        return
    kind, rest = data[0] % 3, data[1:]
    try:
        if kind == 0:
            study_from_text(rest.decode("utf-8", "replace"), FOLDER / "study.toml")
        elif kind == 1:
            (FOLDER / "log.csv").write_bytes(HEADER + rest)
            read_logs(study_from_text(STUDY, FOLDER / "study.toml")).ledger.close()
        else:
            cells = rest.decode("utf-8", "replace").replace("\x00", "").split("\n")
            read_times(pa.array(cells, type=pa.string()), None)
    except NicheError as error:
        assert "defect of niche" not in str(error), error  # noqa: PT017 - a finding, not an expectation


if __name__ == "__main__":
    atheris.Setup(sys.argv, one)
    atheris.Fuzz()
