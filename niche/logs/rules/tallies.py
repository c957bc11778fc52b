"""Tallies: somebody has added up already; each row has an animal, or a species, and a number under each zone.

Numbers are seconds, minutes, hours, counts or percentages, as the study declares, and one kind throughout: rows that add
up to 100 among others that do not are told apart before they are added.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field

import numpy as np
import pandas as pd
import pyarrow as pa
import pyarrow.compute as pc
from numpy.typing import NDArray

from niche.errors import StudyError
from niche.logs import fields
from niche.logs.ledger import Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.rows import Cells, Rows
from niche.logs.rules.hundreds import percentage_problems
from niche.logs.rules.points import whole_rows, without_copies, without_copies_across_files
from niche.logs.rules.waiting import Waiting, hold, no_visits, table_of
from niche.logs.rules.zone_columns import ZoneColumns
from niche.logs.visits import OUT_OF_SIGHT
from niche.study.model import Study

SCALE = {"s": 1000, "min": 60_000, "h": 3_600_000, "percent": 1000, "count": 1}
"""What 1 of a unit adds: milliseconds, thousandths of a percent, or 1."""

ALL_ANIMALS = "all animals"
"""The one unit of a species in a sheet without animals and sessions."""

_TIME = ("s", "min", "h")


@dataclass
class Tallies:
    """Gathers all rows: whether numbers are percentages, and whether rows repeat, shows only across them."""

    study: Study
    ledger: Ledger
    columns: ZoneColumns = field(init=False)
    _waiting: Waiting = field(default_factory=Waiting, init=False)
    _blanks: Counter[str] = field(default_factory=Counter, init=False)

    def __post_init__(self) -> None:
        self.columns = ZoneColumns(self.study, self.ledger)
        self._places = [*self.study.zones.names, OUT_OF_SIGHT]

    @property
    def _unit(self) -> str:
        if self.study.logs.tallies is None:
            raise StudyError("logs.tallies.unit: missing. It tells what the numbers are: s, min, h, percent or count.")
        return self.study.logs.tallies.unit

    def visits(self, piece: Piece) -> pd.DataFrame:
        """No visit: rows wait for each other."""
        fields.check_headings(piece, self.study, ("species",))
        headings = self.columns.of(piece)
        rows = Rows(piece, self.ledger)
        species = fields.species(rows, self.study)
        animal, session = fields.who(rows, self.study)
        animal = np.where(animal == "", ALL_ANIMALS, animal)
        written = np.zeros((len(piece.rows), len(self._places)))
        decimals = np.zeros(len(piece.rows), dtype=np.int64)
        filled = np.zeros(len(piece.rows), dtype=bool)
        empty = np.zeros((len(piece.rows), len(self._places)), dtype=bool)
        for number, place in enumerate(self._places):
            if place in headings:
                written[:, number], digits, blank = self._numbers(rows, headings[place])
                decimals = np.maximum(decimals, digits)
                filled |= ~blank
                empty[:, number] = blank
        nothing = ~filled
        rows.problem("zone", nothing, Cells(piece.column(None)), "no amounts", "no zone of the row has a number")
        kept = hold(rows)
        self._blanks[piece.file] += int(empty[kept].sum())
        amounts = np.rint(written * SCALE[self._unit]).astype(np.int64)
        self._waiting.add(
            piece,
            kept,
            species=species,
            animal=animal,
            session=np.where(session == "", animal, session),
            whole=whole_rows(piece),
            total=written.sum(axis=1),
            numbers=(written > 0).sum(axis=1),
            decimals=decimals,
            **{f"amount {number}": amounts[:, number] for number in range(len(self._places))},
        )
        return no_visits()

    def _numbers(self, rows: Rows, heading: str) -> tuple[NDArray[np.float64], NDArray[np.int64], NDArray[np.bool_]]:
        """Numbers of a column, their decimals, and which cells are blank (read as 0)."""
        percent = self._unit == "percent"
        cells = Cells(rows.piece.column(heading))
        column = pc.utf8_trim_whitespace(rows.piece.column(heading))
        signed = np.asarray(pc.ends_with(column, pattern="%"))
        if percent:
            column = pc.utf8_rtrim(pc.utf8_rtrim(column, characters="%"), characters=" ")
        number = np.asarray(pc.match_substring_regex(column, r"^\d{1,12}(\.\d+)?$"))
        value = np.array(pc.cast(pc.if_else(pa.array(number), column, "0"), pa.float64()))
        blank = np.asarray(pc.equal(column, ""))
        policy = self.study.logs.problems.unreadable
        mixed = signed & ~np.bool_(percent)
        advice = f'a percentage, and `logs.tallies.unit` is "{self._unit}"; one kind of number in all rows'
        rows.problem(heading, mixed, cells, "percentages among other numbers", advice, "stop")
        advice = "not a plain number at least 0, such as 42 or 42.5"
        rows.problem(heading, ~number & ~blank & ~mixed, cells, "unreadable number", advice, policy)
        if self._unit == "count":
            advice = 'not a whole number, and `logs.tallies.unit` is "count"'
            rows.problem(heading, number & (value % 1 != 0), cells, "unreadable number", advice, policy)
        point = np.asarray(pc.find_substring(column, pattern="."))
        length = np.asarray(pc.utf8_length(pc.utf8_rtrim(column, characters="0")))
        digits = np.where(number & (point >= 0), length - point - 1, 0)
        return np.where(number, value, 0.0), digits.astype(np.int64), blank

    def finish(self) -> pd.DataFrame:
        """All visits: one for each zone in which a row has an amount."""
        self.columns.note_strangers()
        for file, blanks in self._blanks.items():
            if blanks:
                problem = "zone cells left blank, read as 0"
                self.ledger.note(Entry(file, None, "", f"{blanks} cells", "blank cell", problem, "flagged"))
        if not self._waiting:
            return no_visits()
        table = self._waiting.ordered()
        if self.study.logs.columns.animal is None:
            table = without_copies_across_files(table, self.ledger)
        else:
            table = without_copies(table, self.ledger, ("whole",))
        problems = percentage_problems(table, self.study)
        amounts = table[[f"amount {number}" for number in range(len(self._places))]].to_numpy(dtype=np.int64)
        self._settle(table, amounts, problems)
        fine = np.ones(len(table), dtype=bool)
        fine[list(problems)] = False
        row, place = np.nonzero(amounts * fine[:, None])
        found = {name: table[name].to_numpy()[row] for name in ("species", "animal", "session", "file", "row")}
        zone = np.array(self._places, dtype=object)[place]
        never = np.zeros(len(row), dtype=np.int64)
        return table_of({**found, "zone": zone, "start": never, "end": never, "amount": amounts[row, place]})

    def _settle(self, table: pd.DataFrame, amounts: NDArray[np.int64], problems: dict[int, Entry]) -> None:
        """Each row is accounted for once, whatever the number of its zones; its time is the sum over them."""
        time = amounts if self._unit in _TIME else np.zeros_like(amounts)
        seen, unseen = time[:, :-1].sum(axis=1), time[:, -1]
        only_unseen = (amounts[:, :-1].sum(axis=1) == 0) & (amounts[:, -1] > 0)
        files = table["file"].to_numpy()
        for position, file in enumerate(files.tolist()):
            in_view, hidden = int(seen[position]), int(unseen[position])
            self.ledger.come_in(file, 0, in_view + hidden)
            if position in problems:
                self.ledger.dispose([problems[position]], in_view + hidden)
                continue
            alone = int(only_unseen[position])
            self.ledger.count(file, "used", 1 - alone, in_view)
            self.ledger.count(file, "out_of_sight", alone, hidden)
