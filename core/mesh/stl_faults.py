"""The refusals of STL files: what a file that is not a sound one is instead, in one line each."""

from __future__ import annotations

import gzip
import zlib
from contextlib import contextmanager
from typing import TYPE_CHECKING

from core.errors import MeshFileError

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

HEADER, RECORD = 84, 50

# 10 GB of binary STL: more than any part, and far from overflowing a count.
MOST_FACETS = 200_000_000
MOST_BYTES = HEADER + RECORD * MOST_FACETS

BYTE_ORDER_MARK = b"\xef\xbb\xbf"
AGAIN = "Export or copy the file again"
MEND = "Mend the part where it was made and export it again"
COARSER = "Export the part with a coarser tolerance"

_OTHER_FORMATS = (
    (b"<!doctype html", "a web page"), (b"<html", "a web page"), (b"<", "an XML file"),
    (b"pk\x03\x04", "a ZIP archive"), (b"ply\n", "a PLY file"), (b"ply\r", "a PLY file"), (b"off\n", "an OFF file"),
    (b"iso-10303-21", "a STEP file"), (b"%pdf", "a PDF file"), (b"\x89png", "a picture"), (b"gltf", "a glTF file"),
    (b"{", "a JSON file"),
    (b"\x1f\x8b", "a file packed twice with gzip"),
)
_TEXT_BYTES = frozenset((*range(9, 14), *range(32, 127)))


@contextmanager
def reading(name: str) -> Iterator[None]:
    """Turn what the system says about a file of this name into a MeshFileError."""
    try:
        yield
    except FileNotFoundError as fault:
        raise MeshFileError("there is no such file", where=name, remedy="Check the path") from fault
    except (gzip.BadGzipFile, EOFError, zlib.error) as fault:
        said = str(fault).rstrip(".")
        raise MeshFileError("the gzip packing is damaged", where=name, read=said, remedy=AGAIN) from fault
    except OSError as fault:
        raise MeshFileError(
            "the file cannot be read", where=name, read=fault.strerror or str(fault),
            remedy="Check that it is there and that you may read it",
        ) from fault


def refuse_folder(path: Path) -> None:
    """Refuse a folder, and what is there but no file: a pipe can be read only once.

    Raises:
        MeshFileError: path is one of these.
    """
    if path.is_dir():
        raise MeshFileError("this is a folder, not a mesh file", where=str(path), remedy="Name an STL file in it")
    if path.exists() and not path.is_file():
        raise MeshFileError("this is a pipe or a device, not a file", where=str(path), remedy="Save it as a file first")


def refuse_size(name: str, size: int) -> None:
    """Refuse more bytes than are taken.

    Raises:
        MeshFileError: size in bytes is above MOST_BYTES.
    """
    if size > MOST_BYTES:
        raise MeshFileError(
            f"files of more than {MOST_BYTES} bytes are not taken", where=name, read=f"{size} bytes or more",
            remedy=COARSER,
        )


def refuse_count(name: str, count: int) -> None:
    """Refuse the count of a file whose size fits it.

    Raises:
        MeshFileError: no facets, or more than MOST_FACETS.
    """
    if count == 0:
        raise MeshFileError("the file holds no facets", where=name, read="a count of 0 at byte 80", remedy=AGAIN)
    if count > MOST_FACETS:
        raise MeshFileError(
            f"more than {MOST_FACETS} facets are not taken", where=name, read=f"a count of {count} at byte 80",
            remedy=COARSER,
        )


def no_stl(name: str, head: bytes, size: int) -> MeshFileError:
    """Return the error for a file of size bytes that is neither binary STL of the right size nor ASCII STL."""
    if size == 0:
        return MeshFileError("the file is empty", where=name, read="0 bytes", remedy=AGAIN)
    text = head.removeprefix(BYTE_ORDER_MARK).lstrip()
    kind = _other_kind(text, head)
    if kind:
        return MeshFileError(
            f"this is {kind}, not an STL file", where=name, read=_excerpt(text), remedy="Export the part as STL"
        )
    if size < HEADER:
        return MeshFileError(
            "the file is too short for an STL file", where=name,
            read=f"{size} bytes where the header alone takes {HEADER}", remedy=AGAIN,
        )
    return _wrong_size(name, size, int.from_bytes(head[80:HEADER], "little"))


def _wrong_size(name: str, size: int, count: int) -> MeshFileError:
    needed, body = HEADER + RECORD * count, size - HEADER
    if count > MOST_FACETS:
        what, remedy = "the header announces an absurd number of facets", f"If it is meant to be STL, {_lower(AGAIN)}"
    elif body % RECORD == 0:
        what = "the facet count in the header does not fit the file"
        remedy = f"The file was cut or its header is wrong. {AGAIN}"
    elif size < needed:
        what, remedy = "the file is cut short", f"It was not copied or written to its end. {AGAIN}"
    else:
        what, remedy = "bytes follow after the last facet", f"Something was appended to the file. {AGAIN}"
    read = (
        f"a count of {count} at byte 80, which needs {needed} bytes,"
        f" in a file of {size} bytes with room for {body // RECORD} whole facets"
    )
    return MeshFileError(what, where=name, read=read, remedy=remedy)


def _other_kind(text: bytes, head: bytes) -> str:
    """Return in words what else a file is, by its first bytes; "" where they say nothing."""
    start = text[:64].lower()
    for mark, kind in _OTHER_FORMATS:
        if start.startswith(mark):
            return kind
    return 'a text that does not begin with "solid"' if _TEXT_BYTES.issuperset(head) else ""


def _excerpt(text: bytes) -> str:
    shown = " ".join(text[:40].decode("ascii", "replace").split())
    return f'"{"".join(sign if sign.isprintable() else "?" for sign in shown)}"'


def _lower(sentence: str) -> str:
    return sentence[0].lower() + sentence[1:]
