"""A small valid study file as text, and a way to spoil one place of it."""

from pathlib import Path

import pytest

from niche.errors import StudyError
from niche.study import study_from_text

SOUND = """\
title = "Two waders on a flat"
site = "an invented flat"

[logs]
files = ["logs/*.csv"]
rule = "bouts"
time_zone = "Europe/Berlin"
out_of_sight = ["out of sight"]

[logs.columns]
species = "species"
animal = "animal"
session = "session"
zone = "zone"
start = "start"
end = "end"

[logs.problems]
overlap = "set_aside"

[zones]
rows = ["upper shore", "lower shore"]
columns = ["sand", "mud"]
layout = [["upper sand", "upper mud"], ["lower sand", ""]]

[zones.availability]
source = "a survey"
unit = "ha"

[zones.availability.amounts]
"upper sand" = 2
"upper mud" = 1.5
"lower sand" = 0

[[species]]
name = "dunlin"
body_mass = 48
k = { low = 10, high = 20, source = "a count" }

[[species]]
name = "redshank"
body_mass = 125
r = 0.3

[report]
permits = "none needed"

[analysis]
resamples = 500
confidence = 0.9
seed = 7
core = 0.5
"""

SHEET = "zone,row,column,availability\nupper sand,upper,sand,2\nupper mud,upper,mud,1.5\nlower sand,lower,sand,0\n"


class Texts:
    """Study files as text. ``changed`` replaces one passage, which must stand there once."""

    sound = SOUND
    sheet = SHEET

    @staticmethod
    def changed(*pairs):
        text = SOUND
        for old, new in pairs:
            assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times in the sound study"
            text = text.replace(old, new)
        return text

    @staticmethod
    def problems(text, file=Path("flat/study.toml")):
        """The lines of the message with which a study is refused, without the file's name at their start."""
        with pytest.raises(StudyError) as caught:
            study_from_text(text, file)
        lines = str(caught.value).splitlines()
        assert all(line.startswith(f"{file}: ") for line in lines)
        return [line.removeprefix(f"{file}: ") for line in lines]


@pytest.fixture(scope="session")
def texts():
    return Texts


@pytest.fixture
def with_sheet(tmp_path):
    """Write a zone sheet beside a study that uses it; gives the text of the study and the path of its file."""

    def write(sheet, keys='sheet = "zones.csv"'):
        content = sheet if isinstance(sheet, bytes) else sheet.encode()
        (tmp_path / "zones.csv").write_bytes(content)
        start, end = SOUND.index("[zones]"), SOUND.index("[[species]]")
        return f"{SOUND[:start]}[zones]\n{keys}\n\n{SOUND[end:]}", tmp_path / "study.toml"

    return write
