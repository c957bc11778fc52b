"""Looks into a zip file's directory before anything is unpacked."""

from __future__ import annotations

import struct
import xml.etree.ElementTree as ET
import zipfile
import zlib
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from xml.parsers import expat

from niche.errors import LogError

EXPANDED_LIMIT = 4_000_000_000
"""Bytes that a workbook may unpack to; a full sheet of ten columns is about a sixth of it."""
EXPANSION_FREE = 50_000_000
"""Bytes that a workbook may unpack to without a second look."""
EXPANSION_RATIO = 200
"""How many times its own size it may unpack to beyond that; real workbooks stay under 50."""
WHOLE_PART_LIMIT = 500_000_000
"""Bytes of a part that is held in memory whole: shared texts, styles."""
PARTS_LIMIT = 10_000

_OLE = b"\xd0\xcf\x11\xe0"
_DAMAGE = (
    KeyError,
    ValueError,
    IndexError,
    TypeError,
    AttributeError,
    OverflowError,
    NotImplementedError,
    RecursionError,
    EOFError,
    OSError,
    struct.error,
    zlib.error,
    zipfile.BadZipFile,
    ET.ParseError,
    expat.ExpatError,
    UnicodeError,
)
"""What the libraries raise at a workbook that was not written by one."""


@contextmanager
def readable(name: str) -> Iterator[None]:
    """Turn whatever a damaged workbook makes a library raise into one message."""
    try:
        yield
    except _DAMAGE as error:
        told = str(error)[:120] or type(error).__name__
        raise LogError(
            f"{name}: cannot be read as the workbook that its name says it is ({told}). Open it in a spreadsheet program "
            "and save it again, or export the sheet as CSV."
        ) from None


def open_zip(path: Path, name: str) -> zipfile.ZipFile:
    """A zip file whose directory is within bounds and whose XML declares no document type.

    Raises
    ------
    LogError
        It is no zip file, or would unpack to too much, or its XML declares entities.
    """
    try:
        with path.open("rb") as stream:
            signature = stream.read(4)
    except FileNotFoundError:
        raise LogError(f"{name}: there is no such file.") from None
    except OSError as error:
        raise LogError(f"{name}: cannot be read ({error.strerror}).") from None
    if signature == _OLE:
        raise LogError(f"{name}: password-protected, or an old .xls. Save it as .xlsx without a password.")
    with readable(name):
        archive = zipfile.ZipFile(path)
        try:
            _check_size(archive, path.stat().st_size, name)
            for part in archive.infolist():
                if part.filename.lower().endswith((".xml", ".rels")):
                    _refuse_document_type(archive, part.filename, name)
        except BaseException:
            archive.close()
            raise
    return archive


def _check_size(archive: zipfile.ZipFile, packed: int, name: str) -> None:
    parts = archive.infolist()
    expanded = sum(part.file_size for part in parts)
    large = next((p for p in parts if p.file_size > WHOLE_PART_LIMIT and "sheet" not in p.filename.lower()), None)
    why = None
    if expanded > EXPANDED_LIMIT:
        why = f"more than {EXPANDED_LIMIT / 1e6:.0f} MB"
    elif expanded > EXPANSION_FREE and expanded > EXPANSION_RATIO * packed:
        why = f"more than {EXPANSION_RATIO} times its size"
    elif large is not None and large.filename != "content.xml":
        why = f"with {large.file_size / 1e6:.0f} MB in {large.filename}"
    elif len(parts) > PARTS_LIMIT:
        why = f"in {len(parts)} parts"
    if why is not None:
        raise LogError(
            f"{name}: refused: unpacks to {expanded / 1e6:.0f} MB from {packed / 1e6:.2f} MB, {why}. Export the sheet "
            "as CSV if it is a log."
        )


def _refuse_document_type(archive: zipfile.ZipFile, part: str, name: str) -> None:
    """Raise where a part declares a document type: workbooks have none, and entities in one can be a trap."""
    parser, begun = expat.ParserCreate(), []

    def refuse(*_: object) -> None:
        raise LogError(f"{name}: refused: {part} declares an XML document type, which no workbook needs.")

    parser.StartDoctypeDeclHandler = refuse
    parser.StartElementHandler = lambda *_: begun.append(True)
    with archive.open(part) as stream:
        while not begun and (block := stream.read(8192)):
            parser.Parse(block)
