"""Faults 3 and 4: nights crossed on one date, and clocks that were reset; cut into any pieces."""

import numpy as np
import pandas as pd
import pyarrow as pa
import pytest

from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.rules.bouts import Bouts

BERLIN = 'time_zone = "Europe/Berlin"'


def bouts_on(days, hours=((8, 0), (8, 30))):
    """Plain bouts in ISO 8601 on some days of September 2026, half an hour each."""
    (h1, m1), (h2, m2) = hours
    return [[f"2026-09-{day:02d}T{h1:02d}:{m1:02d}", f"2026-09-{day:02d}T{h2:02d}:{m2:02d}"] for day in days]


class TestFault3:
    @pytest.mark.parametrize("date_column", [True, False])
    def test_an_end_after_midnight_on_the_same_date_is_the_next_day_and_noted(self, read, date_column):
        row = ["2026-09-03", "23:50", "00:10"] if date_column else ["2026-09-03T23:50", "2026-09-03T00:10"]
        found = read([*["date"] * date_column, "start", "end"], row, logs=BERLIN)
        assert found.spans() == [("2026-09-03T21:50:00", "2026-09-03T22:10:00", 2)]
        assert found.lines() == [(2, "end", "2026-09-03T00:10", "past midnight", "repaired")]

    def test_a_bout_longer_than_the_longest_stops(self, read):
        row = ["2026-09-03T18:00", "2026-09-03T07:00"]
        assert read(["start", "end"], row, logs=BERLIN).lines() == [(2, "end", row[1], "end before start", "stop")]
        found = read(["start", "end"], row, logs=BERLIN, clock="longest_bout = 14")
        assert found.spans() == [("2026-09-03T16:00:00", "2026-09-04T05:00:00", 2)]

    def test_two_times_exchanged_are_no_midnight(self, read):
        found = read(["start", "end"], ["2026-09-03T08:40", "2026-09-03T08:15"], logs=BERLIN)
        assert found.lines() == [(2, "end", "2026-09-03T08:15", "end before start", "stop")]

    def test_with_dates_that_differ_nothing_is_moved(self, read):
        found = read(["start", "end"], ["2026-09-03T23:50", "2026-09-02T23:55"], logs=BERLIN)
        assert found.lines()[0][3:] == ("end before start", "stop")

    def test_the_study_can_forbid_it(self, read):
        found = read(["start", "end"], ["2026-09-03T23:50", "2026-09-03T00:10"], logs=BERLIN, clock='midnight = "stop"')
        assert found.lines() == [(2, "end", "2026-09-03T00:10", "end before start", "stop")]

    def test_the_night_of_a_change_of_clocks_is_crossed_in_local_time(self, read):
        # 23:30 to 03:30 across the end of summer time lasts five hours.
        found = read(["date", "start", "end"], ["2026-10-24", "23:30", "03:30"], logs=BERLIN)
        assert found.spans() == [("2026-10-24T21:30:00", "2026-10-25T02:30:00", 2)]

    SHEET = (
        ["w1", "2026-09-03", "23:20", "23:40"],
        ["w1", "2026-09-03", "23:50", "00:10"],
        ["w1", "2026-09-03", "00:10", "00:30"],
        ["w1", "2026-09-03", "00:30", "00:45"],
        ["w2", "2026-09-03", "08:00", "08:10"],
    )

    def test_later_rows_of_a_sheet_that_bears_its_first_date_follow(self, read):
        found = read(["session", "date", "start", "end"], *self.SHEET, logs=BERLIN)
        assert [start for start, *_ in found.spans()] == [
            "2026-09-03T21:20:00",
            "2026-09-03T21:50:00",
            "2026-09-03T22:10:00",
            "2026-09-03T22:30:00",
            "2026-09-03T06:00:00",
        ]
        assert [(row, name, action) for row, name, _, _, action in found.lines()] == [
            (3, "end", "repaired"),
            (4, "start", "repaired"),
            (5, "start", "repaired"),
        ]

    def test_a_sheet_that_falls_back_after_midnight_is_out_of_order_and_stops(self, read):
        rows = [["w1", "2026-09-03", t, t] for t in ("22:00", "08:00", "20:00", "07:00", "19:00")]
        found = read(["session", "date", "start", "end"], *rows, logs=BERLIN)
        assert [line for line in found.lines() if line[-1] == "stop"] == [
            (5, "start", "2026-09-03T07:00", "clock reset", "stop")
        ]
        assert any("not in the order of time; sort them" in words for words in found.messages(5))

    def test_a_sheet_that_fell_back_by_less_before_moves_nothing(self, read):
        rows = [["w1", "2026-09-03", t, t] for t in ("22:00", "21:00", "23:00", "07:00")]
        found = read(["session", "date", "start", "end"], *rows, logs=BERLIN)
        assert [start[8:13] for start, *_ in found.spans()] == ["03T20", "03T19", "03T21", "03T05"]

    def test_without_sessions_the_order_of_rows_moves_nothing(self, read):
        found = read(
            ["date", "start", "end"], ["2026-09-03", "22:00", "22:10"], ["2026-09-03", "08:00", "08:10"], logs=BERLIN
        )
        assert [start for start, *_ in found.spans()] == ["2026-09-03T20:00:00", "2026-09-03T06:00:00"]


class TestFault4:
    def test_years_outside_the_window_stop(self, read):
        rows = [*bouts_on([3, 4]), ["2062-09-05T08:00", "2062-09-05T08:30"]]
        found = read(["start", "end"], *rows, logs=BERLIN, clock="first_year = 2025\nlast_year = 2026")
        assert [line[:2] + line[3:] for line in found.lines()] == [
            (4, "start", "clock reset", "stop"),
            (4, "end", "clock reset", "stop"),
        ]
        assert "outside 2025 to 2026, as `logs.clock.first_year`" in found.messages(4)[0]

    @pytest.mark.parametrize("year", [1970, 2000, 2012])
    def test_a_year_at_which_clocks_begin_again_stops_among_others(self, read, year):
        rows = [*bouts_on([3, 4, 5]), [f"{year}-01-01T00:03", f"{year}-01-01T00:20"]]
        found = read(["start", "end"], *rows, logs=BERLIN)
        assert found.lines()[0] == (5, "start", f"{year}-01-01T00:03", "clock reset", "stop")
        assert "`logs.clock.first_year`" in found.messages(5)[0]

    def test_a_study_in_such_a_year_is_left_alone(self, read):
        rows = [
            [f"20{year}-01-{day:02d}T08:00", f"20{year}-01-{day:02d}T08:20"]
            for year in (11, 12, 13)
            for day in (3, 4, 5)
        ]
        assert read(["start", "end"], *rows, logs=BERLIN).lines() == []
        rows = [*bouts_on([3, 4, 5]), ["2000-01-01T08:00", "2000-01-01T08:20"]]
        assert read(["start", "end"], *rows, logs=BERLIN, clock="first_year = 2000").lines() == []

    def watch(self, *hours):
        return [
            ["w1", f"2026-09-{3 + h // 24:02d}T{h % 24:02d}:00", f"2026-09-{3 + h // 24:02d}T{h % 24:02d}:30"]
            for h in hours
        ]

    def test_a_clock_that_falls_back_by_more_than_12_hours_within_a_session_stops(self, read):
        rows = self.watch(30, 31, 32, 33, 34, 35, 2, 3)
        found = read(["session", "start", "end"], *rows, logs=BERLIN)
        assert found.lines() == [(8, "start", "2026-09-03T02:00", "clock reset", "stop")]
        assert "falls back by more than 12 hours" in found.said(8)

    def test_a_log_sorted_the_other_way_is_no_clock_that_fell_back(self, read):
        assert read(["session", "start", "end"], *self.watch(60, 40, 20, 0), logs=BERLIN).lines() == []

    def test_another_session_may_be_earlier(self, read):
        rows = [*self.watch(30, 31, 32, 33, 34, 35), ["w2", *self.watch(2)[0][1:]]]
        assert read(["session", "start", "end"], *rows, logs=BERLIN).lines() == []


def test_whatever_the_pieces_the_answer_is_the_same(tmp_path, study_of):
    """A sheet that crosses midnight, a clock that falls back, local and repaired times: cut at every row."""
    rng = np.random.default_rng(7)
    times = ["23:20", "23:50", "00:10", "00:30", "00:45", "01:00", "01:20", "01:40", "02:00"]
    table = pd.DataFrame({"session": "w1", "date": "2026-09-03", "start": times, "end": [*times[1:], "24:00"]})
    more = pd.concat([table, table.assign(session="w2", date="2026-09-05")], ignore_index=True)
    table = pd.concat(
        [more, more.assign(session="w3", date=[f"2026-09-{day:02d}" for day in [9] * 14 + [7] * 4])], ignore_index=True
    )
    table = table.assign(species="dunlin", animal="A", zone=rng.choice(["upper sand", "middle mud"], len(table)))
    columns = "\n".join(f'{name} = "{name}"' for name in ("session", "date", "start", "end"))
    study = study_of(tmp_path, columns=columns, logs=BERLIN)

    def read_in(size):
        ledger = Ledger()
        rule, visits = Bouts(study, ledger), []
        for begin in range(0, len(table), size):
            part = table.iloc[begin : begin + size]
            cells = {name: pa.array(part[name].tolist(), type=pa.string()) for name in table}
            visits.append(rule.visits(Piece("a.csv", np.arange(begin + 2, begin + 2 + len(part)), cells)))
        rule.finish()
        ledger.close()
        notes = sorted((e.row or 0, e.field, e.reason, e.action) for e in ledger.entries)
        return pd.concat(visits, ignore_index=True), notes, ledger.sums()

    whole, notes, sums = read_in(len(table))
    assert {reason for _, _, reason, _ in notes} >= {"past midnight", "clock reset"}
    for size in (1, 2, 3, 5, 8):
        part, part_notes, part_sums = read_in(size)
        pd.testing.assert_frame_equal(part, whole, check_dtype=False)
        assert (part_notes, part_sums) == (notes, sums)
