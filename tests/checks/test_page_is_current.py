"""The verification page in the documentation says what the checks give now."""

from __future__ import annotations

import re

from write_page import PAGE, gathered, page

_RANDOM = re.compile(r"≈ (\S+)")
"""A number from random draws: another release of NumPy may draw otherwise."""


def test_page_is_current() -> None:
    written = PAGE.read_text(encoding="utf-8")
    assert _RANDOM.sub("≈", written) == _RANDOM.sub("≈", page()), (
        "docs/verification.md is stale: run python tests/checks/write_page.py"
    )


def test_numbers_from_random_draws_on_the_page_meet_their_checks() -> None:
    shown = [float(number) for number in _RANDOM.findall(PAGE.read_text(encoding="utf-8"))]
    checks = [check for _, _, checks in gathered() for check in checks if check.random]
    assert len(shown) == len(checks) > 5
    for number, check in zip(shown, checks, strict=True):
        slack = check.tolerance + 0.005 * abs(check.expected)  # the page shows three digits
        assert abs(number - check.expected) <= slack, check.name


def test_names_of_checks_are_told_apart() -> None:
    for file, _, checks in gathered():
        names = [check.name for check in checks]
        assert len(names) == len(set(names)), file
