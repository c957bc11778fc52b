"""Faults 1 to 15: dates, times of day, zones of time, spreadsheet days."""

from __future__ import annotations

from fault_register import DURATIONS, HEADER, Found, Planted, lengths, starts

BERLIN = 'time_zone = "Europe/Berlin"'
DATE_AND_TIME = 'session = "session"\ndate = "date"\nstart = "start"\nend = "end"'
ROW = "dunlin,RW,s1,upper mud,{},{}\n"


def rows(*times: tuple[str, str], header: str = HEADER) -> str:
    return header + "".join(ROW.format(*pair) for pair in times)


PLANTED = [
    Planted(
        1,
        "day and month cannot be told apart",
        "asks",
        "logs.clock.format",
        rows(("03/04/2026 08:00", "03/04/2026 08:10"), ("05/04/2026 08:00", "05/04/2026 08:10")),
        found=(Found(2, "start", "stop", ("`logs.clock.format`", "%d/%m/%Y %H:%M", "%m/%d/%Y %H:%M")),),
        rows={"stop": 2},
        study={"keys": BERLIN},
        answer={"tables": '[logs.clock]\nformat = "%d/%m/%Y %H:%M"'},
        answered={"used": 2},
        check_answered=lambda log: starts(log) == ["2026-04-03T06:00", "2026-04-05T06:00"],
    ),
    Planted(
        2,
        "both date orders in one column",
        "stops; both groups are listed",
        "",
        rows(("13/04/2026 08:00", "13/04/2026 08:10"), ("04/14/2026 08:00", "04/14/2026 08:10")),
        found=(Found(3, "start", "stop", ("only be month first", "row 2 only day first")),),
        rows={"used": 1, "stop": 1},
        study={"keys": BERLIN, "tables": '[logs.clock]\nformat = "%d/%m/%Y %H:%M"'},
    ),
    Planted(
        3,
        "a bout runs past midnight under one date",
        "carried to the next day and noted, if no longer than the longest bout",
        "logs.clock.midnight, logs.clock.longest_bout",
        rows(("2026-09-03T23:50:00", "2026-09-03T00:10:00")),
        found=(Found(2, "end", "repaired", ("next day",)),),
        rows={"used": 1},
        study={"keys": BERLIN},
        check=lambda log: lengths(log) == [1200],
        answer={"tables": '[logs.clock]\nmidnight = "stop"'},
        answered={"stop": 1},
    ),
    Planted(
        4,
        "a clock that was reset",
        "stops where the year lies outside the years of the study",
        "logs.clock.first_year, logs.clock.last_year",
        rows(
            ("2026-09-03T08:00:30Z", "2026-09-03T08:15:00Z"),
            ("2026-09-03T08:15:00Z", "2026-09-03T08:20:30Z"),
            ("1970-01-01T00:05:30Z", "1970-01-01T00:15:30Z"),
        ),
        found=(Found(4, "start", "stop", ("logs.clock.first_year",)),),
        rows={"used": 2, "stop": 1},
        answer={"tables": "[logs.clock]\nfirst_year = 1970\nlast_year = 2030"},
        answered={"used": 3},
    ),
    Planted(
        5,
        "24:00 for the end of the day",
        "read as 00:00 of the next day and noted",
        "",
        rows(("2026-09-03T23:50:00Z", "2026-09-03T24:00:00Z")),
        found=(Found(2, "end", "repaired", ("00:00 of the next day",)),),
        rows={"used": 1},
        check=lambda log: lengths(log) == [600],
    ),
    Planted(
        6,
        "twelve hours without AM or PM",
        "flagged where no hour is above 12 over days; a format with %I and without %p is refused",
        "logs.clock.format",
        rows(
            *(
                (f"2026-09-{day:02d} {hour:02d}:00", f"2026-09-{day:02d} {hour:02d}:30")
                for day in range(1, 11)
                for hour in (6, 8, 10, 12, 2, 4)
            ),
        ),
        found=(Found(None, "start", "flagged", ("24-hour times",)),),
        rows={"used": 60},
        study={"keys": BERLIN},
    ),
    Planted(
        7,
        "decimal hours or hours and minutes (7.30)",
        "asks",
        "logs.clock.format, logs.duration_unit",
        "species,animal,session,zone,date,start,end\ndunlin,RW,s1,upper mud,2026-09-03,7.30,7.50\n",
        found=(Found(2, "start", "stop", ("`logs.clock.format`", "decimal_hours")),),
        rows={"stop": 1},
        study={"keys": BERLIN, "columns": DATE_AND_TIME},
        answer={"tables": '[logs.clock]\nformat = "decimal_hours"'},
        answered={"used": 1},
        check_answered=lambda log: lengths(log) == [720],
    ),
    Planted(
        8,
        "minutes and seconds or hours and minutes (12:30)",
        "asks",
        "logs.duration_unit",
        "species,animal,session,zone,start,duration\ndunlin,RW,s1,upper mud,2026-09-03T08:00:00Z,12:30\n",
        found=(Found(2, "duration", "stop", ("`logs.duration_unit`", "m:s", "h:m")),),
        rows={"stop": 1},
        study={"columns": DURATIONS},
        answer={"keys": 'duration_unit = "m:s"'},
        answered={"used": 1},
        check_answered=lambda log: lengths(log) == [750],
    ),
    Planted(
        9,
        "the hour that comes twice when clocks go back",
        "asks",
        "logs.clock.repeated_hour",
        rows(("2026-10-25T02:10:00", "2026-10-25T02:20:00")),
        found=(Found(2, "start", "stop", ("came twice", "repeated_hour")),),
        rows={"stop": 1},
        study={"keys": BERLIN},
        answer={"tables": '[logs.clock]\nrepeated_hour = "later"'},
        answered={"used": 1},
        check_answered=lambda log: starts(log) == ["2026-10-25T01:10"],
    ),
    Planted(
        10,
        "times with and without offset in one file",
        "stops",
        "",
        rows(
            ("2026-09-03T08:00:00+02:00", "2026-09-03T08:10:00+02:00"), ("2026-09-03T08:10:00", "2026-09-03T08:20:00")
        ),
        found=(Found(3, "start", "stop", ("no offset, where the file's first time has one",)),),
        rows={"used": 1, "stop": 1},
        study={"keys": BERLIN},
    ),
    Planted(
        11,
        "winter time kept all year",
        "read as declared",
        "logs.time_zone",
        rows(("2026-07-03T08:00:00", "2026-07-03T08:10:00")),
        rows={"used": 1},
        study={"keys": 'time_zone = "Etc/GMT-1"'},
        check=lambda log: starts(log) == ["2026-07-03T07:00"],
    ),
    Planted(
        12,
        "spreadsheet days for dates (46268.5)",
        "asks; read and noted with the epoch declared",
        "logs.clock.format, logs.clock.epoch",
        rows(("46268.5", "46268.510416667")),
        found=(Found(2, "start", "stop", ("spreadsheet",)),),
        rows={"stop": 1},
        study={"keys": BERLIN},
        answer={"tables": '[logs.clock]\nformat = "spreadsheet"'},
        answered={"used": 1},
        check_answered=lambda log: starts(log) == ["2026-09-03T10:00"] and lengths(log) == [900],
    ),
    Planted(
        13,
        "days counted from 1904",
        "asks where nothing tells the epoch; a workbook tells it itself",
        "logs.clock.epoch",
        rows(("44806.5", "44806.510416667")),
        rows={"used": 1},
        study={"keys": BERLIN, "tables": '[logs.clock]\nformat = "spreadsheet"\nepoch = 1904'},
        check=lambda log: starts(log) == ["2026-09-03T10:00"],
    ),
    Planted(
        14,
        "durations over 24 h shown as dates of 1900",
        "turned back and noted in a column of durations",
        "",
        "species,animal,session,zone,start,duration\ndunlin,RW,s1,upper mud,2026-09-03T08:00:00Z,1900-01-01T06:30:00\n",
        found=(Found(2, "duration", "repaired", ("a spreadsheet showed this duration as a date: read as 30:30:00",)),),
        rows={"used": 1},
        study={"columns": DURATIONS, "keys": 'duration_unit = "h:m:s"'},
        check=lambda log: lengths(log) == [(24 + 6.5) * 3600],
    ),
    Planted(
        15,
        "a cell at midnight that lost its time",
        "read as 00:00 and noted where the other cells have times",
        "",
        rows(
            ("2026-09-03T23:40:00", "2026-09-04"),
            ("2026-09-04", "2026-09-04T00:20:00"),
            ("2026-09-04T00:20:00", "2026-09-04T00:40:00"),
        ),
        found=(Found(2, "end", "repaired", ("00:00",)), Found(3, "start", "repaired", ("00:00",))),
        rows={"used": 3},
        study={"keys": BERLIN},
        check=lambda log: lengths(log) == [1200, 1200, 1200],
    ),
]
