"""The page on faults says what the program does now."""

from __future__ import annotations

from write_page import PAGE, page


def test_page_is_current() -> None:
    assert PAGE.read_text(encoding="utf-8") == page(), (
        "docs/faults.md is stale: run python tests/logs/faults/write_page.py"
    )
