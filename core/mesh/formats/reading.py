"""A mesh file read by the format that its name says."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from types import MappingProxyType
from typing import TYPE_CHECKING

from core.errors import MeshFileError
from core.mesh.asset import MeshAsset
from core.mesh.formats.bodies import MOST_BYTES
from core.mesh.formats.glb import read_glb
from core.mesh.formats.obj import read_obj
from core.mesh.formats.off import read_off
from core.mesh.formats.ply import read_ply
from core.mesh.formats.three_mf import read_3mf
from core.mesh.stl_faults import AGAIN, COARSER, reading, refuse_folder
from core.mesh.stl_writing import stl_of_triangles

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from core.mesh.formats.bodies import RawBody, RawFile
    from core.progress import Progress

# Suffix → what the format is called; "stl.gz" is taken as well.
FORMATS: Mapping[str, str] = MappingProxyType({
    "stl": "STL", "obj": "OBJ", "ply": "PLY", "off": "OFF", "3mf": "3MF", "glb": "GLB",
})
# What a body is called in its file is shown and saved, so it is not taken at any length.
_LONGEST_NAME = 100
_READERS: Mapping[str, Callable[[bytes, str, Progress | None], RawFile]] = MappingProxyType({
    "obj": read_obj,
    "ply": lambda data, name, _: read_ply(data, name),
    "off": lambda data, name, _: read_off(data, name),
    "3mf": read_3mf,
    "glb": lambda data, name, _: read_glb(data, name),
})


def read_bodies(path: str | Path, progress: Progress | None = None) -> tuple[MeshAsset, ...]:
    """Return the bodies of a mesh file, at least one, in the file's own frame and length unit.

    The suffix says the format; a file with another suffix is read as STL. A body is named after the file, of several
    each with its own name behind it, numbered where it has none. metres_per_unit is the unit that the file itself
    names: of 3MF as written in it, of GLB metres, of others None. Bodies of formats other than STL are held as binary
    STL, their coordinates rounded to about seven digits.

    Raises:
        MeshFileError: missing, unreadable, too large, no sound file of its format, or one that needs what is not read.
        Cancelled: progress was cancelled.
    """
    path = Path(path)
    suffix = path.suffix.lower().removeprefix(".")
    refuse_folder(path)
    if suffix == "gltf":
        raise MeshFileError(
            "a .gltf file keeps its data in other files, which are not looked up", where=str(path),
            remedy="Export it as one .glb file",
        )
    if suffix not in _READERS:
        return (MeshAsset.read(path, progress),)
    with reading(str(path)):
        size = path.stat().st_size
        if size > MOST_BYTES:
            what = f"files of more than {MOST_BYTES} bytes are not taken in this format"
            raise MeshFileError(what, where=str(path), read=f"{size} bytes", remedy=f"{COARSER}, or export it as STL")
        data = path.read_bytes()
    if not data:
        raise MeshFileError("the file is empty", where=str(path), read="0 bytes", remedy=AGAIN)
    raw = _READERS[suffix](data, str(path), progress)
    bodies = [body for body in raw.bodies if len(body.corners)]
    names = _names(path.name, bodies)
    return tuple(
        _asset(body, name, raw.metres_per_unit, progress) for body, name in zip(bodies, names, strict=True)
    )


def _asset(body: RawBody, name: str, metres_per_unit: float | None, progress: Progress | None) -> MeshAsset:
    data = stl_of_triangles(body.points[body.corners], name)
    return replace(MeshAsset.of_bytes(data, name, progress), metres_per_unit=metres_per_unit)


def _names(file: str, bodies: list[RawBody]) -> list[str]:
    """Return a name of its own for each body."""
    if len(bodies) == 1:
        return [file]
    names: list[str] = []
    taken: dict[str, int] = {}
    for number, body in enumerate(bodies, 1):
        called = "".join(sign for sign in body.name if sign.isprintable())[:_LONGEST_NAME] or f"body {number}"
        taken[called] = taken.get(called, 0) + 1
        names.append(f"{file}: {called}" if taken[called] == 1 else f"{file}: {called} ({taken[called]})")
    return names
