"""Each small sample, one a form of log, goes through the whole report and is told in its own words."""

import re
from pathlib import Path

import numpy as np
import pytest
from typer.testing import CliRunner

import niche
from niche.analysis import run_study
from niche.cli import app
from niche.report import summarise

SAMPLES = Path(__file__).parents[2] / "sample_logs"
FORMS = {
    "roost_readers": "hours in view of 4 species, 13 animals in all, from 2026-09-02",
    "switch_log": "hours in view of 3 species, 12 animals in all, from 2026-09-02",
    "hourly_scans": "1,215 animals in scans of 4 species, 40 sessions in all, from 2026-09-06",
    "camera_events": "183 events at cameras of 3 species, 24 sessions in all, from 2026-09-01",
    "tally_sheet": "35.7 hours in view of 3 species, 12 animals in all; the animals were out of sight for 2%",
}


@pytest.mark.parametrize(("sample", "words"), FORMS.items())
def test_a_form_is_reported_in_its_own_words(sample, words, tmp_path):
    out = tmp_path / "r"
    result = CliRunner().invoke(app, ["report", str(SAMPLES / sample), "--out", str(out), "--resamples", "200"])
    assert result.exit_code == 0, result.output
    assert words in result.stdout
    page = re.sub(r"<svg.*?</svg>|<style.*?</style>", "", (out / "report.html").read_text(encoding="utf-8"), flags=re.S)
    assert "1970-01" not in page
    assert not re.search(r"\bnan\b", page)
    if sample in ("hourly_scans", "camera_events"):
        assert "hours in view of" not in page
        usage = (out / "tables" / "usage.csv").read_text(encoding="utf-8").splitlines()
        assert usage[0].endswith(",visits")
        assert all(line.split(",")[2] == "" for line in usage[1:])


def test_cameras_give_pooled_values_and_no_interval():
    run = run_study(niche.read_study(SAMPLES / "camera_events"))
    pianka = run.analysis.overlap["pianka"]
    assert np.isnan(pianka.low[0, 1])
    np.testing.assert_array_equal(pianka.value, pianka.pooled)
    assert run.analysis.outcomes == ()
    assert "no interval: people chose the zone of each session" in summarise(run).text()


def test_sums_tell_of_no_visits_to_count():
    run = run_study(niche.read_study(SAMPLES / "tally_sheet"))
    assert run.analysis.usage.visits is None
    assert "morisita" not in run.analysis.overlap
