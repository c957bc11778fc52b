"""What a check is: one number from outside, and how the program comes to it.

Each test file of this folder holds a list ``CHECKS``; ``write_page.py`` turns all of them into ``docs/verification.md``.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

Status = Literal["seen in the source", "second-hand, cites the page", "from memory", "derived here"]


@dataclass(frozen=True)
class Check:
    """One published or independently computed number beside ours.

    Attributes
    ----------
    name : str
        What is computed, from which data.
    source : str
        Where the data or the expected number come from.
    status : str
        How the expected number is known.
    expected : float
        The number to meet.
    tolerance : float
        Largest absolute difference allowed: the digits printed, or what rounding in the source explains.
    got : callable
        Computes our number.
    random : bool
        Whether our number comes from random draws, so that its last digits are not worth printing.
    """

    name: str
    source: str
    status: Status
    expected: float
    tolerance: float
    got: Callable[[], float]
    random: bool = False

    def __str__(self) -> str:
        return self.name


def require(check: Check) -> None:
    """Compute the number and hold it against the one expected."""
    got = check.got()
    assert math.isfinite(got), f"{check.name}: got {got}; expected {check.expected} ({check.source})"
    assert abs(got - check.expected) <= check.tolerance, (
        f"{check.name}: got {got:.8g}; expected {check.expected:.8g} ± {check.tolerance:.2g} ({check.source})"
    )
