"""Each way to declare a log on docs/logs.md is accepted as it stands."""

import re
from pathlib import Path

import pytest

from niche.study import study_from_text

PAGE = (Path(__file__).parents[2] / "docs" / "logs.md").read_text(encoding="utf-8")
SNIPPETS = re.findall(r"(?ms)^```toml\n(.+?)^```$", PAGE)
REST = 'title = "t"\n{}\n[zones]\nrows = ["r"]\ncolumns = ["1", "2"]\nlayout = [["upper sand", "upper mud"]]\n'


@pytest.mark.parametrize("snippet", SNIPPETS, ids=range(len(SNIPPETS)))
def test_a_declaration_of_the_page_is_accepted(snippet, tmp_path):
    study = study_from_text(REST.format(snippet), tmp_path / "study.toml")
    assert study.logs.rule in PAGE


def test_every_rule_stands_on_the_page():
    from niche.logs.rules import RULES

    assert {rule for rule in RULES if f"`{rule}`" not in PAGE} == set()
    assert len(SNIPPETS) >= 9
