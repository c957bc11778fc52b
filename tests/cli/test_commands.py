"""The command line: exit statuses, streams, forms, and messages that help."""

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pandas as pd
import pytest
from typer.testing import CliRunner

from niche.cautions import BY_TABLE
from niche.cli import app
from niche.tables import COLUMNS

SAMPLE = str(Path(__file__).parents[2] / "sample_logs" / "tidal_flat")
SPOILED = str(Path(__file__).parents[2] / "sample_logs" / "spoiled")

LOG = """\
species,animal,session,zone,start,end
dunlin,A,1,mud,2026-09-03T08:00:00+02:00,2026-09-03T08:10:00+02:00
dunlin,B,2,sand,2026-09-03T08:00:00+02:00,2026-09-03T08:05:00+02:00
dunlin,C,3,mud,2026-09-03T08:00:00+02:00,2026-09-03T08:05:00+02:00
redshank,D,4,mud,2026-09-03T09:00:00+02:00,2026-09-03T09:10:00+02:00
redshank,E,5,mud,2026-09-03T09:00:00+02:00,2026-09-03T09:10:00+02:00
redshank,F,6,sand,2026-09-03T09:00:00+02:00,2026-09-03T09:10:00+02:00
"""


def run(*arguments):
    return CliRunner().invoke(app, list(arguments), catch_exceptions=False)


@pytest.fixture
def log(tmp_path):
    path = tmp_path / "watch.csv"
    path.write_text(LOG, encoding="utf-8")
    return path


TABLES = {
    "usage": "usage",
    "breadth": "breadth",
    "overlap": "overlap",
    "compete": "coefficients",
    "outcome": "outcome",
}


@pytest.mark.parametrize(("command", "table"), TABLES.items())
def test_every_table_has_its_columns_in_csv_and_its_cautions_on_stderr(command, table):
    result = run(command, SAMPLE, "--format", "csv", "--resamples", "100")
    assert result.exit_code == 0
    assert result.stdout.splitlines()[0].split(",") == list(COLUMNS[table])
    for caution in BY_TABLE[table]:
        assert f"Caution: {caution}" in result.stderr


@pytest.mark.parametrize(("command", "table"), TABLES.items())
def test_quiet_drops_the_notes_and_keeps_the_cautions(command, table):
    result = run(command, SAMPLE, "--quiet", "--resamples", "100")
    assert result.stderr.splitlines() == [f"Caution: {line}" for line in BY_TABLE[table]]


def test_json_carries_rows_notes_and_cautions(log):
    result = run("overlap", str(log), "--format", "json", "--resamples", "100")
    content = json.loads(result.stdout)
    assert list(content) == ["table", "rows", "notes", "cautions"]
    pianka = content["rows"][0]
    # By hand: dunlin 15 min mud, 5 min sand; redshank 20 and 10: (.75·2/3 + .25/3) / √(.625 · 5/9).
    assert pianka["pooled"] == pytest.approx(0.989949, abs=1e-6)
    # By hand: pairs of different animals: dunlin A and C share mud, 2·10·5 of 2·(10·5+10·5+5·5); redshank D and E
    # share mud, 2·100 of 600; so C_ss = 0.4 and 1/3, C_st = 7/12, and 7/12 / √(0.4/3) is above 1.
    assert pianka["estimate"] == 1.0
    assert any("seed" in note for note in content["notes"])


def test_table_is_for_reading(log):
    result = run("usage", str(log), "--resamples", "100")
    lines = result.stdout.splitlines()
    assert lines[0].split() == list(COLUMNS["usage"])
    assert lines[1].split()[:4] == ["dunlin", "mud", "900", "0.750"]


def test_usage_tells_what_the_core_really_holds(log):
    result = run("usage", str(log), "--resamples", "100")
    # Dunlins spent 15 of 20 minutes on mud: one zone, and well over half.
    assert "Core of dunlin, 75% of its use: mud." in result.stderr


def test_out_writes_the_file_and_nothing_to_stdout(log, tmp_path):
    out = tmp_path / "new" / "overlap.csv"
    result = run("overlap", str(log), "--format", "csv", "--out", str(out), "--resamples", "100")
    assert result.stdout == ""
    assert list(pd.read_csv(out).columns) == list(COLUMNS["overlap"])
    assert [path.name for path in out.parent.iterdir()] == ["overlap.csv"]


def test_options_replace_the_settings_of_the_study():
    one = run("outcome", SAMPLE, "--seed", "1", "--format", "csv", "--resamples", "200").stdout
    again = run("outcome", SAMPLE, "--seed", "1", "--format", "csv", "--resamples", "200").stdout
    other = run("outcome", SAMPLE, "--seed", "2", "--format", "csv", "--resamples", "200").stdout
    session = run("overlap", SAMPLE, "--unit", "session", "--format", "json", "--resamples", "200").stdout
    assert one == again != other
    assert json.loads(session)["rows"][0]["units_1"] == 45
    assert "intervals over sessions" in json.loads(session)["notes"][0]


def test_weighting_by_animal_counts_each_animal_once(log):
    result = run("usage", str(log), "--weighting", "animal", "--format", "json", "--resamples", "100")
    # Two of three dunlins were on mud all the time, whatever the length of their watches.
    assert json.loads(result.stdout)["rows"][0]["proportion"] == pytest.approx(2 / 3)


def test_wider_confidence_gives_a_wider_interval():
    def width(level):
        row = json.loads(run("breadth", SAMPLE, "--format", "json", "--confidence", level).stdout)["rows"][0]
        return row["high"] - row["low"]

    assert width("0.99") > width("0.95") > width("0.8")


def test_check_of_a_clean_log():
    result = run("check", SAMPLE)
    assert result.exit_code == 0
    assert "No problem found." in result.stdout
    assert "read                  2677          298234" in result.stdout


def test_check_of_a_spoiled_log_names_every_problem_and_exits_1():
    result = run("check", SPOILED)
    assert result.exit_code == 1
    assert "zone 'midle mud': no such zone; did you mean 'middle mud'?" in result.stdout
    ledger = pd.read_csv(pd.io.common.StringIO(run("check", SPOILED, "--format", "csv").stdout))
    planted = pd.read_csv(Path(SPOILED) / "planted.csv")
    for fault in planted.itertuples():
        assert ((ledger["file"] == fault.file) & (ledger["row"] == fault.row)).any(), fault


def test_a_spoiled_log_stops_every_other_command():
    result = run("overlap", SPOILED)
    assert result.exit_code == 1
    assert result.stdout == ""
    assert "problems stop the work" in result.stderr
    assert "`niche check` lists everything" in result.stderr


def test_start_writes_what_check_accepts(tmp_path):
    folder = tmp_path / "study"
    result = run("start", str(folder))
    assert result.exit_code == 0
    assert result.stdout.split() == [str(folder / n) for n in ("study.toml", "zones.csv", "logs/log.csv")]
    assert run("check", str(folder)).exit_code == 0
    again = run("start", str(folder))
    assert again.exit_code == 1
    assert "not empty" in again.stderr


def test_report_prints_its_folder_and_the_summary(log, tmp_path):
    result = run("report", str(log), "--out", str(tmp_path / "r"), "--resamples", "100")
    assert result.exit_code == 0
    assert result.stdout.splitlines()[0] == str(tmp_path / "r" / "report.html")
    assert "dunlin and redshank: Pianka’s overlap is 1.00" in result.stdout


def test_a_folder_of_others_is_refused_before_the_work(log, tmp_path):
    (tmp_path / "mine").mkdir()
    (tmp_path / "mine" / "thesis.txt").write_text("do not lose", encoding="utf-8")
    result = run("report", str(log), "--out", str(tmp_path / "mine"))
    assert result.exit_code == 1
    assert (tmp_path / "mine" / "thesis.txt").exists()


def test_a_study_without_rows_says_that_there_is_nothing_to_compute(tmp_path):
    run("start", str(tmp_path / "study"))
    result = run("report", str(tmp_path / "study"), "--out", str(tmp_path / "report"))
    assert result.exit_code == 1
    assert "nothing to compute" in result.stderr
    assert not (tmp_path / "report").exists()


def test_outcome_from_numbers():
    result = run("outcome", "--alpha", "0.5", "--beta", "0.5", "--k1", "500", "--k2", "500", "--format", "json")
    content = json.loads(result.stdout)
    assert content["rows"][0]["outcome"] == "coexistence"
    assert content["rows"][0]["n_1"] == pytest.approx(1000 / 3)
    assert content["notes"][1] == "Both would persist for K1/K2 above 0.5 and below 2; here it is 1."


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["outcome"], "give a STUDY, or --alpha, --beta, --k1 and --k2"),
        (["outcome", "--alpha", "1"], "go together; one is missing"),
        (["outcome", SAMPLE, "--alpha", "1"], "not both"),
        (["outcome", "--alpha", "-1", "--beta", "1", "--k1", "1", "--k2", "1"], "alpha is -1.0"),
        (["overlap", SAMPLE, "--confidence", "95"], "write 0.95 for 95 %"),
        (["overlap", SAMPLE, "--resamples", "3"], "--resamples"),
        (["overlap"], "STUDY"),
    ],
)
def test_wrong_arguments_exit_2(arguments, message):
    result = run(*arguments)
    assert result.exit_code == 2
    assert message in result.stderr
    assert result.stdout == ""


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("species,zone,start,end\n", "no heading 'animal' and none 'session'"),
        ("species,animal,zone,start\n", "no heading 'end' and none 'duration'"),
        ("animal,zone,start,end\n", "no heading 'species'"),
        ("species,animal,zone,start,end\n", "no row names a zone"),
        ("", "no header"),
    ],
)
def test_a_log_that_cannot_stand_alone_says_why(tmp_path, text, message):
    path = tmp_path / "log.csv"
    path.write_text(text, encoding="utf-8")
    result = run("overlap", str(path))
    assert result.exit_code == 1
    assert message in result.stderr


def test_missing_study():
    result = run("overlap", "nowhere")
    assert result.exit_code == 1
    assert result.stderr.startswith("niche: nowhere: there is no such file.")


def test_no_command_is_help_and_status_2():
    assert run().exit_code == 2
    assert run("--version").output.startswith("niche ")


def test_a_reader_that_has_had_enough_is_no_error():
    command = f"{sys.executable} -m niche check {SPOILED} --format csv | head -1"
    done = subprocess.run(command, shell=True, capture_output=True, text=True, check=False)
    assert done.stdout.startswith("file,row")
    assert done.stderr == ""


@pytest.mark.skipif(os.name != "posix", reason="signals")
def test_interruption_is_status_130_and_leaves_nothing(tmp_path):
    command = [sys.executable, "-m", "niche", "report", SAMPLE, "--out", str(tmp_path / "r"), "--resamples", "1000000"]
    process = subprocess.Popen(command, stderr=subprocess.PIPE, stdout=subprocess.PIPE, text=True)
    time.sleep(2.5)
    process.send_signal(signal.SIGINT)
    _, errors = process.communicate(timeout=60)
    assert process.returncode == 130
    assert "interrupted" in errors
    assert "Traceback" not in errors
    assert list(tmp_path.iterdir()) == []
