"""What the times of a whole file look like together: to the minute only, on a 12-hour clock, as days of a spreadsheet."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from niche.logs.clocks.diagnose import HALF_DAY, Question
from niche.logs.clocks.written import DAY, Written
from niche.study.model import Study

RESOLUTION = "times to the minute"
_MANY = 20
"""Fewer times on a dial of 12 hours may be chance."""


@dataclass
class Seen:
    """Counts over the readable times of one file."""

    name: str = ""
    times: int = 0
    has_end: bool = False
    seconds: bool = False
    civil: bool = True
    hours: NDArray[np.int64] = field(default_factory=lambda: np.zeros(24, dtype=np.int64))
    first: int = 2**62
    last: int = -(2**62)

    def add(self, name: str, written: Written, fine: NDArray[np.bool_]) -> None:
        """Count the times of a column of a piece."""
        self.name = self.name or name
        self.has_end |= name == "end"
        ms = written.ms[fine]
        if not len(ms):
            return
        self.times += len(ms)
        self.seconds |= written.seconds
        self.civil &= written.civil
        self.hours += np.bincount(ms % DAY // (DAY // 24), minlength=24)
        self.first, self.last = min(self.first, int(ms.min())), max(self.last, int(ms.max()))

    def notes(self, study: Study) -> list[Question]:
        """Flags for the file as a whole."""
        form, found = study.logs.clock.format, []
        if self.times and self.has_end and not self.seconds:
            advice = "no time tells seconds, so the length of each bout is known to ± 1 min"
            found.append(Question(RESOLUTION, advice))
        on_a_dial = (
            self.hours[0] == 0 and not self.hours[13:].any() and self.hours[1:6].any() and self.hours[7:13].any()
        )
        if self.civil and self.times >= _MANY and self.last - self.first > DAY and on_a_dial and "%I" not in form:
            advice = (
                "no hour is above 12 or is 0, yet hours of 1 to 5 and of 7 to 12 occur over more than a day: if afternoons "
                "were written as 1:30 for 13:30, the times are wrong; check them, and write 24-hour times"
            )
            found.append(Question(HALF_DAY, advice))
        if form == "spreadsheet" and self.times:
            advice = (
                f"times read as a spreadsheet's days since its epoch {study.logs.clock.epoch}, as `logs.clock` says"
            )
            found.append(Question("spreadsheet days", advice))
        return found
