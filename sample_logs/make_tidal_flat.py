"""Write the invented sample study of four waders on a tidal flat.

Run from the top of the repository::

    python sample_logs/make_tidal_flat.py

It writes ``tidal_flat/logs/``, one file a day, and from the same rows ``spoiled/`` (see ``plant_faults.py``). All that
is in them is invented: the place, the birds, the areas and the observers.

How a bird is made to move: each animal has its own share of use over the zones, drawn around the mean of its species.
At each change the bird picks a zone by that share, among the zones the tide has left bare; a zone on another shore
level is taken less readily. The pick is made so that this changes how often a bird moves, not how much it uses a zone.
"""

from __future__ import annotations

import csv
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta, timezone
from pathlib import Path

import numpy as np
from field_notes import note_for
from plant_faults import write_spoiled

HERE = Path(__file__).parent
HEADER = ["species", "animal", "session", "zone", "start", "end", "behaviour", "observer", "notes"]
RANDOM_SEED = 12
SUMMER_TIME = timezone(timedelta(hours=2))
OUT_OF_SIGHT = "out of sight"

# Mussels do not grow as high as the upper shore, so one of the twelve cells has no zone.
LEVELS = ["upper", "middle", "lower"]
SURFACES = ["sand", "mud", "mussel bed", "channel edge"]
ZONES = [
    f"{level} {surface}" for level in LEVELS for surface in SURFACES if (level, surface) != ("upper", "mussel bed")
]
PLACES = np.array(
    [(LEVELS.index(level), SURFACES.index(surface)) for level, surface in (zone.split(" ", 1) for zone in ZONES)]
)

# Hours either side of low water for which each shore level is bare, and how long the tide takes to cross it.
BARE_HOURS = np.array([9.0, 3.9, 2.9])[PLACES[:, 0]]
CROSSING_HOURS = 0.8

# How much animals of one species are alike: the larger, the more alike.
CONCENTRATION = 12.0

# How readily a bird goes one shore level up or down, against staying on its level.
LEVEL_CHANGE = 0.42

BEHAVIOURS = ["foraging", "resting", "alert", "preening"]
MEDIAN_SECONDS = {"foraging": 66.0, "resting": 105.0, "alert": 34.0, "preening": 70.0, OUT_OF_SIGHT: 66.0}
SPREAD = 0.6
SHORTEST = 20

# Low water of the first day, and how much later each following day: the days chosen are those with a low water that
# falls well inside daylight, which come round once a fortnight.
FIRST_DAY = date(2026, 9, 2)
FIRST_LOW_WATER_HOURS = 9.9
LATER_EACH_DAY_HOURS = 0.8412
TIDE_HOURS = 12.4206
DAYS = [date(2026, 9, day) for day in (2, 3, 4, 6, 7, 8, 17, 18, 20, 21, 22)] + [
    date(2026, 10, day) for day in (1, 2, 3, 5)
]
HOURS_EITHER_SIDE = 3.4
EARLIEST, LATEST = 7.25, 18.75

OBSERVERS = ["HB", "LK", "TS"]
RING_COLOURS = "BGNORWY"


@dataclass(frozen=True)
class Species:
    """What is needed to invent the watches of one species.

    ``use`` gives mean use by zone, in the order of `ZONES`, in any unit; ``behaviour`` the chance of each of
    `BEHAVIOURS` when a new bout begins.
    """

    name: str
    animals: int
    sessions: int
    use: tuple[float, ...]
    behaviour: tuple[float, ...]


# Order of zones:        upper shore     middle shore          lower shore
#                        sand mud edge   sand mud mussel edge  sand mud mussel edge
SPECIES = [
    Species("dunlin", 14, 45, (3, 9, 2, 8, 28, 2, 4, 7, 31, 2, 4), (0.80, 0.06, 0.07, 0.07)),
    Species("redshank", 11, 38, (1, 7, 7, 1, 20, 4, 18, 1, 21, 4, 17), (0.70, 0.08, 0.14, 0.08)),
    Species("ringed plover", 8, 25, (33, 9, 2, 33, 9, 0.6, 2, 8, 2, 0.5, 0.5), (0.70, 0.06, 0.16, 0.08)),
    Species("turnstone", 6, 18, (2, 1, 1, 2, 3, 37, 4, 1, 3, 42, 4), (0.77, 0.06, 0.08, 0.09)),
]


@dataclass(frozen=True)
class Follow:
    """One watch of one animal, planned but not yet filled with bouts."""

    species: Species
    animal: str
    likes: np.ndarray
    observer: str
    start: datetime
    low_water: datetime


def ring_codes(random: np.random.RandomState, number: int) -> list[str]:
    """Different colour-ring codes, two rings a leg; none is another with left and right swapped."""
    codes: list[str] = []
    while len(codes) < number:
        rings = "".join(random.choice(list(RING_COLOURS), 4))
        code, swapped = f"{rings[:2]}-{rings[2:]}", f"{rings[2:]}-{rings[:2]}"
        if len(set(rings)) > 1 and code not in codes and swapped not in codes:
            codes.append(code)
    return codes


def low_water_on(day: date) -> datetime:
    """Time of the low water that falls in daylight."""
    hours = FIRST_LOW_WATER_HOURS + LATER_EACH_DAY_HOURS * (day - FIRST_DAY).days
    while hours > LATEST:
        hours -= TIDE_HOURS
    return at_hour(day, hours)


def at_hour(day: date, hours: float) -> datetime:
    """A day and decimal hours as a time on the clock, to the second."""
    return datetime.combine(day, time(), SUMMER_TIME) + timedelta(seconds=round(3600 * hours))


def plan_follows(random: np.random.RandomState) -> list[Follow]:
    """Who is watched on which day, by whom, from when; an animal at most once a day."""
    codes = ring_codes(random, sum(species.animals for species in SPECIES))
    by_day: dict[date, list[tuple[Species, str, np.ndarray]]] = {day: [] for day in DAYS}
    for species in SPECIES:
        mean = np.array(species.use) / sum(species.use)
        # Some birds are found again and again, some once or twice: one session each, the rest shared out unevenly.
        luck = random.dirichlet(np.full(species.animals, 3.0))
        sessions = 1 + random.multinomial(species.sessions - species.animals, luck)
        for number in sessions:
            animal, likes = codes.pop(), random.dirichlet(CONCENTRATION * mean)
            quietest_first = sorted(DAYS, key=lambda day: len(by_day[day]) + 4 * random.random_sample())
            for day in quietest_first[: int(number)]:
                by_day[day].append((species, animal, likes))
    follows: list[Follow] = []
    for day, birds in by_day.items():
        out_today = list(random.permutation(OBSERVERS))[: 3 if len(birds) > 8 else 2]
        order = random.permutation(len(birds))
        for index, observer in enumerate(out_today):
            theirs = [birds[i] for i in order[index :: len(out_today)]]
            follows += _one_observers_day(random, day, observer, theirs)
    return sorted(follows, key=lambda follow: follow.start)


def _one_observers_day(
    random: np.random.RandomState, day: date, observer: str, birds: Sequence[tuple[Species, str, np.ndarray]]
) -> list[Follow]:
    """Spread one observer's birds over the hours around low water, with time between them to find the next."""
    low_water = low_water_on(day)
    middle = low_water.hour + low_water.minute / 60
    first, last = max(middle - HOURS_EITHER_SIDE, EARLIEST), min(middle + HOURS_EITHER_SIDE, LATEST)
    turn = (last - first) / len(birds)
    # A follow lasts at most some fifty minutes, so one that starts early enough in its turn ends before the next.
    late = max(turn - 0.95, 0.05)
    starts = [first + turn * place + late * random.random_sample() for place in range(len(birds))]
    return [
        Follow(species, animal, likes, observer, at_hour(day, start), low_water)
        for (species, animal, likes), start in zip(birds, starts, strict=True)
    ]


def bouts_of(random: np.random.RandomState, follow: Follow, session: str) -> list[list[str]]:
    """Rows of one follow: bouts that touch each other, a new one whenever zone or behaviour changes."""
    ends = follow.start + timedelta(minutes=float(random.uniform(28, 48)))
    now, zone, label, behaviour = follow.start, -1, "", ""
    rows: list[list[str]] = []
    while now < ends:
        before = (label, behaviour)
        if rows and label != OUT_OF_SIGHT and random.random_sample() < _chance_of_losing(zone):
            label, behaviour = OUT_OF_SIGHT, ""
        else:
            zone = _next_zone(random, follow, now, zone)
            label, behaviour = ZONES[zone], _next_behaviour(random, follow.species, zone)
        now += timedelta(seconds=_seconds(random, behaviour or OUT_OF_SIGHT))
        if (label, behaviour) == before:
            rows[-1][HEADER.index("end")] = now.isoformat()
            continue
        start = rows[-1][HEADER.index("end")] if rows else follow.start.isoformat()
        note = note_for(random, session, follow.species.name, label, behaviour, ZONES[zone])
        row = [follow.species.name, follow.animal, session, label, start, now.isoformat()]
        rows.append([*row, behaviour, follow.observer, note])
    # A watch that loses its bird for good ends when the bird was last seen.
    return rows[:-1] if label == OUT_OF_SIGHT else rows


def _seconds(random: np.random.RandomState, behaviour: str) -> int:
    """How long until the bird next chooses; nothing shorter than an observer can write down."""
    seconds = 0
    while seconds < SHORTEST:
        seconds = int(MEDIAN_SECONDS[behaviour] * random.lognormal(0.0, SPREAD))
    return seconds


def _share_on_tide(follow: Follow, now: datetime) -> np.ndarray:
    """The animal's share of use over the zones, with those under water left out; sums to 1."""
    from_low_water = abs((now - follow.low_water).total_seconds()) / 3600
    share = follow.likes * np.clip((BARE_HOURS - from_low_water) / CROSSING_HOURS, 0.0, 1.0)
    return np.asarray(share / share.sum())


def _next_zone(random: np.random.RandomState, follow: Follow, now: datetime, zone: int) -> int:
    """Offer a zone by the animal's share; take it for sure on the same shore level, else less readily; or stay.

    The chance of taking it is the same there and back, so the share of use is left as it was (Metropolis's rule). The
    first zone of a follow (``zone`` -1) and the one after a zone has gone under water are taken as offered.
    """
    share = _share_on_tide(follow, now)
    offered = int(random.choice(len(ZONES), p=share))
    if zone < 0 or share[zone] == 0:
        return offered
    levels_apart = abs(int(PLACES[offered, 0] - PLACES[zone, 0]))
    return offered if random.random_sample() < LEVEL_CHANGE**levels_apart else zone


def _next_behaviour(random: np.random.RandomState, species: Species, zone: int) -> str:
    """Behaviour in the zone just chosen: more rest and preening high on the shore."""
    chances = np.array(species.behaviour) * ([1.0, 2.0, 1.0, 1.6] if ZONES[zone].startswith("upper") else 1.0)
    return str(random.choice(BEHAVIOURS, p=chances / chances.sum()))


def _chance_of_losing(zone: int) -> float:
    """Chance that a bird drops out of view at the end of a bout: channels and mussel beds hide it best."""
    return 0.11 if ZONES[zone].endswith(("edge", "bed")) else 0.06


def write_log(path: Path, rows: Sequence[Sequence[str]]) -> None:
    """Write one day's log as UTF-8 CSV, cells quoted where they have to be."""
    path.parent.mkdir(parents=True, exist_ok=True)
    with path.open("w", encoding="utf-8", newline="") as file:
        csv.writer(file, lineterminator="\n").writerows([HEADER, *rows])


def main() -> None:
    """Write the sample study and its spoiled copy; print what the study holds."""
    # The stream of RandomState is frozen, so the files come out the same under any release of NumPy.
    random = np.random.RandomState(RANDOM_SEED)
    by_day: dict[str, list[list[str]]] = {day.isoformat(): [] for day in DAYS}
    number_on = dict.fromkeys(by_day, 0)
    follows = plan_follows(random)
    for follow in follows:
        day = follow.start.date().isoformat()
        number_on[day] += 1
        by_day[day] += bouts_of(random, follow, f"{day}-{number_on[day]:02d}")
    for day, rows in by_day.items():
        write_log(HERE / "tidal_flat" / "logs" / f"{day}.csv", rows)
    write_spoiled(HERE, HEADER, by_day)

    every = [row for rows in by_day.values() for row in rows]
    seconds = sum((datetime.fromisoformat(row[5]) - datetime.fromisoformat(row[4])).total_seconds() for row in every)
    animals = len({row[1] for row in every})
    print(f"{len(follows)} sessions, {len(every)} bouts, {seconds / 3600:.1f} hours, {animals} animals")


if __name__ == "__main__":
    main()
