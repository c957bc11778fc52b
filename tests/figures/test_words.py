import math

import pytest

from niche.figures.words import count, isolated, joined, level, no_interval, number, percent, span, wrapped


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.8249, "0.82"),
        (0.995, "0.99"),
        (9.994, "9.99"),
        (9.996, "10.0"),
        (16.0, "16.0"),
        (99.94, "99.9"),
        (99.96, "100"),
        (1943.7, "1,944"),
        (0.004, "<0.01"),
        (0.006, "0.01"),
        (-0.004, ">−0.01"),
        (-0.25, "−0.25"),
        (0.0, "0"),
        (math.nan, "not defined"),
        (math.inf, "no limit"),
    ],
)
def test_number(value, text):
    assert number(value) == text


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (0.0, "0%"),
        (1e-12, "<1%"),
        (0.005, "<1%"),
        (0.0051, "1%"),
        (0.2947, "29%"),
        (0.9949, "99%"),
        (0.995, ">99%"),
        (0.9999, ">99%"),
        (1 - 1e-15, "100%"),
        (1.0, "100%"),
    ],
)
def test_percent(share, text):
    assert percent(share) == text


def test_percent_of_nothing_is_not_defined():
    assert percent(math.nan) == "not defined"


@pytest.mark.parametrize(("confidence", "text"), [(0.95, "95%"), (0.975, "97.5%"), (0.999, "99.9%"), (0.9, "90%")])
def test_level(confidence, text):
    assert level(confidence) == text


def test_spans_counts_and_lists():
    assert span(0.644, 0.979) == "0.64 to 0.98"
    assert span(0.2, 0.35, shares=True) == "20% to 35%"
    assert [count(n, "animal") for n in (0, 1, 2, 1200)] == ["no animals", "1 animal", "2 animals", "1,200 animals"]
    assert [joined(p) for p in ([], ["a"], ["a", "b"], ["a", "b", "c"])] == ["", "a", "a and b", "a, b and c"]


def test_no_interval_names_the_species_with_too_few_units():
    assert no_interval([2, 9], ["dunlin", "redshank"], "animal") == "no interval: 2 animals of dunlin"
    assert no_interval([1, 2], ["a", "b"], "session") == "no interval: 1 session of a and 2 sessions of b"
    assert no_interval([3], ["dunlin"], "animal") == "no interval: no resample gives a value"


def test_long_labels_are_broken_and_cut():
    assert wrapped("middle channel edge", 10) == "middle\nchannel\nedge"
    label = wrapped("Pseudocalidrisverylongname", 10, 2)
    assert label.splitlines() == ["Pseudocali", "drisveryl…"]
    assert wrapped("上上上上上上", 6) == "上上上上上上"[:4] + "\n上上"
    assert wrapped("a\x00b\x1b", 10) == "ab"
    assert wrapped("", 10) == " "


def test_names_written_from_right_to_left_are_set_apart():
    assert isolated("كروان and dunlin: 3") == "\u2068كروان\u2069 and dunlin: 3"
    assert isolated("5 of كروان شاطئ, 6") == "5 of \u2068كروان شاطئ\u2069, 6"
    assert isolated("Бекас 上の砂 é") == "Бекас 上の砂 é"
