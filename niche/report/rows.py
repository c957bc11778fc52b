"""Tables of the page: numbers as people read them. The CSV beside the page holds every digit."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from markupsafe import Markup

from niche.effort import effort
from niche.figures.words import UNDEFINED, joined, level, no_interval, number, percent, span
from niche.indices import BREADTH
from niche.report.assumptions import assumptions

if TYPE_CHECKING:
    from niche.analysis import Run


@dataclass(frozen=True)
class Table:
    """A table of the page.

    ``source`` is the CSV with the same numbers; the first ``heads`` cells of a row are its headings, and from column
    ``numeric`` on cells are numbers.
    """

    key: str
    source: str
    caption: str
    headings: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    heads: int = 1
    numeric: int = 1


def effort_table(run: Run) -> Table:
    """Who was watched for how long."""
    columns, latin = run.study.logs.columns, {s.name: s.scientific_name for s in run.study.species}
    rows = []
    timed = run.log.measure == "time"
    for row in effort(run.log.visits, run.analysis.usage.species, run.log.measure).to_dict("records"):
        view, unseen = row["seconds_in_view"], row["seconds_out_of_sight"]
        each = [number(row[f"seconds_{which}"] / 3600) for which in ("least", "median", "most")]
        name, scientific = str(row["species"]), latin.get(str(row["species"]))
        rows.append(
            (
                name if scientific is None else Markup('{} <i lang="la">{}</i>').format(name, scientific),
                f"{row['animals']:,}" if columns.animal else "not logged",
                f"{row['sessions']:,}" if columns.session else "not logged",
                f"{row['visits']:,}",
                f"{row['zones_used']} of {len(run.analysis.usage.zones)}",
                number(view / 3600) if timed else "not measured",
                (percent(unseen / (view + unseen)) if view + unseen > 0 else UNDEFINED) if timed else "not measured",
                percent(row["most_watched_share"]) if columns.animal else "not logged",
                _each(each, logged=columns.animal is not None, timed=timed, seen=view > 0),
            )
        )
    headings = (
        "Species",
        "Animals",
        "Sessions",
        "Stays in a zone",
        "Zones used",
        "Hours in view",
        "Out of sight",
        "Most-watched animal",
        "Hours an animal (least / median / most)",
    )
    return Table("effort", "effort", "Effort by species", headings, tuple(rows))


def _each(hours: list[str], *, logged: bool, timed: bool, seen: bool) -> str:
    """Hours of the least, the median and the most watched animal, or why there are none."""
    if not logged:
        return "not logged"
    if not timed:
        return "not measured"
    return " / ".join(hours) if seen else UNDEFINED


_BECAME = {"read": "read", "used": "used", "out_of_sight": "out of sight", "set_aside": "set aside", "stop": "stopping"}


def ledger_table(run: Run) -> Table:
    """Rows and seconds: read, and what became of them."""
    rows = tuple(
        (_BECAME[name].capitalize(), f"{rows:,}", _seconds(ms), number(ms / 3_600_000))
        for name, rows, ms in run.log.ledger.sums()
        if name != "stop" or rows
    )
    return Table("ledger-sums", "ledger", "What became of the logs", ("Disposition", "Rows", "Seconds", "Hours"), rows)


def reasons_table(run: Run) -> Table | None:
    """Rows that were not simply used, by reason; None where there are none."""
    ledger = run.log.ledger
    seconds: Counter[tuple[str, str]] = Counter()
    noted: Counter[tuple[str, str]] = Counter()
    for entry in ledger.entries:
        seconds[entry.action, entry.reason] += entry.milliseconds
        if entry.action in ("repaired", "flagged"):
            noted[entry.action, entry.reason] += 1
    rows = [
        (_BECAME[action].capitalize(), reason, f"{n:,}", _seconds(seconds[action, reason]))
        for (action, reason), n in sorted(ledger.reasons.items())
        if n
    ]
    rows += [(f"Used, {action}", reason, f"{n:,}", "–") for (action, reason), n in sorted(noted.items())]
    if not rows:
        return None
    headings = ("What was done", "Reason", "Rows", "Seconds")
    return Table("ledger-reasons", "ledger", "Rows set aside, repaired or flagged", headings, tuple(rows), 2, 2)


def closes(run: Run) -> str:
    """The sum that proves that no row and no millisecond is lost."""
    (_, rows, ms), *parts = run.log.ledger.sums()
    shown = [(name, n, t) for name, n, t in parts if name != "stop" or n]
    by_row = " + ".join(f"{n:,} {_BECAME[name]}" for name, n, _ in shown)
    by_time = " + ".join(f"{_seconds(t)} s {_BECAME[name]}" for name, _, t in shown)
    return f"{by_row} = {rows:,} rows read; {by_time} = {_seconds(ms)} s read."


def usage_table(run: Run) -> Table:
    """Share of use by zone and species with its interval, and availability where it is given."""
    usage, use = run.analysis.usage, run.analysis.use
    shares = usage.availability
    p = use.proportion
    rows = []
    for z, zone in enumerate(usage.zones):
        cells = []
        for s in range(len(usage.species)):
            core = "; core" if use.core[s, z] else ""
            interval = "" if np.isnan(p.low[s, z]) else f" ({span(p.low[s, z], p.high[s, z], shares=True)})"
            cells.append(f"{percent(p.value[s, z])}{interval}{core}")
        rows.append((zone, *([] if shares is None else [percent(shares[z])]), *cells))
    available = () if shares is None else ("Share of the area" if _is_area(run) else "Share available",)
    return Table("usage", "usage", "Share of use by zone", ("Zone", *available, *usage.species), tuple(rows))


def core_table(run: Run) -> Table:
    """Core zones, what they hold, and in what share of resamples each is core."""
    usage, use = run.analysis.usage, run.analysis.use
    rows = []
    for s, name in enumerate(usage.species):
        order = [z for z in np.argsort(-use.amount[s], kind="stable") if use.core[s, z]]
        often = use.core_frequency[s]
        zones = [usage.zones[z] + ("" if np.isnan(often[z]) else f" ({percent(often[z])} of resamples)") for z in order]
        rows.append((name, joined(zones) or "none: no use recorded", percent(use.core_share[s])))
    headings = ("Species", "Core zones, most used first", "Use they hold")
    return Table("core", "usage", "Core zones", headings, tuple(rows), 1, 2)


def breadth_table(run: Run) -> Table:
    """Every index of breadth by species."""
    analysis = run.analysis
    usage, rows = analysis.usage, []
    for s, name in enumerate(usage.species):
        units = int(usage.unit_counts[s])
        without = no_interval([units], [name], usage.unit, placed=usage.placed)
        for index, e in analysis.breadth.items():
            interval = without if np.isnan(e.low[s]) else span(e.low[s], e.high[s])
            row = (number(e.value[s]), interval, number(e.pooled[s]), f"{units:,}", f"{e.undefined[s]:,}")
            rows.append((name, BREADTH[index].title, *row))
    headings = (
        "Species",
        "Index",
        "Estimate",
        interval_heading(run),
        "Pooled",
        f"{usage.unit.capitalize()}s",
        "Undefined draws",
    )
    return Table("breadth", "breadth", "Breadth by species", headings, tuple(rows), 2, 2)


def input_table(run: Run) -> Table:
    """Log files with their fingerprints."""
    rows = tuple((f.name, f"{f.rows:,}", f"{f.size:,}", f.sha256) for f in run.log.files)
    return Table("inputs", "inputs", "Log files read", ("File", "Rows", "Bytes", "SHA-256"), rows)


def assumptions_table(run: Run) -> Table:
    """Assumptions, each with its standing."""
    rows = tuple((a.name, a.status, a.why) for a in assumptions(run))
    headings = ("Assumption", "Standing", "Why")
    return Table("assumptions", "assumptions", "What the results rest on", headings, rows, 1, 3)


def interval_heading(run: Run) -> str:
    """Heading of a column of intervals: their level."""
    return f"{level(run.analysis.options.confidence)} interval"


def _is_area(run: Run) -> bool:
    given = run.study.zones.availability
    return given is not None and given.unit in ("ha", "m²", "m2", "km²", "km2")


def _seconds(milliseconds: int) -> str:
    """Seconds to the millisecond, without needless zeros."""
    whole, rest = divmod(milliseconds, 1000)
    return f"{whole:,}" + (f".{rest:03d}".rstrip("0") if rest else "")
