"""Write the logs and small tables of the five small invented samples, one for each recording rule beside bouts.

Run from the top of the repository::

    python sample_logs/make_small_samples.py

It writes the same bytes each time. Their ``study.toml`` are written by hand. All of it is invented: the flat, the birds,
their rings and tags, the readers and the cameras.

Each animal has its own share of use over the zones, drawn around the mean of its species, so that animals differ.
"""

from __future__ import annotations

import csv
import io
import zipfile
from collections.abc import Iterable, Sequence
from datetime import datetime, timedelta, timezone
from pathlib import Path

import numpy as np
from openpyxl import Workbook

HERE = Path(__file__).parent
RANDOM_SEED = 31
SUMMER_TIME = timezone(timedelta(hours=2))
SPECIES = ["dunlin", "redshank", "ringed plover", "turnstone"]
CONCENTRATION = 6.0

ROOST = ["sand spit", "shingle bank", "salt marsh", "channel edge"]
FLAT = ["upper sand", "upper mud", "middle sand", "middle mud", "lower mud", "lower mussel bed"]

USE = {
    "dunlin": [1, 4, 2, 6, 7, 1],
    "redshank": [1, 3, 1, 5, 4, 4],
    "ringed plover": [6, 3, 4, 2, 1, 0.3],
    "turnstone": [2, 0.5, 1, 1, 2, 7],
}
"""Mean use of the zones of the flat, in any unit."""

ROOST_USE = {
    "dunlin": [6, 2, 3, 1],
    "redshank": [1, 1, 6, 3],
    "ringed plover": [5, 5, 1, 0.5],
    "turnstone": [1, 7, 0.5, 2],
}

RINGS = ["RW-GY", "BO-NR", "WY-BG", "GG-OR", "NY-WB", "OB-RY", "YR-GN", "WN-OO", "BW-YG", "RO-NB", "GY-WR", "NO-BY"]


def own_use(rng: np.random.Generator, mean: Sequence[float]) -> np.ndarray:
    """Share of use of one animal."""
    shares = np.array(mean, dtype=float)
    return rng.dirichlet(CONCENTRATION * shares / shares.sum() + 0.05)


def iso(moment: datetime) -> str:
    return moment.isoformat(timespec="seconds")


def write(name: str, header: Sequence[str], rows: Iterable[Sequence[object]]) -> None:
    path = HERE / name
    path.parent.mkdir(parents=True, exist_ok=True)
    with path.open("w", encoding="utf-8", newline="") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(header)
        writer.writerows(rows)


def switch_log(rng: np.random.Generator) -> None:
    """Follows of single birds: a row each time the bird changes zone."""
    rows: list[list[object]] = []
    sessions: list[list[object]] = []
    birds = [(SPECIES[i % 3], RINGS[i], own_use(rng, USE[SPECIES[i % 3]])) for i in range(12)]
    for day in range(4):
        moment = datetime(2026, 9, 2 + day, 8, 0, tzinfo=SUMMER_TIME)
        for number, (species, ring, use) in enumerate(birds):
            if number % 2 != day % 2:
                continue
            begin, session = moment, f"{moment:%m-%d} {ring}"
            end = begin + timedelta(minutes=35 + int(rng.integers(0, 10)))
            last = ""
            while moment < end:
                zone = str(rng.choice([*FLAT, "lost"], p=[*(0.94 * use), 0.06]))
                if zone != last:
                    rows.append([iso(moment), session, species, ring, zone])
                last = zone
                moment += timedelta(seconds=int(rng.lognormal(5.0, 0.6)) + 15)
            # One watch was broken off and nobody wrote down when.
            sessions.append([session, iso(begin), "" if (day, number) == (2, 4) else iso(end), ("HB", "LK")[day % 2]])
            moment = end + timedelta(minutes=4)
    write("switch_log/logs/switches.csv", ["time", "session", "species", "animal", "zone"], rows)
    write("switch_log/sessions.csv", ["session", "start", "end", "observer"], sessions)


def hourly_scans(rng: np.random.Generator) -> None:
    """Each hour every zone is looked over; a zone with nobody in it has a row without species."""
    rows: list[list[object]] = []
    for day in range(10):
        shares = {name: own_use(rng, USE[name]) for name in SPECIES}
        for hour in range(7, 15):
            moment = datetime(2026, 9, 6 + day, hour, 0, tzinfo=SUMMER_TIME)
            counted = {name: rng.multinomial(int(rng.poisson(4)), shares[name]) for name in SPECIES}
            for place, zone in enumerate(FLAT):
                if zone == "lower mussel bed" and hour in (7, 14):
                    continue  # under water: not looked at
                present = [(name, int(counted[name][place])) for name in SPECIES if counted[name][place]]
                for name, number in present or [("", "")]:
                    rows.append([f"{moment:%Y-%m-%d}", iso(moment), zone, name, number])
    write("hourly_scans/logs/scans.csv", ["day", "time", "zone", "species", "count"], rows)


def roost_readers(rng: np.random.Generator) -> None:
    """Five readers at roost posts read leg tags about every 20 s while a bird stands near."""
    readers = {"R1": "sand spit", "R2": "shingle bank", "R3": "salt marsh", "R4": "salt marsh", "R5": "channel edge"}
    posts = {zone: [reader for reader, place in readers.items() if place == zone] for zone in ROOST}
    reads: list[tuple[datetime, str, str]] = []
    tags: list[list[object]] = []
    for number, ring in enumerate(RINGS):
        species = SPECIES[number % 4]
        tag, use = f"0A4F{number + 17:04d}", own_use(rng, ROOST_USE[species])
        tags.append([tag, ring, species, "2026-09-01", "2026-09-03" if number == 3 else ""])
        for night in range(3):
            if number == 3 and night == 2:
                continue  # its tag had been found on the beach and given to another bird
            reads += night_of(rng, tag, use, posts, datetime(2026, 9, 2 + night, 20, 0, tzinfo=SUMMER_TIME))
    tags.append(["0A4F0020", "YY-NB", "turnstone", "2026-09-04", ""])
    use = own_use(rng, ROOST_USE["turnstone"])
    reads += night_of(rng, "0A4F0020", use, posts, datetime(2026, 9, 4, 20, 0, tzinfo=SUMMER_TIME))
    for reader in readers:  # the test tag, held to each reader on setting it up
        reads.append((datetime(2026, 9, 2, 18, 0, int(reader[1]), tzinfo=SUMMER_TIME), "TEST0001", reader))
    reads.append((datetime(2026, 9, 3, 2, 11, 5, tzinfo=SUMMER_TIME), "0A4F9999", "R2"))  # a tag of nobody's
    reads.sort()
    reads.insert(41, reads[40])  # one read stored twice
    write(
        "roost_readers/logs/reads.csv", ["time", "tag", "reader"], ([iso(t), tag, reader] for t, tag, reader in reads)
    )
    write("roost_readers/tags.csv", ["tag", "animal", "species", "valid_from", "valid_to"], tags)


def night_of(
    rng: np.random.Generator, tag: str, use: np.ndarray, posts: dict[str, list[str]], begin: datetime
) -> list[tuple[datetime, str, str]]:
    """Reads of one tag in one night."""
    reads = []
    moment = begin + timedelta(minutes=int(rng.integers(0, 120)))
    for _ in range(int(rng.integers(3, 6))):
        reader = str(rng.choice(posts[str(rng.choice(ROOST, p=use))]))
        for _ in range(int(rng.integers(1, 14))):
            reads.append((moment, tag, reader))
            moment += timedelta(seconds=int(rng.gamma(4.0, 6.0)) + 1)
        moment += timedelta(minutes=int(rng.integers(4, 50)))
    return reads


def camera_events(rng: np.random.Generator) -> None:
    """Twelve deployments of cameras, each in one zone, with bursts, empty pictures and the people who set them up."""
    deployments: list[list[object]] = []
    events: list[list[object]] = []
    for number in range(12):
        name, zone = f"C{number + 1:02d}", FLAT[number % 6]
        begin = datetime(2026, 9, 1, 9, 0, tzinfo=SUMMER_TIME) + timedelta(hours=number)
        end = begin + timedelta(days=6)
        deployments.append([name, zone, iso(begin), iso(end)])
        events.append([name, iso(begin + timedelta(minutes=1)), "", "human", "", ""])
        for species in SPECIES[:3]:
            rate = 12.0 * USE[species][number % 6] / sum(USE[species]) * float(rng.gamma(2.0, 0.5))
            for _ in range(int(rng.poisson(rate))):
                moment = begin + timedelta(minutes=int(rng.integers(10, 6 * 24 * 60 - 60)))
                for _ in range(int(rng.integers(1, 4))):  # the camera fires again while the bird is still there
                    last = moment + timedelta(seconds=int(rng.integers(5, 50)))
                    events.append([name, iso(moment), iso(last), "animal", species, int(rng.integers(1, 5))])
                    moment += timedelta(minutes=int(rng.integers(1, 9)))
        for _ in range(3):
            moment = begin + timedelta(minutes=int(rng.integers(10, 6 * 24 * 60 - 60)))
            events.append([name, iso(moment), iso(moment), "blank", "", ""])
    events.sort(key=lambda event: (str(event[0]), str(event[1])))
    write("camera_events/logs/events.csv", ["deployment", "start", "end", "kind", "species", "count"], events)
    write("camera_events/deployments.csv", ["deployment", "zone", "start", "end"], deployments)


def tally_sheet(rng: np.random.Generator) -> None:
    """A workbook with minutes by bird and zone, as someone summed them up after the season."""
    book = Workbook()
    sheet = book.active
    sheet.title = "minutes"
    sheet.append(["species", "ring", *FLAT, "out of sight", "remarks"])
    for number, ring in enumerate(RINGS):
        species = SPECIES[number % 3]
        total = float(rng.integers(90, 260))
        minutes = np.round(total * own_use(rng, USE[species]), 1)
        hidden = round(float(rng.uniform(0, 9)), 1)
        remark = "limps" if number == 5 else None
        sheet.append([species, ring, *(float(m) if m else None for m in minutes), hidden, remark])
    book.properties.created = book.properties.modified = datetime(2026, 10, 1)  # noqa: DTZ001 - a workbook has no zone
    stream = io.BytesIO()
    book.save(stream)
    path = HERE / "tally_sheet/logs/minutes.xlsx"
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_bytes(same_each_time(stream.getvalue()))


def same_each_time(workbook: bytes) -> bytes:
    """The workbook with a fixed date on each of its parts: a workbook is a zip file, and that tells when it was made."""
    stream = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(workbook)) as source, zipfile.ZipFile(stream, "w", zipfile.ZIP_DEFLATED) as target:
        for name in source.namelist():
            content = source.read(name)
            if name == "docProps/core.xml":  # saving puts the present moment here, whatever was set before
                begin, end = content.index(b"<dcterms:modified"), content.index(b"</dcterms:modified>")
                start = content.index(b">", begin) + 1
                content = content[:start] + b"2026-10-01T00:00:00Z" + content[end:]
            target.writestr(zipfile.ZipInfo(name, (2026, 10, 1, 0, 0, 0)), content, zipfile.ZIP_DEFLATED)
    return stream.getvalue()


def main() -> None:
    for number, sample in enumerate((switch_log, hourly_scans, roost_readers, camera_events, tally_sheet)):
        sample(np.random.default_rng([RANDOM_SEED, number]))


if __name__ == "__main__":
    main()
