import csv
import hashlib
import json
import re

import pytest

from niche import cautions
from niche.errors import OutputError
from niche.report import write_maps, write_report
from niche.report.package import slug
from niche.report.record import run_record

CREATED = "2026-10-07T08:00:00Z"


@pytest.fixture(scope="module")
def report(plain, tmp_path_factory):
    folder = tmp_path_factory.mktemp("report") / "out"
    page = write_report(plain, folder, command="niche report study", created=CREATED)
    assert page == folder / "report.html"
    return folder


def read(file):
    return json.loads(file.read_text(encoding="utf-8"))


def test_everything_is_there(report):
    figures = {path.name for path in (report / "figures").iterdir()}
    stems = ("coexistence_windows", "effort_timeline", "overlap_intervals_pianka", "overlap_matrix_pianka", "zone_maps")
    assert figures == {f"{stem}.{ending}" for stem in stems for ending in ("png", "svg")}
    assert {path.name for path in report.iterdir()} == {
        "report.html",
        "tables",
        "figures",
        "datapackage.json",
        "run.json",
    }


def test_equal_runs_give_equal_folders(plain, report, tmp_path):
    write_report(plain, tmp_path / "again", command="niche report study", created=CREATED)
    for path in report.rglob("*.*"):
        assert path.read_bytes() == (tmp_path / "again" / path.relative_to(report)).read_bytes(), path.name


def test_the_package_describes_the_files_as_they_are(report):
    package = read(report / "datapackage.json")
    assert package["$schema"] == "https://datapackage.org/profiles/2.0/datapackage.json"
    assert package["created"] == CREATED
    assert package["name"] == "a-flat-in-autumn"
    assert {r["path"] for r in package["resources"]} == {f"tables/{p.name}" for p in (report / "tables").iterdir()}
    for resource in package["resources"]:
        content = (report / resource["path"]).read_bytes()
        assert resource["bytes"] == len(content)
        assert resource["hash"] == "sha256:" + hashlib.sha256(content).hexdigest()
        assert (resource["type"], resource["format"], resource["encoding"]) == ("table", "csv", "utf-8")
        header = next(csv.reader(content.decode("utf-8").splitlines()))
        fields = resource["schema"]["fields"]
        assert [f["name"] for f in fields] == header
        assert all(f["description"] for f in fields)


def test_every_cell_has_the_type_of_its_field(report):
    fits = {
        "integer": r"-?\d+|",
        "number": r"-?\d+(\.\d+)?(e[+-]?\d+)?|INF|-INF|",
        "boolean": r"true|false",
        "date": r"\d{4}-\d\d-\d\d",
        "string": r"(?s).*",
    }
    for resource in read(report / "datapackage.json")["resources"]:
        with (report / resource["path"]).open(encoding="utf-8", newline="") as stream:
            for row in list(csv.reader(stream))[1:]:
                for cell, field in zip(row, resource["schema"]["fields"], strict=True):
                    assert re.fullmatch(fits[field["type"]], cell), (resource["name"], field, cell)


def test_fields_have_the_types_a_reader_needs(report):
    types = {
        (r["name"], f["name"]): f["type"]
        for r in read(report / "datapackage.json")["resources"]
        for f in r["schema"]["fields"]
    }
    assert types["usage", "core"] == "boolean"
    assert types["usage", "units"] == "integer"
    assert types["ledger", "row"] == "integer"
    assert types["overlap", "low"] == "number"
    assert types["overlap", "index"] == "string"
    assert types["effort_by_day", "date"] == "date"


def test_cautions_and_the_note_go_with_each_table(report):
    package = read(report / "datapackage.json")
    assert "Invented data." in package["description"]
    told = {r["name"]: r["description"] for r in package["resources"]}
    for name, lines in cautions.BY_TABLE.items():
        assert all(line in told[name] for line in lines), name
    assert all("Invented data." in text for text in told.values())


def test_the_record_is_enough_to_run_again(plain, report):
    record = read(report / "run.json")
    study = plain.study.folder / "study.toml"
    assert record["program"] == "niche"
    assert record["command"] == "niche report study"
    assert record["study"]["sha256"] == hashlib.sha256(study.read_bytes()).hexdigest()
    assert record["options"]["seed"] == 3
    assert record["options"]["resamples"] == 200
    assert record["options"]["unit"] == "animal"
    log = plain.study.folder / "logs" / "log.csv"
    assert record["inputs"] == [
        {
            "name": "logs/log.csv",
            "sha256": hashlib.sha256(log.read_bytes()).hexdigest(),
            "size": log.stat().st_size,
            "rows": 60,
        }
    ]
    sums = {line["disposition"]: line for line in record["ledger"]}
    assert sums["read"]["rows"] == 60
    assert sum(line["rows"] for name, line in sums.items() if name != "read") == 60
    assert sum(line["milliseconds"] for name, line in sums.items() if name != "read") == sums["read"]["milliseconds"]


def test_the_record_lists_what_was_written(report):
    listed = read(report / "run.json")["files"]
    there = sorted(p.relative_to(report).as_posix() for p in report.rglob("*") if p.is_file() and p.name != "run.json")
    assert listed == there


def test_the_record_tells_nothing_of_the_machine(report):
    import platform

    text = (report / "run.json").read_text(encoding="utf-8")
    for word in (platform.node(), platform.system(), platform.machine()):
        assert not word or word not in text


def test_the_study_file_is_told_as_it_was_named(plain):
    folder = plain.study.folder

    def told(named):
        return run_record(plain, command="x", created=CREATED, study_file=named, files=[])["study"]["file"]

    assert told(None) == told(folder) == told(folder / "study.toml") == (folder / "study.toml").as_posix()
    assert told(folder / "logs" / "log.csv") is None
    assert told(folder / "none.toml") is None


def test_maps_alone(plain, tmp_path):
    path = write_maps(plain, tmp_path / "maps", command="niche map study", created=CREATED)
    assert path == tmp_path / "maps" / "figures" / "zone_maps.svg"
    assert path.is_file()
    names = sorted(p.relative_to(tmp_path / "maps").as_posix() for p in (tmp_path / "maps").rglob("*") if p.is_file())
    assert names == [
        "datapackage.json",
        "figures/zone_maps.png",
        "figures/zone_maps.svg",
        "run.json",
        "tables/usage.csv",
    ]


def test_maps_need_no_index(make, tmp_path):
    from niche.analysis import run_study
    from niche.study import read_study

    run = run_study(read_study(make.study({"dunlin": 3, "redshank": 3})), indices=[])
    assert write_maps(run, tmp_path / "maps", command="x").is_file()
    assert write_report(run, tmp_path / "report", command="x").is_file()


def test_a_report_replaces_a_report_and_nothing_else(plain, tmp_path):
    write_maps(plain, tmp_path / "out", command="x")
    write_maps(plain, tmp_path / "out", command="y")
    assert read(tmp_path / "out" / "run.json")["command"] == "y"
    (tmp_path / "out" / "mine.txt").write_text("precious")
    with pytest.raises(OutputError, match=r"mine\.txt"):
        write_report(plain, tmp_path / "out", command="x")
    assert (tmp_path / "out" / "mine.txt").read_text() == "precious"


def test_the_hour_is_told_by_the_standard(plain, tmp_path):
    write_maps(plain, tmp_path / "out", command="x")
    assert re.fullmatch(r"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ", read(tmp_path / "out" / "run.json")["created"])


@pytest.mark.parametrize(
    ("title", "name"),
    [("Four waders, 2026!", "four-waders-2026"), ("Wattvögel", "wattvogel"), ("干潟", "study"), ("", "study")],
)
def test_names_for_machines(title, name):
    assert slug(title) == name
