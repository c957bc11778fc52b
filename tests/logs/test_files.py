"""Which files a study names, what they are called, what is kept of each, and copies of a file."""

import hashlib
import os

import pytest

from niche.errors import StudyError
from niche.logs import read_logs
from niche.logs.engine import log_paths


@pytest.fixture
def place(field):
    folder = field.folder()
    for number, name in enumerate(["2026-09-03.csv", "2026-09-04.csv", "notes.txt", "deep/2026-09-05.csv"]):
        file = folder / "logs" / name
        file.parent.mkdir(parents=True, exist_ok=True)
        file.write_text(field.text(field.bout(day=f"2026-09-{number + 3:02d}")), encoding="utf-8")
    return folder


def named(field, place, files):
    study = field.study(place, files=files)
    return [path.relative_to(place).as_posix() for path in log_paths(study)]


@pytest.mark.parametrize(
    ("files", "expected"),
    [
        ('["logs/*.csv"]', ["logs/2026-09-03.csv", "logs/2026-09-04.csv"]),
        ('["logs/2026-09-04.csv", "logs/*.csv"]', ["logs/2026-09-04.csv", "logs/2026-09-03.csv"]),
        ('["logs/*.csv", "logs/*.csv", "./logs/2026-09-03.csv"]', ["logs/2026-09-03.csv", "logs/2026-09-04.csv"]),
        ('["logs/2026-09-0?.csv"]', ["logs/2026-09-03.csv", "logs/2026-09-04.csv"]),
        ('["**/*.csv"]', ["logs/2026-09-03.csv", "logs/2026-09-04.csv", "logs/deep/2026-09-05.csv"]),
        ('["logs/*"]', ["logs/2026-09-03.csv", "logs/2026-09-04.csv", "logs/notes.txt"]),
        ('["logs/notes.txt"]', ["logs/notes.txt"]),
    ],
)
def test_patterns_name_files_each_once_and_no_folders(field, place, files, expected):
    assert named(field, place, files) == expected


@pytest.mark.parametrize(
    "pattern",
    [
        "*.csv", "log/*.csv", "logs/2026-10-*.csv", "logs", "logs/", "logs/deep", "..", "/", " ", "[", "~/x.csv",
        "a\\\\b.csv", "logs/x\\u0000",
    ],
)  # fmt: skip
def test_a_pattern_that_names_no_file_is_told_with_its_key(field, place, pattern):
    study = field.study(place, files=f'["logs/*.csv", "{pattern}"]')
    with pytest.raises(StudyError, match=r"^logs\.files\[2\]: ") as caught:
        read_logs(study)
    assert str(place.resolve()) in str(caught.value)
    assert repr(pattern.encode().decode("unicode_escape")) in str(caught.value)


def test_an_absolute_path_names_its_file(field, place):
    study = field.study(place, files=f'["{(place / "logs" / "2026-09-03.csv").as_posix()}"]')
    log = read_logs(study)
    assert [file.name for file in log.files] == ["logs/2026-09-03.csv"]
    field.check_closed(log)


def test_a_file_outside_the_folder_of_the_study_keeps_its_whole_name(field, place):
    elsewhere = field.folder() / "x.csv"
    elsewhere.write_text(field.text(field.bout()), encoding="utf-8")
    log = read_logs(field.study(place, files=f'["{elsewhere.as_posix()}"]'))
    assert log.visits["file"].tolist() == [elsewhere.as_posix()]


def test_what_is_kept_of_each_file_is_right(field, place):
    log = read_logs(field.study(place, files='["**/*.csv"]'))
    for file in log.files:
        content = (place / file.name).read_bytes()
        assert file.sha256 == hashlib.sha256(content).hexdigest()
        assert file.size == len(content)
        assert file.rows == 1
    assert log.visits["file"].tolist() == [file.name for file in log.files]


def test_progress_counts_bytes_file_by_file(field, place):
    calls = []
    log = read_logs(field.study(place, files='["**/*.csv"]'), progress=lambda done, total: calls.append((done, total)))
    sizes = [file.size for file in log.files]
    assert calls == [(sum(sizes[:n]), sum(sizes)) for n in (1, 2, 3)]


def test_a_byte_for_byte_copy_adds_nothing_but_its_rows(field):
    rows = [field.bout(), field.bout("08:10", "08:20", zone="creek"), field.bout("08:20", "08:30", zone="out of sight")]
    alone = field.read(rows)
    log = field.read(rows, rows, rows)
    assert log.visits.to_dict("list") == alone.visits.to_dict("list")
    assert field.rows(log) == {"used": 1, "stop": 1, "out_of_sight": 1, "set_aside": 6}
    assert log.ledger.sums()[0] == ("read", 9, 30 * 60_000)
    copied = [e for e in log.ledger.entries if e.action == "set_aside"]
    assert [(e.file, e.row) for e in copied] == [(name, row) for name in ("b.csv", "c.csv") for row in (2, 3, 4)]
    assert {e.problem for e in copied} == {"the file repeats a.csv byte for byte"}
    assert [file.rows for file in log.files] == [3, 3, 3]


def test_a_file_that_says_the_same_in_other_bytes_is_found_row_by_row(field):
    rows = [field.bout(), field.bout("08:10", "08:20")]
    log = field.read(field.text(*rows), field.text(*rows).replace("\n", "\r\n"))
    assert field.rows(log) == {"used": 2, "set_aside": 2}
    found = sorted((e.row or 0, e.problem) for e in log.ledger.entries)
    assert found[1:] == [(2, "repeats a.csv, row 2, exactly"), (3, "repeats a.csv, row 3, exactly")]
    assert found[0] == (
        0, "all its rows repeat rows of a.csv, in the same order: the same log a second time; leave one of the two out",
    )  # fmt: skip


def test_files_without_rows_are_no_copies_that_matter(field):
    log = field.read([], [], [field.bout()])
    assert field.rows(log) == {"used": 1}
    assert [file.rows for file in log.files] == [0, 0, 1]


def test_a_link_to_a_log_is_a_copy_and_links_that_lead_nowhere_are_passed_over(field):
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(field.bout()), encoding="utf-8")
    for name, target in (("b.csv", "a.csv"), ("c.csv", "c.csv"), ("d.csv", "none.csv")):
        os.symlink(folder / target, folder / name)
    log = read_logs(field.study(folder))
    assert [file.name for file in log.files] == ["a.csv", "b.csv"]
    assert field.rows(log) == {"used": 1, "set_aside": 1}


def test_a_folder_that_holds_a_link_to_itself_is_searched_once(field):
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(field.bout()), encoding="utf-8")
    os.symlink(folder, folder / "round")
    log = read_logs(field.study(folder, files='["**/*.csv"]'))
    assert field.rows(log) == {"used": 1}


def test_a_folder_and_a_pipe_whose_names_fit_the_pattern_are_no_logs(field):
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(field.bout()), encoding="utf-8")
    (folder / "b.csv").mkdir()
    os.mkfifo(folder / "c.csv")
    assert [file.name for file in read_logs(field.study(folder)).files] == ["a.csv"]


def test_a_study_in_the_current_folder_finds_its_logs(field, place, monkeypatch):
    monkeypatch.chdir(place)
    study = field.study(type(place)(), files='["logs/*.csv"]')
    assert [file.name for file in read_logs(study).files] == ["logs/2026-09-03.csv", "logs/2026-09-04.csv"]
