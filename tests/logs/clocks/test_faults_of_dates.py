"""Faults 1 and 2: dates that are not ISO 8601 and not declared, and two orders of day and month in one column."""

import pytest

BERLIN = 'time_zone = "Europe/Berlin"'


class TestFault1:
    def test_dates_that_can_be_read_both_ways_are_asked_about_with_both_patterns(self, read):
        found = read(
            ["start", "end"],
            ["03/04/2026 08:15", "03/04/2026 08:40"],
            ["05/04/2026 08:15", "05/04/2026 08:40"],
            logs=BERLIN,
        )
        assert found.spans() == []
        assert found.lines(3) == [
            (3, "start", "05/04/2026 08:15", "day and month ambiguous", "stop"),
            (3, "end", "05/04/2026 08:40", "day and month ambiguous", "stop"),
        ]
        for entry in found.log.ledger.entries:
            assert 'Set `logs.clock.format` to "%d/%m/%Y %H:%M" or "%m/%d/%Y %H:%M"' in entry.problem

    @pytest.mark.parametrize(
        ("cells", "word", "pattern"),
        [
            (["03/04/2026 08:15", "13/04/2026 08:40"], "day first, as row 3 shows", "%d/%m/%Y %H:%M"),
            (["03/04/2026 08:15:10", "04/13/2026 08:40:10"], "month first, as row 3 shows", "%m/%d/%Y %H:%M:%S"),
            (["3.4.26 8.15", "13.4.26 8.40"], "day first, as row 3 shows", "%d.%m.%y %H.%M"),
            (["03-04-2026 08:15 AM", "04-13-2026 8:40 PM"], "month first, as row 3 shows", "%m-%d-%Y %I:%M %p"),
            (["03/04/2026T08:15", "31/04/2026T08:40"], "day first, as row 3 shows", "%d/%m/%YT%H:%M"),
        ],
    )
    def test_evidence_in_the_column_is_named_and_the_pattern_proposed(self, read, cells, word, pattern):
        found = read(["start", "duration"], *([cell, "60"] for cell in cells), logs=BERLIN)
        assert {e.reason for e in found.log.ledger.entries if e.row} == {"form of time not declared"}
        assert found.said(2) == f'{word}; set `logs.clock.format` to "{pattern}"'

    def test_the_proposed_pattern_works(self, read):
        cells = ["03/04/2026 08:15", "60"], ["13/04/2026 08:40", "60"]
        proposed = read(["start", "duration"], *cells, logs=BERLIN).said(2).split('"')[1]
        found = read(["start", "duration"], *cells, logs=BERLIN, clock=f'format = "{proposed}"')
        assert found.spans()[0][0] == "2026-04-03T06:15:00"
        assert found.lines() == []

    def test_a_date_in_a_column_of_its_own_is_asked_about_too(self, read):
        found = read(["date", "start", "duration"], ["03/04/2026", "08:15", "60"], logs=BERLIN)
        assert found.lines() == [(2, "start", "03/04/2026T08:15", "day and month ambiguous", "stop")]
        assert "%d/%m/%Y %H:%M" in found.said(2)

    def test_setting_unreadable_times_aside_does_not_silence_the_question(self, read):
        found = read(
            ["start", "duration"], ["03/04/2026 08:15", "60"], logs=BERLIN, problems='unreadable = "set_aside"'
        )
        assert found.lines()[0][-1] == "stop"


class TestFault2:
    def test_mixed_orders_stop_and_both_groups_are_listed(self, read):
        days = ["03/04/2026", "13/04/2026", "04/15/2026", "14/04/2026", "05/05/2026"]
        found = read(["start", "duration"], *([f"{day} 08:15", "60"] for day in days), logs=BERLIN)
        assert {(line[3], line[4]) for line in found.lines()} == {("mixed date orders", "stop")}
        assert [line[0] for line in found.lines()] == [2, 3, 4, 5, 6]
        assert found.said(2).startswith("rows 3, 5 can only be day first and row 4 only month first")

    def test_under_a_declared_pattern_the_rows_of_the_other_order_stop(self, read):
        days = ["03/04/2026", "13/04/2026", "04/15/2026", "14/04/2026", "31/02/2026"]
        found = read(
            ["start", "duration"],
            *([f"{day} 08:15", "60"] for day in days),
            logs=BERLIN,
            clock='format = "%d/%m/%Y %H:%M"',
        )
        assert found.lines() == [
            (4, "start", "04/15/2026 08:15", "mixed date orders", "stop"),
            (6, "start", "31/02/2026 08:15", "unreadable time", "stop"),
        ]
        assert found.said(4).startswith("row 4 can only be month first and rows 3, 5 only day first")
        assert found.said(6) == "no such date or time of day"
