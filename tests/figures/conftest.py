"""Analyses made from numbers, without files."""

from __future__ import annotations

import warnings

import pytest
from matplotlib.text import Text

from niche.analysis import analyse
from niche.errors import NicheWarning
from niche.study import Zones
from niche.usage import Usage

NAMES = ("dunlin", "redshank", "turnstone")
ZONES = Zones(
    rows=("upper", "lower"), columns=("sand", "mud"), layout=(("upper sand", "upper mud"), ("lower sand", ""))
)

USE = {
    "dunlin": [[60, 30, 10], [50, 40, 10], [70, 20, 10], [55, 25, 20]],
    "redshank": [[20, 60, 20], [30, 40, 30], [10, 70, 20], [25, 55, 20]],
    "turnstone": [[5, 5, 90], [0, 10, 90], [10, 0, 90]],
}


def analysed(use, zones=ZONES, **settings):
    usage = Usage.from_units(use, zones=zones.names)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", NicheWarning)
        return analyse(usage, **{"resamples": 199, "seed": 5, **settings})


@pytest.fixture(scope="session")
def analysis():
    return analysed(USE)


@pytest.fixture(scope="session")
def few():
    """Two animals of the first species: no interval for it."""
    return analysed({"dunlin": USE["dunlin"][:2], "redshank": USE["redshank"]})


@pytest.fixture(scope="session")
def unseen():
    """A species without any use: its values are not defined."""
    return analysed({"dunlin": [[0, 0, 0]], "redshank": USE["redshank"], "turnstone": USE["turnstone"]})


@pytest.fixture(scope="session")
def zones():
    return ZONES


@pytest.fixture(scope="session")
def make():
    return analysed


@pytest.fixture(scope="session")
def texts():
    """All text of an Axes or a Figure."""

    def find(artist):
        return [text.get_text() for text in artist.findobj(Text) if text.get_text()]

    return find
