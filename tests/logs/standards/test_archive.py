"""Darwin Core archives: hand-made, a core of events with occurrences, in a zip and in a folder."""

import pytest

from niche.errors import LogError

EVENTS = {"eventID": 0, "parentEventID": 1, "eventDate": 2, "habitat": 3, "samplingProtocol": "focal follow"}
OCCURRENCES = {"occurrenceID": 1, "scientificName": 2, "organismID": 3, "occurrenceStatus": "present"}


def span(first, last):
    return f"2026-09-03T08:{first}:00Z/2026-09-03T08:{last}:00Z"


@pytest.fixture
def files(tools):
    return {
        "meta.xml": tools.meta(("Event", "event.txt", EVENTS, 0), ("Occurrence", "occurrence.txt", OCCURRENCES, 0)),
        "event.txt": tools.tabbed(
            ["eventID", "parentEventID", "eventDate", "habitat"],
            ["campaign", r"\N", r"\N", r"\N"],
            ["watch", "campaign", span("00", "40"), "upper sand"],
            ["bout 1", "watch", span("00", "10"), ""],
            ["bout 2", "watch", span("10", "25"), "upper mud"],
            ["bout 3", "watch", span("25", "30"), r"\N"],
        ),
        "occurrence.txt": tools.tabbed(
            ["coreid", "occurrenceID", "scientificName", "organismID"],
            ["bout 1", "1", "Calidris alpina", "RW"],
            ["bout 2", "2", "Calidris alpina", "RW"],
        ),
    }


STAYS = [("dunlin", "RW", "watch", "upper mud", 900.0), ("dunlin", "RW", "watch", "upper sand", 600.0)]


def test_occurrences_have_what_their_events_and_the_events_above_say(station, tools, files):
    log = station.read({"flat.zip": tools.zipped(files)})
    assert tools.stays(log) == STAYS
    assert log.visits["file"].unique().tolist() == ["flat.zip/occurrence.txt"]
    assert log.visits["row"].tolist() == [2, 3]


def test_an_event_without_occurrence_is_effort(station, tools, files):
    log = station.read({"flat.zip": tools.zipped(files)})
    assert tools.entries(log) == [(6, "eventID", "bout 3", "set_aside")]
    assert log.ledger.entries[0].file == "flat.zip/event.txt"
    assert tools.rows(log) == {"used": 2, "set_aside": 1}
    assert [file.rows for file in log.files] == [3]


def test_a_folder_is_read_by_its_meta_xml(station, tools, files):
    log = station.read({f"archive/{name}": text for name, text in files.items()}, name="archive/meta.xml")
    assert tools.stays(log) == STAYS
    assert log.visits["file"].unique().tolist() == ["archive/occurrence.txt"]


def test_a_zip_may_hold_one_folder(station, tools, files):
    log = station.read({"flat.zip": tools.zipped({f"export/{name}": text for name, text in files.items()})})
    assert tools.stays(log) == STAYS


def test_the_meta_xml_of_a_zip_is_the_outermost(station, tools, files):
    log = station.read({"flat.zip": tools.zipped({"an older one/meta.xml": "<archive/>", **files})})
    assert tools.stays(log) == STAYS


def test_a_default_fills_the_cells_that_are_empty(station, tools):
    fields = "".join(
        f'<field index="{i}" term="{tools.dwc}{term}"{default}/>'
        for i, (term, default) in enumerate(
            [("vernacularName", ""), ("organismID", ""), ("eventDate", ""), ("habitat", ' default="middle mud"')]
        )
    )
    table = f"<files><location>o.csv</location></files>{fields}"
    text = f'<archive><core rowType="{tools.dwc}Occurrence">{table}</core></archive>'
    rows = f"dunlin,RW,{span('00', '05')},\ndunlin,RX,{span('00', '05')},upper sand\n"
    log = station.read({"a/meta.xml": text, "a/o.csv": rows}, name="a/meta.xml")
    assert [stay[3] for stay in tools.stays(log)] == ["middle mud", "upper sand"]


def test_the_digest_of_an_archive_covers_its_tables(station, tools, files):
    first = {f"a/{name}": text for name, text in files.items()}
    other = {f"b/{name}": text.replace("RW", "RX") for name, text in files.items()}
    log = station.read({**first, **other}, name=["a/meta.xml", "b/meta.xml"])
    # The descriptors are the same byte for byte; the second archive is another all the same.
    assert {stay[1] for stay in tools.stays(log)} == {"RW", "RX"}
    same = {f"b/{name}": text for name, text in files.items()}
    copy = station.read({**first, **same}, name=["a/meta.xml", "b/meta.xml"])
    assert tools.stays(copy) == STAYS
    assert tools.rows(copy) == {"used": 2, "set_aside": 4}


def test_a_date_of_the_parent_is_taken_and_said(station, tools, files):
    files["event.txt"] = files["event.txt"].replace(span("10", "25"), "")
    files["occurrence.txt"] = files["occurrence.txt"].replace("bout 1\t1", "bout 3\t1")
    log = station.read({"flat.zip": tools.zipped(files)})
    assert (5, "eventDate", "", "flagged") in tools.entries(log, file="event.txt")
    assert "that of 'watch', in which it lies, holds for it" in tools.problems(log, 5)[0]


def test_what_an_occurrence_says_itself_goes_before_its_event(station, tools, files):
    fields = {**OCCURRENCES, "habitat": 4}
    files["meta.xml"] = tools.meta(("Event", "event.txt", EVENTS, 0), ("Occurrence", "occurrence.txt", fields, 0))
    files["occurrence.txt"] = tools.tabbed(
        ["coreid", "occurrenceID", "scientificName", "organismID", "habitat"],
        ["bout 1", "1", "Calidris alpina", "RW", "middle mud"],
        ["bout 2", "2", "Calidris alpina", "RW", ""],
    )
    log = station.read({"flat.zip": tools.zipped(files)})
    assert [stay[3] for stay in tools.stays(log)] == ["middle mud", "upper mud"]


def test_an_occurrence_of_no_event_stops_the_work(station, tools, files):
    files["occurrence.txt"] += tools.tabbed(["bout 9", "3", "Tringa totanus", "RX"])
    log = station.read({"flat.zip": tools.zipped(files)})
    assert (4, "coreid", "bout 9", "stop") in tools.entries(log)


def test_ragged_and_blank_rows_are_accounted_for(station, tools, files):
    files["occurrence.txt"] += "bout 3\t3\n\t\t\t\n"
    log = station.read({"flat.zip": tools.zipped(files)})
    assert tools.entries(log, file="occurrence.txt") == [(4, "", "bout 3 3", "stop"), (5, "", "", "set_aside")]


def test_a_core_of_occurrences_carries_its_events(station, tools):
    fields = {"occurrenceID": 0, "vernacularName": 1, "organismID": 2, "eventDate": 3, "habitat": "upper sand"}
    files = {
        "meta.xml": tools.meta(("Occurrence", "occ.csv", fields, 0), terminated=",", header=0),
        "occ.csv": f"1,dunlin,RW,{span('00', '05')}\n",
    }
    log = station.read({"flat.zip": tools.zipped(files)})
    assert tools.stays(log) == [("dunlin", "RW", "RW", "upper sand", 300.0)]
    assert log.visits["row"].tolist() == [1]


def test_defaults_of_the_text_guide_hold_where_meta_xml_is_silent(station, tools):
    terms = ["vernacularName", "organismID", "eventDate", "habitat"]
    fields = "".join(f'<field index="{i}" term="{tools.dwc}{term}"/>' for i, term in enumerate(terms))
    text = (
        f'<archive xmlns="http://rs.tdwg.org/dwc/text/"><core rowType="{tools.dwc}Occurrence"><files><location>o.csv'
        f"</location></files>{fields}</core></archive>"
    )
    log = station.read(
        {"a/meta.xml": text, "a/o.csv": f'dunlin,"R,W",{span("00", "05")},upper sand\r\n'}, name="a/meta.xml"
    )
    assert tools.stays(log) == [("dunlin", "R,W", "R,W", "upper sand", 300.0)]


def test_an_event_without_occurrence_is_an_empty_scan(station, tools):
    events = {"eventID": 0, "eventDate": 1, "habitat": 2}
    fields = {"vernacularName": 1, "individualCount": 2}
    files = {
        "meta.xml": tools.meta(("Event", "e.txt", events, 0), ("Occurrence", "o.txt", fields, 0), header=0),
        "e.txt": tools.tabbed(["s1", "2026-09-03T08:00Z", "upper sand"], ["s2", "2026-09-03T09:00Z", "upper mud"]),
        "o.txt": tools.tabbed(["s1", "dunlin", "4"]),
    }
    log = station.read({"flat.zip": tools.zipped(files)}, rule="scans", unit="session", columns='animal = ""')
    assert log.visits["amount"].tolist() == [4]
    assert tools.rows(log) == {"used": 2}


@pytest.mark.parametrize(
    ("events", "message"),
    [
        ([["a", "b"], ["b", "a"]], r"parentEventID goes round in a circle: 'a' → 'b' → 'a'"),
        ([["a", "a"]], r"circle: 'a' → 'a'"),
        ([["a", ""], ["a", ""]], r"row 2: the event 'a' stands in row 1 already"),
    ],
)
def test_events_that_cannot_be_told_apart(station, tools, events, message):
    fields = {"eventID": 0, "parentEventID": 1}
    files = {
        "meta.xml": tools.meta(
            ("Event", "e.txt", fields, 0), ("Occurrence", "o.txt", {"vernacularName": 1}, 0), header=0
        ),
        "e.txt": tools.tabbed(*events),
        "o.txt": tools.tabbed(["a", "dunlin"]),
    }
    with pytest.raises(LogError, match=message):
        station.read({"flat.zip": tools.zipped(files)})


def test_a_parent_that_is_not_there_is_flagged(station, tools, files):
    files["event.txt"] = files["event.txt"].replace("watch\tcampaign", "watch\tyear 3")
    log = station.read({"flat.zip": tools.zipped(files)})
    assert (3, "parentEventID", "year 3", "flagged") in tools.entries(log)
