"""Strict reading of STL files, binary and ASCII, also packed with gzip, in chunks and bounded memory.

A file is binary if and only if its size is 84 + 50·n for the count n in its header; beginning with "solid" proves
nothing. Stored normals and attribute bytes are ignored. Whatever is wrong is a MeshFileError; nothing is mended.
"""

from __future__ import annotations

import gzip
import io
import zlib
from contextlib import closing
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, BinaryIO, TypeAlias

import numpy as np

from core.errors import MeshFileError
from core.mesh.stl_text import facets_of_text

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from numpy.typing import NDArray

HEADER, RECORD = 84, 50

# 10 GB of binary STL: more than any part, and far from overflowing a count.
MOST_FACETS = 200_000_000

_SNIFF = 1024
_GZIP_MARK = b"\x1f\x8b"
_BYTE_ORDER_MARK = b"\xef\xbb\xbf"
_AGAIN = "Export or copy the file again"
_NOT_STL = "Export the part as STL"

_Opener: TypeAlias = "Callable[[], BinaryIO]"


class BinaryStl:
    """The facets of a binary STL file whose size fits its count; made by open_stl."""

    format = "binary STL"
    dtype: np.dtype[np.floating] = np.dtype("<f4")

    def __init__(self, name: str, opener: _Opener, count: int) -> None:
        self.name = name
        self._opener = opener
        self.count = count

    @property
    def steps(self) -> int:
        """Progress steps of one pass: one per facet."""
        return self.count

    def chunks(self, most: int) -> Iterator[tuple[NDArray[np.floating], int]]:
        """Yield (corners (n, 3, 3) float32, n); the array is a view of a buffer that the next chunk overwrites."""
        buffer = bytearray(RECORD * min(most, self.count))
        done = 0
        with _reading(self.name), closing(self._opener()) as file:
            _fill(file, memoryview(bytearray(HEADER)))
            while done < self.count:
                count = min(most, self.count - done)
                got = _fill(file, memoryview(buffer)[: RECORD * count])
                if got < RECORD * count:
                    raise MeshFileError(
                        "the file became shorter while it was read", where=f"{self.name}, facet {done + got // RECORD + 1}",
                        read=f"{HEADER + RECORD * done + got} bytes", remedy="Read it again once nothing writes to it",
                    )
                yield corners_of_records(buffer, count), count
                done += count


class AsciiStl:
    """The facets of an ASCII STL file, parsed as they are asked for; made by open_stl."""

    format = "ASCII STL"
    dtype: np.dtype[np.floating] = np.dtype(np.float64)

    def __init__(self, name: str, opener: _Opener, size: int) -> None:
        self.name = name
        self._opener = opener
        self._size = size

    @property
    def steps(self) -> int:
        """Progress steps of one pass: one per byte."""
        return self._size

    def chunks(self, most: int) -> Iterator[tuple[NDArray[np.floating], int]]:
        """Yield (corners (n, 3, 3) float64, bytes read for them)."""
        with _reading(self.name), closing(self._opener()) as file:
            for corners, steps in facets_of_text(file, self.name):
                for start in range(0, len(corners), most):
                    yield corners[start : start + most], 0 if start else steps


def open_stl(path: str | Path) -> BinaryStl | AsciiStl:
    """Return the facets of an STL file, after its head and size have been judged.

    Raises:
        MeshFileError: missing, a directory, unreadable, or no sound STL file.
    """
    path = Path(path)
    if path.is_dir():
        raise MeshFileError("this is a folder, not a mesh file", where=str(path), remedy="Name an STL file in it")
    with _reading(str(path)), path.open("rb") as file:
        head = file.read(_SNIFF)
        size = file.seek(0, io.SEEK_END)
    # Unbuffered: chunks are large, and go straight into a buffer that is used again.
    return _judge(str(path), partial(path.open, "rb", buffering=0), head, size)


def stl_of_bytes(data: bytes, name: str) -> BinaryStl | AsciiStl:
    """Return the facets of an STL file that is already in memory; name stands in messages.

    Raises:
        MeshFileError: no sound STL file.
    """
    return _judge(name, partial(io.BytesIO, data), data[:_SNIFF], len(data))


def corners_of_records(buffer: bytes | bytearray | memoryview, count: int, offset: int = 0) -> NDArray[np.floating]:
    """Return a (count, 3, 3) float32 view of the corners of binary STL records that begin at offset."""
    shape, strides = (count, 3, 3), (RECORD, 12, 4)
    return np.ndarray(shape, np.dtype("<f4"), buffer, offset + 12, strides)


def is_packed(data: bytes) -> bool:
    """Tell whether bytes begin as a gzip file does."""
    return data[:2] == _GZIP_MARK


def unpacked(data: bytes, name: str) -> bytes:
    """Return gzip'ed bytes unpacked, within the size that MOST_FACETS allows.

    Raises:
        MeshFileError: damaged, or too large once unpacked.
    """
    with _reading(name), gzip.open(io.BytesIO(data)) as file:
        content = file.read(HEADER + RECORD * MOST_FACETS + 1)
    _check_size(name, len(content))
    return content


def _judge(name: str, opener: _Opener, head: bytes, size: int) -> BinaryStl | AsciiStl:
    if is_packed(head):
        opener = partial(_open_packed, opener)
        with _reading(name), closing(opener()) as file:
            head, size = _measure(file, name)
    if size == 0:
        raise MeshFileError("the file is empty", where=name, read="0 bytes", remedy=_AGAIN)
    count = int.from_bytes(head[80:HEADER], "little") if size >= HEADER else -1
    if size == HEADER + RECORD * count:
        _check_count(name, count)
        return BinaryStl(name, opener, count)
    text = head.removeprefix(_BYTE_ORDER_MARK).lstrip()
    if text[:5].lower() == b"solid" and b"\0" not in head:
        _check_size(name, size)
        return AsciiStl(name, opener, size)
    raise _no_stl(name, head, size, count)


def _check_count(name: str, count: int) -> None:
    if count == 0:
        raise MeshFileError("the file holds no facets", where=name, read="a count of 0", remedy=_AGAIN)
    if count > MOST_FACETS:
        raise MeshFileError(
            f"more than {MOST_FACETS} facets are not taken", where=name, read=f"a count of {count} at byte 80",
            remedy="Export the part with a coarser tolerance",
        )


def _check_size(name: str, size: int) -> None:
    most = HEADER + RECORD * MOST_FACETS
    if size > most:
        raise MeshFileError(
            f"files of more than {most} bytes are not taken", where=name, read=f"{size} bytes",
            remedy="Export the part with a coarser tolerance",
        )


def _no_stl(name: str, head: bytes, size: int, count: int) -> MeshFileError:
    """Return the error for a file that is neither a binary STL file of the right size nor an ASCII one."""
    text = head.removeprefix(_BYTE_ORDER_MARK).lstrip()
    kind = _other_kind(text, head)
    if kind:
        return MeshFileError(f"this is {kind}, not an STL file", where=name, read=_excerpt(text), remedy=_NOT_STL)
    if size < HEADER:
        return MeshFileError(
            "the file is too short for an STL file", where=name,
            read=f"{size} bytes where the header alone takes {HEADER}", remedy=_AGAIN,
        )
    body = size - HEADER
    fits = f"a count of {count} at byte 80, which needs {HEADER + RECORD * count} bytes, in a file of {size} bytes"
    room = f"room for {body // RECORD} whole facets"
    if count > MOST_FACETS:
        what = "the header announces an absurd number of facets"
        return MeshFileError(what, where=name, read=f"{fits}, {room}", remedy=f"If it is meant to be STL: {_AGAIN.lower()}")
    if body % RECORD == 0:
        what, remedy = "the facet count in the header does not fit the file", f"The file was cut or its header is wrong. {_AGAIN}"
    elif body < RECORD * count:
        what, remedy = "the file is cut short", f"It was not copied or written to its end. {_AGAIN}"
    else:
        what, remedy = "bytes follow after the last facet", f"Something was appended to the file. {_AGAIN}"
    return MeshFileError(what, where=name, read=f"{fits}, {room}", remedy=remedy)


def _other_kind(text: bytes, head: bytes) -> str:
    """Return in words what else a file is, by its first bytes; "" where they say nothing."""
    start = text[:64].lower()
    marks = (
        (b"<!doctype html", "a web page"), (b"<html", "a web page"), (b"<", "an XML file"), (b"pk\x03\x04", "a ZIP archive"),
        (b"ply\n", "a PLY file"), (b"ply\r", "a PLY file"), (b"off\n", "an OFF file"), (b"iso-10303-21", "a STEP file"),
        (b"%pdf", "a PDF file"), (b"\x89png", "a picture"), (b"gltf", "a glTF file"), (b"{", "a JSON file"),
    )
    for mark, kind in marks:
        if start.startswith(mark):
            return kind
    printable = head and not any(byte < 9 or 13 < byte < 32 or byte > 126 for byte in head)
    return "a text that does not begin with \"solid\"" if printable else ""


def _excerpt(text: bytes) -> str:
    shown = " ".join(text[:40].decode("ascii", "replace").split())
    return f'"{"".join(sign if sign.isprintable() else "?" for sign in shown)}"'


def _open_packed(opener: _Opener) -> BinaryIO:
    return io.BufferedReader(_Packed(opener()))


class _Packed(gzip.GzipFile):
    """A gzip reader that closes the file it reads from too."""

    def __init__(self, file: BinaryIO) -> None:
        super().__init__(fileobj=file, mode="rb")
        self._file = file

    def close(self) -> None:
        super().close()
        self._file.close()


def _measure(file: BinaryIO, name: str) -> tuple[bytes, int]:
    """Return the head and the unpacked size, which a gzip file itself tells only modulo 2³²."""
    buffer = memoryview(bytearray(1 << 20))
    head, size = b"", 0
    while got := _fill(file, buffer):
        head = head or bytes(buffer[: min(got, _SNIFF)])
        size += got
        _check_size(name, size)
    return head, size


def _fill(file: BinaryIO, target: memoryview) -> int:
    """Read until target is full or the file ends; return how many bytes were read."""
    got = 0
    while got < len(target):
        read = file.readinto(target[got:])  # type: ignore[attr-defined]  # typeshed's BinaryIO leaves readinto out
        if not read:
            break
        got += read
    return got


class _reading:  # noqa: N801  # used as a context manager, like contextlib.closing
    """Turn what the system says about a file into a MeshFileError."""

    def __init__(self, name: str) -> None:
        self._name = name

    def __enter__(self) -> None:
        return None

    def __exit__(self, kind: type[BaseException] | None, fault: BaseException | None, trace: object) -> None:
        if isinstance(fault, FileNotFoundError):
            raise MeshFileError("there is no such file", where=self._name, remedy="Check the path") from fault
        if isinstance(fault, (gzip.BadGzipFile, EOFError, zlib.error)):
            raise MeshFileError(
                "the gzip packing is damaged", where=self._name, read=str(fault).rstrip("."), remedy=_AGAIN
            ) from fault
        if isinstance(fault, OSError):
            raise MeshFileError(
                "the file cannot be read", where=self._name, read=fault.strerror or str(fault),
                remedy="Check that it is there and that you may read it",
            ) from fault
