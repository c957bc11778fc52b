"""Effort by zone, three kinds of zero, what use is measured in, and nothing dropped on the way into Usage."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

from niche import Usage, analyse
from niche.effort import effort, out_of_sight_by_session
from niche.errors import StudyError, ValueRuleError
from niche.logs.visits import COLUMNS
from niche.study import study_from_text
from niche.tables import csv_text

ZONES = ("upper sand", "upper mud", "lower mud")


def study(tmp_path, zones="", analysis="", logs='rule = "bouts"', columns='start = "start"\nend = "end"', species=""):
    listed = "\n".join(f'[[species]]\nname = "{name}"' for name in species.split())
    text = f"""
title = "effort"
[logs]
files = ["*.csv"]
{logs}
[logs.columns]
session = "session"
{columns}
[zones]
rows = ["flat"]
columns = ["1", "2", "3"]
layout = [["upper sand", "upper mud", "lower mud"]]
{zones}
[analysis]
{analysis}
{listed}
"""
    return study_from_text(text, tmp_path / "study.toml")


def visits(*rows):
    """(species, animal, session, zone, amount) to visits, amounts in milliseconds."""
    cells = [(*row[:4], 0, row[4], row[4], "a.csv", n) for n, row in enumerate(rows, 2)]
    return pd.DataFrame(cells, columns=COLUMNS)


SOME = visits(
    ("dunlin", "RW", "s1", "upper sand", 3000),
    ("dunlin", "RW", "s1", "upper mud", 1000),
    ("dunlin", "GY", "s2", "upper mud", 4000),
    ("redshank", "BB", "s1", "upper mud", 2000),
    ("redshank", "BB", "s1", "", 500),
)


def test_three_kinds_of_zero_are_kept_apart(tmp_path):
    zones = """
effort = { "upper sand" = 2, "upper mud" = 4, "lower mud" = 0 }
[zones.availability]
source = "walked"
amounts = { "upper sand" = 0, "upper mud" = 1, "lower mud" = 1 }"""
    usage = Usage.from_visits(SOME, study(tmp_path, zones))
    assert usage.zeros().tolist() == [["", "", "not looked at"], ["not there", "", "not looked at"]]
    assert usage.effort.tolist() == [2, 4, 0]
    plain = Usage.from_visits(SOME, study(tmp_path))
    assert plain.effort is None
    assert plain.zeros().tolist() == [["", "", "not used"], ["not used", "", "not used"]]


def test_what_the_logs_tell_of_zones_not_looked_at_counts_where_the_study_is_silent(tmp_path):
    told = {"upper sand": True, "upper mud": True, "lower mud": False}
    usage = Usage.from_visits(SOME, study(tmp_path), told)
    assert usage.zeros().tolist() == [["", "", "not looked at"], ["not used", "", "not looked at"]]
    hours = 'effort = { "upper sand" = 2, "upper mud" = 4, "lower mud" = 1 }'
    assert Usage.from_visits(SOME, study(tmp_path, hours), told).zeros()[0, 2] == "not used"
    assert Usage.from_visits(SOME, study(tmp_path), dict.fromkeys(ZONES, True)).effort is None


HOURS = 'effort = { "upper sand" = 1, "upper mud" = 4, "lower mud" = 0 }'


def test_use_is_divided_by_effort_only_where_the_study_says_so(tmp_path):
    ignoring = Usage.from_visits(SOME, study(tmp_path, HOURS))
    assert ignoring.use is ignoring.time
    dividing = Usage.from_visits(SOME, study(tmp_path, HOURS, 'effort = "divide"'))
    assert [t.tolist() for t in dividing.time] == [t.tolist() for t in ignoring.time]
    # hours of 1 and 4 are 0.4 and 1.6 of their mean
    assert dividing.use[0].tolist() == [[0, 4000 / 1.6, 0], [3000 / 0.4, 1000 / 1.6, 0]]
    result = analyse(dividing, resamples=50, indices=["pianka"])
    expected = np.array([3000 / 1, 5000 / 4, 0])
    np.testing.assert_allclose(result.use.proportion.value[0], expected / expected.sum())
    assert result.table("usage")["seconds"].tolist() == [3, 5, 0, 0, 2, 0]
    assert any("divided by effort: zones were looked at for 1 to 4 hours" in note for note in result.notes)


def test_unequal_effort_that_is_ignored_is_said(tmp_path):
    notes = analyse(Usage.from_visits(SOME, study(tmp_path, HOURS)), resamples=50).notes
    assert any("1 to 4 hours, and use is not divided by it" in note and "`analysis.effort" in note for note in notes)
    assert "Not looked at: lower mud. That no use is known there says nothing about the animals." in notes
    level = 'effort = { "upper sand" = 2, "upper mud" = 2, "lower mud" = 2 }'
    notes = analyse(Usage.from_visits(SOME, study(tmp_path, level)), resamples=50).notes
    assert not any("effort" in note for note in notes)


def test_equal_effort_changes_nothing_when_divided_by(tmp_path):
    level = 'effort = { "upper sand" = 3, "upper mud" = 3, "lower mud" = 3 }'
    divided = analyse(Usage.from_visits(SOME, study(tmp_path, level, 'effort = "divide"')), resamples=50, seed=3)
    plain = analyse(Usage.from_visits(SOME, study(tmp_path)), resamples=50, seed=3)
    np.testing.assert_array_equal(divided.overlap["pianka"].value, plain.overlap["pianka"].value)


@pytest.mark.parametrize("size", [1e-300, 1.0, 1e300, 1.7e308])
def test_only_the_ratios_of_hours_matter_whatever_their_size(size):
    usage = Usage.from_units({"dunlin": [[3, 1, 0]]}, zones=ZONES, effort=[size, size / 4, 0], by_effort=True)
    # 1 and 1/4 are 1.6 and 0.4 of their mean
    np.testing.assert_allclose(usage.use[0], [[3 / 1.6, 1 / 0.4, 0]])


def test_where_no_zone_was_looked_at_there_is_no_use():
    usage = Usage.from_units({"dunlin": [[0, 0, 0]]}, zones=ZONES, effort=[0, 0, 0], by_effort=True)
    assert usage.use[0].tolist() == [[0, 0, 0]]


def test_use_of_a_zone_that_was_not_looked_at_is_a_contradiction(tmp_path):
    wrong = 'effort = { "upper sand" = 1, "upper mud" = 0, "lower mud" = 0 }'
    with pytest.raises(StudyError, match=r"zones.effort: zone 'upper mud' has use and 0 hours"):
        Usage.from_visits(SOME, study(tmp_path, wrong))
    with pytest.raises(ValueRuleError, match="zone 'b' has use and 0 hours"):
        Usage.from_units({"dunlin": [[1, 1]]}, zones=["a", "b"], effort=[1, 0])


@pytest.mark.parametrize(
    ("zones", "analysis", "words"),
    [
        ('effort = { "upper sand" = 1, "upper mud" = 1 }', "", "zones.effort: has no hours for zone 'lower mud'"),
        ('effort = { "upper sand" = 1, "creek" = 1 }', "", "zones.effort: names 'creek', which is no zone"),
        ('effort = { "upper sand" = 0, "upper mud" = 0, "lower mud" = 0 }', "", "zones.effort: all hours are 0"),
        ('effort = { "upper sand" = -1, "upper mud" = 0, "lower mud" = 0 }', "", "at least 0"),
        ("", 'effort = "divide"', "analysis.effort: found 'divide', and there is no `zones.effort`"),
        ("", 'effort = "multiply"', "allowed: 'ignore' or 'divide'"),
    ],
)  # fmt: skip
def test_effort_that_does_not_fit_the_zones_is_refused(tmp_path, zones, analysis, words):
    with pytest.raises(StudyError) as error:
        study(tmp_path, zones, analysis)
    assert words in str(error.value)


def test_a_zone_sheet_keeps_the_effort(tmp_path):
    (tmp_path / "zones.csv").write_text("zone,row,column\nmud,1,1\nsand,1,2\n")
    text = (
        'title = "t"\n[logs]\nfiles = ["a"]\n[logs.columns]\nstart = "s"\nend = "e"\n[zones]\nsheet = "zones.csv"\n'
        "same_across_sites = true\neffort = { mud = 1, sand = 0 }"
    )
    read = study_from_text(text, tmp_path / "study.toml")
    assert read.zones.effort == {"mud": 1, "sand": 0}
    assert read.zones.same_across_sites is True


@pytest.mark.parametrize(
    ("column", "stranger", "words"),
    [("zone", "creek", "visits hold zone 'creek'"), ("species", "knot", "visits hold species 'knot'")],
)
def test_a_visit_that_fits_nowhere_is_never_dropped(tmp_path, column, stranger, words):
    wrong = SOME.copy()
    wrong.loc[1, column] = stranger
    with pytest.raises(ValueRuleError, match=words):
        Usage.from_visits(wrong, study(tmp_path, species="dunlin redshank"))


def test_all_time_in_view_is_tallied_whatever_the_labels(tmp_path):
    odd = visits(
        ("dunlin", "", "s1", "upper mud", 700),
        ("dunlin", "nan", "s1", "upper mud", 40),
        ("dunlin", "None", "s1", "upper mud", 2),
    )
    usage = Usage.from_visits(odd, study(tmp_path))
    assert usage.units == (("", "None", "nan"),)
    assert int(usage.time[0].sum()) == 742


def test_usages_add_only_with_the_same_effort_and_measure():
    make = lambda **keys: Usage.from_units({"dunlin": [[1, 0]]}, zones=["a", "b"], **keys)  # noqa: E731
    total = make(effort=[1, 2]) + make(effort=[1, 2])
    assert total.effort.tolist() == [1, 2]
    assert total.time[0].tolist() == [[2, 0]]
    for other in ({"effort": [1, 3]}, {}, {"effort": [1, 2], "by_effort": True}):
        with pytest.raises(ValueRuleError, match="same effort"):
            make(effort=[1, 2]) + make(**other)
    with pytest.raises(ValueRuleError, match="time and scans do not add"):
        make() + make(measure="scans")


SCANS = {"logs": 'rule = "scans"', "columns": 'time = "time"'}


def test_scans_are_not_called_seconds(tmp_path):
    counted = visits(
        *[
            ("dunlin", animal, "s1", zone, n)
            for animal, zone, n in [("RW", "upper mud", 3), ("GY", "upper sand", 1), ("BB", "upper mud", 2)]
        ]
    )
    usage = Usage.from_visits(counted, study(tmp_path, **SCANS))
    assert usage.measure == "scans"
    table = analyse(usage, resamples=50).table("usage")
    assert list(table.columns)[-1] == "visits"
    assert table["seconds"].isna().all()
    assert table["visits"].tolist() == [1, 5, 0]
    assert "dunlin,upper mud,,0.8" in csv_text(table)


def test_time_comes_with_the_number_of_visits(tmp_path):
    table = analyse(Usage.from_visits(SOME, study(tmp_path)), resamples=50).table("usage")
    assert table["visits"].tolist() == [1, 2, 0, 0, 1, 0]
    assert table["seconds"].tolist() == [3, 5, 0, 0, 2, 0]
    bare = Usage.from_units({"dunlin": [[3, 1], [1, 1]]}, zones=["mud", "sand"])
    table = analyse(bare, resamples=50).table("usage")
    assert table["visits"].isna().all()
    assert table["seconds"].tolist() == [4, 2]


def test_out_of_sight_by_species_and_session():
    table = out_of_sight_by_session(SOME)
    assert table[["species", "session"]].to_numpy().tolist() == [["dunlin", "s1"], ["dunlin", "s2"], ["redshank", "s1"]]
    assert table["seconds_in_view"].tolist() == [4, 4, 2]
    assert table["seconds_out_of_sight"].tolist() == [0, 0, 0.5]
    assert table["visits_out_of_sight"].tolist() == [0, 0, 1]
    assert table["share_out_of_sight"].tolist() == [0, 0, 0.2]
    scans = out_of_sight_by_session(SOME, "scans")
    assert scans["seconds_in_view"].isna().all()
    assert scans["share_out_of_sight"].tolist() == [0, 0, 0.2]


def test_effort_of_scans_gives_shares_and_no_seconds():
    timed, counted = effort(SOME, ("dunlin",)), effort(SOME, ("dunlin",), "scans")
    assert timed["seconds_in_view"].tolist() == [8]
    assert counted[["seconds_in_view", "seconds_most"]].isna().all(axis=None)
    assert counted["most_watched_share"].tolist() == timed["most_watched_share"].tolist() == [0.5]
