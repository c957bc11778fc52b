"""Writes ``docs/faults.md``: the 42 faults, what happens by default, which key decides, and the message met.

Run ``python tests/logs/faults/write_page.py`` after a change of a planted fault or of a message.
"""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE))

import planted_clocks  # noqa: E402
import planted_files  # noqa: E402
import planted_rows  # noqa: E402
from fault_register import Planted  # noqa: E402

from niche.errors import NicheError  # noqa: E402

PAGE = HERE.parents[2] / "docs" / "faults.md"

HEAD = """# Faults of field logs

Logs from the field go wrong in ways that are known. The program looks for 42 of them. Whatever it finds is told with file,
row, column, value, rule and remedy by `niche check`, and every row is accounted for: it is used, out of sight, set aside or
stops the work.

- **stops**: nothing is computed until the log is mended or the study file decides.
- **asks**: it stops too, and the message names the key of the study file that answers the question.
- **set aside**: the row is left out and listed with its time.
- **repaired**, **noted**: the row is used after a repair that loses nothing.
- **flagged**: the row is used as it stands; look at it again.

The messages below come from small planted logs, one for each fault, which the tests read in every run. Regenerate with
`python tests/logs/faults/write_page.py`.
"""


def page() -> str:
    """The whole page."""
    faults = sorted(
        [*planted_clocks.PLANTED, *planted_rows.PLANTED, *planted_files.PLANTED], key=lambda fault: fault.number
    )
    return HEAD + "".join(_section(fault) for fault in faults)


def _section(fault: Planted) -> str:
    keys = ", ".join(f"`{key.strip()}`" for key in fault.option.split(",")) if fault.option else "none"
    lines = [f"\n## {fault.number}. {fault.fault[0].upper()}{fault.fault[1:]}\n", f"- By default: {fault.default}."]
    lines.append(f"- Decided by: {keys}.")
    message = _message(fault)
    if message:
        lines += ["- Message:", "", *(f"  > {line}" for line in message.splitlines())]
    return "\n".join(lines) + "\n"


def _message(fault: Planted) -> str:
    """The first message that the planted fault gives; empty where it needs none."""
    with tempfile.TemporaryDirectory() as folder:
        try:
            log = fault.read(Path(folder))
        except NicheError as error:
            return str(error).replace(folder + "/", "")
        for found in sorted(fault.found, key=lambda found: found.action != "stop"):
            for e in log.ledger.entries:
                if (e.file, e.row, e.field, e.action) == (found.file, found.row, found.field, found.action) and all(
                    words in e.problem for words in found.words
                ):
                    place = e.file if e.row is None else f"{e.file}, row {e.row}"
                    what = f"{e.field} {e.value!r}: " if e.field else (f"{e.value!r}: " if e.value else "")
                    return f"{place}: {what}{e.problem}"
    return ""


if __name__ == "__main__":
    PAGE.parent.mkdir(exist_ok=True)
    PAGE.write_text(page(), encoding="utf-8", newline="\n")
    sys.stdout.write(f"{PAGE}\n")
