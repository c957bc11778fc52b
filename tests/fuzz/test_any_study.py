"""A fixed budget of spoiled studies on every run, a longer one on request (``-m slow``)."""

import warnings
from collections import Counter

import holding
import pytest
import spoiling

CASES = 240


def outcomes(cases, tmp_path):
    found = Counter()
    for case in cases:
        folder = tmp_path / str(case)
        folder.mkdir()
        try:
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")
                found[holding.hold(spoiling.make(case, folder))] += 1
        except BaseException as error:
            raise AssertionError(f"case {case}: {type(error).__name__}: {error}") from error
    return found


@pytest.mark.parametrize("part", range(4))
def test_spoiled_studies_are_read_with_a_closed_ledger_or_refused_in_words(part, tmp_path):
    found = outcomes(range(part * CASES // 4, (part + 1) * CASES // 4), tmp_path)
    assert found.total() == CASES // 4
    assert min(found["refused"], found["stopped"], found["read"]) > 0, found  # or the cases would prove little


@pytest.mark.slow
def test_many_more(tmp_path):
    assert outcomes(range(10_000, 15_000), tmp_path).total() == 5_000
