"""The 42 faults: each has a small log with the fault planted in it, read here with the default and with the answer."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

import planted_clocks
import planted_files
import planted_rows
import pytest
from conftest import check_closed
from fault_register import Planted

from niche.errors import NicheError
from niche.logs import Log

FAULTS = sorted(
    [*planted_clocks.PLANTED, *planted_rows.PLANTED, *planted_files.PLANTED], key=lambda fault: fault.number
)
every = pytest.mark.parametrize("fault", FAULTS, ids=[fault.name for fault in FAULTS])
answered = pytest.mark.parametrize(
    "fault", [f for f in FAULTS if f.answer], ids=[fault.name for fault in FAULTS if fault.answer]
)


def rows(log: Log) -> dict[str, int]:
    return dict(+Counter({name: number for name, number, _ in log.ledger.sums()[1:]}))


def test_all_are_here() -> None:
    assert [fault.number for fault in FAULTS] == list(range(1, 43))


@every
def test_the_planted_fault_is_found(fault: Planted, tmp_path: Path) -> None:
    if fault.refused:
        with pytest.raises(NicheError) as error:
            fault.read(tmp_path)
        assert [words for words in fault.refused if words not in str(error.value)] == [], str(error.value)
        return
    log = fault.read(tmp_path)
    check_closed(log)
    told = [(e.file, e.row, e.field, e.action, e.problem) for e in log.ledger.entries]
    for found in fault.found:
        here = [t for t in told if t[:4] == (found.file, found.row, found.field, found.action)]
        assert here, told
        assert any(all(words in problem for words in found.words) for *_, problem in here), told
    if fault.rows:
        assert rows(log) == fault.rows, told
    assert fault.check is None or fault.check(log), told
    stops = any(found.action == "stop" for found in fault.found)
    if stops:
        with pytest.raises(NicheError):
            log.require_usable()


@answered
def test_the_study_can_answer(fault: Planted, tmp_path: Path) -> None:
    log = fault.read(tmp_path, **fault.answer)
    check_closed(log)
    told = [(e.file, e.row, e.field, e.action, e.problem) for e in log.ledger.entries]
    assert rows(log) == fault.answered, told
    assert fault.check_answered is None or fault.check_answered(log), told


@every
def test_a_question_names_the_key_that_answers_it(fault: Planted, tmp_path: Path) -> None:
    if not fault.default.startswith("asks") or not (fault.refused or fault.found):
        return
    said = " ".join(fault.refused or [e.problem for e in fault.read(tmp_path).ledger.stops])
    keys = [key.strip() for key in fault.option.split(",")]
    assert any(key in said for key in keys), said
