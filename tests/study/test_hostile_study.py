"""Whatever stands in a study file, it is read or refused in words: nothing else may happen."""

import re
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from niche.errors import NicheError, StudyError
from niche.logs import read_logs
from niche.study import Study, study_from_text

FILE = Path("study.toml")
VALUES = [
    "1", "-1", "0", "1.5", "-0.0", "1e308", "1e400", "nan", "inf", "-inf", "true", "2026-09-03", "08:15:00",
    "2026-09-03T08:15:00Z", "'x'", "''", "' '", '"\\u0000"', '"\\u001b[31m"', '"\\ud7ff\\U0010ffff"', "[]", "[[]]",
    "[[[]]]", "['x']", "[1, 'x', [2]]", "{}", "{a = 1}", "[{a = 1}]", "['" + "x" * 10_000 + "']", "'../..'", "'*'",
    "1" + "0" * 400, "0x7fffffffffffffffffff", "[" * 100 + "]" * 100, "{a.b.c.d.e = 1}",
]  # fmt: skip


def settle(text):
    """A study, or the message it was refused with."""
    try:
        return study_from_text(text, FILE)
    except StudyError as error:
        refusal = str(error)
    assert refusal.startswith("study.toml: ")
    return refusal


def test_any_value_under_any_key_is_read_or_refused_at_that_key(texts):
    keys = [match.span(1) for match in re.finditer(r"(?m)^\S[^=\n]* = (.+)$", texts.sound)]
    assert len(keys) == 32
    read = refused = 0
    for begin, end in keys:
        for value in VALUES:
            answer = settle(texts.sound[:begin] + value + texts.sound[end:])
            read += isinstance(answer, Study)
            refused += isinstance(answer, str)
    assert read > 50
    assert refused > 500
    assert read + refused == len(keys) * len(VALUES)


@settings(max_examples=150, deadline=None)
@given(st.data())
def test_a_study_with_a_passage_written_over_is_read_or_refused(texts, data):
    begin = data.draw(st.integers(0, len(texts.sound)))
    length = data.draw(st.integers(0, 60))
    written = data.draw(st.text(max_size=30) | st.sampled_from(VALUES))
    assert settle(texts.sound[:begin] + written + texts.sound[begin + length :])


@settings(max_examples=100, deadline=None)
@given(st.text(max_size=200))
def test_any_text_is_read_or_refused(text):
    assert isinstance(settle(text), str)


@pytest.mark.parametrize("depth", [10, 100, 500])
def test_a_value_nested_deep_by_dots_is_refused(texts, depth):
    key = ".".join(["a"] * depth)
    (line,) = texts.problems(texts.changed(('title = "Two', f'note.{key} = 1\ntitle = "Two')))
    assert line.startswith("note: found {'a': {'a': ")
    assert "allowed: text in quotes" in line


def test_thousands_of_unknown_keys_are_told_one_by_one(texts):
    text = "".join(f"k{i} = 1\n" for i in range(2000)) + texts.sound
    assert len(texts.problems(text)) == 2000


def test_a_thousand_species_are_read(texts):
    text = texts.sound + "".join(f'[[species]]\nname = "wader {i}"\nbody_mass = {i + 1}\n' for i in range(1000))
    assert len(study_from_text(text, FILE).species) == 1002


@pytest.mark.parametrize("table", ['sessions = { file = "a\\u0000b" }', 'tags = { file = "a\\u0000b" }'])
def test_a_small_table_with_a_nul_in_its_name_is_refused(table, tmp_path):
    (tmp_path / "log.csv").write_text("species,tag,antenna,time\ndunlin,7,a,2026-09-03T08:00:00Z\n", encoding="utf-8")
    text = f"""
title = "t"
[logs]
files = ["log.csv"]
rule = "{"switches" if "sessions" in table else "reads"}"
{table}
[logs.columns]
animal = ""
zone = "antenna"
{'session = "tag"' if "sessions" in table else 'tag = "tag"'}
time = "time"
[logs.reads]
gap = 60
[zones]
rows = ["r"]
columns = ["1"]
layout = [["a"]]
"""
    with pytest.raises(NicheError, match="null"):
        read_logs(study_from_text(text, tmp_path / "study.toml"))
