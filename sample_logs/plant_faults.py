"""Copy two days of the sample study and plant faults in them, each listed with what should come of it.

The faults are those that field logs are known for. They are planted one to a row, apart from each other, in rows that
are otherwise sound, so that a complaint about any other row is a false alarm.
"""

from __future__ import annotations

import csv
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from pathlib import Path

DAYS = ("2026-09-03", "2026-09-21")
TITLE = 'title = "Spoiled on purpose: two days of the tidal flat, with planted faults (invented)"'
NOTE = 'note = "Invented data, spoiled on purpose to show what is found in a log: see planted.csv."'
KEPT_CLEAR = 2
APART = 17
LONG_BOUT = timedelta(minutes=5)

Row = list[str]


@dataclass(frozen=True)
class Slip:
    """One cell written wrongly: in which day and column, what stood there ("" = anything), what stands there now."""

    day: str
    column: str
    was: str
    becomes: Callable[[str], str]
    fault: str
    action: str


def _to(text: str) -> Callable[[str], str]:
    return lambda _: text


FIRST, SECOND = DAYS
SLIPS = [
    Slip(FIRST, "zone", "middle mud", _to("midle mud"), "zone misspelt", "stop"),
    Slip(FIRST, "zone", "upper sand", _to(" Upper  Sand"), "zone differs by case and spaces only", "repaired"),
    Slip(FIRST, "species", "dunlin", _to("dunlyn"), "species misspelt", "stop"),
    Slip(FIRST, "end", "", _to(""), "end missing", "set_aside"),
    Slip(FIRST, "start", "", lambda cell: cell.removesuffix("+02:00"), "time without offset among others with", "stop"),
    Slip(FIRST, "zone", "", _to("saltmarsh"), "zone not in the study", "stop"),
    Slip(FIRST, "zone", "lower mud", _to("lower\u00a0mud"), "no-break space in zone", "repaired"),
    Slip(FIRST, "animal", "", _to(""), "animal missing", "set_aside"),
    Slip(SECOND, "end", "", lambda cell: _moved(cell, timedelta(hours=-1)), "end before start", "stop"),
    Slip(SECOND, "species", "", _to(""), "species missing", "set_aside"),
    Slip(SECOND, "zone", "", _to(""), "zone blank", "out_of_sight"),
    Slip(SECOND, "start", "", _to("9.45"), "time that cannot be read", "stop"),
    Slip(SECOND, "species", "redshank", _to("Redshank "), "species differs by case and spaces only", "repaired"),
    Slip(SECOND, "end", "", lambda cell: cell.replace("-21T", "-31T"), "date that does not exist", "stop"),
    Slip(SECOND, "species", "", _to("oystercatcher"), "species not in the study", "stop"),
    Slip(SECOND, "zone", "lower mud", _to("l\u043ewer mud"), "look-alike letter in zone (Cyrillic o)", "stop"),
]


class SpoiledDay:
    """One day's rows while faults are planted; a row is known by itself, not by its number, until all are in."""

    def __init__(self, day: str, header: Sequence[str], rows: Sequence[Sequence[str]]) -> None:
        self.day = day
        self.header = list(header)
        self.rows = [list(row) for row in rows]
        self.planted: list[tuple[Row, str, str]] = []
        self.search_from = APART

    def sound_row(self, fits: Callable[[Row], bool]) -> int:
        """Position of the next row that fits, is well inside its session, and has no fault near it.

        Each search begins some way below the last, and again at the top when it meets the foot, so that the faults lie
        scattered over the sheet.
        """
        session, zone = self.header.index("session"), self.header.index("zone")
        spoiled = [id(row) for row, _, _ in self.planted]
        places = range(KEPT_CLEAR, len(self.rows) - KEPT_CLEAR)
        below = [place for place in places if place >= self.search_from]
        for place in below + [place for place in places if place < self.search_from]:
            near = self.rows[place - KEPT_CLEAR : place + KEPT_CLEAR + 1]
            row = self.rows[place]
            alone = all(id(other) not in spoiled and other[session] == row[session] for other in near)
            if alone and row[zone] != "out of sight" and fits(row):
                self.search_from = place + APART
                return place
        raise ValueError(f"no sound row is left in {self.day} for this fault")

    def slip(self, slip: Slip) -> None:
        """Write one cell wrongly."""
        column = self.header.index(slip.column)
        row = self.rows[self.sound_row(lambda row: slip.was in ("", row[column]))]
        row[column] = slip.becomes(row[column])
        self.planted.append((row, slip.fault, slip.action))

    def no_time_passes(self) -> None:
        """End a bout when it starts."""
        start, end = self.header.index("start"), self.header.index("end")
        row = self.rows[self.sound_row(lambda _: True)]
        row[end] = row[start]
        self.planted.append((row, "zero duration", "flagged"))

    def cell_lost(self) -> None:
        """Leave the last cell and its comma out."""
        row = self.rows[self.sound_row(lambda row: not row[-1])]
        row.pop()
        self.planted.append((row, "one cell too few", "stop"))

    def comma_unquoted(self) -> None:
        """Write a remark with a comma and forget the quotes, which makes two cells of it."""
        row = self.rows[self.sound_row(lambda row: not row[-1])]
        row[-1:] = ["ran 5 m", " then stood"]
        self.planted.append((row, "one cell too many (comma not in quotes)", "stop"))

    def bouts_inside(self) -> None:
        """Put two bouts inside a long one. The second touches no row beside it, only the long bout two rows above."""
        zone, start, end, notes = (self.header.index(name) for name in ("zone", "start", "end", "notes"))

        def long(row: Row) -> bool:
            return datetime.fromisoformat(row[end]) - datetime.fromisoformat(row[start]) >= LONG_BOUT

        place = self.sound_row(long)
        outer = self.rows[place]
        faults = ("bout inside the long bout above", "bout inside the long bout two rows above, clear of the row above")
        for number, fault in enumerate(faults, 1):
            inner = outer.copy()
            inner[zone] = "upper mud" if outer[zone] != "upper mud" else "middle mud"
            inner[start] = _moved(outer[start], timedelta(seconds=100 * number - 60))
            inner[end] = _moved(outer[start], timedelta(seconds=100 * number))
            inner[notes] = "added from dictaphone"
            self.rows.insert(place + number, inner)
            self.planted.append((inner, fault, "stop"))

    def night_watch(self) -> None:
        """Add a watch that ends at midnight, written 24:00:00; tides leave the lower shore bare at night as well."""
        last = self.rows[-1]
        bird = next(row for row in reversed(self.rows) if row[0] == "dunlin")
        session = f"{self.day}-{int(last[2][-2:]) + 1:02d}"
        changes = ["23:38:12+02:00", "23:44:50+02:00", "23:53:05+02:00", "24:00:00+02:00"]
        remarks = ["thermal telescope, same bird since dusk", "", ""]
        for zone, begin, end, note in zip(
            ["middle mud", "lower mud", "middle mud"], changes[:-1], changes[1:], remarks, strict=True
        ):
            watch = ["dunlin", bird[1], session, zone, f"{self.day}T{begin}", f"{self.day}T{end}"]
            self.rows.append([*watch, "foraging", bird[7], note])
        self.planted.append((self.rows[-1], "end of day written 24:00:00", "repaired"))

    def repeat(self) -> None:
        """Enter one sound row a second time at the foot of the sheet."""
        again = self.rows[self.sound_row(lambda _: True)].copy()
        self.rows.append(again)
        self.planted.append((again, "exact repeat of an earlier row", "set_aside"))

    def empty_line(self) -> None:
        """Leave a line empty after the first session."""
        session = self.header.index("session")
        place = next(i for i, row in enumerate(self.rows) if row[session] != self.rows[0][session])
        self.rows.insert(place, [])
        self.planted.append((self.rows[place], "empty line", "set_aside"))


def _moved(cell: str, by: timedelta) -> str:
    return (datetime.fromisoformat(cell) + by).isoformat()


def spoil(header: Sequence[str], by_day: Mapping[str, Sequence[Sequence[str]]]) -> list[SpoiledDay]:
    """Plant every fault in copies of the two days."""
    spoiled = {day: SpoiledDay(day, header, by_day[day]) for day in DAYS}
    spoiled[FIRST].bouts_inside()
    for slip in SLIPS:
        spoiled[slip.day].slip(slip)
    spoiled[FIRST].cell_lost()
    spoiled[SECOND].comma_unquoted()
    spoiled[SECOND].no_time_passes()
    spoiled[FIRST].repeat()
    spoiled[SECOND].night_watch()
    spoiled[SECOND].empty_line()
    return list(spoiled.values())


def write_spoiled(folder: Path, header: Sequence[str], by_day: Mapping[str, Sequence[Sequence[str]]]) -> None:
    """Write ``spoiled/`` into a folder: the two logs, the list of what was planted, the study with its own title."""
    target = folder / "spoiled"
    (target / "logs").mkdir(parents=True, exist_ok=True)
    listed = [["file", "row", "fault", "expected_action"]]
    for day in spoil(header, by_day):
        name = f"logs/{day.day}.csv"
        _write(target / name, [day.header, *day.rows])
        # The header is line 1, and no cell holds a line break, so a row's line is its place in the list plus two.
        lines = {id(row): line for line, row in enumerate(day.rows, 2)}
        found = sorted((lines[id(row)], fault, action) for row, fault, action in day.planted)
        listed += [[name, str(line), fault, action] for line, fault, action in found]
    _write(target / "planted.csv", listed)
    study = (folder / "tidal_flat" / "study.toml").read_text(encoding="utf-8").splitlines()
    ours = {"title = ": TITLE, "note = ": NOTE}
    text = [next((new for start, new in ours.items() if line.startswith(start)), line) for line in study]
    (target / "study.toml").write_text("\n".join(text) + "\n", encoding="utf-8")


def _write(path: Path, rows: Sequence[Sequence[str]]) -> None:
    with path.open("w", encoding="utf-8", newline="") as file:
        csv.writer(file, lineterminator="\n").writerows(rows)
