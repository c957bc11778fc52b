"""Each way to get one key wrong: the message names the key's path, what was found and what is allowed."""

import pytest

BLOCK = {
    "columns": '[logs.columns]\nspecies = "species"\nanimal = "animal"\nsession = "session"\nzone = "zone"\n'
    'start = "start"\nend = "end"\n',
}

# (old text, new text, then passages that one line of the message must hold, the path of the key first)
CASES = {
    "unknown key with a close match": ("seed = 7", "sede = 7", "analysis.sede: unknown key", "`seed`", "resamples"),
    "unknown key without a match": ("seed = 7", "weather = 7", "analysis.weather: unknown key", "Allowed here: resamples"),
    "unknown key at the top": ("title = ", "observer = 'x'\ntitle = ", "observer: unknown key", "title, site, note, logs"),
    "unknown key in a species": ("r = 0.3", "mass = 3", "species[2].mass: unknown key", "scientific_name, body_mass"),
    "unknown key three tables down": ("low = 10", "lo = 10", "species[1].k.lo: unknown key", "`low`"),
    "unknown key of columns": ('zone = "zone"', 'zones = "zone"', "logs.columns.zones: unknown key", "`zone`"),
    "unknown table": ("[report]", "[reports]", "reports: unknown key", "`report`"),
    "title missing": ('title = "Two waders on a flat"\n', "", "title: missing", "required"),
    "columns missing": (BLOCK["columns"], "columns = { date = 'date' }\n", "logs: ", "`end`", "one of the two"),
    "source of k missing": (', source = "a count"', "", "species[1].k.source: missing", "required"),
    "source of availability missing": ('source = "a survey"\n', "", "zones.availability.source: missing"),
    "name of a species missing": ('name = "redshank"\n', "", "species[2].name: missing"),
    "text: number": ('"Two waders on a flat"', "12", "title: found 12 (a whole number)", "text in quotes"),
    "text: date": ('"Two waders on a flat"', "2026-09-03", "title: found datetime.date(2026, 9, 3)", "(a date or time)"),
    "text: time": ('"Two waders on a flat"', "08:15:00", "title: found", "(a date or time)", "text in quotes"),
    "text: empty": ('"Two waders on a flat"', '""', "title: found '' (text)", "not empty"),
    "text: list": ('"Two waders on a flat"', "['a']", "title: found ['a'] (a list)", "text in quotes"),
    "text: table": ('"Two waders on a flat"', "{a = 1}", "title: found {'a': 1} (a table)", "text in quotes"),
    "text: true": ('"Two waders on a flat"', "true", "title: found True (true/false)", "text in quotes"),
    "long value cut short": ('"Two waders on a flat"', f"['{'x' * 90}']", "title: found ['xxx", "xxx... (a list)"),
    "heading empty": ('zone = "zone"', 'zone = ""', "logs: the rule 'bouts' needs", "`columns.zone`"),
    "list: text": ('["logs/*.csv"]', '"logs/*.csv"', "logs.files: found 'logs/*.csv' (text)", "a list in square brackets"),
    "list: empty": ('["logs/*.csv"]', "[]", "logs: `files` names no log", "at least one file"),
    "list: a number in it": ('["logs/*.csv"]', "['a.csv', 3]", "logs.files[2]: found 3", "text in quotes"),
    "list: empty text in it": ('["logs/*.csv"]', "['']", "logs.files[1]: found ''", "not empty"),
    "layout: not nested": ('[["upper sand", "upper mud"], ["lower sand", ""]]', "['a', 'b']", "zones.layout[1]: found 'a'"),
    "layout: a number": ('["lower sand", ""]', '["lower sand", 4]', "zones.layout[2][2]: found 4", "text in quotes"),
    "table: number": ('k = { low = 10, high = 20, source = "a count" }', "k = 5", "species[1].k: found 5", "a table"),
    "number: text": ("low = 10", "low = '10'", "species[1].k.low: found '10' (text)", "allowed: a number"),
    "number: true": ("low = 10", "low = true", "species[1].k.low: found True (true/false)", "allowed: a number"),
    "number: zero": ("body_mass = 48", "body_mass = 0", "species[1].body_mass: found 0", "above 0"),
    "number: negative": ("r = 0.3", "r = -0.3", "species[2].r: found -0.3 (a number)", "above 0"),
    "number: nan": ("r = 0.3", "r = nan", "species[2].r: found nan", "finite"),
    "number: inf": ("r = 0.3", "r = inf", "species[2].r: found inf", "finite"),
    "number: too large to hold": ("r = 0.3", "r = 1e400", "species[2].r: found inf", "finite"),
    "number: 401 digits": ("body_mass = 48", f"body_mass = 1{'0' * 400}", "species[1].body_mass: found 1000", "a number"),
    "whole number: fraction": ("resamples = 500", "resamples = 500.5", "analysis.resamples: found 500.5", "a whole number"),
    "whole number: point nought": ("resamples = 500", "resamples = 500.0", "analysis.resamples: found 500.0", "whole"),
    "whole number: true": ("resamples = 500", "resamples = true", "analysis.resamples: found True", "a whole number"),
    "resamples too few": ("resamples = 500", "resamples = 99", "analysis.resamples: found 99", "at least 100"),
    "resamples too many": ("resamples = 500", "resamples = 1000001", "analysis.resamples: found 1000001", "at most 1"),
    "seed below 0": ("seed = 7", "seed = -1", "analysis.seed: found -1", "at least 0"),
    "confidence too low": ("confidence = 0.9", "confidence = 0.5", "analysis.confidence: found 0.5", "above 0.5"),
    "confidence in percent": ("confidence = 0.9", "confidence = 95", "analysis.confidence: found 95", "below 1"),
    "confidence nan": ("confidence = 0.9", "confidence = nan", "analysis.confidence: found nan", "a number"),
    "core all of it": ("core = 0.5", "core = 1", "analysis.core: found 1", "below 1"),
    "core none of it": ("core = 0.5", "core = 0.0", "analysis.core: found 0.0", "above 0"),
    "mass exponent": ("core = 0.5", "mass_exponent = 2.5", "analysis.mass_exponent: found 2.5", "at most 2"),
    "unit": ("seed = 7", "unit = 'herd'", "analysis.unit: found 'herd'", "'animal' or 'session'"),
    "weighting": ("seed = 7", "weighting = 'x'", "analysis.weighting: found 'x'", "'time' or 'animal'"),
    "demand": ("seed = 7", "demand = 'k'", "analysis.demand: found 'k'", "'intake', 'body_mass' or 'equal'"),
    "rule": ('rule = "bouts"', 'rule = "guess"', "logs.rule: found 'guess'", "'bouts'"),
    "policy": (
        'overlap = "set_aside"', 'overlap = "ignore"', "logs.problems.overlap: found 'ignore'", "'stop', 'set_aside'",
    ),
    "distribution": (
        "high = 20", "high = 20, distribution = 'normal'", "species[1].k.distribution: found 'normal'", "'uniform'",
    ),
    "time zone unknown": ("Europe/Berlin", "Europe/Berlyn", "logs.time_zone: ", "no such time zone", "Europe/Berlin"),
    "time zone a folder": ("Europe/Berlin", "Europe", "logs.time_zone: ", "no such time zone"),
    "time zone a path": ("Europe/Berlin", "../../etc/passwd", "logs.time_zone: ", "no such time zone"),
    "time zone with NUL": ("Europe/Berlin", "UTC\\u0000", "logs.time_zone: ", "no such time zone"),
    "time zone not ASCII": ("Europe/Berlin", "Europe/Zürich", "logs.time_zone: ", "no such time zone"),
    "time zone very long": ("Europe/Berlin", "x" * 5000, "logs.time_zone: ", "no such time zone"),
    "end and duration": (
        'end = "end"', 'end = "end"\nduration = "d"', "logs: ", "`end`", "`duration`", "one of the two",
    ),
    "neither end nor duration": ('end = "end"\n', 'date = "day"\n', "logs: ", "`end`", "`duration`", "one of the two"),
    "amount negative": ("= 1.5", "= -1.5", "zones.availability.amounts.upper mud: found -1.5", "at least 0"),
    "amount infinite": ("= 1.5", "= inf", "zones.availability.amounts.upper mud: found inf", "finite"),
    "amount a text": ("= 1.5", "= '1.5 ha'", "zones.availability.amounts.upper mud: found '1.5 ha'", "a number"),
    "K low above high": ("low = 10", "low = 30", "species[1].k: low is 30 and high is 20", "low must not be above high"),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES.values(), ids=CASES.keys())
def test_one_wrong_key_is_told_with_its_path_what_was_found_and_what_is_allowed(texts, case):
    old, new, *passages = case
    lines = texts.problems(texts.changed((old, new)))
    told = [line for line in lines if line.startswith(passages[0])]
    assert len(told) == 1, lines
    for passage in passages:
        assert passage in told[0]


def test_an_unknown_key_that_replaces_a_needed_one_is_told_beside_the_missing_one(texts):
    assert texts.problems(texts.changed(("low = 10", "lo = 10"))) == [
        "species[1].k.low: missing. This key is required.",
        "species[1].k.lo: unknown key. Did you mean `low`? Allowed here: low, high, source, distribution.",
    ]


@pytest.mark.parametrize("basis", ["body_mass", "intake"])
def test_demand_that_a_species_does_not_give_is_refused(texts, basis):
    changed = texts.changed(("body_mass = 125\n", ""), ("seed = 7", f'demand = "{basis}"'))
    (line,) = texts.problems(changed)
    assert f"analysis.demand is {basis!r}" in line
    assert f"no `{basis}` for {'redshank' if basis == 'body_mass' else 'dunlin'}" in line


def test_demand_without_any_species_is_refused(texts):
    start, end = texts.sound.index("[[species]]"), texts.sound.index("[report]")
    text = (texts.sound[:start] + texts.sound[end:]).replace("seed = 7", 'demand = "intake"')
    (line,) = texts.problems(text)
    assert "no `intake` for any species" in line


@pytest.mark.parametrize("second", ["dunlin", "Dunlin", "DUNLIN"])
def test_a_species_listed_twice_is_refused_whatever_its_case(texts, second):
    (line,) = texts.problems(texts.changed(('name = "redshank"', f'name = "{second}"')))
    assert "species 'dunlin' is listed twice" in line


def test_a_name_of_one_table_where_a_list_of_tables_belongs_is_refused(texts):
    start = texts.sound.index("[[species]]")
    text = texts.sound[:start] + '[species]\nname = "dunlin"\n'
    (line,) = texts.problems(text)
    assert line.startswith("species: found {'name': 'dunlin'} (a table); allowed: ")
