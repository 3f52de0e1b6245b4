"""Strict reading of STL files, binary and ASCII, also packed with gzip, in chunks and bounded memory.

A file is binary if and only if its size is 84 + 50·n for the count n in its header; beginning with "solid"
proves nothing. Stored normals and attribute bytes are ignored. Whatever is wrong is a MeshFileError; nothing is
mended.
"""

from __future__ import annotations

import gzip
import io
import re
from contextlib import closing
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, BinaryIO, TypeAlias, cast

import numpy as np

from core.errors import MeshFileError
from core.mesh.stl_faults import (
    BYTE_ORDER_MARK,
    HEADER,
    MOST_BYTES,
    RECORD,
    no_stl,
    reading,
    refuse_count,
    refuse_folder,
    refuse_size,
)
from core.mesh.stl_text import facets_of_text

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator

    from numpy.typing import NDArray

_SNIFF = 1024
# The end of the last solid may have a name, and blank lines after it.
_TAIL = 1 << 16
_SOLID_END = re.compile(rb"end[ \t]*solid", re.IGNORECASE)
_GZIP_MARK = b"\x1f\x8b"
# A read of this size fills the buffer of gzip's own reader a few times over.
_COUNTING_BLOCK = 1 << 20

_Opener: TypeAlias = "Callable[[], io.BufferedIOBase | io.RawIOBase]"


class BinaryStl:
    """The facets of a binary STL file whose size fits its count; made by open_stl or stl_of_bytes."""

    format = "binary STL"
    dtype: np.dtype[np.floating] = np.dtype("<f4")

    def __init__(self, name: str, opener: _Opener, count: int) -> None:
        self.name = name
        self.count = count
        self._opener = opener

    @property
    def steps(self) -> int:
        """Progress steps of one pass: one per facet."""
        return self.count

    def chunks(self, most: int) -> Iterator[tuple[NDArray[np.floating], int]]:
        """Yield (corners (n, 3, 3) float32, n); the array is a view of a buffer that the next chunk overwrites."""
        # No memory map: mapped pages count as the program's memory, a buffer that is used again does not grow.
        buffer = bytearray(RECORD * min(most, self.count))
        done = 0
        with reading(self.name), closing(self._opener()) as file:
            _fill(file, memoryview(bytearray(HEADER)))
            while done < self.count:
                count = min(most, self.count - done)
                got = _fill(file, memoryview(buffer)[: RECORD * count])
                if got < RECORD * count:
                    raise MeshFileError(
                        "the file became shorter while it was read",
                        where=f"{self.name}, facet {done + got // RECORD + 1}",
                        read=f"{HEADER + RECORD * done + got} bytes",
                        remedy="Read it again once nothing writes to it",
                    )
                yield corners_of_records(buffer, count), count
                done += count


class AsciiStl:
    """The facets of an ASCII STL file, parsed as they are asked for; made by open_stl or stl_of_bytes."""

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
        with reading(self.name), closing(self._opener()) as file:
            for corners, steps in facets_of_text(cast("BinaryIO", file), self.name):
                for start in range(0, len(corners), most):
                    yield corners[start : start + most], 0 if start else steps

    def ends_as_it_should(self) -> bool:
        """Return whether the last solid has its end: a text that was cut short between two facets has none."""
        with reading(self.name), closing(self._opener()) as file:
            file.seek(max(self._size - _TAIL, 0))
            return _SOLID_END.search(file.read()) is not None


def open_stl(path: str | Path) -> BinaryStl | AsciiStl:
    """Return the facets of an STL file, after its head and size have been judged.

    Raises:
        MeshFileError: missing, a folder, unreadable, or no sound STL file.
    """
    path = Path(path)
    refuse_folder(path)
    with reading(str(path)), path.open("rb") as file:
        head = file.read(_SNIFF)
        size = file.seek(0, io.SEEK_END)
    # Unbuffered: chunks are large, and go straight into a buffer that is used again.
    return _judge(str(path), partial(io.FileIO, path), head, size)


def stl_of_bytes(data: bytes, name: str) -> BinaryStl | AsciiStl:
    """Return the facets of an STL file that is already in memory; name stands in messages.

    Raises:
        MeshFileError: no sound STL file.
    """
    return _judge(name, partial(io.BytesIO, data), data[:_SNIFF], len(data))


def corners_of_records(buffer: bytes | bytearray, count: int, offset: int = 0) -> NDArray[np.floating]:
    """Return a (count, 3, 3) float32 view of the corners of binary STL records that begin at offset."""
    return np.ndarray((count, 3, 3), np.dtype("<f4"), buffer, offset + 12, (RECORD, 12, 4))


def is_packed(data: bytes) -> bool:
    """Tell whether bytes begin as a gzip file does."""
    return data[:2] == _GZIP_MARK


def unpacked(data: bytes, name: str) -> bytes:
    """Return gzip'ed bytes unpacked.

    Raises:
        MeshFileError: damaged, packed twice, or too large once unpacked.
    """
    with reading(name), gzip.open(io.BytesIO(data)) as file:
        content = file.read(MOST_BYTES + 1)
    refuse_size(name, len(content))
    # Kept as it is, it would be unpacked for the survey and taken for facets everywhere else.
    if is_packed(content):
        raise no_stl(name, content[:_SNIFF], len(content))
    return content


def _judge(name: str, opener: _Opener, head: bytes, size: int) -> BinaryStl | AsciiStl:
    if is_packed(head):
        opener = partial(_Packed, opener)
        with reading(name), closing(opener()) as file:
            head, size = _measure(file, name)
        if is_packed(head):
            raise no_stl(name, head, size)
    if size >= HEADER and size == HEADER + RECORD * (count := int.from_bytes(head[80:HEADER], "little")):
        refuse_count(name, count)
        return BinaryStl(name, opener, count)
    text = head.removeprefix(BYTE_ORDER_MARK).lstrip()
    if text[:5].lower() == b"solid" and b"\0" not in head:
        refuse_size(name, size)
        return AsciiStl(name, opener, size)
    raise no_stl(name, head, size)


class _Packed(gzip.GzipFile):
    """A gzip reader that closes the file it reads from too."""

    def __init__(self, opener: _Opener) -> None:
        self._packed_file = opener()
        super().__init__(fileobj=cast("BinaryIO", self._packed_file), mode="rb")

    def close(self) -> None:
        """Close both files."""
        super().close()
        self._packed_file.close()


def _measure(file: io.BufferedIOBase | io.RawIOBase, name: str) -> tuple[bytes, int]:
    """Return the head and the unpacked size, which a gzip file itself tells only modulo 2³²."""
    buffer = memoryview(bytearray(_COUNTING_BLOCK))
    head, size = b"", 0
    while got := _fill(file, buffer):
        head = head or bytes(buffer[: min(got, _SNIFF)])
        size += got
        refuse_size(name, size)
    return head, size


def _fill(file: io.BufferedIOBase | io.RawIOBase, target: memoryview) -> int:
    """Read until target is full or the file ends; return how many bytes were read."""
    got = 0
    while got < len(target):
        read = file.readinto(target[got:])
        if not read:
            break
        got += read
    return got
