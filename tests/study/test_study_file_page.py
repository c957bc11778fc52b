"""The page on the study file: every key of the models stands in it with its default, no other does, examples work."""

import re
import tomllib
from pathlib import Path
from typing import get_args

import pytest
from pydantic import BaseModel
from pydantic_core import PydanticUndefined

from niche.logs import read_logs
from niche.study import Study, study_from_text

PAGE = (Path(__file__).parents[2] / "docs" / "study_file.md").read_text(encoding="utf-8")
TOP = "The study as a whole"


def models_in(annotation):
    """Every table class inside an annotation."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        return [annotation]
    return [model for part in get_args(annotation) for model in models_in(part)]


def fields(model=Study, path=()):
    """(path of the table, key, field) of every key of the study file."""
    for key, field in model.model_fields.items():
        yield path, key, field
        for inner in models_in(field.annotation):
            yield from fields(inner, (*path, key))


def documented():
    """(path of the table, key) of every key of the page, with its cells; the heading of a section names the table."""
    found = []
    for section in re.split(r"(?m)^## ", PAGE)[1:]:
        heading, body = section.split("\n", 1)
        named = re.fullmatch(r"`\[+([a-z.]+)\]+`", heading)
        path = tuple(named[1].split(".")) if named else ()
        lines = re.findall(r"(?m)^\| `(\w+)` \|(.+)\|$", body)
        assert named or heading == TOP or not lines, heading
        found += [((path, key), [cell.strip() for cell in cells.split(" | ")]) for key, cells in lines]
    return found


def blocks(kind):
    return re.findall(rf"(?ms)^```{kind}\n(.+?)^```$", PAGE)


def test_every_key_stands_on_the_page_once_and_no_other_key_does():
    expected = [(path, key) for path, key, _ in fields()]
    assert len(expected) > 45
    assert sorted(place for place, _ in documented()) == sorted(expected)


def test_the_keys_of_a_table_stand_in_the_order_of_the_model():
    page, models = [place for place, _ in documented()], [(path, key) for path, key, _ in fields()]
    for table in {path for path, _ in models}:
        assert [key for path, key in page if path == table] == [key for path, key in models if path == table]


@pytest.mark.parametrize(
    ("path", "key", "field"), list(fields()), ids=lambda part: part if isinstance(part, str) else ""
)
def test_type_default_and_meaning_are_those_of_the_model(path, key, field):
    kind, default, meaning = dict(documented())[path, key]
    assert kind
    assert meaning.endswith(".")
    if field.default is PydanticUndefined:
        assert default == "*required*"
    elif field.default is None:
        assert default == "*none*"
    elif isinstance(field.default, BaseModel):
        assert default == "its defaults"
    else:
        value = tomllib.loads(f"x = {default.strip('`')}")["x"]
        assert (tuple(value) if isinstance(value, list) else value) == field.default
        assert type(value) is type(field.default) or isinstance(field.default, tuple)


def test_a_choice_lists_every_value_it_may_take():
    for path, key, field in fields():
        choices = [part for part in get_args(field.annotation) if isinstance(part, str)] or [
            value for part in get_args(field.annotation) for value in get_args(part) if isinstance(value, str)
        ]
        if choices:
            kind = dict(documented())[path, key][0]
            assert sorted(re.findall(r'`"([^`]+)"`', kind)) == sorted(choices), (path, key)


def test_the_example_is_a_study_that_reads_the_example_log(tmp_path):
    (example,) = blocks("toml")
    log = next(block for block in blocks("csv") if block.startswith("species"))
    (tmp_path / "logs").mkdir()
    (tmp_path / "logs" / "2026-09-03.csv").write_text(log, encoding="utf-8")
    read = read_logs(study_from_text(example, tmp_path / "study.toml"))
    read.require_usable()
    assert read.ledger.entries == []
    assert {name: rows for name, rows, _ in read.ledger.sums()} == {
        "read": 4, "used": 3, "out_of_sight": 1, "set_aside": 0, "stop": 0,
    }  # fmt: skip


def test_the_example_sheet_is_a_zone_sheet(tmp_path):
    sheet = next(block for block in blocks("csv") if block.startswith("zone"))
    (tmp_path / "zones.csv").write_text(sheet, encoding="utf-8")
    (example,) = blocks("toml")
    begin, end = example.index("[zones]"), example.index("[[species]]")
    study = study_from_text(example[:begin] + '[zones]\nsheet = "zones.csv"\n' + example[end:], tmp_path / "study.toml")
    assert study.zones.layout == (("upper sand", "upper mud"), ("lower sand", ""))


def test_the_short_lines_of_the_page_are_toml():
    prose = re.sub(r"(?ms)^```.+?^```$", "", PAGE)
    short = re.findall(r"`([^`\n]+ = [^`\n]+)`", prose)
    assert len(short) >= 3
    for line in short:
        assert tomllib.loads(line)
