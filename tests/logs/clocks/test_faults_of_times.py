"""Faults 5 to 15 as they show in a log of bouts, and the resolution of its times."""

import pytest

BERLIN = 'time_zone = "Europe/Berlin"'
GERMAN = 'format = "%d.%m.%Y %H:%M"'


def bouts_on(days, hours=((8, 0), (8, 30))):
    """Plain bouts in ISO 8601 on some days of September 2026, half an hour each."""
    (h1, m1), (h2, m2) = hours
    return [[f"2026-09-{day:02d}T{h1:02d}:{m1:02d}", f"2026-09-{day:02d}T{h2:02d}:{m2:02d}"] for day in days]


class TestFaults5To10:
    def test_fault_5_24_00_is_the_next_midnight_in_every_form(self, read):
        found = read(["date", "start", "end"], ["2026-09-03", "23:50", "24:00"], logs=BERLIN)
        assert found.lines() == [(2, "end", "2026-09-03T24:00", "24:00", "repaired")]
        assert found.spans()[0][1] == "2026-09-03T22:00:00"
        found = read(["date", "start", "end"], ["3.9.2026", "23:50", "24:00"], logs=BERLIN, clock=GERMAN)
        assert found.lines() == [(2, "end", "3.9.2026 24:00", "24:00", "repaired")]

    def dial(self, hours):
        return [[f"2026-09-{day:02d}T{h:02d}:00", f"2026-09-{day:02d}T{h:02d}:20"] for day in (3, 4) for h in hours]

    def test_fault_6_a_dial_of_12_hours_is_flagged_once(self, read):
        found = read(["start", "end"], *self.dial([8, 9, 10, 11, 12, 1, 2, 3]), logs=BERLIN)
        assert ("a.csv", "12-hour clock without AM or PM", "flagged") in found.notes()

    @pytest.mark.parametrize(
        "hours",
        [
            [8, 9, 10, 11, 12, 13, 14, 15],
            [5, 6, 7, 8, 9, 10, 11, 0],
            [1, 2, 3, 4, 5, 1, 2, 3],
            [7, 8, 9, 10, 11, 12, 7, 8],
        ],
    )
    def test_fault_6_other_hours_are_not(self, read, hours):
        assert [reason for _, reason, _ in read(["start", "end"], *self.dial(hours), logs=BERLIN).notes()] == [
            "times to the minute"
        ]

    @pytest.mark.parametrize(
        ("cell", "words"),
        [
            ("7.30", 'Set `logs.clock.format` to "%Y-%m-%d %H.%M" or to "decimal_hours"'),
            (
                "7.75",
                'decimal hours, for not all values could be hours and minutes; set `logs.clock.format` to "decimal_hours"',
            ),
            ("7.5", 'set `logs.clock.format` to "decimal_hours"'),
        ],
    )
    def test_fault_7_a_time_with_a_point_is_asked_about(self, read, cell, words):
        found = read(["date", "start", "duration"], ["2026-09-03", cell, "60"], logs=BERLIN)
        assert found.lines() == [(2, "start", f"2026-09-03T{cell}", "form of time not declared", "stop")]
        assert words in found.said(2)

    def test_fault_8_a_bout_longer_than_the_longest_is_flagged(self, read):
        found = read(
            ["start", "duration"],
            ["2026-09-03T08:00", "12:00"],
            ["2026-09-04T08:00", "12:01"],
            logs=BERLIN + '\nduration_unit = "h:m"',
        )
        assert found.lines() == [(3, "duration", "12:01", "long bout", "flagged")]
        assert "longer than 12 h, which `logs.clock.longest_bout` gives" in found.said(3)
        assert len(found.spans()) == 2

    def test_fault_8_two_parts_without_a_declared_unit_stop(self, read):
        found = read(
            ["start", "duration"], ["2026-09-03T08:00", "7:30"], logs=BERLIN, problems='unreadable = "set_aside"'
        )
        assert found.lines() == [(2, "duration", "7:30", "unreadable duration", "stop")]

    def test_fault_9_the_repeated_hour_stops_and_can_be_declared(self, read):
        row = ["2026-10-25T02:30", "2026-10-25T03:30"]
        assert read(["start", "end"], row, logs=BERLIN).lines() == [(2, "start", row[0], "unreadable time", "stop")]
        found = read(["start", "end"], row, logs=BERLIN, clock='repeated_hour = "later"')
        assert found.spans() == [("2026-10-25T01:30:00", "2026-10-25T02:30:00", 2)]
        assert found.lines() == [(2, "start", row[0], "repeated hour", "repaired")]

    def test_fault_9_the_missing_hour_stops(self, read):
        row = ["2026-03-29T02:30", "2026-03-29T03:30"]
        assert read(["start", "end"], row, logs=BERLIN).lines() == [(2, "start", row[0], "unreadable time", "stop")]

    def test_fault_10_offsets_that_differ_are_converted(self, read):
        found = read(
            ["start", "end"],
            ["2026-09-03T08:15+02:00", "2026-09-03T06:40Z"],
            ["2026-09-03T03:15-03:30", "2026-09-03T12:30+05:45"],
        )
        assert found.spans() == [
            ("2026-09-03T06:15:00", "2026-09-03T06:40:00", 2),
            ("2026-09-03T06:45:00", "2026-09-03T06:45:00", 3),
        ]

    def test_fault_10_offsets_among_none_stop(self, read):
        found = read(["start", "end"], ["2026-09-03T08:15Z", "2026-09-03T08:40"], logs=BERLIN)
        assert found.lines() == [(2, "end", "2026-09-03T08:40", "unreadable time", "stop")]
        assert found.said(2).startswith("no offset, where the file's first time has one")


class TestFaults12To15:
    @pytest.mark.parametrize(
        ("cell", "key"),
        [
            ("46268.34375", '"spreadsheet"'),
            ("1788416100", '"unix_seconds"'),
            ("1788416100000", '"unix_milliseconds"'),
            ("37.5", '"elapsed"'),
        ],
    )
    def test_fault_12_numbers_name_the_key_that_would_declare_them(self, read, cell, key):
        found = read(["start", "duration"], [cell, "60"], logs=BERLIN)
        assert found.lines() == [(2, "start", cell, "form of time not declared", "stop")]
        assert f"set `logs.clock.format` to {key}" in found.said(2)

    def test_a_time_of_day_without_a_date_names_the_key(self, read):
        found = read(["start", "duration"], ["08:15", "60"], logs=BERLIN)
        assert found.said(2) == "a time of day without its date; name the column of the date as `logs.columns.date`"

    @pytest.mark.parametrize(("epoch", "other", "day"), [(1900, 1904, 44_806), (1904, 1900, 46_268)])
    def test_fault_13_dates_1462_days_off_propose_the_other_epoch(self, read, epoch, other, day):
        found = read(
            ["start", "duration"],
            [str(day + 0.5), "60"],
            logs=BERLIN,
            clock=f'format = "spreadsheet"\nepoch = {epoch}\nfirst_year = 2026\nlast_year = 2026',
        )
        assert found.lines() == [(2, "start", str(day + 0.5), "clock reset", "stop")]
        assert f"1,462 days away: set `logs.clock.epoch` to {other}" in found.said(2)

    @pytest.mark.parametrize("cell", ["1899-12-30T08:15:00", "1900-01-09T08:15:00", "1904-01-01T08:15:00"])
    def test_fault_14_day_0_of_a_spreadsheet_is_no_date(self, read, cell):
        found = read(["start", "duration"], [cell, "60"], logs=BERLIN, problems='unreadable = "set_aside"')
        assert found.lines() == [(2, "start", cell, "unreadable time", "stop")]
        assert found.said(2).startswith("near day 0 of a spreadsheet")

    def test_fault_14_in_a_duration_column_it_is_repaired(self, read):
        found = read(
            ["start", "duration"],
            ["2026-09-03T08:15", "1900-01-01T05:30:00"],
            logs=BERLIN + '\nduration_unit = "h:m:s"',
        )
        assert found.lines() == [
            (2, "duration", "1900-01-01T05:30:00", "duration shown as a date", "repaired"),
            (2, "duration", "1900-01-01T05:30:00", "long bout", "flagged"),
        ]
        assert found.spans()[0][1] == "2026-09-04T11:45:00"

    @pytest.mark.parametrize(
        ("form", "cells"),
        [
            ("", ["2026-09-03 23:30", "2026-09-03 23:50", "2026-09-04"]),
            (GERMAN, ["3.9.2026 23:30", "3.9.2026 23:50", "4.9.2026"]),
        ],
    )
    def test_fault_15_a_midnight_that_lost_its_time(self, read, form, cells):
        found = read(
            ["start", "end"], [cells[0], cells[1]], [cells[1], cells[2]], [cells[0], cells[1]], logs=BERLIN, clock=form
        )
        assert found.spans()[1][1] == "2026-09-03T22:00:00"
        assert (3, "end", cells[2], "midnight without its time", "repaired") in found.lines()

    def test_a_date_alone_as_a_start_is_a_span(self, read):
        found = read(["start", "end"], ["2026-09-03", "2026-09-04"], logs=BERLIN)
        assert found.lines()[0] == (2, "start", "2026-09-03", "unreadable time", "stop")
        assert "a span of time, not an instant" in found.log.ledger.entries[0].problem


class TestResolution:
    def test_times_to_the_minute_are_said_once_a_file(self, read):
        plain, exact = bouts_on([3, 4]), [["2026-09-05T08:00:10", "2026-09-05T08:20"]]
        found = read(["start", "end"], files=[plain, exact, bouts_on([7])], logs=BERLIN)
        assert found.notes() == [
            ("a.csv", "times to the minute", "flagged"),
            ("c.csv", "times to the minute", "flagged"),
        ]
        assert "± 1 min" in found.log.ledger.entries[-1].problem

    def test_lengths_that_were_measured_are_not_doubted(self, read):
        assert read(["start", "duration"], ["2026-09-03T08:00", "42"], logs=BERLIN).notes() == []
