"""A package of files: a folder or a zip, of which only what lies inside is ever opened, and never more than is bearable."""

from __future__ import annotations

import gzip
import io
import json
import lzma
import stat
import struct
import zipfile
import zlib
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import IO, Any, Protocol, cast

from niche.errors import LogError

MOST_MEMBERS = 10_000
MOST_BYTES = 8 << 30
"""Bytes that a package may hold unpacked."""
ALWAYS_BEARABLE = 64 << 20
MOST_RATIO = 200
"""Above `ALWAYS_BEARABLE` bytes, how many times its packed size a file may unpack to; text packs 5 to 30 times."""
MOST_DESCRIPTOR = 16 << 20


_DAMAGE = (OSError, EOFError, zlib.error, lzma.LZMAError, struct.error, zipfile.BadZipFile, NotImplementedError)
"""What a damaged zip or gzip raises while it is read."""


class Package(Protocol):
    """Where the files of a package lie."""

    @property
    def name(self) -> str:
        """The package as messages call it."""
        ...

    def open(self, member: str) -> IO[bytes]:
        """Open a file of the package, named relative to its descriptor."""
        ...

    def label(self, member: str) -> str:
        """The file as messages call it."""
        ...


@dataclass(frozen=True)
class Folder:
    """A package in a folder; ``name`` is the folder as messages call it, empty for the study's own."""

    root: Path
    name: str

    def open(self, member: str) -> IO[bytes]:
        """Open a file inside the folder."""
        path = self.root.joinpath(*inside(member, self.name or str(self.root)).parts)
        try:
            if not path.resolve().is_relative_to(self.root.resolve()):
                raise LogError(
                    f"{self.label(member)}: leads out of the folder of the package. Put the file itself there."
                )
            return path.open("rb")
        except FileNotFoundError:
            raise LogError(f"{self.label(member)}: the package names this file, and there is no such file.") from None
        except (OSError, RuntimeError, ValueError) as error:  # a loop of links; a name that no file can have
            raise LogError(f"{self.label(member)}: cannot be read ({getattr(error, 'strerror', error)}).") from None

    def label(self, member: str) -> str:
        """The path of the file, as far as messages tell."""
        return f"{self.name}/{member}" if self.name else member


@dataclass(frozen=True)
class Zip:
    """A package in a zip; ``base`` is the folder inside it that holds the descriptor."""

    path: Path
    name: str
    base: PurePosixPath
    members: dict[str, zipfile.ZipInfo]

    def open(self, member: str) -> IO[bytes]:
        """Open a file of the zip."""
        inner = str(self.base / inside(member, self.name))
        if inner not in self.members:
            raise LogError(f"{self.label(member)}: the package names this file, and the zip holds none of that name.")
        info = self.members[inner]
        refuse_bomb(self.label(member), info.compress_size, info.file_size)
        try:
            archive = zipfile.ZipFile(self.path)
            return _Member(archive, archive.open(info))
        except (OSError, zipfile.BadZipFile, RuntimeError, NotImplementedError) as error:
            raise LogError(f"{self.label(member)}: cannot be unpacked ({error}).") from None

    def label(self, member: str) -> str:
        """The zip and the file in it."""
        return f"{self.name}/{member}"


class _Member(io.BufferedReader):
    """A file of a zip that closes the zip with itself."""

    def __init__(self, archive: zipfile.ZipFile, stream: IO[bytes]) -> None:
        super().__init__(cast(io.RawIOBase, stream))
        self._archive = archive

    def close(self) -> None:
        super().close()
        self._archive.close()


def open_package(path: Path, name: str, descriptor: str) -> Package:
    """The package that a path names.

    Parameters
    ----------
    path : Path
        A zip, a folder, or the descriptor itself.
    name : str
        The path as messages call it.
    descriptor : str
        File that makes it a package, such as ``meta.xml``.

    Raises
    ------
    LogError
        It is no such package, or unpacks to more than is bearable.
    """
    if path.is_dir():
        return Folder(path, name)
    if path.name == descriptor:
        parent = PurePosixPath(name).parent
        return Folder(path.parent, "" if str(parent) == "." else str(parent))
    members = _members(path, name)
    found = sorted((m for m in members if PurePosixPath(m).name == descriptor), key=lambda m: (m.count("/"), m))
    if not found:
        raise LogError(f"{name}: the zip holds no {descriptor}, so it is no package of this kind.")
    return Zip(path, name, PurePosixPath(found[0]).parent, members)


def inside(member: str, package: str) -> PurePosixPath:
    """A path that a descriptor gives, refused unless it stays inside the package."""
    path = PurePosixPath(member)
    outside = path.is_absolute() or ".." in path.parts or "\\" in member or "\0" in member or "://" in member
    if outside or not path.parts or ":" in path.parts[0]:
        raise LogError(
            f"{package}: the package names the file {member!r}; only files inside the package are read, by paths such as "
            "occurrence.txt or tables/occurrence.txt."
        )
    return path


def refuse_bomb(name: str, packed: int, unpacked: int) -> None:
    """Raise LogError for a file that would unpack to more than is bearable."""
    if unpacked > MOST_BYTES or (unpacked > ALWAYS_BEARABLE and unpacked > MOST_RATIO * max(packed, 1)):
        raise LogError(
            f"{name}: {packed} bytes would unpack to {unpacked}, which no log does; it is not read. Unpack it by hand and "
            "look at it first."
        )


def _members(path: Path, name: str) -> dict[str, zipfile.ZipInfo]:
    try:
        with zipfile.ZipFile(path) as archive:
            listed = archive.infolist()
    except FileNotFoundError:
        raise LogError(f"{name}: there is no such file.") from None
    except (OSError, zipfile.BadZipFile, NotImplementedError, ValueError, EOFError) as error:
        raise LogError(f"{name}: not a zip that can be read ({error}).") from None
    if len(listed) > MOST_MEMBERS:
        raise LogError(f"{name}: the zip holds {len(listed)} files; at most {MOST_MEMBERS} are read.")
    refuse_bomb(name, sum(info.compress_size for info in listed), sum(info.file_size for info in listed))
    members = {}
    for info in listed:
        if info.is_dir():
            continue
        inside(info.filename, name)
        if stat.S_ISLNK(info.external_attr >> 16):
            raise LogError(f"{name}: {info.filename!r} is a link; a package holds the files themselves.")
        if info.flag_bits & 1:
            raise LogError(f"{name}: {info.filename!r} is locked with a password. Unpack the zip, and name the folder.")
        members[str(PurePosixPath(info.filename))] = info
    return members


@contextmanager
def opened(package: Package, member: str) -> Iterator[IO[bytes]]:
    """A file of a package, unpacked where it is gzip; trouble while it is read becomes a LogError."""
    label = package.label(member)
    with package.open(member) as stream, readable(stream, label, packed=member.lower().endswith(".gz")) as plain:
        yield plain


@contextmanager
def readable(stream: IO[bytes], label: str, *, packed: bool) -> Iterator[IO[bytes]]:
    """A stream, unpacked where it is gzip and counted while it is; trouble while it is read becomes a LogError."""
    try:
        yield io.BufferedReader(_Counted(stream, label)) if packed else stream
    except _DAMAGE as error:
        raise LogError(f"{label}: cannot be read to its end ({error}).") from None


class _Counted(io.RawIOBase):
    """Unpacks gzip and refuses to go on where that yields more than is bearable."""

    def __init__(self, stream: IO[bytes], label: str) -> None:
        self._packed, self._label, self._size = stream, label, 0
        self._plain = gzip.GzipFile(fileobj=stream)

    def readable(self) -> bool:
        return True

    def readinto(self, buffer: Any) -> int:
        data = self._plain.read(len(buffer))
        buffer[: len(data)] = data
        self._size += len(data)
        if self._size > ALWAYS_BEARABLE:
            refuse_bomb(self._label, self._packed.tell(), self._size)
        return len(data)


def read_descriptor(stream: IO[bytes], label: str) -> dict[str, Any]:
    """A JSON object, refused where it is larger or deeper than any descriptor is."""
    content = read_small(stream, label)
    try:
        value = json.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError:
        raise LogError(f"{label}: not UTF-8. Save the descriptor as UTF-8.") from None
    except (ValueError, RecursionError) as error:
        raise LogError(f"{label}: not valid JSON ({error}).") from None
    if not isinstance(value, dict):
        raise LogError(f"{label}: a descriptor is a JSON object, in curly brackets.")
    return value


def read_small(stream: IO[bytes], label: str) -> bytes:
    """All of a small file."""
    content = stream.read(MOST_DESCRIPTOR + 1)
    if len(content) > MOST_DESCRIPTOR:
        raise LogError(f"{label}: larger than {MOST_DESCRIPTOR} bytes, which no descriptor is.")
    return content
