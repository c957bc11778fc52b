import json

import pytest

from niche.errors import OutputError
from niche.report import check_folder
from niche.report.folder import files_below, whole_folder


def fill(folder, *, program="niche", files=("a.txt",)):
    (folder / "a.txt").write_text("new")
    (folder / "run.json").write_text(json.dumps({"program": program, "files": list(files)}))


def write(target):
    with whole_folder(target) as new:
        fill(new)


def test_a_new_folder_with_its_parents_appears_whole(tmp_path):
    target = tmp_path / "deep" / "er" / "out"
    write(target)
    assert files_below(target) == ["a.txt", "run.json"]
    assert list(target.parent.iterdir()) == [target]


def test_an_empty_folder_is_taken(tmp_path):
    target = tmp_path / "out"
    target.mkdir()
    (target / ".DS_Store").write_text("")
    write(target)
    assert files_below(target) == ["a.txt", "run.json"]


def test_an_earlier_report_is_replaced(tmp_path):
    target = tmp_path / "out"
    target.mkdir()
    fill(target, files=["a.txt", "gone.txt"])
    (target / "gone.txt").write_text("old")
    write(target)
    assert files_below(target) == ["a.txt", "run.json"]
    assert (target / "a.txt").read_text() == "new"
    assert list(tmp_path.iterdir()) == [target]


def test_a_failure_leaves_everything_as_it_was(tmp_path):
    target = tmp_path / "out"
    target.mkdir()
    fill(target)
    (target / "a.txt").write_text("old")

    def half():
        with whole_folder(target) as new:
            (new / "a.txt").write_text("half")
            raise KeyError("a defect")

    with pytest.raises(KeyError):
        half()
    assert (target / "a.txt").read_text() == "old"
    assert list(tmp_path.iterdir()) == [target]


@pytest.mark.parametrize(
    "record",
    [None, "", "[]", '{"program": "other", "files": ["mine.txt"]}', '{"program": "niche"}', "\xff"],
)
def test_a_folder_of_somebody_else_is_refused(tmp_path, record):
    target = tmp_path / "out"
    target.mkdir()
    (target / "mine.txt").write_text("precious")
    if record is not None:
        (target / "run.json").write_bytes(record.encode("latin-1"))
    with pytest.raises(
        OutputError, match=r"not empty, and it is no earlier report.*Name a folder that is new or empty"
    ):
        write(target)
    assert (target / "mine.txt").read_text() == "precious"
    assert [p.name for p in tmp_path.iterdir()] == ["out"]


def test_a_folder_with_folders_alone_is_not_empty(tmp_path):
    (tmp_path / "out" / "photos").mkdir(parents=True)
    with pytest.raises(OutputError, match="not empty"):
        check_folder(tmp_path / "out")


def test_a_file_put_into_a_report_is_not_lost(tmp_path):
    target = tmp_path / "out"
    target.mkdir()
    fill(target)
    (target / "notes.txt").write_text("precious")
    with pytest.raises(OutputError, match=r"'notes\.txt', which no report wrote"):
        write(target)
    assert (target / "notes.txt").read_text() == "precious"


def test_a_file_of_that_name_is_refused(tmp_path):
    (tmp_path / "out").write_text("precious")
    with pytest.raises(OutputError, match="there is a file of this name"):
        write(tmp_path / "out")
    assert (tmp_path / "out").read_text() == "precious"


def test_a_place_that_cannot_be_written_is_told(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(OutputError, match="cannot be written"):
        write(tmp_path / "file" / "out")


def test_a_link_stays_a_link(tmp_path):
    (tmp_path / "real").mkdir()
    (tmp_path / "link").symlink_to(tmp_path / "real")
    write(tmp_path / "link")
    assert (tmp_path / "link").is_symlink()
    assert files_below(tmp_path / "real") == ["a.txt", "run.json"]
