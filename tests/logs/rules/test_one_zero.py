"""One-zero records: occurrence, refused as time."""

import pytest

from niche.errors import LogError

HEADER = "species,animal,session,zone,time"
COLUMNS = 'session = "session"\ntime = "time"'


@pytest.fixture
def log(clock):
    return [
        ["dunlin", "RW", "s1", "mud", clock(0)],
        ["dunlin", "RW", "s1", "sand", clock(0)],
        ["dunlin", "RW", "s1", "mud", clock(0)],
        ["dunlin", "RW", "s1", "mud", clock(5)],
    ]


def test_a_tick_is_one_occurrence_and_a_second_tick_none(bench, log):
    found = bench.run(bench.study("one_zero", COLUMNS), HEADER, log, cut=1)
    assert found.what("zone", "amount") == [("mud", 1), ("mud", 1), ("sand", 1)]
    assert found.lines("set_aside") == [(4, "", "", "exact repeat of an earlier row", "set_aside")]
    assert found.ledger.milliseconds_read == 0


def test_use_is_refused(bench, log):
    read = bench.read(bench.study("one_zero", COLUMNS), HEADER, log)
    assert read.measure == "occurrences"
    assert len(read.visits) == 3
    with pytest.raises(
        LogError, match=r"One-zero records tell in how many intervals a zone was used, not for how long"
    ):
        read.require_usable()
