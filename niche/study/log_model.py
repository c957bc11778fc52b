"""The ``[logs]`` table of a study file: where the logs are, how they are written, what one row is worth."""

from __future__ import annotations

from typing import Annotated, Any, Literal, Self

from pydantic import Field, field_validator, model_validator

from niche.study.names import named_twice
from niche.study.rule_columns import with_rule_columns
from niche.study.rule_needs import check_needs
from niche.study.section import Positive, Section, Text, Texts
from niche.study.standard_columns import with_standard_columns
from niche.study.time_pattern import check_pattern
from niche.study.time_zone import time_zone

Policy = Literal["stop", "set_aside"]
RuleName = Literal["bouts", "switches", "scans", "reads", "camera", "tallies", "one_zero"]

Measure = Literal["time", "scans", "events", "counts", "percent", "occurrences"]
"""What use of a zone is measured in: milliseconds, or how many of something."""

CLOCK_FORMATS = ("iso", "spreadsheet", "unix_seconds", "unix_milliseconds", "elapsed", "frames", "decimal_hours")
"""Ways to write times that have a name; any other is a pattern."""

STANDARD_COLUMNS = ("species", "animal", "session", "zone", "start", "end", "duration")


class Columns(Section):
    """Heading in the logs of each thing the program can use; a rule says which it needs.

    Empty text (``animal = ""``) says that the logs have no such column.
    """

    species: Text | None = "species"
    animal: Text | None = "animal"
    session: Text | None = None
    zone: Text | None = "zone"
    date: Text | None = None
    start: Text | None = None
    end: Text | None = None
    duration: Text | None = None
    time: Text | None = None
    count: Text | None = None
    observer: Text | None = None
    site: Text | None = None
    tag: Text | None = None
    antenna: Text | None = None
    deployment: Text | None = None
    kind: Text | None = None
    """Camera: what an event shows; every other word than ``animal`` is set aside."""

    @field_validator("*", mode="before")
    @classmethod
    def _empty_is_absent(cls, heading: Any) -> Any:
        return None if heading == "" else heading


class FileForm(Section):
    """How the files are written. What is not given is found where that is unambiguous, and noted."""

    encoding: Literal["utf-8", "utf-16", "latin-1", "windows-1252"] | None = None
    delimiter: Annotated[str, Field(min_length=1, max_length=1)] | None = None
    """The sign between cells; found for comma, semicolon and tab."""
    decimal: Literal[".", ","] | None = None
    header_row: Annotated[int, Field(ge=1, le=1000)] | None = None
    """Row of the header, as a spreadsheet counts; rows above it are not read."""
    header_rows: Literal[1, 2] = 1
    """Two rows are joined by a space; an empty cell of the upper row has the name to its left."""
    units_row: bool = False
    """Whether the row below the header gives units."""
    totals: Policy = "stop"
    """What becomes of rows whose species, animal, session, zone, tag or date reads total, subtotal, sum or mean."""
    sheet: Text | None = None
    database: Text | None = None
    """URL of a database, SQLite or PostgreSQL, which is only ever read."""
    table: Text | None = None
    query: Text | None = None
    descriptor: Text | None = None
    standard: Literal["darwin-core", "camtrap-dp"] | None = None

    @field_validator("delimiter")
    @classmethod
    def _parts_cells(cls, sign: str | None) -> str | None:
        if sign is not None and (sign.isalnum() or sign in '"\r\n\0.-:+ ' or not (sign.isprintable() or sign == "\t")):
            raise ValueError(f"{sign!r} cannot part cells; give a sign that no cell holds, such as ; or \\t")
        return sign

    @model_validator(mode="after")
    def _one_source(self) -> Self:
        if self.database is None and (self.table or self.query):
            raise ValueError("`table` and `query` go with `database`; give its URL, such as sqlite:///watch.sqlite")
        if self.database is not None and (self.table is None) == (self.query is None):
            raise ValueError("with a database give either `table` or `query`, and not both")
        return self


class Clock(Section):
    """How times are written, where that is not ISO 8601; one way for all files, held to strictly.

    ``format`` is ``iso``, ``spreadsheet`` (days since the epoch), ``unix_seconds``, ``unix_milliseconds``, ``elapsed``
    (since the session's start, in ``logs.duration_unit``), ``frames`` (the same, in frames), ``decimal_hours`` (of the
    day in ``logs.columns.date``), or a pattern of strptime codes such as ``%d.%m.%Y %H:%M``. With ``logs.columns.date``
    a pattern is that of the date, a space, and the time of day.
    """

    format: Text = "iso"
    epoch: Literal[1900, 1904] = 1900
    frames_per_second: Positive | None = None
    midnight: Literal["next_day", "stop"] = "next_day"
    longest_bout: Positive = 12.0
    """Hours; a longer bout is flagged, and an end before its start is carried past midnight only if the bout is then
    no longer than this."""
    repeated_hour: Literal["stop", "earlier", "later"] = "stop"
    first_year: int | None = None
    last_year: int | None = None

    @model_validator(mode="after")
    def _can_be_held_to(self) -> Self:
        if "%" in self.format:
            check_pattern(self.format)
        elif self.format not in CLOCK_FORMATS:
            raise ValueError(
                f"format is {self.format!r}; allowed: {', '.join(CLOCK_FORMATS)}, or a pattern such as %d.%m.%Y %H:%M"
            )
        if self.format == "frames" and self.frames_per_second is None:
            raise ValueError("format is 'frames': give `frames_per_second` too")
        if self.first_year is not None and self.last_year is not None and self.first_year > self.last_year:
            raise ValueError(f"first_year is {self.first_year} and last_year {self.last_year}: the first comes first")
        return self


class Sessions(Section):
    """The sessions table: a CSV of session, start, end and, if known, observer; an empty end is not known."""

    file: Text


class Tags(Section):
    """The tag table: a CSV of tag, animal, species, valid_from, valid_to; an empty end is open."""

    file: Text


class Reads(Section):
    """How reads of tags are built into visits: reads of one animal in one zone, each within the gap of the one before."""

    gap: Positive
    """Seconds without a read after which a visit has ended; no default, for it decides the result."""
    gaps: dict[str, Positive] = {}
    """Another gap for some antennas."""
    zones: dict[str, Text] = {}
    """Zone of each antenna, where the log has no zone column."""
    test_tags: Texts = ()
    lone: Literal["keep", "set_aside"] = "set_aside"
    """What becomes of a read without another of the same animal in the same zone within the gap."""


class Camera(Section):
    """How camera events are counted."""

    gap: Annotated[float, Field(ge=0, allow_inf_nan=False)] = 1800.0
    """Seconds between events of a species at a deployment below which they are one. 30 min is a convention."""
    deployments: Text | None = None
    """A CSV of deployment, zone, start, end."""
    least_probability: Annotated[float, Field(ge=0, le=1)] | None = None
    """Camtrap DP: classifications by machine that are less probable are set aside."""


class Tallies(Section):
    """What the numbers under the zone headings are."""

    unit: Literal["s", "min", "h", "percent", "count"]
    adds_to_100: Literal["stop", "keep"] = "stop"
    """What to do where rows add up to 100 though the unit is not percent; ``keep`` says that they are no percentages."""


class Aliases(Section):
    """Spellings that stand for listed names: accepted by a person, never guessed."""

    zones: dict[str, Text] = {}
    species: dict[str, Text] = {}
    animals: dict[str, Text] = {}


class Policies(Section):
    """What to do with what the program will not decide about by itself."""

    unknown_zone: Policy = "stop"
    unknown_species: Policy = "stop"
    unreadable: Policy = "stop"
    end_before_start: Policy = "stop"
    overlap: Literal["stop", "set_aside", "trim_earlier", "split"] = "stop"
    """One animal in two places at once. ``set_aside`` takes out the later bout; ``trim_earlier`` ends the earlier one
    where the later starts; ``split`` lets the later one take over in the middle of the time they share."""
    two_observers: Literal["stop", "set_aside_later"] = "stop"
    """Two observers with one animal at the same time, where ``logs.observer`` does not decide. ``set_aside_later`` uses
    the rows of the one who had the animal first."""
    last_state_open: Policy = "set_aside"
    nameless_animals: Policy = "stop"
    """Animals with a label of ``logs.nameless``, where the animal is the sampling unit."""
    reused_animals: Literal["stop", "keep_apart_by_site", "same_animal"] = "stop"
    """One animal name at several sites over the same days."""


class Logs(Section):
    """Where the logs are and how to read them."""

    files: Annotated[tuple[Text, ...], Field(strict=False)] = ()
    rule: RuleName = "bouts"
    columns: Columns = Columns()
    file: FileForm = FileForm()
    clock: Clock = Clock()
    time_zone: Text | None = None
    duration_unit: Literal["s", "min", "h", "d", "h:m:s", "h:m", "m:s", "frames"] = "s"
    out_of_sight: Texts = ()
    nameless: Texts = ("unk", "unknown", "?", "unidentified", "none")
    observer: Text | None = None
    """Where two observers logged the same animal at the same time: whose rows count."""
    sessions: Sessions | None = None
    tags: Tags | None = None
    reads: Reads | None = None
    camera: Camera = Camera()
    tallies: Tallies | None = None
    aliases: Aliases = Aliases()
    problems: Policies = Policies()

    @property
    def measure(self) -> Measure:
        """What use is measured in under this rule."""
        if self.rule in ("bouts", "switches", "reads"):
            return "time"
        if self.rule == "tallies" and self.tallies is not None:
            return {"percent": "percent", "count": "counts"}.get(self.tallies.unit, "time")  # type: ignore[return-value]
        return {"scans": "scans", "camera": "events"}.get(self.rule, "occurrences")  # type: ignore[return-value]

    def tells(self, unit: Literal["animal", "session"]) -> bool:
        """Whether the logs give every visit a sampling unit of this kind.

        An animal can be known by its tag; a camera's deployment is a session; a tally sheet without animals gives each
        species one sum, which has no interval.
        """
        if getattr(self.columns, unit) is not None:
            return True
        if unit == "session":
            return self.rule == "camera"
        return self.rule == "tallies" or (
            self.rule == "reads" and (self.tags is not None or self.columns.tag is not None)
        )

    @field_validator("time_zone")
    @classmethod
    def _known_time_zone(cls, name: str | None) -> str | None:
        if name is not None:
            time_zone(name)
        return name

    @model_validator(mode="before")
    @classmethod
    def _standard_names_its_columns(cls, given: Any) -> Any:
        return with_rule_columns(with_standard_columns(given))

    @model_validator(mode="after")
    def _columns_are_apart(self) -> Self:
        if self.file.descriptor is not None or self.file.standard is not None:
            return self  # headings are the descriptor's or the standard's, and one may carry two things
        # A deployment may stand for the session, and a tag for the animal.
        named = self.columns.model_dump(exclude={"deployment", "tag", "antenna"}).values()
        if (twice := named_twice([heading for heading in named if heading is not None])) is not None:
            raise ValueError(f"the heading {twice!r} is named for two things; each has a column of its own")
        return self

    @model_validator(mode="after")
    def _has_what_the_rule_needs(self) -> Self:
        check_needs(self)
        return self
