"""Small invented logs in open standards, beside a study that reads them."""

import io
import json
import zipfile
from collections import Counter
from dataclasses import dataclass

import pytest

from niche.logs import read_logs
from niche.study import study_from_text

STUDY = """\
title = "two waders on a flat (invented)"
[logs]
files = {files}
rule = "{rule}"
out_of_sight = ["out of sight"]
{logs}
[logs.columns]
{columns}
[logs.file]
{form}
[zones]
rows = ["upper shore", "middle shore"]
columns = ["sand", "mud"]
layout = [["upper sand", "upper mud"], ["middle sand", "middle mud"]]
[[species]]
name = "dunlin"
scientific_name = "Calidris alpina"
[[species]]
name = "redshank"
scientific_name = "Tringa totanus"
[analysis]
unit = "{unit}"
"""

DWC = "http://rs.tdwg.org/dwc/terms/"
PROFILE = "https://raw.githubusercontent.com/tdwg/camtrap-dp/1.0.2/camtrap-dp-profile.json"


@dataclass
class Station:
    """A place for one study after another."""

    base: object
    count: int = 0

    def folder(self):
        self.count += 1
        place = self.base / str(self.count)
        place.mkdir()
        return place

    def study(
        self, folder, files, *, rule="bouts", form='standard = "darwin-core"', columns="", logs="", unit="animal"
    ):
        listed = json.dumps([files] if isinstance(files, str) else files)
        text = STUDY.format(files=listed, rule=rule, form=form, columns=columns, logs=logs, unit=unit)
        return study_from_text(text, folder / "study.toml")

    def read(self, content, *, name=None, **keys):
        """Read files given by name; the log is the first, or the one named."""
        folder = self.folder()
        for file, data in content.items():
            place = folder / file
            place.parent.mkdir(parents=True, exist_ok=True)
            place.write_bytes(data if isinstance(data, bytes) else data.encode())
        log = read_logs(self.study(folder, name or next(iter(content)), **keys))
        closed(log)
        return log


def closed(log):
    """Every row and every millisecond is somewhere, counted here anew."""
    total, *parts = log.ledger.sums()
    assert total[1:] == (sum(p[1] for p in parts), sum(p[2] for p in parts))
    assert total[1] == sum(file.rows for file in log.files)
    lines = {(e.file, e.row) for e in log.ledger.entries if e.action in ("set_aside", "stop")}
    counts = {name: rows for name, rows, _ in parts}
    assert counts["set_aside"] + counts["stop"] == len(lines)
    if log.measure == "time" and (log.visits["amount"] == log.visits["end"] - log.visits["start"]).all():
        length = log.visits["end"] - log.visits["start"]
        seen = log.visits["zone"] != ""
        assert counts["used"] == int(seen.sum())
        assert {p[0]: p[2] for p in parts}["used"] == int(length[seen].sum())


def entries(log, row=None, file=None):
    """Lines of the ledger as (row, field, value, action)."""
    return [
        (e.row, e.field, e.value, e.action)
        for e in log.ledger.entries
        if row in (None, e.row) and (file is None or e.file.endswith(file))
    ]


def problems(log, row):
    return [e.problem for e in log.ledger.entries if e.row == row]


def rows(log):
    return +Counter({name: count for name, count, _ in log.ledger.sums()[1:]})


def stays(log):
    """Visits as (species, animal, session, zone, seconds)."""
    v = log.visits
    seconds = (v["end"] - v["start"]) / 1000
    return sorted(zip(v["species"], v["animal"], v["session"], v["zone"], seconds, strict=True))


def meta(core, extension=None, *, terminated="\\t", header=1):
    """A meta.xml from (row type, file, {term: index or constant}, index of the id)."""

    def table(tag, id_tag, row_type, file, fields, id_index):
        lines = [
            f'<{tag} rowType="{DWC}{row_type}" fieldsTerminatedBy="{terminated}" linesTerminatedBy="\\n" '
            f'fieldsEnclosedBy="" encoding="UTF-8" ignoreHeaderLines="{header}">',
            f"<files><location>{file}</location></files>",
        ]
        if id_index is not None:
            lines.append(f'<{id_tag} index="{id_index}"/>')
        for term, place in fields.items():
            kind = "index" if isinstance(place, int) else "default"
            lines.append(f'<field {kind}="{place}" term="{DWC}{term}"/>')
        return "".join(lines) + f"</{tag}>"

    parts = [table("core", "id", *core)]
    if extension is not None:
        parts.append(table("extension", "coreid", *extension))
    return f'<archive xmlns="http://rs.tdwg.org/dwc/text/" metadata="eml.xml">{"".join(parts)}</archive>'


def tabbed(*rows):
    return "".join("\t".join(row) + "\n" for row in rows)


def zipped(content, method=zipfile.ZIP_DEFLATED):
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w", method) as archive:
        for name, data in content.items():
            archive.writestr(name, data)
    return stream.getvalue()


@pytest.fixture(scope="module")
def station(tmp_path_factory):
    return Station(tmp_path_factory.mktemp("station"))


class Tools:
    """What tests call by name."""

    entries, problems, rows, stays, meta, tabbed, zipped, closed = map(
        staticmethod, (entries, problems, rows, stays, meta, tabbed, zipped, closed)
    )
    profile = PROFILE
    dwc = DWC


@pytest.fixture(scope="session")
def tools():
    return Tools
