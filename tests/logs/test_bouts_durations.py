"""Bouts with a start and a duration."""

import pytest

HEADER = ("species", "animal", "session", "zone", "start", "duration")
COLUMNS = 'duration = "duration"'
CENTURY_DAYS = 100 * 366


def read(field, *durations, unit="s", problems=""):
    """Read bouts of these durations, each on a day of its own."""
    rows = [[*field.bout(day=f"2026-09-{day:02d}")[:-1], written] for day, written in enumerate(durations, 1)]
    log = f'duration_unit = "{unit}"'
    return field.read(field.text(*rows, header=HEADER), columns=COLUMNS, logs=log, problems=problems)


@pytest.mark.parametrize(
    ("written", "unit", "milliseconds"),
    [
        ("42", "s", 42_000), ("42.5", "s", 42_500), ("0.001", "s", 1), (" 7 ", "s", 7_000), ("007", "s", 7_000),
        ("\u00a07", "s", 7_000), ("1.0009", "s", 1_001), ("1.0004", "s", 1_000), ("86400", "s", 86_400_000),
        ("2", "min", 120_000), ("0.5", "min", 30_000), ("1.25", "h", 4_500_000), ("24", "h", 86_400_000),
        ("0.1", "h", 360_000), ("0.07", "h", 252_000), ("4.1", "min", 246_000),
    ],
)  # fmt: skip
def test_a_duration_is_read_in_its_unit_to_the_millisecond(field, written, unit, milliseconds):
    log = read(field, written, unit=unit)
    assert (log.visits["end"] - log.visits["start"]).tolist() == [milliseconds]
    assert field.rows(log) == {"used": 1}
    long = [(2, "duration", written, "long bout", "flagged")] if milliseconds > 12 * 3_600_000 else []
    assert field.entries(log) == long


def test_seconds_are_the_unit_unless_said_otherwise(field):
    log = field.read(field.text([*field.bout()[:-1], "3"], header=HEADER), columns=COLUMNS)
    assert (log.visits["end"] - log.visits["start"]).tolist() == [3_000]


@pytest.mark.parametrize("written", ["0", "0.0", "0.0004", "-0"])
def test_no_duration_is_kept_and_flagged(field, written):
    log = read(field, written)
    assert field.rows(log) == {"used": 1}
    assert field.entries(log) == [(2, "duration", written, "zero duration", "flagged")]


@pytest.mark.parametrize("policy", ["stop", "set_aside"])
@pytest.mark.parametrize("written", ["-1", "-0.5", "-99999999999999"])
def test_a_negative_duration_follows_the_policy_for_an_end_before_the_start(field, written, policy):
    log = read(field, written, "5", problems=f'end_before_start = "{policy}"')
    assert field.rows(log) == {policy: 1, "used": 1}
    assert field.entries(log) == [(2, "duration", written, "end before start", policy)]
    assert "not negative" in field.problem(log, 2)
    assert log.ledger.sums()[0] == ("read", 2, 5_000)


@pytest.mark.parametrize("policy", ["stop", "set_aside"])
@pytest.mark.parametrize(
    "written",
    [
        "x", "4 min", "4,5", "1:30", "00:01:30", "1e3", "nan", "inf", "1_000", "+5", "5.", ".5", "--5", "٣", "0x10",
        "9" * 16, "1e999",
    ],
)  # fmt: skip
def test_what_is_no_plain_number_follows_the_policy_for_the_unreadable(field, written, policy):
    log = read(field, "5", written, problems=f'unreadable = "{policy}"')
    # What could be told of the form is told: which key to set. A form that was not declared is a question about the whole
    # log, which no policy for single rows answers.
    form = {"4,5": "logs.file.decimal", "1:30": '"h:m" or "m:s"', "00:01:30": '"h:m:s"'}
    policy = "stop" if written in ("1:30", "00:01:30") else policy
    assert field.rows(log) == {policy: 1, "used": 1}
    assert field.entries(log) == [(3, "duration", written, "unreadable duration", policy)]
    assert form.get(written, "plain number") in field.problem(log, 3)


@pytest.mark.parametrize("blank", ["", "  "])
def test_a_missing_duration_sets_the_row_aside(field, blank):
    log = read(field, blank)
    assert [entry[3:] for entry in field.entries(log)] == [("duration missing", "set_aside")]


def test_a_duration_beyond_a_century_is_a_slip(field):
    log = read(field, str(CENTURY_DAYS * 24 + 1), "9" * 15, unit="h")
    assert field.rows(log) == {"stop": 2}
    assert "longer than a century; is the unit 'h' right?" in field.problem(log, 2)
    assert log.ledger.sums()[0] == ("read", 2, 0)


def test_a_hundred_thousand_decimals_are_still_a_number(field):
    log = read(field, "1." + "0" * 100_000)
    assert (log.visits["end"] - log.visits["start"]).tolist() == [1_000]


def test_an_unreadable_start_takes_the_row_with_its_duration(field):
    rows = [[*field.bout("x")[:-1], "5"]]
    log = field.read(field.text(*rows, header=HEADER), columns=COLUMNS)
    assert field.rows(log) == {"stop": 1}
    assert log.ledger.sums()[0] == ("read", 1, 0)


def test_durations_overlap_like_ends(field):
    rows = [
        [*field.bout("08:00")[:-1], "600"],
        [*field.bout("08:09:59", zone="sand")[:-1], "60"],
        [*field.bout("08:11")[:-1], "9"],
    ]
    log = field.read(field.text(*rows, header=HEADER), columns=COLUMNS)
    assert field.rows(log) == {"used": 2, "stop": 1}
    assert field.entries(log)[0][0] == 3
