"""Sessions, tags and deployments: whatever is wrong is an error with file and line."""

import pytest

from niche.errors import StudyError
from niche.logs.deployments import read_deployments
from niche.logs.sessions import Session, read_sessions
from niche.logs.tags import read_tags

MIDNIGHT = 1_788_300_000_000
"""2026-09-02 00:00 at +02:00."""
HOUR = 3_600_000


@pytest.fixture
def sessions(bench):
    def read(text):
        study = bench.study(
            "switches", 'session = "s"\ntime = "t"', 'sessions = { file = "sessions.csv" }', sessions=text
        )
        return read_sessions(study)

    return read


@pytest.fixture
def tags(bench):
    def read(text):
        return read_tags(
            bench.study("reads", 'time = "t"', 'reads = { gap = 9 }\ntags = { file = "tags.csv" }', tags=text)
        )

    return read


@pytest.fixture
def deployments(bench):
    def read(text):
        study = bench.study("camera", "", 'camera = { deployments = "deployments.csv" }', deployments=text)
        return read_deployments(study)

    return read


def test_sessions_are_read(sessions):
    found = sessions(
        "\ufeffSession,start,end,observer,tide\n s  1 ,2026-09-02 08:00,2026-09-02T09:30+02:00,HB,low\n\ns2,2026-09-02,,,\n"
    )
    assert found == {
        "s 1": Session(MIDNIGHT + 8 * HOUR, MIDNIGHT + 9 * HOUR + HOUR // 2, "HB"),
        "s2": Session(MIDNIGHT, None, ""),
    }


def test_no_table_is_no_sessions(bench):
    assert read_sessions(bench.study("switches", 'session = "s"\ntime = "t"')) == {}


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "session,end\n",
            r"sessions.csv: line 1: no heading 'start'. `logs.sessions.file` needs 'session', 'start', 'end'",
        ),
        ("", "line 1: no heading 'session'"),
        ("session,start,start,end\n", "line 1: the heading 'start' stands twice"),
        ("session,start,end\ns1,2026-09-02 08:00\n", "line 2: 2 cells where the header has 3"),
        ("session,start,end\n\n,2026-09-02 08:00,\n", "line 3: session is empty"),
        ("session,start,end\ns1,,2026-09-02 08:00\n", "line 2: start is empty"),
        ("session,start,end\ns1,2.9.26,\n", "line 2: start '2.9.26': "),
        (
            "session,start,end\ns1,2026-09-02 08:00,2026-09-02 07:00\n",
            "line 2: session 's1' ends 2026-09-02 07:00, before",
        ),
        ("session,start,end\ns1,2026-09-02,\ns1,2026-09-03,\n", "line 3: session 's1' stands on line 2 already"),
        ('session,start,end\n"s1,2026-09-02,\n', "cannot be read as UTF-8 CSV"),
    ],
)
def test_sessions_that_cannot_be_used(sessions, text, message):
    with pytest.raises(StudyError, match=message):
        sessions(text)


def test_a_missing_table_is_named(bench):
    study = bench.study("switches", 'session = "s"\ntime = "t"', 'sessions = { file = "sessions.csv" }')
    with pytest.raises(
        StudyError, match=r"sessions.csv: `logs.sessions.file` names this file, and there is no such file"
    ):
        read_sessions(study)


def test_a_date_alone_is_valid_to_its_end(tags):
    table = tags(
        "tag,animal,species,valid_from,valid_to\nT1,RW,Dunlin,2026-09-01,2026-09-01\nT1,BO,redshank,2026-09-02,\n"
    )
    assert table.wearer("T1", MIDNIGHT - 1).animal == "RW"
    assert table.wearer("T1", MIDNIGHT).species == "redshank"
    assert table.wearer("T1", MIDNIGHT - 25 * HOUR) is None
    assert table.tags["T1"][0].species == "dunlin"


@pytest.mark.parametrize(
    ("lines", "message"),
    [
        (
            "T1,RW,dunlin,,2026-09-02\nT1,BO,dunlin,2026-09-02,",
            r"tags.csv: line 3: tag 'T1' is on 'BO' while it is still on 'RW' \(line 2\)",
        ),
        ("T1,RW,dunlin,,\nT1,BO,dunlin,,", "line 3: tag 'T1' is on 'BO' while"),
        ("T1,RW,dunlinn,,", "line 2: species 'dunlinn': not listed under `species`; did you mean 'dunlin'"),
        ("T1,RW,dunlin,2026-09-03,2026-09-02", "line 2: valid_to is not after valid_from"),
        ("T1,,dunlin,,", "line 2: animal is empty"),
        (",RW,dunlin,,", "line 2: tag is empty"),
        ("T1,RW,dunlin,soon,", "line 2: valid_from 'soon': "),
    ],
)
def test_tags_that_cannot_be_used(tags, lines, message):
    with pytest.raises(StudyError, match=message):
        tags("tag,animal,species,valid_from,valid_to\n" + lines + "\n")


@pytest.mark.parametrize(
    ("lines", "message"),
    [
        ("C1,mudd,,", "deployments.csv: line 2: zone 'mudd': no such zone; did you mean 'mud'"),
        ("C1,mud,,\nC1,sand,,", "line 3: deployment 'C1' is there already"),
        ("C1,mud,2026-09-04,2026-09-02", "line 2: deployment 'C1' ends before it starts"),
    ],
)
def test_deployments_that_cannot_be_used(deployments, lines, message):
    with pytest.raises(StudyError, match=message):
        deployments("deployment,zone,start,end\n" + lines + "\n")
