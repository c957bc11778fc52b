"""CSV described by a Table Schema and a Table Dialect."""

import json

import pytest

from niche.errors import LogError
from niche.logs.standards.descriptors import Field
from niche.logs.standards.values import converter

COLUMNS = 'species = "species"\nanimal = "bird"\nsession = ""\nzone = "zone"\nstart = "start"\nend = "end"'
FIELDS = [
    {"name": "species", "type": "string"},
    {"name": "bird", "type": "string", "constraints": {"required": True, "pattern": "R[A-Z]"}},
    {"name": "zone", "type": "string"},
    {"name": "start", "type": "datetime"},
    {"name": "end", "type": "datetime"},
]
ROW = "dunlin,RW,upper sand,2026-09-03T08:00:00Z,2026-09-03T08:10:00Z"
HEADER = "species,bird,zone,start,end"


def schema(**changes):
    fields = [{**field, **changes.get(field["name"], {})} for field in FIELDS]
    return {"fields": fields, **changes.get("top", {})}


@pytest.fixture
def read(station):
    def reader(text, descriptor, *, columns=COLUMNS, logs="", unit="animal"):
        content = {"log.csv": text, "table.json": json.dumps(descriptor)}
        return station.read(content, form='descriptor = "table.json"', columns=columns, logs=logs, unit=unit)

    return reader


def lines(*rows, header=HEADER):
    return "\n".join([header, *rows]) + "\n"


STAY = [("dunlin", "RW", "RW", "upper sand", 600.0)]


@pytest.mark.parametrize(
    "descriptor",
    [
        schema(),
        {"schema": schema()},
        {"name": "log", "path": "log.csv", "schema": schema(), "dialect": {}},
        {"resources": [{"name": "log", "path": "log.csv", "type": "table", "schema": schema()}]},
        {
            "resources": [
                {"name": "x", "path": "x.csv", "type": "table"},
                {"name": "log", "path": "log.csv", "schema": schema()},
            ]
        },
        {"resources": [{"name": "log", "path": ["log.csv"], "profile": "tabular-data-resource", "schema": schema()}]},
    ],
    ids=["schema", "schema and dialect", "resource", "package", "one of two by path", "version 1"],
)
def test_every_form_of_descriptor(read, tools, descriptor):
    assert tools.stays(read(lines(ROW), descriptor)) == STAY


@pytest.mark.parametrize(
    ("text", "dialect"),
    [
        (lines(ROW).replace(",", ";"), {"delimiter": ";"}),
        (lines(ROW).replace(",", "\t"), {"delimiter": "\t"}),
        (lines(ROW.replace("upper sand", "'upper sand'")), {"quoteChar": "'"}),
        (lines(ROW).replace(",", ", "), {"skipInitialSpace": True}),
        ("# kept by hand, \"and so on\n" + lines(ROW, "# a break"), {"commentChar": "#"}),
        ("flat,,,,\n" + lines(ROW), {"commentRows": [1]}),
        ("flat,,,,\n" + lines(ROW), {"headerRows": [2]}),
        (ROW + "\n", {"header": False}),
        (lines(ROW.replace("RW", r"R\,W").replace(r"R\,W", "RW")), {"escapeChar": "\\", "doubleQuote": False}),
        (",,,,\n".join(["species,bird,zone,start,end\n", ""]) + ROW + "\n", {"headerRows": [1, 2], "headerJoin": "_"}),
    ],
)  # fmt: skip
def test_every_part_of_a_dialect(read, tools, text, dialect):
    log = read(text, {"schema": schema(), "dialect": dialect})
    assert tools.stays(log) == STAY
    assert [e for e in log.ledger.entries if e.action == "stop"] == []


def test_rows_keep_their_line_below_comments_and_line_breaks_in_cells(read):
    text = (
        "# one\nspecies,bird,zone,start,end,notes\n# two\n"
        + ROW
        + ',"a\nb"\n# "three\n'
        + ROW.replace("RW", "RX")
        + ",\n"
    )
    log = read(text, {"dialect": {"commentChar": "#"}, "schema": schema(top={"fieldsMatch": "subset"})})
    assert log.visits["row"].tolist() == [4, 7]


def test_ragged_and_blank_rows_are_accounted_for(read, tools):
    log = read(lines(ROW, "dunlin,RX,upper sand", "", ROW + ",more"), {"schema": schema()})
    assert tools.stays(log) == STAY
    assert tools.entries(log, 3) == [(3, "", "dunlin RX upper sand", "stop")]
    assert tools.problems(log, 5)[0].startswith("6 cells where the header has 5")
    assert tools.rows(log) == {"used": 1, "set_aside": 1, "stop": 2}


def test_a_header_in_two_rows_is_joined(read, tools):
    text = "bird,bird,where,watch,watch\nspecies,ring,zone,start,end\n" + ROW + "\n"
    columns = 'species = "bird/species"\nanimal = "bird/ring"\nsession = ""\nzone = "where/zone"\n'
    columns += 'start = "watch/start"\nend = "watch/end"'
    log = read(text, {"dialect": {"headerRows": [1, 2], "headerJoin": "/"}}, columns=columns)
    assert tools.stays(log) == STAY
    assert log.visits["row"].tolist() == [3]


@pytest.mark.parametrize(
    ("form", "written", "found"),
    [
        ({"type": "number", "decimalChar": ","}, "2,5", "2.5"),
        ({"type": "number", "decimalChar": ",", "groupChar": "."}, "1.234,5", "1234.5"),
        ({"type": "number", "decimalChar": ",", "groupChar": "."}, "1.5", None),
        ({"type": "number", "decimalChar": ","}, "2.5", None),
        ({"type": "number", "groupChar": " "}, "12 345", "12345"),
        ({"type": "number", "groupChar": ","}, "12,34", None),
        ({"type": "number", "bareNumber": False}, "€ 95.5 a day", "95.5"),
        ({"type": "number", "bareNumber": False}, "-3 %", "-3"),
        ({"type": "number"}, "95 s", None),
        ({"type": "number"}, "1e3", "1000"),
        ({"type": "number"}, ".5", "0.5"),
        ({"type": "number"}, "NaN", None),
        ({"type": "number"}, "", None),
        ({"type": "number"}, "٣", None),
        ({"type": "integer"}, "12", "12"),
        ({"type": "integer"}, "12.0", None),
        ({"type": "integer", "groupChar": "."}, "1.200", "1200"),
        ({"type": "boolean", "trueValues": ["ja"], "falseValues": ["nein"]}, "ja", "true"),
        ({"type": "boolean"}, "FALSE", "false"),
        ({"type": "boolean"}, "yes", None),
        ({"type": "datetime", "format": "%d.%m.%Y %H:%M"}, "03.09.2026 08:15", "2026-09-03T08:15:00"),
        ({"type": "datetime", "format": "%d.%m.%Y %H:%M"}, "09/03/2026 08:15", None),
        ({"type": "datetime", "format": "%Y-%m-%dT%H:%M:%S%z"}, "2026-09-03T08:15:00+0200", "2026-09-03T08:15:00+02:00"),
        ({"type": "datetime", "format": "%d.%m.%Y %H:%M:%S.%f"}, "03.09.2026 08:15:00.250", "2026-09-03T08:15:00.250"),
        ({"type": "datetime", "format": "%Q"}, "1", None),
        ({"type": "date", "format": "%d.%m.%Y"}, "03.09.2026", "2026-09-03"),
        ({"type": "time", "format": "%I:%M %p"}, "01:05 PM", "13:05:00"),
        ({"type": "datetime", "format": "default"}, "2026-09-03T08:15:00Z", "2026-09-03T08:15:00Z"),
        ({"type": "string", "categories": {"1": "upper sand"}}, "1", "upper sand"),
        ({"type": "string", "categories": {"1": "upper sand"}}, "2", None),
    ],
)  # fmt: skip
def test_cells_of_every_type(form, written, found):
    names = {"decimalChar": "decimal_char", "groupChar": "group_char", "bareNumber": "bare_number",
             "trueValues": "true_values", "falseValues": "false_values"}  # fmt: skip
    field = Field("x", **{names.get(key, key): value for key, value in form.items()})
    cell = converter(field, keep_times=False)(written)
    assert (None if cell.problem else cell.text) == found
    assert cell.problem is None or cell.text == written


def test_a_pattern_of_the_schema_is_held_to(read, tools):
    form = {"format": "%d.%m.%Y %H:%M"}
    log = read(
        lines("dunlin,RW,upper sand,03.09.2026 08:00,03.09.2026 08:10", "dunlin,RX,upper sand,13/09/2026 08:00,"),
        {"schema": schema(start=form, end=form)},
        logs='time_zone = "Europe/Berlin"',
    )
    assert tools.stays(log) == STAY
    assert tools.entries(log) == [(3, "start", "13/09/2026 08:00", "stop")]
    assert "does not fit the pattern '%d.%m.%Y %H:%M' of the schema" in tools.problems(log, 3)[0]


def test_missing_values_and_their_labels(read, tools):
    text = lines(ROW.replace("upper sand", "OOS"), ROW.replace("upper sand", "-").replace("T08", "T09"))
    labels = {"missingValues": [{"value": "-", "label": "not recorded"}, {"value": "OOS", "label": "Out of sight"}]}
    log = read(text, {"schema": schema(zone=labels)})
    assert [(stay[3], stay[4]) for stay in tools.stays(log)] == [("", 600.0), ("", 600.0)]
    # Out of sight is declared; a zone not recorded is worth a look.
    assert tools.entries(log) == [(3, "zone", "", "flagged")]


def test_a_missing_value_of_the_schema_holds_for_every_field(read, tools):
    log = read(lines(ROW.replace("RW", "NA")), {"schema": schema(top={"missingValues": ["", "NA"]})})
    assert tools.entries(log) == [(2, "bird", "NA", "stop")]
    assert "the schema requires a value" in tools.problems(log, 2)[0]


def test_the_null_sequence_of_the_dialect_is_an_empty_cell(read, tools):
    log = read(lines(ROW.replace("RW", "NULL")), {"schema": schema(), "dialect": {"nullSequence": "NULL"}})
    assert tools.entries(log) == [(2, "bird", "", "stop")]


@pytest.mark.parametrize(
    ("field", "rule", "row", "value", "words"),
    [
        ("zone", {"enum": ["upper mud"]}, ROW, "upper sand", "not one of the values that the schema allows: upper mud"),
        ("bird", {"pattern": "[0-9]+"}, ROW, "RW", "does not match the pattern '[0-9]+'"),
        ("bird", {"minLength": 3}, ROW, "RW", "has 2 characters; minLength of the schema is 3"),
        ("bird", {"maxLength": 1}, ROW, "RW", "has 2 characters; maxLength of the schema is 1"),
    ],
)
def test_constraints_are_told_with_row_and_rule(read, tools, field, rule, row, value, words):
    log = read(lines(row), {"schema": schema(**{field: {"constraints": rule}})})
    assert tools.entries(log) == [(2, field, value, "stop")]
    assert words in tools.problems(log, 2)[0]
    assert log.ledger.entries[0].reason == "breaks the schema"


@pytest.mark.parametrize(
    ("rule", "value", "fits"),
    [({"minimum": 0}, "-1", False), ({"minimum": 0}, "0", True), ({"exclusiveMinimum": 0}, "0", False),
     ({"maximum": "10"}, "11", False), ({"exclusiveMaximum": 10}, "9", True), ({"enum": [1, 2]}, "2", True),
     ({"enum": [1, 2]}, "3", False)],
)  # fmt: skip
def test_bounds_of_numbers(read, tools, rule, value, fits):
    described = schema(top={"fieldsMatch": "subset"})
    described["fields"].append({"name": "wind", "type": "integer", "constraints": rule})
    log = read(lines(f"{ROW},{value}", header=f"{HEADER},wind"), {"schema": described})
    assert tools.stays(log) == STAY  # the study does not use the column: the row stays, and is flagged
    assert tools.entries(log) == ([] if fits else [(2, "wind", value, "flagged")])


def test_the_policy_for_unreadable_cells_holds(read, tools):
    described = {"schema": schema(bird={"constraints": {"pattern": "[0-9]+"}})}
    log = read(lines(ROW), described, logs='[logs.problems]\nunreadable = "set_aside"')
    assert tools.entries(log) == [(2, "bird", "RW", "set_aside")]


@pytest.mark.parametrize(
    ("match", "header", "fits"),
    [
        ("exact", HEADER, True), ("exact", "bird,species,zone,start,end", False), ("exact", HEADER + ",notes", False),
        ("equal", "bird,species,zone,start,end", True), ("equal", HEADER + ",notes", False),
        ("subset", HEADER + ",notes", True), ("subset", "species,bird,zone,start", False),
        ("superset", "species,bird,zone,start", True), ("superset", HEADER + ",notes", False),
        ("partial", "species,notes", True), ("partial", "notes", False),
    ],
)  # fmt: skip
def test_fields_and_headings_go_together_as_the_schema_says(read, match, header, fits):
    described = {"schema": schema(top={"fieldsMatch": match})}
    columns = "\n".join(f'{name} = "species"' for name in ("species", "animal", "zone", "start", "end"))
    if fits:
        assert len(read(header + "\n", described, columns=columns).visits) == 0
    else:
        with pytest.raises(LogError, match=f"fieldsMatch '{match}'"):
            read(header + "\n", described, columns=columns)


def test_categories_give_zones_by_their_labels(read, tools):
    codes = {"categories": [{"value": "1", "label": "upper sand"}, {"value": "2", "label": "upper mud"}],
             "categoriesOrdered": True}  # fmt: skip
    log = read(lines(ROW.replace("upper sand", "1"), ROW.replace("upper sand", "5")), {"schema": schema(zone=codes)})
    assert tools.stays(log) == STAY
    assert tools.entries(log) == [(3, "zone", "5", "stop")]


@pytest.mark.parametrize(
    ("descriptor", "message"),
    [
        ({"fields": []}, "fields: missing or empty"),
        ({"fields": [{"type": "string"}]}, r"fields\[1\]\.name: missing"),
        ({"fields": [{"name": "a", "type": "text"}]}, r"fields\[1\]\.type: found 'text'; allowed: string"),
        ({"fields": [{"name": "a"}, {"name": "a"}]}, "'a' stands twice"),
        ({"fields": [{"name": "a", "constraints": {"pattern": "("}}]}, "not a pattern"),
        ({"schema": "schema.json"}, "write the schema out here"),
        ({"schema": "http://example.org/schema.json"}, "write the schema out here"),
        ({"dialect": {"delimiter": ";;"}}, "delimiter is ';;'"),
        ({"dialect": {"delimiter": '"'}}, "are the same character"),
        ({"dialect": {"headerRows": [0]}}, "row numbers from 1"),
        ({"dialect": {"headerRows": "1"}}, "a list expected"),
        ({"encoding": "zip_codec"}, "encoding is 'zip_codec'"),
        ({"resources": []}, "describes 0 tables"),
        ({"resources": [{"path": "a.csv", "type": "table"}, {"path": "b.csv", "type": "table"}]}, "describes 2 tables"),
        ({"resources": "log.csv"}, "a list expected"),
        ([], "a JSON object"),
    ],
)
def test_descriptors_that_break_the_standard(read, descriptor, message):
    with pytest.raises(LogError, match=message):
        read(lines(ROW), descriptor)
