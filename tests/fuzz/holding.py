"""What must hold for any study at all: it is read with its ledger closed, or refused in words; nothing else happens."""

from __future__ import annotations

import csv
import io
import signal
import sys
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from niche.analysis import analyse
from niche.errors import NicheError
from niche.logs import open_study, read_logs
from niche.tables import csv_text
from niche.usage import Usage

SECONDS = 20
"""A case that takes longer hangs."""

_opened: list[str] | None = None


def _note_opening(event: str, arguments: tuple[Any, ...]) -> None:
    if event == "open" and _opened is not None and isinstance(arguments[0], str | bytes):
        name = arguments[0]
        _opened.append(name if isinstance(name, str) else name.decode("utf-8", "replace"))


sys.addaudithook(_note_opening)


@contextmanager
def watched() -> Iterator[list[str]]:
    """Files that are opened meanwhile."""
    global _opened
    _opened = []
    try:
        yield _opened
    finally:
        _opened = None


@contextmanager
def limited() -> Iterator[None]:
    """Raise TimeoutError where a case hangs."""

    def stop(number: int, frame: Any) -> None:
        raise TimeoutError(f"more than {SECONDS} s")

    before = signal.signal(signal.SIGALRM, stop)
    signal.alarm(SECONDS)
    try:
        yield
    finally:
        signal.alarm(0)
        signal.signal(signal.SIGALRM, before)


def hold(study_file: Path) -> str:
    """Read a study and check what must hold; returns what became of it: ``refused``, ``stopped`` or ``read``."""
    folder = study_file.parent.resolve()
    with limited(), watched() as opened:
        try:
            study = open_study(study_file)
            log = read_logs(study)
        except NicheError as error:
            assert "defect of niche" not in str(error), error  # noqa: PT017 - the ledger did not close
            _plain_words(str(error))
            _inside(opened, folder)
            return "refused"
    _inside(opened, folder)
    ledger = log.ledger
    ledger.close()
    total, *parts = ledger.sums()
    assert total[1:] == (sum(p[1] for p in parts), sum(p[2] for p in parts))
    assert all(number >= 0 for part in parts for number in part[1:]), parts
    assert sum(round(x * 1000) for x in ledger.table()["seconds"]) == total[2]
    _no_formula(csv_text(ledger.table()))
    try:
        log.require_usable()
    except NicheError as error:
        _plain_words(str(error))
        return "stopped"
    try:
        usage = Usage.from_visits(log.visits, study, log.looked_at)
    except NicheError as error:
        _plain_words(str(error))
        return "stopped"
    assert sum(int(t.sum()) for t in usage.time) == int(log.visits.loc[log.visits["zone"] != "", "amount"].sum())
    analysis = analyse(usage, resamples=20)
    for name in ("usage", "overlap", "coefficients"):
        _no_formula(csv_text(analysis.table(name)))
    return "read"


def _plain_words(text: str) -> None:
    assert text
    assert "Traceback" not in text
    assert not any(ord(letter) < 32 and letter not in "\n\t" for letter in text), "control letters reach the terminal"


def _inside(opened: list[str], folder: Path) -> None:
    """No file is opened but the study's own, the program's, and the machine's tables of time zones and fonts."""
    own = (
        str(folder),
        sys.prefix,
        sys.base_prefix,
        "/usr/share/",
        "/usr/lib/",
        "/proc/",
        "/sys/",
        "/dev/",
        "/etc/mime",
    )
    code = str(Path(__file__).parents[2] / "niche")
    place = tempfile.gettempdir()
    for name in opened:
        absolute = str(Path(name).absolute())
        inside = absolute.startswith((*own, code)) or absolute.endswith((".py", ".pyc"))
        assert inside or not Path(absolute).is_file() or absolute.startswith(place), f"opened {name}"


def _no_formula(text: str) -> None:
    for row in csv.reader(io.StringIO(text)):
        for cell in row:
            if cell.startswith(("=", "+", "-", "@", "\t", "\r")):
                float(cell)  # a number may begin with a sign, and nothing else
