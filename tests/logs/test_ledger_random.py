"""Random logs with planted faults: every row and every millisecond goes where the fault says, exactly.

What should come of each row is worked out here by plain rules, row by row, without the code under test.
"""

from collections import Counter
from datetime import datetime, timedelta

from hypothesis import given, settings
from hypothesis import strategies as st

from niche.logs import read_logs

POLICIES = ("unknown_zone", "unknown_species", "unreadable", "end_before_start", "overlap")
DAY = datetime(2026, 9, 3)  # noqa: DTZ001 - the offset is written out

# fault: (what it does to the sound row, what becomes of the row, whether its time can be read)
FAULTS = {
    "none": (lambda row: row, "used", True),
    "out of sight": (lambda row: {**row, "zone": "Not  seen"}, "out_of_sight", True),
    "zone blank": (lambda row: {**row, "zone": " "}, "out_of_sight", True),
    "zone respelled": (lambda row: {**row, "zone": f"\u00a0{row['zone'].upper()}"}, "used", True),
    "species respelled": (lambda row: {**row, "species": f" {row['species'].title()}"}, "used", True),
    "zone unknown": (lambda row: {**row, "zone": "creek"}, "unknown_zone", True),
    "species unknown": (lambda row: {**row, "species": "knot"}, "unknown_species", True),
    "species missing": (lambda row: {**row, "species": ""}, "set_aside", True),
    "animal missing": (lambda row: {**row, "animal": ""}, "set_aside", True),
    "session missing": (lambda row: {**row, "session": "\u00a0"}, "set_aside", True),
    "start missing": (lambda row: {**row, "start": ""}, "set_aside", False),
    "end missing": (lambda row: {**row, "end": " "}, "set_aside", False),
    "start unreadable": (lambda row: {**row, "start": "soon"}, "unreadable", False),
    "end impossible": (lambda row: {**row, "end": "2026-09-31T10:00:00+02:00"}, "unreadable", False),
    "times swapped": (lambda row: {**row, "start": row["end"], "end": row["start"]}, "end_before_start", False),
    "no time passes": (lambda row: {**row, "end": row["start"]}, "used", False),
    "zone unknown, animal missing": (
        lambda row: {**row, "zone": "creek", "animal": ""}, ("unknown_zone", "set_aside"), True,
    ),
    "zone and times wrong": (lambda row: {**row, "zone": "creek", "end": "x"}, ("unknown_zone", "unreadable"), False),
    "blank line": (None, "set_aside", False),
    "cells missing": (None, "stop", False),
    "cell too many": (None, "stop", False),
    "repeat of the last sound row": (None, "set_aside", True),
    "inside the last sound row": (None, "overlap", True),
}  # fmt: skip

rows = st.tuples(
    st.sampled_from(list(FAULTS)), st.integers(2_000, 599_999), st.sampled_from(["mud", "sand", "mussel bed"]),
    st.sampled_from(["dunlin", "redshank"]), st.sampled_from(["RW", "GY", "NB"]), st.booleans(),
)  # fmt: skip
logs = st.lists(st.lists(rows, max_size=12), min_size=1, max_size=4)
policies = st.fixed_dictionaries({name: st.sampled_from(["stop", "set_aside"]) for name in POLICIES})


def clock(milliseconds):
    return (DAY + timedelta(milliseconds=milliseconds)).isoformat(timespec="milliseconds") + "+02:00"


def written(row):
    return ",".join(row[name] for name in ("species", "animal", "session", "zone", "start", "end", "notes"))


def build(files, policy):
    """Texts of the files, and what should become of them: (rows, milliseconds) by disposition, and by file and row."""
    texts, totals, fates, sound, slot = [], Counter(), {}, None, 0
    for number, planned in enumerate(files):
        lines, line = ["species,animal,session,zone,start,end,notes"], 2
        for fault, length, zone, species, animal, broken in planned:
            change, fate, timed = FAULTS[fault]
            slot += 1  # each row has ten minutes of its own, so nothing overlaps by accident
            start, notes = slot * 600_000, '"a\nremark, ""quoted"""' if broken else ""
            row = {
                "species": species, "animal": animal, "session": f"s{number}", "zone": zone, "notes": notes,
                "start": clock(start), "end": clock(start + length),
            }  # fmt: skip
            if fault.endswith("last sound row") and sound is None:
                change, fate, timed = FAULTS["none"]
            if change is not None:
                text = written(change(row))
                if fault == "none":
                    sound = (row, start, length)
            elif fault == "blank line":
                text, broken = "", False
            elif fault == "cells missing":
                text, broken = ",".join([species, animal, zone]), False
            elif fault == "cell too many":
                text = written(row) + ",more"
            elif fault.startswith("repeat"):
                text, length = written({**sound[0], "notes": notes}), sound[2]
            else:
                first, length = sound[1] + 1, 500
                text = written({**sound[0], "start": clock(first), "end": clock(first + 500), "notes": notes})
                sound = None  # a second one inside would repeat the first
            outcomes = [policy.get(name, name) for name in ([fate] if isinstance(fate, str) else fate)]
            became = "stop" if "stop" in outcomes else outcomes[0]
            time = length if timed else 0
            totals[became, "rows"] += 1
            totals[became, "ms"] += time
            fates[f"{'abcd'[number]}.csv", line] = (became, time)
            lines.append(text)
            line += 2 if broken else 1
        texts.append("\n".join(lines) + "\n")
    return texts, totals, fates


@settings(max_examples=80, deadline=None)
@given(logs, policies)
def test_every_row_and_millisecond_of_a_spoiled_log_goes_where_its_fault_says(field, files, policy):
    texts, totals, fates = build(files, policy)
    log = field.read(*texts, problems="\n".join(f'{name} = "{what}"' for name, what in policy.items()))
    for name, number, milliseconds in log.ledger.sums()[1:]:
        assert (number, milliseconds) == (totals[name, "rows"], totals[name, "ms"]), name
    carried = {(e.file, e.row): (e.action, e.milliseconds) for e in log.ledger.entries if e.milliseconds}
    lost = {(e.file, e.row) for e in log.ledger.entries if e.action in ("stop", "set_aside")}
    assert lost == {place for place, (became, _) in fates.items() if became in ("stop", "set_aside")}
    assert carried == {place: fate for place, fate in fates.items() if place in lost and fate[1]}
    kept = zip(
        log.visits["file"], log.visits["row"], log.visits["zone"], log.visits["end"] - log.visits["start"], strict=True
    )
    found = {(file, row): ("used" if zone else "out_of_sight", ms) for file, row, zone, ms in kept}
    assert found == {place: fate for place, fate in fates.items() if place not in lost}


def test_all_faults_at_once_are_each_found(field):
    """The random logs would prove little if they never held a fault: here is one of each, twice over."""
    planned = [(fault, 5_000, "mud", "dunlin", "RW", False) for fault in [*FAULTS, *reversed(FAULTS)]]
    texts, totals, fates = build([planned], dict.fromkeys(POLICIES, "stop"))
    log = field.read(*texts)
    assert len(fates) == 2 * len(FAULTS)
    assert {name: (number, ms) for name, number, ms in log.ledger.sums()[1:]} == {
        name: (totals[name, "rows"], totals[name, "ms"]) for name in ("used", "out_of_sight", "set_aside", "stop")
    }
    assert {reason for _, reason in log.ledger.reasons} == {
        "unknown zone", "unknown species", "species missing", "animal missing", "session missing", "start missing",
        "end missing", "unreadable time", "end before start", "blank row", "wrong number of cells",
        "exact repeat of an earlier row", "overlaps another bout of the same animal",
    }  # fmt: skip


cells = st.text(st.characters(exclude_characters="\x00", exclude_categories=["Cs"]), max_size=12) | st.sampled_from(
    ["mud", "dunlin", "2026-09-03T08:00Z", "2026-09-03T09:00Z", '"', ","]
)


@settings(max_examples=80, deadline=None)
@given(st.lists(st.lists(cells, min_size=6, max_size=6), max_size=8))
def test_any_cells_at_all_are_accounted_for(field, table):
    folder = field.folder()
    (folder / "a.csv").write_text(field.text(*table), encoding="utf-8", newline="")
    log = read_logs(field.study(folder))
    field.check_closed(log)
    assert log.ledger.sums()[0][1] == len(table)
