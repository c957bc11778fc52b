"""The ``[logs]`` table of a study file: where the logs are, how they are written, what one row is worth."""

from __future__ import annotations

from typing import Annotated, Literal, Self
from zoneinfo import ZoneInfo

from pydantic import Field, field_validator, model_validator

from niche.study.section import Positive, Section, Text, Texts

Policy = Literal["stop", "set_aside"]
RuleName = Literal["bouts", "switches", "scans", "reads", "camera", "tallies", "one_zero"]

Measure = Literal["time", "scans", "events", "counts", "percent", "occurrences"]
"""What use of a zone is measured in: milliseconds, or how many of something."""

STANDARD_COLUMNS = ("species", "animal", "session", "zone", "start", "end", "duration")


class Columns(Section):
    """Heading in the logs of each thing the program can use; a rule says which it needs."""

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


class FileForm(Section):
    """How the files are written. What is not given is found where that is unambiguous, and noted."""

    encoding: Literal["utf-8", "utf-16", "latin-1", "windows-1252"] | None = None
    delimiter: Annotated[str, Field(min_length=1, max_length=1)] | None = None
    decimal: Literal[".", ","] | None = None
    header_row: Annotated[int, Field(ge=1)] | None = None
    header_rows: Literal[1, 2] = 1
    units_row: bool = False
    totals: Policy = "stop"
    sheet: Text | None = None
    database: Text | None = None
    table: Text | None = None
    query: Text | None = None
    descriptor: Text | None = None

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
    (since the session's start, in ``logs.duration_unit``), ``frames`` (the same, in frames), or a pattern of strptime
    codes such as ``%d.%m.%Y %H:%M``.
    """

    format: Text = "iso"
    epoch: Literal[1900, 1904] = 1900
    frames_per_second: Positive | None = None
    midnight: Literal["next_day", "stop"] = "next_day"
    longest_bout: Positive = 24.0
    repeated_hour: Literal["stop", "earlier", "later"] = "stop"
    first_year: int | None = None
    last_year: int | None = None

    @model_validator(mode="after")
    def _frames_have_a_rate(self) -> Self:
        named = ("iso", "spreadsheet", "unix_seconds", "unix_milliseconds", "elapsed", "frames")
        if self.format not in named and "%" not in self.format:
            raise ValueError(
                f"format is {self.format!r}; allowed: {', '.join(named)}, or a pattern such as %d.%m.%Y %H:%M"
            )
        if self.format == "frames" and self.frames_per_second is None:
            raise ValueError("format is 'frames': give `frames_per_second` too")
        return self


class Sessions(Section):
    """The sessions table: a CSV of session, start, end and, if known, observer."""

    file: Text


class Tags(Section):
    """The tag table: a CSV of tag, animal, species, valid_from, valid_to; an empty end is open."""

    file: Text


class Reads(Section):
    """How reads of tags are built into visits."""

    gap: Positive
    """Seconds without a read after which a visit has ended; no default, for it decides the result."""
    gaps: dict[str, Positive] = {}
    """Another gap for some antennas."""
    zones: dict[str, Text] = {}
    """Zone of each antenna, where the log has no zone column."""
    test_tags: Texts = ()
    lone: Literal["keep", "set_aside"] = "set_aside"
    """What becomes of a read without another of the same tag at the same antenna within the gap."""


class Camera(Section):
    """How camera events are counted."""

    gap: Annotated[float, Field(ge=0, allow_inf_nan=False)] = 1800.0
    """Seconds between events of a species at a deployment below which they are one. 30 min is a convention."""
    deployments: Text | None = None
    """A CSV of deployment, zone, start, end."""


class Tallies(Section):
    """What the numbers under the zone headings are."""

    unit: Literal["s", "min", "h", "percent", "count"]


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
    two_observers: Literal["stop", "set_aside_later"] = "stop"
    last_state_open: Policy = "set_aside"
    nameless_animals: Policy = "stop"
    reused_animals: Literal["stop", "keep_apart_by_site", "same_animal"] = "stop"


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

    @field_validator("time_zone")
    @classmethod
    def _known_time_zone(cls, name: str | None) -> str | None:
        if name is not None:
            try:
                ZoneInfo(name)
            except (KeyError, ValueError, OSError) as error:
                raise ValueError("no such time zone; give an IANA name such as Europe/Berlin or Etc/GMT-1") from error
        return name

    @model_validator(mode="after")
    def _has_what_the_rule_needs(self) -> Self:
        columns = self.columns
        if not self.files and self.file.database is None:
            raise ValueError("`files` names no log; give at least one file, or a database under `logs.file`")
        if self.rule == "bouts" and (columns.end is None) == (columns.duration is None):
            raise ValueError(
                "a bout ends by its `end` or its `duration` column: name one of the two under `logs.columns`"
            )
        if self.rule == "reads" and self.reads is None:
            raise ValueError("the rule 'reads' needs `logs.reads.gap`: the seconds without a read that end a visit")
        if self.rule == "tallies" and self.tallies is None:
            raise ValueError("the rule 'tallies' needs `logs.tallies.unit`: s, min, h, percent or count")
        if self.duration_unit == "frames" and self.clock.frames_per_second is None:
            raise ValueError("duration_unit is 'frames': give `logs.clock.frames_per_second` too")
        return self
