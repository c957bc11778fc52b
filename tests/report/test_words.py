"""Summary, assumptions, fieldwork, references: sentences written by rules from the results."""

import numpy as np
import pytest

from niche.errors import NicheWarning
from niche.figures.words import number, percent, span
from niche.report import summarise
from niche.report.assumptions import assumptions
from niche.report.fieldwork import fieldwork
from niche.report.references import references


def test_the_summary_says_what_the_tables_say(plain):
    summary, analysis = summarise(plain), plain.analysis
    assert "3 species, 15 animals in all, from 2026-09-02 to 2026-09-07" in summary.data
    about, told = summary.species[0]
    e = analysis.breadth["levins"]
    assert about == "dunlin"
    assert f"Levins’ B, is {number(e.value[0])} (95% interval {span(e.low[0], e.high[0])}) of at most 3" in told
    assert f"holds {percent(analysis.use.core_share[0])} of its use" in told
    overlap = analysis.overlap["pianka"]
    pairs = dict(summary.pairs)
    at = (0, 1)
    expected = (
        f"Pianka’s overlap is {number(overlap.value[at])} (95% interval {span(overlap.low[at], overlap.high[at])})."
    )
    assert pairs["dunlin and redshank"] == expected


def test_hours_and_time_out_of_sight(make):
    summary = summarise(make.run({"dunlin": 1}))
    # Minutes 3, 15, 27, 11 out of sight: 45 in view of 56.
    assert "0.8 hours in view of dunlin, 1 animal in all, on 2026-09-02" in summary.data
    assert "for 20% of the watching" in summary.data


def test_pairs_are_told_from_the_largest_overlap(plain):
    values = [float(told.split("is ")[1].split(" ")[0]) for _, told in summarise(plain).pairs]
    assert values == sorted(values, reverse=True)


def test_many_pairs_are_cut_to_the_ends(make):
    run = make.run({f"species {i}": 3 for i in range(5)})
    pairs = summarise(run).pairs
    assert len(pairs) == 9
    assert pairs[5] == ("further pairs", "2 pairs lie between these; the table of overlap has them.")


def test_shares_of_outcomes_are_told(plain):
    about, told = summarise(plain).scenario[0]
    share = plain.analysis.outcomes[0].share
    assert about == "dunlin and redshank"
    assert "with K of 1,400 to 2,100 for dunlin and 800 to 1,100 for redshank" in told
    for words, value in zip(
        ("dunlin excludes redshank", "redshank excludes dunlin", "both persist"), share, strict=False
    ):
        assert (f"{words} in {percent(value)}" in told) == (value > 0)


def test_without_k_the_window_is_told(make):
    run = make.run({"dunlin": 4, "redshank": 4})
    alpha = run.analysis.coefficients.alpha
    ((about, told),) = summarise(run).scenario
    low, high = number(alpha.value[0, 1]), number(1 / alpha.value[1, 0])
    assert about == "dunlin and redshank"
    assert told.startswith(f"both persist with K dunlin / K redshank between {low} (")
    assert f" and {high} (" in told
    assert told.endswith("95% intervals in brackets.")


def test_few_animals_are_told_in_place_of_an_interval(make):
    summary = summarise(make.run({"dunlin": 2, "redshank": 4}, k={"dunlin": (1, 2), "redshank": (1, 2)}))
    assert "(no interval: 2 animals of dunlin)" in summary.species[0][1]
    assert "(no interval: 2 animals of dunlin)" in summary.pairs[0][1]
    assert summary.scenario == (("dunlin and redshank", "no outcome shares; no interval: 2 animals of dunlin."),)


def test_what_is_not_defined_is_told_so(make):
    text = summarise(make.run({"dunlin": 0, "redshank": 1, "turnstone": 3})).text()
    assert "dunlin: no use of any zone was recorded" in text
    assert "redshank: 1 animal; its core" in text
    assert "Levins’ B, is not defined." in text
    assert "nan" not in text


def test_one_species_has_no_pairs(make):
    summary = summarise(make.run({"dunlin": 3}))
    assert summary.pairs == ()
    assert summary.scenario == ()


def standing(run):
    return {a.name: a for a in assumptions(run)}


def test_assumptions_that_a_clean_log_meets(plain):
    found = standing(plain)
    assert found["Zones exclude each other: an animal is in one at a time"].status == "met"
    assert found["Zones cover every place an animal can be in"].status == "met"
    assert found["Individuals are recognised"].status == "met"
    assert found["What the zones offer is in short supply"].status == "unknown"
    assert found["Zones are equally available"].status == "not met"
    assert "a walk" in found["Zones are equally available"].why
    assert {a.status for a in found.values()} == {"met", "not met", "unknown"}


def test_assumptions_that_the_ledger_breaks(make):
    rows = [
        ["dunlin", "0-0", "x", "upper mud", "2026-09-02T08:01:00+00:00", "2026-09-02T08:02:00+00:00"],
        ["dunlin", "0-0", "x", "the moon", "2026-09-05T08:01:00+00:00", "2026-09-05T08:02:00+00:00"],
        ["dunlin", "0-1", "x", "the moon", "2026-09-05T08:01:00+00:00", "2026-09-05T08:02:00+00:00"],
    ]
    run = make.run({"dunlin": 3}, extra_rows=rows, problems='overlap = "set_aside"\nunknown_zone = "set_aside"')
    found = standing(run)
    exclusive = found["Zones exclude each other: an animal is in one at a time"]
    assert (exclusive.status, exclusive.why) == ("not met", "1 row overlapped another bout of the animal; set aside.")
    exhaustive = found["Zones cover every place an animal can be in"]
    assert (exhaustive.status, exhaustive.why) == ("not met", "2 rows named a zone that is not listed; set aside.")


def test_animals_that_are_not_told_apart(make):
    found = standing(make.run({"dunlin": 3}, unit="session", with_animal=False))
    assert found["Individuals are recognised"].status == "not met"
    assert found["Zones exclude each other: an animal is in one at a time"].status == "unknown"


@pytest.mark.parametrize(
    ("lines", "words"),
    [("", "Assumed equal"), ("body_mass = 50.0", "body mass to the power 0.75"), ("intake = 3.0", "the intake given")],
)
def test_the_basis_of_demand_is_told(make, lines, words):
    run = make.run({"dunlin": 3, "redshank": 3}, species_lines=lines)
    assert words in standing(run)["Per-capita demand is as stated"].why


def test_assumptions_of_competition_only_with_coefficients(make, plain):
    assert "Per-capita demand is as stated" not in standing(make.run({"dunlin": 3}))
    assert any("Lotka–Volterra" in a.why for a in assumptions(plain))


def test_fieldwork_names_what_is_thin(plain):
    text = " ".join(fieldwork(plain))
    assert "Fewest animals: redshank (4)." in text
    e = plain.analysis.overlap["pianka"]
    width = e.high - e.low
    s, t = np.unravel_index(np.nanargmax(np.triu(width, 1)), width.shape)
    names = plain.analysis.usage.species
    assert f"that of {names[s]} and {names[t]}, {span(e.low[s, t], e.high[s, t])}" in text


def test_fieldwork_without_intervals_or_use(make):
    text = " ".join(fieldwork(make.run({"dunlin": 0, "redshank": 2})))
    assert "Fewest animals: dunlin (0)." in text
    assert "widest" not in text
    assert "nan" not in text


def test_uneven_watching_is_named(make):
    long = [["dunlin", "0-9", "0-9", "upper mud", "2026-09-25T04:00:00+00:00", "2026-09-25T18:00:00+00:00"]]
    text = " ".join(fieldwork(make.run({"dunlin": 4}, extra_rows=long)))
    assert "One animal makes up 8" in text
    assert "of the time of dunlin (5 animals)" in text


def test_references_are_those_of_the_methods_used(make, plain):
    cited = " ".join(references(plain))
    for name in ("Levins", "Pianka", "Schoener", "Volterra", "Efron", "Colwell"):
        assert name in cited
    assert "Kleiber" not in cited
    alone = " ".join(references(make.run({"dunlin": 3}, species_lines="body_mass = 50.0")))
    assert "Levins" in alone
    for name in ("Pianka", "Volterra", "Kleiber"):
        assert name not in alone
    weighed = make.run({"dunlin": 3, "redshank": 3}, species_lines="body_mass = 50.0")
    assert "Kleiber" in " ".join(references(weighed))
    assert references(plain) == sorted(references(plain))


def test_warnings_are_the_analysis_own(make):
    from niche.analysis import run_study
    from niche.study import read_study

    with pytest.warns(NicheWarning, match="No use was recorded for dunlin"):
        run_study(read_study(make.study({"dunlin": 0, "redshank": 3})))
