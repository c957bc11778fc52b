"""Tallies: zones as columns; percentages told from seconds (faults 22, 32, 41)."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.errors import LogError
from niche.usage import Usage

HEADER = "species,animal,Mud,sand,mussel bed,out of sight"


@pytest.fixture(scope="session")
def run(bench):
    def with_keys(*logs, unit="min", header=HEADER, columns="", problems="", more="", **keys):
        text = f'[logs.tallies]\nunit = "{unit}"\n{more}'
        return bench.run(bench.study("tallies", columns, text, problems), header, *logs, **keys)

    return with_keys


def test_one_row_is_used_once_and_its_time_is_the_sum(run):
    found = run([["dunlin", "RW", 10, 2.5, "", 1], ["dunlin", "BO", 0, 3, 4, ""]])
    assert found.what("animal", "zone", "amount") == [
        ("BO", "mussel bed", 240_000),
        ("BO", "sand", 180_000),
        ("RW", "", 60_000),
        ("RW", "mud", 600_000),
        ("RW", "sand", 150_000),
    ]
    assert found.ledger.sums() == [
        ("read", 2, 1_230_000),
        ("used", 2, 1_170_000),
        ("out_of_sight", 0, 60_000),
        ("set_aside", 0, 0),
        ("stop", 0, 0),
    ]


@pytest.mark.parametrize(("unit", "amount"), [("s", 12_000), ("h", 43_200_000), ("count", 12)])
def test_units(run, unit, amount):
    found = run([["dunlin", "RW", 12, 0, 0, 0]], unit=unit)
    assert found.what("zone", "amount") == [("mud", amount)]
    assert found.ledger.milliseconds_read == (0 if unit == "count" else amount)


def test_percentages_are_thousandths_and_must_add_up(run):
    found = run(
        [["dunlin", "RW", "33.3%", 33.3, 33.3, 0], ["dunlin", "BO", 50, 20, 0, 0], ["redshank", "NY", 0.5, 0.5, 0, 0]],
        unit="percent",
    )
    assert found.what("animal", "zone", "amount")[0] == ("RW", "mud", 33_300)
    assert found.lines("stop") == [
        (3, "zone", "70", "percentages do not add up to 100", "stop"),
        (4, "zone", "1", "percentages do not add up to 100", "stop"),
    ]
    assert found.problem(4).endswith("are these shares of 1? Multiply them by 100")
    assert found.ledger.milliseconds_read == 0


def test_a_percent_sign_among_seconds_stops(run):
    found = run([["dunlin", "RW", "40 %", 3, 4, 0], ["dunlin", "BO", 30, 3, 4, 0]])
    assert found.lines("stop") == [(2, "Mud", "40 %", "percentages among other numbers", "stop")]


def test_rows_that_add_up_to_100_among_others_stop(run):
    log = [["dunlin", "RW", 1200, 700, 300, 0], ["dunlin", "BO", 60.5, 20, 19.5, 0], ["redshank", "NY", 2000, 30, 5, 0]]
    found = run(log, unit="s")
    assert found.lines("stop") == [(3, "zone", "100", "numbers add up to 100", "stop")]
    assert "and other rows do not: percentages?" in found.problem(3)
    assert "`logs.tallies.adds_to_100`" in found.problem(3)
    assert run(log, unit="s", more='adds_to_100 = "keep"').rows() == {"used": 3}


def test_a_row_of_100_among_small_sums_stops(run):
    found = run(
        [["dunlin", "RW", 1.5, 2, 0, 0], ["dunlin", "BO", 60, 40, 0, 0], ["dunlin", "NY", 2, 2, 1, 0]], unit="h"
    )
    assert [line[0] for line in found.lines("stop")] == [3]


def test_all_rows_adding_up_to_100_stop(run):
    found = run([["dunlin", "RW", 60, 30, 10, 0], ["dunlin", "BO", 33, 33, 33, 0]], unit="s")
    assert [line[0] for line in found.lines("stop")] == [2, 3]
    assert "as every row does" in found.problem(2)


def test_a_sum_of_100_is_no_wonder_where_other_rows_come_near(run):
    found = run([["dunlin", "RW", 60, 30, 10, 0], ["dunlin", "BO", 70, 60, 2, 0]])
    assert found.rows() == {"used": 2}


@pytest.mark.parametrize(("text", "unit"), [("-3", "s"), ("3,5", "s"), ("long", "s"), ("2.5", "count")])
def test_numbers_that_are_none_stop_under_their_heading(run, text, unit):
    found = run([["dunlin", "RW", 1, text, 2, 0]], unit=unit)
    assert found.lines("stop") == [(2, "sand", text, "unreadable number", "stop")]


def test_blank_cells_are_zero_and_counted_and_a_blank_row_is_set_aside(run):
    found = run([["dunlin", "RW", 1, "", "", 0], ["dunlin", "BO", "", "", "", ""]])
    assert found.note("blank cell").value == "2 cells"
    assert found.lines("set_aside") == [(3, "zone", "", "no amounts", "set_aside")]


def test_a_zone_without_a_column_was_not_looked_at(run):
    found = run([["dunlin", "RW", 1, 2]], header="species,animal,mud,sand")
    assert found.note("zone without a column").problem == "no column for zone 'mussel bed': it counts as not looked at"
    assert found.rule.columns.looked == {"mud", "sand"}


def test_a_heading_that_is_nearly_a_zone_stops(run):
    with pytest.raises(LogError, match=r"a.csv: heading 'musel bed' is no zone; did you mean 'mussel bed'"):
        run([["dunlin", "RW", 1, 2]], header="species,animal,mud,musel bed")
    found = run([["dunlin", "RW", 1, 2]], header="species,animal,mud,musel bed", problems='unknown_zone = "set_aside"')
    assert found.what("zone") == [("mud",)]


def test_an_alias_makes_it_a_zone(bench):
    study = bench.study("tallies", "", 'tallies = { unit = "s" }\naliases = { zones = { "musel bed" = "mussel bed" } }')
    found = bench.run(study, "species,animal,mud,musel bed", [["dunlin", "RW", 1, 2]])
    assert found.what("zone") == [("mud",), ("mussel bed",)]


def test_numbers_under_no_zone_are_flagged_and_remarks_are_not(run):
    found = run([["dunlin", "RW", 1, 2, 3, "limps"]], header="species,animal,mud,sand,total,remarks", cut=1)
    line = found.note("numbers under no zone")
    assert (line.file, line.value, line.action) == ("a.csv", "total", "flagged")


@pytest.mark.parametrize(
    ("header", "message"),
    [
        ("species,animal,mud,MUD", "headings 'mud' and 'MUD' are the same zone 'mud'"),
        ("species,animal,bed,rock", "no heading is a zone. A tally sheet has a column for each zone"),
    ],
)
def test_headings_that_cannot_be_used(run, header, message):
    with pytest.raises(LogError, match=message):
        run([["dunlin", "RW", 1, 2]], header=header)


def test_a_row_copied_whole_is_dropped_where_animals_have_names(run):
    found = run([["dunlin", "RW", 1, 2, 3, 0]], [["dunlin", "RW", 1, 2, 3, 0], ["dunlin", "RW", 1, 2, 4, 0]])
    assert found.lines("set_aside") == [(2, "", "", "exact repeat of an earlier row", "set_aside")]
    assert len(found.visits) == 6


def test_only_out_of_sight(run):
    assert run([["dunlin", "RW", 0, 0, 0, 5]]).rows() == {"out_of_sight": 1}


def test_without_animals_each_species_is_one_unit(bench):
    study = bench.study("tallies", 'animal = ""', 'tallies = { unit = "count" }')
    log = bench.read(
        study, "species,mud,sand,mussel bed", [["dunlin", 5, 1, 0], ["dunlin", 5, 1, 0], ["redshank", 1, 1, 7]]
    )
    usage = Usage.from_visits(log.visits, study)
    assert usage.units == (("all animals",), ("all animals",))
    assert usage.time[0].tolist() == [[10, 2, 0]]
    assert log.measure == "counts"


@settings(max_examples=15, deadline=None)
@given(data=st.data())
def test_order_and_pieces_change_nothing(run, data):
    numbers = st.sampled_from(["", "0", "1", "7.5", "100", "2500"])
    one = st.tuples(st.sampled_from(["RW", "BO"]), numbers, numbers, numbers, numbers)
    log = [["dunlin", *row] for row in data.draw(st.lists(one, min_size=1, max_size=8, unique=True))]
    first = run(log, unit="s")
    order = data.draw(st.permutations(range(len(log))))
    again = run([log[i] for i in order], unit="s", cut=data.draw(st.integers(1, 3)), rows=np.array(order) + 2)
    assert again.what() == first.what()
    assert again.ledger.sums() == first.ledger.sums()
    expected = sum(round(float(cell or 0) * 1000) for row in log for cell in row[2:])
    assert first.ledger.milliseconds_read == expected
