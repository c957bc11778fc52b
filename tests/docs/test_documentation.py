"""The documentation says what the program does."""

import importlib.util
import re
from pathlib import Path

import pytest

from niche.cli import app

ROOT = Path(__file__).parents[2]


def _writer():
    spec = importlib.util.spec_from_file_location("write_commands", Path(__file__).with_name("write_commands.py"))
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def test_command_reference_is_current():
    writer = _writer()
    assert writer.PAGE.read_text(encoding="utf-8") == writer.page(), "run: python tests/docs/write_commands.py"


def test_every_command_is_in_the_reference_and_in_the_readme():
    registered = {c.name or c.callback.__name__ for c in app.registered_commands}
    page = _writer().PAGE.read_text(encoding="utf-8")
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    for name in registered:
        assert f"`niche {name} " in readme
        assert f"## niche {name} " in page


@pytest.mark.parametrize(
    "page", [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").rglob("*.md"))], ids=str
)
def test_links_between_pages_lead_somewhere(page):
    for target in re.findall(r"\]\((?!https?:)([^)#]+)\)", page.read_text(encoding="utf-8")):
        assert (page.parent / target).exists(), f"{page.name} links to {target}"
