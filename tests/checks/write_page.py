"""Writes ``docs/verification.md``: every check of this folder, with the number expected and the number got.

Run ``python tests/checks/write_page.py`` after adding a check or changing a number.
"""

from __future__ import annotations

import sys
from collections.abc import Iterator
from importlib import import_module
from pathlib import Path

from register import Check

HERE = Path(__file__).resolve().parent
PAGE = HERE.parents[1] / "docs" / "verification.md"

_HEAD = """# Verification

Each line holds a number from outside the program beside the number that the program gives for the same data. All of them
are computed anew in every test run, and this page is compared with the result: a stale page fails the tests.

- **expected ±** is the number to meet and the largest difference allowed. The difference allowed covers the digits that
  the source prints, rounding on the way in the source, or (marked ≈) the random error of resampling.
- **status** tells how the expected number is known: *seen in the source*; *second-hand, cites the page* (a secondary
  source that names page or table); *from memory* (never the only check of anything); *derived here* (from the
  definition, a closed form, or another program, on the data of the source named).

{count} checks in {files} files of `tests/checks/`. Regenerate with `python tests/checks/write_page.py`.
"""


def gathered() -> Iterator[tuple[str, str, list[Check]]]:
    """Name, first line of the description, and checks of each file that holds any."""
    for path in sorted(HERE.glob("test_*.py")):
        module = import_module(path.stem)
        if hasattr(module, "CHECKS"):
            yield path.name, (module.__doc__ or "").partition("\n")[0], module.CHECKS


def page() -> str:
    """The whole page."""
    sections = list(gathered())
    count = sum(len(checks) for _, _, checks in sections)
    lines = [_HEAD.format(count=count, files=len(sections))]
    for name, title, checks in sections:
        lines += [f"## {name}", "", title, "", "| what | expected ± | got | source | status |", "|---|---|---|---|---|"]
        lines += [_row(check) for check in checks]
        lines.append("")
    return "\n".join(lines)


def _row(check: Check) -> str:
    got = f"≈ {_number(check.got(), 3)}" if check.random else _number(check.got(), 7)
    expected = (
        f"{_number(check.expected, 7)} ± {_number(check.tolerance, 2)}"
        if check.tolerance
        else _number(check.expected, 7)
    )
    return (
        "| "
        + " | ".join(cell.replace("|", "\\|") for cell in (check.name, expected, got, check.source, check.status))
        + " |"
    )


def _number(value: float, digits: int) -> str:
    """Rounded so that the last bits of a computation, which differ between machines, never show."""
    return f"{round(float(value), 13) + 0.0:.{digits}g}"


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8", newline="\n")
    sys.stdout.write(f"{PAGE}\n")
