"""Camtrap DP 1.0.2: hand-made packages of two cameras on the flat."""

import gzip
import io
import json

import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from niche.errors import LogError
from niche.logs.standards.camtrap_fields import DEPLOYMENTS, MEDIA, OBSERVATIONS

PLACES = [
    {"deploymentID": "d1", "locationName": "upper sand", "deploymentStart": "2026-09-01T00:00:00Z",
     "deploymentEnd": "2026-09-03T12:00:00Z"},
    {"deploymentID": "d2", "locationName": "upper mud", "deploymentStart": "2026-09-01T00:00:00+0200",
     "deploymentEnd": "2026-09-02T00:00:00+0200"},
    {"deploymentID": "d3", "locationName": "upper mud", "deploymentStart": "2026-09-02T00:00:00+02:00",
     "deploymentEnd": "2026-09-02T06:00:00+02:00"},
]  # fmt: skip


def seen(number, **fields):
    return {
        "observationID": str(number), "deploymentID": "d1", "eventID": f"e{number}",
        "eventStart": f"2026-09-01T{number:02d}:00:00Z", "eventEnd": f"2026-09-01T{number:02d}:04:00Z",
        "observationLevel": "event", "observationType": "animal", "scientificName": "Calidris alpina", "count": "1",
        **fields,
    }  # fmt: skip


def table(records, fields):
    text = ",".join(fields) + "\n"
    for record in records:
        text += ",".join(record.get(name, "") for name in fields) + "\n"
    return text


def package(observations, places=PLACES, *, individuals=False, names=None, profile=None, tools=None):
    names = names or {"deployments": "deployments.csv", "media": "media.csv", "observations": "observations.csv"}
    descriptor = {
        "profile": profile or tools.profile,
        "resources": [{"name": n, "path": p, "profile": "tabular-data-resource"} for n, p in names.items()],
        "project": {"title": "flat", "individualAnimals": individuals},
    }
    return {
        "datapackage.json": json.dumps(descriptor),
        names["deployments"]: table(places, DEPLOYMENTS),
        names["media"]: table([], MEDIA),
        names["observations"]: table(observations, OBSERVATIONS),
    }


@pytest.fixture
def read(station, tools):
    def reader(observations, places=PLACES, *, columns="", logs="", unit="session", **keys):
        content = package(observations, places, tools=tools, **keys)
        form = 'standard = "camtrap-dp"'
        return station.read(content, rule="camera", form=form, columns=columns, logs=logs, unit=unit)

    return reader


def test_fields_are_those_of_the_standard_with_its_marks():
    # Camtrap DP 1.0.2 (2025-06-10): 24, 11 and 28 fields; those that each row must fill.
    assert [len(DEPLOYMENTS), len(MEDIA), len(OBSERVATIONS)] == [24, 11, 28]
    required = [[name for name, mark in fields.items() if mark] for fields in (DEPLOYMENTS, MEDIA, OBSERVATIONS)]
    assert required == [
        ["deploymentID", "latitude", "longitude", "deploymentStart", "deploymentEnd"],
        ["mediaID", "deploymentID", "timestamp", "filePath", "filePublic", "fileMediatype"],
        ["observationID", "deploymentID", "eventStart", "eventEnd", "observationLevel", "observationType"],
    ]
    assert list(OBSERVATIONS) == [
        "observationID",
        "deploymentID",
        "mediaID",
        "eventID",
        "eventStart",
        "eventEnd",
        "observationLevel",
        "observationType",
        "cameraSetupType",
        "scientificName",
        "count",
        "lifeStage",
        "sex",
        "behavior",
        "individualID",
        "individualPositionRadius",
        "individualPositionAngle",
        "individualSpeed",
        "bboxX",
        "bboxY",
        "bboxWidth",
        "bboxHeight",
        "classificationMethod",
        "classifiedBy",
        "classificationTimestamp",
        "classificationProbability",
        "observationTags",
        "observationComments",
    ]
    assert list(DEPLOYMENTS) == [
        "deploymentID",
        "locationID",
        "locationName",
        "latitude",
        "longitude",
        "coordinateUncertainty",
        "deploymentStart",
        "deploymentEnd",
        "setupBy",
        "cameraID",
        "cameraModel",
        "cameraDelay",
        "cameraHeight",
        "cameraDepth",
        "cameraTilt",
        "cameraHeading",
        "detectionDistance",
        "timestampIssues",
        "baitUse",
        "featureType",
        "habitat",
        "deploymentGroups",
        "deploymentTags",
        "deploymentComments",
    ]
    assert list(MEDIA) == [
        "mediaID",
        "deploymentID",
        "captureMethod",
        "timestamp",
        "filePath",
        "filePublic",
        "fileName",
        "fileMediatype",
        "exifData",
        "favorite",
        "mediaComments",
    ]


def test_events_count_in_the_zone_of_their_deployment_and_add_no_time(read, tools):
    log = read([seen(1, count="3"), seen(2, deploymentID="d2", scientificName="Tringa totanus")])
    v = log.visits
    assert list(zip(v["species"], v["session"], v["zone"], v["amount"], strict=True)) == [
        ("dunlin", "d1", "upper sand", 3),
        ("redshank", "d2", "upper mud", 1),
    ]
    assert (v["start"] == v["end"]).all()  # the event's span of four minutes is a burst, no stay
    assert tools.rows(log) == {"used": 2}


@pytest.mark.parametrize(
    ("fields", "field", "value"),
    [
        ({"observationType": "human"}, "observationType", "human"),
        ({"observationType": "blank"}, "observationType", "blank"),
        ({"observationType": "vehicle"}, "observationType", "vehicle"),
        ({"observationType": "unclassified"}, "observationType", "unclassified"),
        ({"observationLevel": "media"}, "observationLevel", "media"),
        ({"cameraSetupType": "setup"}, "cameraSetupType", "setup"),
    ],
)
def test_what_is_no_event_of_an_animal_is_set_aside(read, tools, fields, field, value):
    log = read([seen(1), seen(3, **fields)])
    assert (3, field, value, "set_aside") in tools.entries(log)
    assert tools.rows(log) == {"used": 1, "set_aside": 1}


@pytest.mark.parametrize(
    ("fields", "field", "value"),
    [
        ({"observationType": "bird"}, "observationType", "bird"),
        ({"observationLevel": "week"}, "observationLevel", "week"),
        ({"deploymentID": "d9"}, "deploymentID", "d9"),
        ({"eventStart": "2012-01-01T00:00:00Z"}, "eventStart", "2012-01-01T00:00:00Z"),
    ],
)
def test_what_breaks_the_standard_stops_the_work(read, tools, fields, field, value):
    log = read([seen(1), seen(3, **fields)])
    assert (3, field, value, "stop") in tools.entries(log)


def test_a_threshold_holds_for_machines_alone(read, tools):
    records = [
        seen(1, classificationMethod="machine", classificationProbability="0.79"),
        seen(2, classificationMethod="machine", classificationProbability="0.8"),
        seen(3, classificationMethod="human", classificationProbability="0.1"),
        seen(4, classificationMethod="machine"),
    ]
    log = read(records, logs="[logs.camera]\nleast_probability = 0.8")
    found = [entry for entry in tools.entries(log) if entry[1] == "classificationProbability"]
    assert found == [
        (2, "classificationProbability", "0.79", "set_aside"),
        (5, "classificationProbability", "", "set_aside"),
    ]
    assert tools.rows(read(records)) == {"used": 4}


def test_effort_is_how_long_cameras_stood_in_each_zone(read):
    effort = read([seen(1)]).effort.set_index("zone")
    # d1 stood for 60 h; d2 and d3, one after the other in one zone, for 24 h and 6 h. Events of 4 min add nothing.
    assert (effort["effort"] / 3600).to_dict() == {"upper sand": 60, "upper mud": 30, "middle sand": 0, "middle mud": 0}
    assert effort["looked_at"].to_dict() == {
        "upper sand": True,
        "upper mud": True,
        "middle sand": False,
        "middle mud": False,
    }


def test_doubtful_deployments_are_flagged(read, tools):
    place = {**PLACES[0], "timestampIssues": "true", "baitUse": "TRUE", "cameraDelay": "60"}
    fine = {**PLACES[1], "timestampIssues": "false", "baitUse": "false", "cameraDelay": "0"}
    log = read([seen(1)], [place, fine])
    assert tools.entries(log, file="deployments.csv") == [
        (2, "timestampIssues", "true", "flagged"),
        (2, "baitUse", "TRUE", "flagged"),
        (2, "cameraDelay", "60", "flagged"),
    ]


@pytest.mark.parametrize(
    ("place", "columns"),
    [
        ({"locationName": "", "habitat": "middle mud"}, ""),
        ({"locationName": "pole 7", "habitat": "middle mud"}, 'zone = "habitat"'),
        (
            {"locationName": "pole 7", "deploymentGroups": "season:autumn | zone:middle mud"},
            'zone = "deploymentGroups:zone"',
        ),
        ({"locationName": "", "locationID": "middle mud"}, 'zone = "locationID"'),
    ],
)
def test_the_zone_stands_where_the_study_says(read, place, columns):
    log = read([seen(1)], [{**PLACES[0], **place}], columns=columns)
    assert log.visits["zone"].tolist() == ["middle mud"]


@pytest.mark.parametrize("missing", ["NA", "NaN", "nan"])
def test_the_marks_of_a_missing_value_are_empty_cells(read, missing):
    log = read([seen(1, count=missing)], [{**PLACES[0], "locationName": missing, "habitat": "middle mud"}])
    assert log.visits[["zone", "amount"]].to_numpy().tolist() == [["middle mud", 1]]


def test_a_choice_between_zone_fields_is_said(read, tools):
    log = read([seen(1)], [{**PLACES[0], "habitat": "mud"}])
    assert (1, "zone", "locationName", "flagged") in tools.entries(log, file="deployments.csv")


def test_individuals_are_units_where_the_package_tells_them_apart(read, tools):
    records = [seen(1, individualID="RW"), seen(3, individualID="RX")]
    log = read(records, individuals=True, columns='animal = "individualID"', unit="animal")
    assert log.visits["animal"].tolist() == ["RW", "RX"]
    assert "individualAnimals" not in {entry[1] for entry in tools.entries(log)}
    told = read(records, individuals=True)
    assert (1, "individualAnimals", "true", "flagged") in tools.entries(told, file="datapackage.json")


def test_a_count_left_out_is_one_and_said(read, tools):
    log = read([seen(1, count="")])
    assert log.visits["amount"].tolist() == [1]
    assert (2, "count", "", "flagged") in tools.entries(log)


def test_gzip_and_zip_read_alike(station, tools):
    names = {"deployments": "deployments.csv.gz", "media": "media.csv", "observations": "observations.csv.gz"}
    content = package([seen(1)], names=names, tools=tools)
    content = {n: gzip.compress(t.encode()) if n.endswith(".gz") else t for n, t in content.items()}
    keys = {"rule": "camera", "form": 'standard = "camtrap-dp"', "unit": "session"}
    assert len(station.read(content, **keys).visits) == 1
    zipped = station.read({"flat.zip": tools.zipped(content)}, **keys)
    assert zipped.visits["file"].tolist() == ["flat.zip/observations.csv.gz"]


def test_parquet_with_typed_columns_reads_as_csv_does(station, tools):
    names = {"deployments": "deployments.csv", "media": "media.csv", "observations": "observations.parquet"}
    content = package([], names=names, tools=tools)
    records = [seen(1, count=2), seen(2, count=None, individualID="NaN")]
    columns = {name: [record.get(name) for record in records] for name in OBSERVATIONS}
    for name in ("eventStart", "eventEnd"):
        times = [t.replace("Z", "") for t in columns[name]]
        columns[name] = pa.array(times).cast(pa.timestamp("us")).cast(pa.timestamp("us", tz="UTC"))
    columns["count"] = pa.array(columns["count"], type=pa.int64())
    stream = io.BytesIO()
    pq.write_table(pa.table(columns), stream)
    content["observations.parquet"] = stream.getvalue()
    log = station.read(content, rule="camera", form='standard = "camtrap-dp"', unit="session")
    assert log.visits["amount"].tolist() == [2, 1]
    assert log.visits["row"].tolist() == [1, 2]
    assert log.visits["start"].tolist() == [1788224400000, 1788228000000]  # 2026-09-01T01:00Z and 02:00Z


@pytest.mark.parametrize(
    ("places", "message"),
    [
        ([{**PLACES[0], "deploymentEnd": "2026-08-01T00:00:00Z"}], "deploymentEnd .* is before deploymentStart"),
        ([{**PLACES[0], "deploymentEnd": "2026-09-03T12:00:00"}], "deploymentEnd .*no offset"),
        ([PLACES[0], PLACES[0]], "row 3: deploymentID 'd1' stands in row 2 already"),
        ([{**PLACES[0], "deploymentID": ""}], "row 2: deploymentID is empty"),
        ([{**PLACES[0], "locationName": ""}], "nothing tells the zone"),
    ],
)
def test_deployments_that_cannot_be_used(read, places, message):
    with pytest.raises(LogError, match=message):
        read([seen(1)], places)


@pytest.mark.parametrize(
    ("profile", "message"),
    [
        ("https://example.org/other.json", "that of Camtrap DP ends in"),
        ("https://example.org/camtrap-dp/0.6/camtrap-dp-profile.json", r"Camtrap DP 0\.6; read are 1\.0"),
    ],
)
def test_other_packages_are_refused(read, profile, message):
    with pytest.raises(LogError, match=message):
        read([seen(1)], profile=profile)
