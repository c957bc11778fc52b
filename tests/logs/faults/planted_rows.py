"""Faults 16 to 27, 39 and 40: names, and what only several rows together show."""

from __future__ import annotations

from fault_register import BOUTS, HEADER, SOUND, Found, Planted, lengths

OBSERVED = HEADER.replace("end\n", "end,observer\n")
SITED = HEADER.replace("end\n", "end,site\n")
SAME = "same_across_sites = true"


def row(start: str, end: str, *more: str, zone: str = "upper mud", animal: str = "RW", species: str = "dunlin") -> str:
    day = [f"2026-09-03T{time}:30Z" if time else "" for time in (start, end)]
    return ",".join([species, animal, "s1", zone, *day, *more]) + "\n"


def overlap(*later: str) -> str:
    return HEADER + row("08:00", "08:10") + row("08:06", "08:16", zone="lower mud")


PLANTED = [
    Planted(
        16,
        "an id that a spreadsheet turned into a number (9.0E+14)",
        "stops: the digits are lost",
        "",
        HEADER + row("08:00", "08:10", animal="9.0E+14"),
        found=(Found(2, "animal", "stop", ("rounded number", "column set to text")),),
        rows={"stop": 1},
        answer={"tables": '[logs.aliases.animals]\n"9.0E+14" = "RW"'},
        answered={"used": 1},
    ),
    Planted(
        17,
        "a zone that a spreadsheet turned into a date (1-Feb)",
        "stops",
        "logs.aliases.zones",
        HEADER + row("08:00", "08:10", zone="1-Feb"),
        found=(Found(2, "zone", "stop", ("zone name into a date", "`logs.aliases.zones`")),),
        rows={"stop": 1},
        answer={"tables": '[logs.aliases.zones]\n"1-Feb" = "upper mud"'},
        answered={"used": 1},
    ),
    Planted(
        18,
        "a bout without an end",
        "set aside",
        "logs.rule",
        HEADER + row("08:00", "") + SOUND,
        found=(Found(2, "end", "set_aside", ("no length",)),),
        rows={"used": 1, "set_aside": 1},
    ),
    Planted(
        19,
        "an arrival without a departure",
        "the last state of a session is cut at its recorded end; without one it is set aside",
        "logs.sessions.file, logs.problems.last_state_open",
        {
            "a.csv": "species,animal,session,zone,time\n"
            "dunlin,RW,s1,upper mud,2026-09-03T08:00:30Z\ndunlin,RW,s1,lower mud,2026-09-03T08:10:30Z\n",
            "watches.txt": "session,start,end\ns1,2026-09-03T08:00:00Z,2026-09-03T08:30:30Z\n",
        },
        found=(Found(3, "zone", "set_aside", ("no end of the session", "`logs.sessions.file`")),),
        rows={"used": 1, "set_aside": 1},
        study={"keys": 'rule = "switches"', "columns": 'session = "session"\ntime = "time"'},
        check=lambda log: lengths(log) == [600],
        answer={"tables": '[logs.sessions]\nfile = "watches.txt"'},
        answered={"used": 2},
        check_answered=lambda log: lengths(log) == [600, 1200],
    ),
    Planted(
        20,
        "no duration, or a negative one",
        "none: kept and flagged; negative: stops",
        "logs.problems.end_before_start",
        "species,animal,session,zone,start,duration\n"
        "dunlin,RW,s1,upper mud,2026-09-03T08:00:00Z,0\ndunlin,RW,s1,upper mud,2026-09-03T08:10:00Z,-5\n",
        found=(Found(2, "duration", "flagged", ("adds no time",)), Found(3, "duration", "stop", ("not negative",))),
        rows={"used": 1, "stop": 1},
        study={"columns": 'session = "session"\nstart = "start"\nduration = "duration"'},
        answer={"tables": '[logs.problems]\nend_before_start = "set_aside"'},
        answered={"used": 1, "set_aside": 1},
    ),
    Planted(
        21,
        "one animal in two places at once",
        "stops",
        "logs.problems.overlap",
        overlap(),
        found=(
            Found(
                3,
                "start",
                "stop",
                (
                    "'RW' is already in 'upper mud' until 2026-09-03T08:10:30Z",
                    "a.csv, row 2",
                    "`logs.problems.overlap`",
                ),
            ),
        ),
        rows={"used": 1, "stop": 1},
        answer={"tables": '[logs.problems]\noverlap = "trim_earlier"'},
        answered={"used": 2},
        check_answered=lambda log: lengths(log) == [360, 600] and log.ledger.milliseconds["set_aside"] == 240_000,
    ),
    Planted(
        22,
        "rows entered twice, or one file under two names",
        "the repeats are set aside and counted",
        "",
        {
            "a.csv": HEADER + row("08:00", "08:10") + row("08:10", "08:20"),
            "b.csv": HEADER + row("08:10", "08:20") + row("08:00", "08:10"),
            "c.csv": HEADER + row("08:00", "08:10") + row("08:10", "08:20"),
        },
        found=(
            Found(2, "start", "set_aside", ("repeats a.csv, row 3, exactly",), "b.csv"),
            Found(None, "", "flagged", ("all its rows repeat rows of a.csv, in another order",), "b.csv"),
            Found(2, "", "set_aside", ("repeats a.csv byte for byte",), "c.csv"),
        ),
        rows={"used": 2, "set_aside": 4},
    ),
    Planted(
        23,
        "two observers with one animal at once",
        "asks whose rows count",
        "logs.observer, logs.problems.two_observers",
        OBSERVED + row("08:00", "08:10", "HB") + row("08:02", "08:09", "LK", zone="upper sand"),
        found=(Found(3, "start", "stop", ("'HB' and 'LK' both logged 'RW'", '`logs.observer = "HB"`')),),
        rows={"used": 1, "stop": 1},
        study={"columns": BOUTS + '\nobserver = "observer"'},
        answer={"keys": 'observer = "LK"'},
        answered={"used": 1, "set_aside": 1},
        check_answered=lambda log: log.visits["zone"].tolist() == ["upper sand"],
    ),
    Planted(
        24,
        "a zone misspelt, or with other case and spaces",
        "case and spaces repaired and noted; what is merely close is proposed",
        "logs.aliases, logs.problems.unknown_zone",
        HEADER + row("08:00", "08:10", zone=" Upper  MUD") + row("08:20", "08:30", zone="uper mud"),
        found=(
            Found(2, "zone", "repaired", ("read as 'upper mud'",)),
            Found(
                3,
                "zone",
                "stop",
                ("no such zone; did you mean 'upper mud'?", '`logs.aliases.zones`: "uper mud" = "upper mud"'),
            ),
        ),
        rows={"used": 1, "stop": 1},
        answer={"tables": '[logs.aliases.zones]\n"uper mud" = "upper mud"'},
        answered={"used": 2},
    ),
    Planted(
        25,
        "letters that look like others, and spaces that are none",
        "spaces repaired; letters named by code point",
        "logs.aliases",
        HEADER
        + row("08:00", "08:10", zone="upper\u00a0mud")
        + row("08:20", "08:30", zone="l\u043ewer mud")
        + row("08:40", "08:50", animal="R\u0410W"),
        found=(
            Found(2, "zone", "repaired", ("read as 'upper mud'",)),
            Found(3, "zone", "stop", ("did you mean 'lower mud'?", "U+043E CYRILLIC SMALL LETTER O")),
            Found(4, "animal", "flagged", ("U+0410 CYRILLIC CAPITAL LETTER A",)),
        ),
        rows={"used": 2, "stop": 1},
        answer={"tables": '[logs.aliases.zones]\n"l\\u043Ewer mud" = "lower mud"'},
        answered={"used": 3},
    ),
    Planted(
        26,
        "an animal out of sight, or a zone left blank",
        "leaves the use of zones and is reported by species and session; a blank is flagged",
        "logs.out_of_sight",
        HEADER + row("08:00", "08:10") + row("08:10", "08:20", zone="Out of sight") + row("08:20", "08:30", zone=""),
        found=(Found(4, "zone", "flagged", ("counted as out of sight",)),),
        rows={"used": 1, "out_of_sight": 2},
    ),
    Planted(
        27,
        "one zone label at several sites",
        "asks",
        "zones.same_across_sites",
        SITED + row("08:00", "08:10", "north") + row("09:00", "09:10", "south", animal="GY"),
        found=(
            Found(
                3, "start", "stop", ("'upper mud' stands at the sites 'north', 'south'", "`zones.same_across_sites`")
            ),
        ),
        rows={"used": 1, "stop": 1},
        study={"columns": BOUTS + '\nsite = "site"'},
        answer={"zones": SAME},
        answered={"used": 2},
    ),
    Planted(
        39,
        "one animal name for several animals",
        "stops",
        "logs.problems.reused_animals, logs.problems.nameless_animals",
        SITED
        + row("08:00", "08:30", "north")
        + row("08:20", "08:40", "south")
        + row("10:00", "10:10", "north", animal="UNK"),
        found=(
            Found(3, "start", "stop", ("'RW' stands at the sites 'north', 'south'", "`logs.problems.reused_animals`")),
            Found(4, "animal", "stop", ("names no animal", "`logs.problems.nameless_animals`")),
        ),
        rows={"used": 1, "stop": 2},
        study={"columns": BOUTS + '\nsite = "site"', "zones": SAME},
        answer={
            "tables": '[logs.problems]\nreused_animals = "keep_apart_by_site"\nnameless_animals = "set_aside"',
        },
        answered={"used": 2, "set_aside": 1},
        check_answered=lambda log: log.visits["animal"].tolist() == ["RW (north)", "RW (south)"],
    ),
    Planted(
        40,
        "another name of a species",
        "asks",
        "logs.aliases.species, logs.problems.unknown_species",
        HEADER + row("08:00", "08:10", species="red-backed sandpiper"),
        found=(
            Found(2, "species", "stop", ("not listed under `species`", "dunlin, redshank", "`logs.aliases.species`")),
        ),
        rows={"stop": 1},
        answer={"tables": '[logs.aliases.species]\n"red-backed sandpiper" = "dunlin"'},
        answered={"used": 1},
    ),
]
