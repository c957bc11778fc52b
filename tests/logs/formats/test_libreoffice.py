"""Workbooks as LibreOffice writes them, made by hand with ``soffice --convert-to`` from a CSV (LibreOffice 7.4, kept here).

Three bouts: times as dates, one end at midnight, whose cell a spreadsheet writes without its time, and a duration of more
than a day.
"""

from pathlib import Path

import pytest

from niche.logs import read_logs
from niche.study import study_from_text

FIXTURES = Path(__file__).parent / "fixtures"
SECONDS = [250, 57_350, 95_130]
STUDY = """
title = "t"
[logs]
files = ["{file}"]
time_zone = "Etc/UTC"
duration_unit = "h:m:s"
out_of_sight = ["out of sight"]
[logs.columns]
session = "session"
{span}
[zones]
rows = ["r"]
columns = ["1", "2"]
layout = [["upper mud", "lower mud"]]
"""


@pytest.mark.parametrize("span", ['end = "end"', 'duration = "duration"'])
@pytest.mark.parametrize("file", ["libreoffice.xlsx", "libreoffice.ods"])
def test_a_workbook_of_libreoffice_is_read_to_the_second(file, span):
    log = read_logs(study_from_text(STUDY.format(file=file, span=span), FIXTURES / "study.toml"))
    log.require_usable()
    assert ((log.visits["end"] - log.visits["start"]) / 1000).tolist() == SECONDS
    assert log.visits["start"].iloc[0] == 1_788_422_400_000  # 2026-09-03T08:00:00Z
    assert log.visits["animal"].tolist() == ["RW-GY", "RW-GY", "NB-OR"]
    assert log.ledger.sums()[0] == ("read", 3, sum(SECONDS) * 1000)
