"""The ZIP around a document: every size bounded on reading, the same bytes for the same content on writing.

Entries are looked up by the names that the document asks for; no name in an archive is ever used as a path.
"""

from __future__ import annotations

import hashlib
import zipfile
import zlib
from typing import IO, TYPE_CHECKING

from core.errors import DocumentError

if TYPE_CHECKING:
    from collections.abc import Mapping

JSON_NAME = "assembly.json"

MOST_ENTRIES = 10_000
MOST_JSON_BYTES = 256 * 2**20
MOST_MESH_BYTES = 2 * 2**30
MOST_BYTES = 8 * 2**30
# Packed tighter than this, a file that is not small is a trap: meshes pack by 3 to 10,
# the JSON of thousands of equal parts by about 100.
TIGHTEST = 400
_TIGHT_MATTERS_FROM = 2**20

_TAKEN = {zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED}
_FLAG_ENCRYPTED = 0x1
_DAMAGED = "Take the last good copy, or ask for the file again"


class Archive:
    """A document's archive, open for reading.

    Raises:
        DocumentError: it is empty, no ZIP, cut off, or larger than any document.

    """

    def __init__(self, file: IO[bytes]) -> None:
        if not file.read(1):
            raise DocumentError("the file is empty", remedy=_DAMAGED)
        file.seek(0)
        start = file.read(4)
        try:
            self._zip = zipfile.ZipFile(file)
        except (zipfile.BadZipFile, NotImplementedError, ValueError, OverflowError) as error:
            raise _no_zip(start) from error
        self._entries = self._checked()

    def json(self) -> bytes:
        """Return the bytes of assembly.json."""
        if JSON_NAME not in self._entries:
            raise DocumentError(
                f"the archive holds no {JSON_NAME}, so it is no Masswright document",
                remedy="Choose a .masswright file",
            )
        return self._bytes(JSON_NAME, MOST_JSON_BYTES)

    def mesh(self, sha256: str) -> bytes:
        """Return the bytes of a mesh file, held against the SHA-256 that it is filed under."""
        name = mesh_name(sha256)
        if name not in self._entries:
            raise DocumentError("this mesh is not in the archive", where=name, remedy=_DAMAGED)
        data = self._bytes(name, MOST_MESH_BYTES)
        found = hashlib.sha256(data).hexdigest()
        if found != sha256:
            raise DocumentError(
                "a mesh in the archive is not the one that was saved there", where=name,
                read=f"a file with SHA-256 {found[:12]}…", remedy=_DAMAGED,
            )
        return data

    def _checked(self) -> dict[str, zipfile.ZipInfo]:
        infos = self._zip.infolist()
        if len(infos) > MOST_ENTRIES:
            raise DocumentError(
                f"a document holds at most {MOST_ENTRIES} files", read=str(len(infos)),
                remedy="Choose a .masswright file",
            )
        entries = {info.filename: info for info in infos}
        if len(entries) != len(infos):
            raise DocumentError("the archive holds two files of the same name", remedy=_DAMAGED)
        if sum(info.file_size for info in infos) > MOST_BYTES:
            raise _too_large("the archive", sum(info.file_size for info in infos), MOST_BYTES)
        return entries

    def _bytes(self, name: str, most: int) -> bytes:
        info = self._entries[name]
        if info.file_size > most:
            raise _too_large(name, info.file_size, most)
        if info.flag_bits & _FLAG_ENCRYPTED or info.compress_type not in _TAKEN:
            raise DocumentError(
                "this file in the archive is encrypted or packed in an unusual way", where=name,
                remedy="Save the document with Masswright itself",
            )
        if info.file_size > _TIGHT_MATTERS_FROM and info.file_size > TIGHTEST * info.compress_size:
            raise DocumentError(
                "this file in the archive is packed tighter than any document", where=name,
                read=f"{info.file_size} bytes in {info.compress_size}", remedy=_DAMAGED,
            )
        try:
            # zipfile yields no more than the size just checked, and holds the bytes against their CRC.
            data = self._zip.read(info)
        # ValueError: the place that the archive's list gives lies before the file's start.
        except (zipfile.BadZipFile, zlib.error, EOFError, NotImplementedError, ValueError) as error:
            raise DocumentError(
                "this file in the archive is damaged or cut off", where=name, remedy=_DAMAGED
            ) from error
        if len(data) != info.file_size:
            raise DocumentError(
                "this file in the archive is cut off", where=name,
                read=f"{len(data)} of {info.file_size} bytes", remedy=_DAMAGED,
            )
        return data


def mesh_name(sha256: str) -> str:
    """Return the name of a mesh file in the archive."""
    return f"meshes/{sha256}.stl"


def write_archive(file: IO[bytes], json: bytes, meshes: Mapping[str, bytes]) -> None:
    """Write assembly.json and the mesh files (by SHA-256) as an archive whose bytes depend on nothing else.

    Nothing is packed: the bytes then do not hang on the version of the packer, and saving large meshes takes
    no longer than writing them.
    """
    with zipfile.ZipFile(file, "w", zipfile.ZIP_STORED) as archive:
        archive.writestr(_entry(JSON_NAME), json)
        for sha256 in sorted(meshes):
            archive.writestr(_entry(mesh_name(sha256)), meshes[sha256])


def _entry(name: str) -> zipfile.ZipInfo:
    info = zipfile.ZipInfo(name, date_time=(1980, 1, 1, 0, 0, 0))
    info.create_system = 3
    info.external_attr = 0o644 << 16
    return info


def _no_zip(start: bytes) -> DocumentError:
    if start == b"PK\x03\x04":
        return DocumentError(
            "the file is damaged or cut off: the list of its contents at the end is missing", remedy=_DAMAGED
        )
    return DocumentError(
        "the file is no Masswright document", read=f"a file that begins with {start!r}",
        remedy="Choose a .masswright file; a mesh is added to a document as a part",
    )


def _too_large(where: str, size: int, most: int) -> DocumentError:
    return DocumentError(
        f"this is larger than any document: at most {most // 2**20} MB are read", where=where,
        read=f"{size // 2**20} MB", remedy="Choose a .masswright file, or use a lighter mesh",
    )
