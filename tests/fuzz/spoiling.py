"""Studies spoiled at random: samples of every form, with bytes, lines, cells and keys changed.

Every case is made from one number, so that a case that fails can be made again.
"""

from __future__ import annotations

import gzip
import io
import random
import re
import zipfile
from collections.abc import Callable
from pathlib import Path

import pyarrow as pa
import pyarrow.csv
import pyarrow.parquet

SAMPLES = Path(__file__).parents[2] / "sample_logs"
STUDIES = ("tidal_flat", "spoiled", "switch_log", "hourly_scans", "roost_readers", "camera_events", "tally_sheet")
LINES = 30
"""Lines of a text that a case keeps: enough to hold every kind of row, few enough to be quick."""

MARKUP = "<script>alert(7)</script>"
NASTY = (
    "", " ", "\x00", "\u00a0", "\u202e", "\ufeff", '"', '""', ",", ";", "\t", "\n", "\r", "=1+1", "+1", "-1", "@x", MARKUP,
    "9.0E+14", "1-Feb", "24:00", "03/04/2026", "2026-02-30T25:61Z", "0000-01-01T00:00Z", "9999-12-31T23:59:59Z", "+99:99",
    "1e999", "nan", "-0", "9" * 400, "x" * 5000, "\ud7ff", "🐦", "../../etc/passwd", "/etc/passwd", "%s", "{0}", "\\", "'",
    "total", "UNK", "out of sight", "true", "1899-12-30", "45123.5", "P1Y", "PT1H/PT2H", "2026-09-03T08:00/08:10",
)  # fmt: skip
TOML = (
    "[", "]", "{", "}", "=", '"', "'''", "1e400", "true", "2026-09-03", "[[species]]", "[logs]", 'rule = "reads"',
    'rule = "one_zero"', "files = ['**/*']", "files = ['../../*']", "files = ['.']", 'descriptor = "study.toml"',
    "a.b.c = 1",
    'standard = "darwin-core"', 'format = "%d%d%d"', 'format = "spreadsheet"', "gap = 1e-300", "resamples = 0xFFFFFFFFFFFF",
    'database = "sqlite:///study.toml"', 'encoding = "utf-16"', "header_row = 999", 'delimiter = "x"', "seed = -1",
)  # fmt: skip


def make(case: int, folder: Path) -> Path:
    """Write the spoiled study of a case; returns its study file."""
    rng = random.Random(case)
    source = SAMPLES / rng.choice(STUDIES)
    logs = sorted(path for path in source.rglob("*") if path.is_file() and path.name != "planted.csv")
    kept = [path for path in logs if path.suffix == ".toml" or path.parent == source]
    kept += rng.sample([p for p in logs if p not in kept], k=min(2, len(logs) - len(kept)))
    study = folder / "study.toml"
    for path in kept:
        place = folder / path.relative_to(source)
        place.parent.mkdir(parents=True, exist_ok=True)
        if path.name == "study.toml":
            text = re.sub(r"(?m)^files = .*$", 'files = ["logs/*"]', path.read_text(encoding="utf-8"))
            spoiled = _study(text, rng) if rng.random() < 0.25 else text
            place.write_bytes(spoiled.encode("utf-8", "surrogatepass"))
        elif path.parent == source and rng.random() < 0.8:  # a small table beside the logs
            place.write_bytes(path.read_bytes())
        else:
            _log(path, place, rng, other_forms=path.parent != source)
    return study


def _study(text: str, rng: random.Random) -> str:
    lines = text.split("\n")
    for _ in range(rng.randint(1, 4)):
        at = rng.randrange(len(lines))
        match rng.randrange(5):
            case 0:
                lines[at] = rng.choice(TOML)
            case 1:
                del lines[at]
            case 2:
                lines.insert(at, rng.choice(TOML))
            case 3:
                lines[at] = lines[at].replace('"', rng.choice(NASTY), 1)
            case _:
                lines[at], lines[0] = lines[0], lines[at]
        lines = lines or [""]
    return "\n".join(lines)


def _log(source: Path, place: Path, rng: random.Random, *, other_forms: bool) -> None:
    content = source.read_bytes()
    if source.suffix == ".xlsx":
        place.write_bytes(_workbook(content, rng))
        return
    text = "\n".join(content.decode("utf-8").split("\n")[:LINES])
    for _ in range(rng.choice((0, 0, 1, 1, 1, 2, 4))):
        text = rng.choice(_TEXT)(text, rng)
    data = text.encode("utf-8", "replace")
    if rng.random() < 0.1:
        data = _bytes(data, rng)
    wrapped, suffix = rng.choice(_FORMS)(data) if other_forms else (data, "")
    place.write_bytes(wrapped)
    if suffix:  # the same log in another form of file, which the study's pattern may or may not name
        place.rename(place.with_name(place.name + suffix))


def _cell(text: str, rng: random.Random) -> str:
    lines = text.split("\n")
    at = rng.randrange(len(lines))
    cells = lines[at].split(",")
    cells[rng.randrange(len(cells))] = rng.choice(NASTY)
    lines[at] = ",".join(cells)
    return "\n".join(lines)


def _line(text: str, rng: random.Random) -> str:
    lines = text.split("\n")
    at, other = rng.randrange(len(lines)), rng.randrange(len(lines))
    lines.insert(at, rng.choice((lines[other], "", rng.choice(NASTY), lines[0], "," * rng.randint(0, 20))))
    return "\n".join(lines)


def _cut(text: str, rng: random.Random) -> str:
    return text[: rng.randrange(len(text) + 1)]


def _sign(text: str, rng: random.Random) -> str:
    return text.replace(",", rng.choice(";\t|,"))


def _ends(text: str, rng: random.Random) -> str:
    return text.replace("\n", rng.choice(("\r\n", "\r", "\n\n")))


def _insert(text: str, rng: random.Random) -> str:
    at = rng.randrange(len(text) + 1)
    return text[:at] + rng.choice(NASTY) + text[at:]


_TEXT: tuple[Callable[[str, random.Random], str], ...] = (_cell, _cell, _cell, _line, _cut, _sign, _ends, _insert)


def _bytes(data: bytes, rng: random.Random) -> bytes:
    changed = bytearray(data or b"\0")
    for _ in range(rng.randint(1, 8)):
        changed[rng.randrange(len(changed))] = rng.randrange(256)
    return bytes(changed)


def _plain(data: bytes) -> tuple[bytes, str]:
    return data, ""


def _gzipped(data: bytes) -> tuple[bytes, str]:
    return gzip.compress(data, mtime=0), ".gz"


def _parquet(data: bytes) -> tuple[bytes, str]:
    try:
        table = pyarrow.csv.read_csv(io.BytesIO(data))
        stream = io.BytesIO()
        pyarrow.parquet.write_table(table, stream)
    except (pa.ArrowException, ValueError, KeyError):
        return data, ".parquet"
    return stream.getvalue(), ".parquet"


def _utf16(data: bytes) -> tuple[bytes, str]:
    return data.decode("utf-8", "replace").encode("utf-16"), ""


_FORMS: tuple[Callable[[bytes], tuple[bytes, str]], ...] = (_plain,) * 8 + (_gzipped, _parquet, _utf16)


def _workbook(content: bytes, rng: random.Random) -> bytes:
    """A workbook with bytes of a part changed, a part gone, or cells that say something else."""
    if rng.random() < 0.2:
        return _bytes(content, rng)
    stream = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(content)) as old, zipfile.ZipFile(stream, "w") as new:
        victim = rng.choice(old.namelist())
        for name in old.namelist():
            data = old.read(name)
            if name == victim:
                if rng.random() < 0.15:
                    continue
                if rng.random() < 0.5:
                    data = data.replace(
                        b"<v>", b"<v>" + rng.choice(NASTY).encode("utf-8", "replace")[:50], rng.randint(1, 5)
                    )
                else:
                    data = _bytes(data, rng)
            new.writestr(name, data)
    return stream.getvalue()
