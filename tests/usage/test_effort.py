"""Effort: who was watched for how long, against plain loops, and by day in local dates."""

from statistics import median

import numpy as np
import pytest

from niche.effort import effort, effort_by_day

HOUR = 3_600_000
BERLIN_MIDNIGHT = 1_788_386_400_000
"""2026-09-03T00:00 in Berlin, 22:00 of the day before in UTC."""


def by_loops(visits, name):
    inside, outside, counts = {}, 0, {"visits": 0, "animals": set(), "sessions": set(), "zones": set()}
    for visit in visits.to_dict("records"):
        if visit["species"] != name:
            continue
        length = visit["end"] - visit["start"]
        counts["animals"].add(visit["animal"])
        counts["sessions"].add(visit["session"])
        if visit["zone"]:
            inside[visit["animal"]] = inside.get(visit["animal"], 0) + length
            counts["visits"] += 1
            counts["zones"].add(visit["zone"])
        else:
            outside += length
    times = [value / 1000 for value in inside.values()]
    return [
        name, len(counts["animals"]), len(counts["sessions"]), counts["visits"], len(counts["zones"]), sum(times),
        outside / 1000, max(times) / sum(times), min(times), median(times), max(times),
    ]  # fmt: skip


@pytest.mark.parametrize("seed", range(6))
def test_effort_equals_plain_loops(made, seed):
    visits = made.random_visits(seed, 80)
    table = effort(visits, ("redshank", "dunlin"))
    assert list(table.columns) == [
        "species", "animals", "sessions", "visits", "zones_used", "seconds_in_view", "seconds_out_of_sight",
        "most_watched_share", "seconds_least", "seconds_median", "seconds_most",
    ]  # fmt: skip
    for row, name in zip(table.to_numpy().tolist(), ("redshank", "dunlin"), strict=True):
        expected = by_loops(visits, name)
        assert row[:5] == expected[:5]
        assert row[5:] == pytest.approx(expected[5:], rel=1e-12)


def test_a_species_without_visits_gets_zeros_and_no_shares(made):
    table = effort(made.visits(("dunlin", "RW", "s1", "lower mud", 0, 2000)), ("redshank", "dunlin"))
    assert table.iloc[0, 1:7].tolist() == [0] * 6
    assert np.isnan(table.iloc[0, 7:].to_numpy(dtype=float)).all()
    assert table.iloc[1].tolist() == ["dunlin", 1, 1, 1, 1, 2.0, 0.0, 1.0, 2.0, 2.0, 2.0]


def test_a_species_never_in_view_counts_its_animals_and_no_use(made):
    table = effort(made.visits(("dunlin", "RW", "s1", "", 0, 2000)), ("dunlin",))
    assert table.iloc[0, 1:7].tolist() == [1, 1, 0, 0, 0.0, 2.0]
    assert np.isnan(table.iloc[0, 7:].to_numpy(dtype=float)).all()


def test_no_visits_are_no_effort(made):
    assert effort(made.visits(), ("dunlin",))["seconds_in_view"].tolist() == [0.0]


def test_hours_fall_on_the_local_date_on_which_a_visit_begins(made):
    visits = made.visits(
        ("dunlin", "RW", "s1", "lower mud", BERLIN_MIDNIGHT - 1, BERLIN_MIDNIGHT - 1 + HOUR),
        ("dunlin", "RW", "s1", "lower mud", BERLIN_MIDNIGHT, BERLIN_MIDNIGHT + 2 * HOUR),
        ("redshank", "RW", "s1", "lower mud", BERLIN_MIDNIGHT, BERLIN_MIDNIGHT + HOUR // 2),
        ("redshank", "RW", "s1", "", BERLIN_MIDNIGHT, BERLIN_MIDNIGHT + 9 * HOUR),
        ("redshank", "GY", "s1", "upper mud", BERLIN_MIDNIGHT, BERLIN_MIDNIGHT + HOUR),
    )
    local = effort_by_day(visits, "Europe/Berlin")
    assert local.to_dict("index") == {
        "2026-09-02": {"dunlin": 1.0, "redshank": 0.0},
        "2026-09-03": {"dunlin": 2.0, "redshank": 1.5},
    }
    assert effort_by_day(visits, None).to_dict("index") == {"2026-09-02": {"dunlin": 3.0, "redshank": 1.5}}


def test_hours_by_day_add_up_to_the_time_in_view(made):
    visits = made.random_visits(3, 200)
    days = effort_by_day(visits, "Pacific/Auckland")
    total = effort(visits, ("dunlin", "redshank")).set_index("species")["seconds_in_view"]
    for name in ("dunlin", "redshank"):
        assert days[name].sum() * 3600 == pytest.approx(total[name], rel=1e-12)
    assert list(days.index) == sorted(days.index)


def test_no_visits_give_a_table_without_days(made):
    assert len(effort_by_day(made.visits(), None)) == 0
