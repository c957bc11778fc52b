"""Plain Darwin Core CSV."""

import csv
import gzip
import io

import openpyxl
import pytest

from niche.errors import LogError, StudyError
from niche.logs.standards.terms import READ, terms_of

HEADER = "scientificName,organismID,eventID,parentEventID,habitat,eventDate,occurrenceStatus,occurrenceID"
SPAN = "2026-09-03T08:15:30+02:00/2026-09-03T08:20:00+02:00"


def sheet(*rows, header=HEADER):
    return {"log.csv": "\n".join([header, *rows]) + "\n"}


def test_terms_are_those_of_the_standard():
    # Names as the page of standards gives them, classes Event, Location, Occurrence, Organism, Taxon, Identification.
    published = {
        "eventID", "parentEventID", "eventDate", "eventTime", "habitat", "sampleSizeValue", "sampleSizeUnit",
        "locationID", "locality", "occurrenceID", "occurrenceStatus", "individualCount", "organismQuantity",
        "organismQuantityType", "recordedBy", "organismID", "organismScope", "scientificName",
        "scientificNameAuthorship", "vernacularName", "identificationQualifier",
    }  # fmt: skip
    assert set(READ) == published


def test_a_study_that_says_darwin_core_names_no_column(station, tools):
    log = station.read(sheet(f"Calidris alpina,RW,b1,w1,upper sand,{SPAN},present,1"))
    assert tools.stays(log) == [("dunlin", "RW", "w1", "upper sand", 270.0)]
    assert log.ledger.entries == []


def test_start_of_a_visit_is_the_instant_written(station):
    log = station.read(sheet(f"Calidris alpina,RW,b1,w1,upper sand,{SPAN},present,1"))
    assert str(log.visits["start"].to_numpy().astype("datetime64[ms]")[0]) == "2026-09-03T06:15:30.000"


@pytest.mark.parametrize("heading", ["dwc:habitat", "http://rs.tdwg.org/dwc/terms/habitat", "HABITAT", " habitat"])
def test_headings_may_bear_their_namespace(station, tools, heading):
    header = HEADER.replace("habitat", heading)
    log = station.read(sheet(f"Calidris alpina,RW,b1,w1,upper mud,{SPAN},present,1", header=header))
    assert tools.stays(log) == [("dunlin", "RW", "w1", "upper mud", 270.0)]


def test_one_term_under_two_headings_is_refused():
    with pytest.raises(LogError, match=r"log.csv: the headings 'habitat' and 'dwc:habitat' are the same term"):
        terms_of(["habitat", "dwc:habitat"], "log.csv")


@pytest.mark.parametrize(("status", "row"), [("absent", 2), ("notDetected", 2), ("ABSENT", 2), ("not detected", 2)])
def test_an_absence_is_effort_not_use(station, tools, status, row):
    log = station.read(
        sheet(
            f"Tringa totanus,RW,b1,w1,upper sand,{SPAN},{status},1",
            f"Calidris alpina,RX,b2,w1,upper sand,{SPAN},Detected,2",
        )
    )
    assert tools.entries(log) == [(row, "occurrenceStatus", status, "set_aside")]
    assert log.ledger.entries[0].reason == "absence"
    assert log.ledger.entries[0].milliseconds == 270_000
    assert tools.rows(log) == {"used": 1, "set_aside": 1}


def test_an_unknown_status_stops_the_work(station, tools):
    log = station.read(sheet(f"Calidris alpina,RW,b1,w1,upper sand,{SPAN},maybe,1"))
    assert tools.entries(log) == [(2, "occurrenceStatus", "maybe", "stop")]
    assert "neither present nor absent" in tools.problems(log, 2)[0]


def test_an_absence_is_a_scan_without_animals(station, tools):
    header = "vernacularName,eventID,locality,eventDate,individualCount,occurrenceStatus"
    log = station.read(
        sheet(
            "dunlin,s1,upper sand,2026-09-03T08:00Z,3,present",
            "dunlin,s1,upper mud,2026-09-03T08:00Z,,absent",
            "redshank,s1,upper mud,2026-09-03T08:00Z,,present",
            header=header,
        ),
        rule="scans",
        unit="session",
        columns='animal = ""',
    )
    assert list(zip(log.visits["zone"], log.visits["amount"], strict=True)) == [("upper sand", 3), ("upper mud", 1)]
    assert (4, "individualCount", "", "flagged") in tools.entries(log)
    assert tools.rows(log) == {"used": 3}


def test_an_instant_and_a_sample_size_make_a_bout(station, tools):
    header = "vernacularName,organismID,habitat,eventDate,sampleSizeValue,sampleSizeUnit"
    log = station.read(
        sheet(
            "dunlin,RW,upper sand,2026-09-03T08:00:00+02:00,1.5,minutes",
            "dunlin,RX,upper mud,2026-09-03T09:00:00+02:00,200,square metre",
            header=header,
        )
    )
    assert tools.stays(log) == [("dunlin", "RW", "RW", "upper sand", 90.0)]
    assert tools.entries(log, 3) == [(3, "end", "", "set_aside")]


def test_a_local_start_and_a_sample_size_cross_the_missing_hour(station, tools):
    header = "vernacularName,organismID,habitat,eventDate,sampleSizeValue,sampleSizeUnit"
    log = station.read(
        sheet("dunlin,RW,upper sand,2026-03-29T01:45,30,minute", header=header), logs='time_zone = "Europe/Berlin"'
    )
    assert tools.stays(log) == [("dunlin", "RW", "RW", "upper sand", 1800.0)]


def test_date_and_time_of_day_in_two_columns(station, tools):
    header = "vernacularName,organismID,habitat,eventDate,eventTime"
    log = station.read(sheet("dunlin,RW,upper sand,2026-09-03,08:00:00Z/08:00:30Z", header=header))
    assert tools.stays(log) == [("dunlin", "RW", "RW", "upper sand", 30.0)]


def test_a_date_alone_is_never_a_length(station, tools):
    header = "vernacularName,organismID,habitat,eventDate"
    log = station.read(sheet("dunlin,RW,upper sand,2026-09-03/2026-09-05", header=header))
    assert len(log.visits) == 0
    assert {action for *_, action in tools.entries(log)} == {"stop"}


def test_zones_come_from_the_first_place_that_is_filled_and_the_choice_is_said(station, tools):
    header = "vernacularName,organismID,habitat,locationID,locality,eventDate"
    log = station.read(sheet(f"dunlin,RW,,upper mud,a pole,{SPAN}", header=header))
    assert [stay[3] for stay in tools.stays(log)] == ["upper mud"]
    assert tools.entries(log) == [(1, "zone", "locationID", "flagged")]
    assert "not from 'locality'; set `logs.columns.zone`" in tools.problems(log, 1)[0]
    chosen = station.read(sheet(f"dunlin,RW,,a pole,upper sand,{SPAN}", header=header), columns='zone = "locality"')
    assert [stay[3] for stay in tools.stays(chosen)] == ["upper sand"]
    assert tools.entries(chosen) == []


@pytest.mark.parametrize(
    ("header", "row", "message"),
    [
        ("vernacularName,organismID,eventDate", f"dunlin,RW,{SPAN}", "nothing tells the zone"),
        ("organismID,habitat,eventDate", f"RW,upper sand,{SPAN}", "nothing tells the species"),
        ("vernacularName,eventID,habitat,eventDate", f"dunlin,w1,upper sand,{SPAN}", 'Set `logs.columns.animal` to ""'),
    ],
)
def test_what_a_log_cannot_do_without(station, header, row, message):
    with pytest.raises(LogError, match=r"log\.csv: line 1") as caught:
        station.read(sheet(row, header=header))
    assert message in str(caught.value)


def test_sessions_stand_in_where_animals_are_not_told_apart(station, tools):
    header = "vernacularName,eventID,habitat,eventDate"
    log = station.read(sheet(f"dunlin,w1,upper sand,{SPAN}", header=header), columns='animal = ""', unit="session")
    assert tools.stays(log) == [("dunlin", "w1", "w1", "upper sand", 270.0)]


@pytest.mark.parametrize(
    ("science", "common", "author", "doubt", "species"),
    [
        ("Calidris alpina", "", "", "", "dunlin"),
        ("calidris  alpina", "", "", "", "dunlin"),
        ("Calidris alpina (Linnaeus, 1758)", "", "(Linnaeus, 1758)", "", "dunlin"),
        ("", "dunlin", "", "", "dunlin"),
        ("Calidris alpina", "Alpenstrandläufer", "", "", "dunlin"),
        ("Calidris alpina arctica", "dunlin", "", "", "dunlin"),
        ("Calidris alpina (Linnaeus, 1758)", "", "", "", None),
        ("Calidris alpina", "", "", "cf.", None),
        ("Calidris alpina", "redshank", "", "", None),
    ],
)
def test_species_by_either_name_never_by_guess(station, tools, science, common, author, doubt, species):
    stream = io.StringIO()
    header = ["scientificName", "vernacularName", "scientificNameAuthorship", "identificationQualifier"]
    csv.writer(stream).writerows(
        [[*header, "organismID", "habitat", "eventDate"], [science, common, author, doubt, "RW", "upper sand", SPAN]]
    )
    log = station.read({"log.csv": stream.getvalue()})
    if species is not None:
        assert log.visits["species"].tolist() == [species]
    else:
        assert len(log.visits) == 0
        assert {action for *_, action in tools.entries(log)} == {"stop"}


def test_one_occurrence_uploaded_twice_counts_once(station, tools):
    row = f"Calidris alpina,RW,b1,w1,upper sand,{SPAN},present,urn:1"
    log = station.read(sheet(row, row))
    assert tools.entries(log) == [(3, "occurrenceID", "urn:1", "set_aside")]
    assert tools.problems(log, 3) == ["repeats log.csv, row 2, exactly"]
    other = station.read(sheet(row, row.replace("upper sand", "upper mud")))
    assert tools.entries(other) == [(3, "occurrenceID", "urn:1", "stop")]


def test_a_group_under_one_organism_id_is_flagged(station, tools):
    header = "vernacularName,organismID,organismScope,habitat,eventDate"
    log = station.read(sheet(f"dunlin,flock 1,pack,upper sand,{SPAN}", header=header))
    assert tools.entries(log) == [(2, "organismScope", "pack", "flagged")]


def workbook(*rows):
    stream = io.BytesIO()
    book = openpyxl.Workbook()
    for row in rows:
        book.active.append(row)
    book.save(stream)
    return stream.getvalue()


@pytest.mark.parametrize("name", ["log.csv", "log.tsv", "semicolons.csv", "log.csv.gz", "log.xlsx"])
def test_darwin_core_in_any_form_of_table(station, tools, name):
    table = [["vernacularName", "organismID", "habitat", "eventDate"], ["dunlin", "007", "upper sand", SPAN]]
    mark = {"log.tsv": "\t", "semicolons.csv": ";"}.get(name, ",")
    text = "\n".join(mark.join(row) for row in table) + "\n"
    content = {"log.xlsx": workbook(*table), "log.csv.gz": gzip.compress(text.encode())}.get(name, text)
    assert tools.stays(station.read({name: content})) == [("dunlin", "007", "007", "upper sand", 270.0)]


def test_camtrap_dp_goes_with_the_rule_of_cameras(station):
    with pytest.raises(StudyError, match='goes with rule = "camera"'):
        station.study(station.folder(), "x.csv", form='standard = "camtrap-dp"')
