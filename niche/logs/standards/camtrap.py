"""Camtrap DP packages: events of animals at deployments, ready for the rule of cameras.

Only observations of animals at the level of events count: those of single media repeat them. An event's span is the
length of a burst, never time in a zone; the effort is how long each deployment stood.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pyarrow as pa

from niche.errors import LogError
from niche.logs.clocks import read_times
from niche.logs.deployments import Deployment
from niche.logs.labels import key
from niche.logs.ledger import Action, Entry, Ledger
from niche.logs.pieces import Piece
from niche.logs.standards.camtrap_fields import DEPLOYMENTS, GROUPS, LEVELS, OBSERVATIONS, TYPES, ZONE_FIELDS
from niche.logs.standards.camtrap_tables import CamtrapPackage, open_camtrap
from niche.logs.standards.delimited import without
from niche.logs.standards.taxa import Taxa
from niche.logs.zone_names import zones_by_key
from niche.study.model import Study


@dataclass(frozen=True)
class CamtrapDeployment:
    """Where a camera stood: ``[start_ms, end_ms)`` in milliseconds since 1970-01-01T00:00Z."""

    zone: str
    start_ms: int
    end_ms: int
    row: int


def read_camtrap(path: Path, name: str, study: Study, ledger: Ledger) -> Iterator[Piece]:
    """Pieces of the observations under the columns species, deployment, session, zone, time, end, count.

    The fields of the standard stay beside them, so that a study may name one, such as ``individualID`` for the animal.

    Parameters
    ----------
    path, name
        A zip, a folder, or its ``datapackage.json``, and what messages call it.

    Raises
    ------
    LogError
        It is no Camtrap DP package, or a deployment cannot be told.
    """
    package = open_camtrap(path, name)
    deployments = read_deployments(package, study, ledger)
    _individuals(package, study, ledger)
    for raw in package.pieces("observations", OBSERVATIONS, ledger):
        yield _piece(raw, deployments, study, ledger)


def read_deployments(package: CamtrapPackage, study: Study, ledger: Ledger) -> dict[str, CamtrapDeployment]:
    """Deployments by id; what makes their times or counts doubtful goes to the ledger as flags.

    Raises
    ------
    LogError
        A deployment has no id, or one that another has, or its times cannot be read or are in the wrong order.
    """
    found: dict[str, CamtrapDeployment] = {}
    # A blank row of the deployments is no row of the log.
    for piece in package.pieces("deployments", DEPLOYMENTS, Ledger()):
        cells = {name: column.to_pylist() for name, column in piece.columns.items()}
        zones = _zones(piece, cells, study, ledger)
        for position, row in enumerate(piece.rows.tolist()):
            record = {name: column[position] for name, column in cells.items()}
            identity = record["deploymentID"]
            place = f"{piece.file}: row {row}"
            if not identity:
                raise LogError(f"{place}: deploymentID is empty; Camtrap DP requires it.")
            if identity in found:
                raise LogError(f"{place}: deploymentID {identity!r} stands in row {found[identity].row} already.")
            start, end = (_instant(record[name], name, place) for name in ("deploymentStart", "deploymentEnd"))
            if end < start:
                raise LogError(f"{place}: deploymentEnd {record['deploymentEnd']!r} is before deploymentStart.")
            found[identity] = CamtrapDeployment(zones[position], start, end, row)
            _doubts(piece.file, row, record, ledger)
    return found


def package_deployments(study: Study) -> dict[str, Deployment]:
    """Deployments of all packages of a study in zones that it lists, for the effort by zone: end − start of each.

    Raises
    ------
    LogError
        A package cannot be read.
    """
    from niche.logs.engine import log_paths

    known = zones_by_key(study)
    found: dict[str, Deployment] = {}
    for path in log_paths(study):
        for name, place in read_deployments(open_camtrap(path, path.name), study, Ledger()).items():
            zone = known.get(key(place.zone))
            if zone:
                found[f"{path} {name}"] = Deployment(zone, place.start_ms, place.end_ms)
    return found


def _zones(piece: Piece, cells: dict[str, list[str]], study: Study, ledger: Ledger) -> list[str]:
    """Zone of each deployment: from the field or group key that the study names, else from the first that is filled."""
    chosen = study.logs.columns.zone
    if chosen is not None and chosen.startswith(GROUPS):
        return [_group(text, chosen.removeprefix(GROUPS).strip()) for text in cells["deploymentGroups"]]
    if chosen not in (None, "zone"):
        if chosen not in cells:
            raise LogError(
                f"{piece.file}: no column {chosen!r}, which `logs.columns.zone` names. The zone can stand in "
                f"{', '.join(ZONE_FIELDS)}, or in a key of deploymentGroups: {GROUPS}KEY."
            )
        return cells[chosen]
    filled = [name for name in ZONE_FIELDS if any(cells[name])]
    if not filled:
        if len(piece.rows):
            raise LogError(
                f"{piece.file}: none of {', '.join(ZONE_FIELDS)} is filled, so nothing tells the zone of a deployment. Name "
                f"the column as `logs.columns.zone`, or a key of deploymentGroups as {GROUPS}KEY."
            )
        return []
    if len(filled) > 1:
        problem = (
            f"zones are read from {filled[0]!r}, not from {' or '.join(map(repr, filled[1:]))}; set `logs.columns.zone` to "
            "choose"
        )
        ledger.note(Entry(piece.file, 1, "zone", filled[0], "zone chosen", problem, "flagged"))
    return cells[filled[0]]


def _group(text: str, wanted: str) -> str:
    """Value of a key in a list such as ``season:autumn | zone:upper sand``."""
    for part in text.split("|"):
        name, colon, value = part.partition(":")
        if colon and name.strip() == wanted:
            return value.strip()
    return ""


def _instant(text: str, name: str, place: str) -> int:
    found = read_times(pa.array([text], type=pa.string()), None)
    if found.problem[0] is not None:
        raise LogError(f"{place}: {name} {text!r}: {found.problem[0]}.")
    return int(found.ms[0])


def _doubts(file: str, row: int, record: dict[str, str], ledger: Ledger) -> None:
    """Flag a deployment whose counts cannot be taken like others'."""
    doubts = {
        "timestampIssues": "its times are known to be wrong or doubtful; leave the deployment out unless they do not matter",
        "baitUse": "bait draws animals: its counts are not those of deployments without",
        "cameraDelay": "s of rest after each trigger: animals that came in them are missing",
    }
    for name, problem in doubts.items():
        value = record[name]
        if value.lower() in ("true", "1") or (name == "cameraDelay" and value.strip("0.") != ""):
            ledger.note(Entry(file, row, name, value, name, problem, "flagged"))


def _individuals(package: CamtrapPackage, study: Study, ledger: Ledger) -> None:
    """Note where what the package says of its animals and what the study does with them differ."""
    named = study.logs.columns.animal is not None
    if named == package.individual_animals:
        return
    value = str(package.individual_animals).lower()
    problem = 'animals are told apart; set `logs.columns.animal` to "individualID" to resample them, not deployments'
    if named:
        problem = "the package says that animals are not told apart, yet `logs.columns.animal` names them"
    label = package.package.label("datapackage.json")
    ledger.note(Entry(label, 1, "individualAnimals", value, "individual animals", problem, "flagged"))


def _piece(raw: Piece, deployments: dict[str, CamtrapDeployment], study: Study, ledger: Ledger) -> Piece:
    """The events of animals in one piece."""
    cells = {name: column.to_pylist() for name, column in raw.columns.items()}
    found: dict[int, list[Entry]] = {}
    for position in range(len(raw.rows)):
        told = _why_not({name: column[position] for name, column in cells.items()}, deployments, study)
        if told is not None:
            name, reason, problem, action = told
            value = cells[name][position]
            found[position] = [Entry(raw.file, int(raw.rows[position]), name, value, reason, problem, action)]
    kept = without(raw, ledger, found)
    names = ("deploymentID", "eventStart", "eventEnd", "count", "scientificName", "individualID")
    own = {name: kept.columns[name].to_pylist() for name in names}
    clash: dict[int, list[Entry]] = {}
    derived = {
        "species": Taxa(study).names({"scientificName": own["scientificName"]}, kept, clash),
        "deployment": own["deploymentID"],
        "session": own["deploymentID"],
        "zone": [deployments[name].zone for name in own["deploymentID"]],
        "time": own["eventStart"],
        "end": own["eventEnd"],
        "count": [text or "1" for text in own["count"]],
    }
    _uncounted(kept, own["count"], ledger)
    arrays = {name: pa.array(values, type=pa.string()) for name, values in derived.items()}
    chosen = study.logs.columns.zone
    if chosen is not None:
        arrays[chosen] = arrays["zone"]
    return Piece(kept.file, kept.rows, {**kept.columns, **arrays})


def _why_not(
    record: dict[str, str], deployments: dict[str, CamtrapDeployment], study: Study
) -> tuple[str, str, str, Action] | None:
    """Field, reason, problem and action for an observation that is no use of a zone; None for one that is."""
    level, kind, identity = record["observationLevel"], record["observationType"], record["deploymentID"]
    policy = study.logs.problems.unreadable
    if level not in LEVELS:
        return "observationLevel", "unknown observationLevel", f"allowed: {', '.join(LEVELS)}", policy
    if kind not in TYPES:
        return "observationType", "unknown observationType", f"allowed: {', '.join(TYPES)}", policy
    if level != "event":
        return (
            "observationLevel",
            "not an event",
            "of one picture; the event that holds it is counted instead",
            "set_aside",
        )
    if record["cameraSetupType"]:
        return "cameraSetupType", "camera set-up", "taken while the camera was set up or calibrated", "set_aside"
    if kind != "animal":
        return "observationType", "no animal", f"{kind}: only animals use zones", "set_aside"
    if identity not in deployments:
        return "deploymentID", "unknown deployment", "the table of deployments has none of this id; correct one", "stop"
    return _unsure(record, study) or _outside(record, deployments[identity], study)


def _unsure(record: dict[str, str], study: Study) -> tuple[str, str, str, Action] | None:
    """A machine's classification below the least probability that the study accepts."""
    least = study.logs.camera.least_probability
    if least is None or record["classificationMethod"] != "machine":
        return None
    name = "classificationProbability"
    try:
        probability = float(record[name])
    except ValueError:
        return (
            name,
            "probability missing",
            "classified by machine without a probability that can be compared",
            "set_aside",
        )
    if probability >= least:
        return None
    problem = f"classified by machine, and below `logs.camera.least_probability`, {least:g}"
    return name, "improbable classification", problem, "set_aside"


def _outside(record: dict[str, str], place: CamtrapDeployment, study: Study) -> tuple[str, str, str, Action] | None:
    """An event before or after its deployment tells of a wrong clock."""
    found = read_times(pa.array([record["eventStart"]], type=pa.string()), None)
    if found.problem[0] is not None or place.start_ms <= found.ms[0] <= place.end_ms:
        return None  # what cannot be read is the rule's to tell
    problem = "outside the dates of its deployment: was the clock reset? Correct the time, or the dates"
    return "eventStart", "outside its deployment", problem, study.logs.problems.unreadable


def _uncounted(piece: Piece, counts: list[str], ledger: Ledger) -> None:
    for position in np.flatnonzero([not text for text in counts]).tolist():
        row = int(piece.rows[position])
        problem = "no number of animals given; counted as 1"
        ledger.note(Entry(piece.file, row, "count", "", "count missing", problem, "flagged"))
