"""From a file in an open standard to pieces that the recording rules read."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

from niche.logs.ledger import Ledger
from niche.logs.pieces import Piece
from niche.logs.standards.archive import META, files_of, read_archive
from niche.logs.standards.camtrap import read_camtrap
from niche.logs.standards.camtrap_tables import DESCRIPTOR, open_camtrap
from niche.logs.standards.darwin_core import DarwinCore, used_terms
from niche.logs.standards.described import read_described
from niche.study.log_model import Columns
from niche.study.model import Study

_TERM_OF_FIELD = {
    "species": "scientificName", "animal": "organismID", "session": "eventID", "zone": "habitat", "start": "eventDate",
    "time": "eventDate", "end": None, "count": "individualCount", "observer": "recordedBy", "tag": None, "antenna": None,
    "deployment": None,
}  # fmt: skip


def is_standard(study: Study) -> bool:
    """Whether a study's logs are to be read by `open_standard`."""
    return study.logs.file.standard is not None or study.logs.file.descriptor is not None


def open_standard(path: Path, name: str, study: Study, ledger: Ledger) -> Iterator[Piece]:
    """Pieces of one log as ``logs.file.standard`` and ``logs.file.descriptor`` say.

    Parameters
    ----------
    path : Path
        A CSV, a zip, a folder, or the descriptor of a folder (``meta.xml``, ``datapackage.json``).
    name : str
        The file as messages and the ledger call it; a file in a package is called ``name/file``.
    study : Study
    ledger : Ledger
        Takes every row that does not reach a rule.

    Raises
    ------
    LogError
        The file breaks the standard, and the message tells where.
    """
    form = study.logs.file
    if form.standard == "camtrap-dp":
        yield from read_camtrap(path, name, study, ledger)
    elif form.standard is None:
        named = {heading for heading in study.logs.columns.model_dump().values() if heading is not None}
        yield from read_described(path, name, study, ledger, named)
    else:
        core = DarwinCore(study, ledger)
        for piece in _darwin_core(path, name, study, ledger):
            yield core.piece(piece)


def _darwin_core(path: Path, name: str, study: Study, ledger: Ledger) -> Iterator[Piece]:
    if study.logs.file.descriptor is not None:
        return read_described(path, name, study, ledger, used_terms(study))
    if path.is_dir() or path.name == META or path.suffix.lower() == ".zip":
        return read_archive(path, name, study, ledger)
    from niche.logs.formats import open_pieces  # which opens files in a standard by this module

    return open_pieces(path, name, _plain(study), ledger)


def _plain(study: Study) -> Study:
    """The study as the reader of plain tables is to see it: the terms as headings, and no standard."""
    named = study.logs.columns.model_dump()
    terms = {field: _TERM_OF_FIELD.get(field, h) if h == field else h for field, h in named.items()}
    form = study.logs.file.model_copy(update={"standard": None})
    logs = study.logs.model_copy(update={"file": form, "columns": Columns.model_construct(**terms)})
    plain = study.model_copy(update={"logs": logs})
    plain._folder = study.folder
    return plain


def parts_of(path: Path, name: str, study: Study) -> list[Path]:
    """Files that make up a log beside the one that the study names: the tables of a package in a folder.

    A digest of the log must cover them: the descriptors of two packages can be the same while their tables differ.

    Raises
    ------
    LogError
        The descriptor cannot be read.
    """
    standard = study.logs.file.standard
    folder = path if path.is_dir() else path.parent
    if standard == "camtrap-dp" and path.name == DESCRIPTOR:
        package = open_camtrap(path, name)
        return [folder / package.path(table) for table in ("deployments", "observations")]
    if standard == "darwin-core" and path.name == META:
        return [folder / file for file in files_of(path, name)]
    return []
