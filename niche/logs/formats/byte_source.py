"""Bytes of a text file, through gzip where it is packed, as UTF-8 in chunks of whole lines.

Nothing here is guessed: a byte order mark tells the encoding, else it is UTF-8 or what the study declares, strictly.
"""

from __future__ import annotations

import codecs
import gzip
import zlib
from collections.abc import Iterator
from pathlib import Path
from typing import BinaryIO, cast

from niche.errors import LogError
from niche.logs.formats.counting import line_ends
from niche.logs.formats.wanted import Wanted

BLOCK = 4_000_000
"""Bytes read at once."""
LONGEST_LINE = 8_000_000
"""Bytes of a line beyond which a file is no table of rows."""
EXPANSION_FREE = 100_000_000
"""Bytes that a packed file may unpack to without a second look."""
EXPANSION_RATIO = 200
"""How many times its own size a packed file may unpack to beyond that; real logs stay under 50."""

_MARKS = ((codecs.BOM_UTF8, "utf-8"), (codecs.BOM_UTF16_LE, "utf-16-le"), (codecs.BOM_UTF16_BE, "utf-16-be"))
_CODECS = {"utf-8": "utf-8", "utf-16": "utf-16-le", "latin-1": "latin-1", "windows-1252": "cp1252"}
_OTHER_FORMS = {
    b"PK\x03\x04": "a zip archive or a workbook",
    b"PAR1": "a Parquet file",
    b"\xd0\xcf\x11\xe0": "an old or password-protected workbook",
    b"SQLite format 3\x00": "an SQLite database",
    b"\x1f\x8b": "packed with gzip",
    b"%PDF": "a PDF",
}


def blocks(path: Path, name: str) -> Iterator[bytes]:
    """Bytes of a file, unpacked where its name ends in ``.gz``.

    Raises
    ------
    LogError
        There is no such file, it cannot be read, is damaged, was cut short, or unpacks out of all proportion.
    """
    try:
        size, done = path.stat().st_size, 0
        packed = path.suffix.lower() == ".gz"
        with cast(BinaryIO, gzip.open(path)) if packed else path.open("rb") as stream:
            while block := stream.read(BLOCK):
                done += len(block)
                if packed and done > EXPANSION_FREE and done > EXPANSION_RATIO * size:
                    raise LogError(
                        f"{name}: unpacks to more than {done / 1e6:.0f} MB from {size / 1e6:.2f} MB, more than "
                        f"{EXPANSION_RATIO} times its size. No log does that; unpack it by hand if it is one."
                    )
                yield block
        if not packed and done != size:
            raise LogError(f"{name}: {done} bytes read of {size}. Is another program writing it? Try again.")
    except FileNotFoundError:
        raise LogError(f"{name}: there is no such file.") from None
    except (EOFError, zlib.error, gzip.BadGzipFile) as error:
        raise LogError(f"{name}: not a whole gzip file ({error}). Copy it again from where it was made.") from None
    except OSError as error:
        raise LogError(f"{name}: cannot be read ({error.strerror}).") from None


def find_encoding(path: Path, wanted: Wanted, *, tell: bool = True) -> tuple[str, int]:
    """Codec of a file, and how many bytes its byte order mark takes.

    Raises
    ------
    LogError
        The file is of another form altogether.
    """
    first = next(blocks(path, wanted.name), b"")
    for signature, what in _OTHER_FORMS.items():
        if first.startswith(signature):
            raise LogError(
                f"{wanted.name}: by its first bytes this is {what}, not text. Give it the ending of what it is "
                "(.xlsx, .ods, .parquet, .gz), or save it as CSV."
            )
    declared = wanted.form.encoding
    for mark, codec in _MARKS:
        if first.startswith(mark):
            if tell and declared is not None and not codec.startswith(declared):
                problem = f"the file's mark says {codec}, which is certain; `logs.file.encoding` was not used"
                wanted.note(None, declared, "encoding", problem)
            elif tell and declared is None and codec != "utf-8":
                wanted.note(None, codec, "encoding", "UTF-16, known by the file's byte order mark", "repaired")
            return codec, len(mark)
    if declared == "utf-16" and first[:1] == b"\0":
        return "utf-16-be", 0
    return _CODECS[declared or "utf-8"], 0


def whole_lines(path: Path, name: str, encoding: str, mark: int) -> Iterator[bytes]:
    """UTF-8 text of a file in chunks that end at the end of a line; the last may lack its line end.

    Raises
    ------
    LogError
        A byte does not fit the encoding, a byte is NUL, or a line is too long.
    """
    rest, line = b"", 1
    for block in _as_utf8(path, name, encoding, mark):
        held = rest + block
        # A carriage return in the last place may be half of a line end.
        cut = max(held.rfind(b"\n"), held.rfind(b"\r", 0, len(held) - 1)) + 1
        chunk, rest = held[:cut], held[cut:]
        if cut:
            _check(chunk, name, line, encoding)
            line += line_ends(chunk)
            yield chunk
        if len(rest) > LONGEST_LINE:
            raise LogError(f"{name}: line {line}: longer than {LONGEST_LINE // 10**6} MB. This is no table of rows.")
    if rest:
        _check(rest, name, line, encoding)
        yield rest


def _as_utf8(path: Path, name: str, encoding: str, mark: int) -> Iterator[bytes]:
    decoder = codecs.getincrementaldecoder(encoding)()
    line = 1
    for block in blocks(path, name):
        body, mark = block[mark:], 0
        if encoding == "utf-8":  # checked by chunks, where line numbers are known
            yield body
            continue
        try:
            text = decoder.decode(body)
        except UnicodeDecodeError as error:
            above = error.object[: error.start].decode(encoding, "ignore").count("\n")
            raise _bad_byte(name, line + above, error.object, error.start, encoding) from None
        line += text.count("\n")
        yield text.encode()
    try:
        yield decoder.decode(b"", final=True).encode()
    except UnicodeDecodeError as error:
        raise _bad_byte(name, line, error.object, error.start, encoding) from None


def _check(chunk: bytes, name: str, line: int, encoding: str) -> None:
    """Raise if a chunk is not UTF-8, or holds what no text holds."""
    if (at := chunk.find(b"\0")) >= 0:
        raise LogError(
            f"{name}: line {line + line_ends(chunk[:at])}: a NUL byte. The file is damaged, or it is UTF-16 without "
            'its mark: then set `logs.file.encoding` to "utf-16".'
        )
    try:
        text = chunk.decode()
    except UnicodeDecodeError as error:
        raise _bad_byte(name, line + line_ends(chunk[: error.start]), chunk, error.start, encoding) from None
    if encoding == "latin-1" and not chunk.isascii():
        for at, letter in enumerate(text):
            if "\x80" <= letter <= "\x9f":
                raise LogError(
                    f"{name}: line {line + text[:at].count(chr(10))}: byte {ord(letter):#04x} is no letter in Latin-1. "
                    'Set `logs.file.encoding` to "windows-1252", where it can be one.'
                )


def _bad_byte(name: str, line: int, data: bytes, at: int, encoding: str) -> LogError:
    """The message for a byte that does not fit the encoding, with what it would be in others."""
    if encoding != "utf-8":
        label = "Windows-1252" if encoding == "cp1252" else "UTF-16"
        where = f"{name}: line {line}: byte {data[at]:#04x} cannot be in {label}"
        return LogError(f"{where}, which `logs.file.encoding` or the file's mark says it is. Set the right encoding.")
    begin = max(data.rfind(b"\n", 0, at) + 1, at - 20)
    around = data[begin : at + 12].splitlines()[0]
    readings = dict.fromkeys(
        f"{around.decode(codec)!r} in {label}"
        for codec, label in (("cp1252", "Windows-1252"), ("latin-1", "Latin-1"))
        if _fits(around, codec)
    )
    return LogError(
        f"{name}: not UTF-8 (byte {data[at]:#04x} in line {line}; here it would be {' or '.join(readings)}). Save the log "
        'as UTF-8 CSV, or set `logs.file.encoding` to "windows-1252" or "latin-1" if that reads right.'
    )


def _fits(data: bytes, codec: str) -> bool:
    try:
        data.decode(codec)
    except UnicodeDecodeError:
        return False
    return True
