"""glTF 2.0 in its binary form (ISO/IEC 12113): a JSON chunk that describes a scene, and one chunk of bytes.

Lengths are metres by the standard, in a right-handed frame with y upwards, which is kept as it is. Every mesh that the
scene shows is a body, once for each node that shows it. Buffers outside the file, compressed and sparse data are
refused.
"""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import numpy as np

from core.mesh.formats.bodies import (
    DEEPEST,
    MOST_BODIES,
    RawBody,
    RawFile,
    checked_body,
    fault,
    refuse_count,
    refuse_empty,
    shown,
)

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.errors import MeshFileError

_HEADER, _CHUNK_HEADER = 12, 8
_JSON, _BYTES = b"JSON", b"BIN\0"
_TYPES = {5120: "<i1", 5121: "<u1", 5122: "<i2", 5123: "<u2", 5125: "<u4", 5126: "<f4"}
_WIDTHS = {"SCALAR": 1, "VEC3": 3}
_FLOAT = 5126
_INDEX_TYPES = (5121, 5123, 5125)
_TRIANGLES, _STRIP, _FAN = 4, 5, 6
_PLAIN = "Export the part as plain facets"


def read_glb(data: bytes, name: str) -> RawFile:
    """Return the bodies of a GLB file, in metres.

    Raises:
        MeshFileError: no GLB file, a damaged one, or one that needs what is not read.
    """
    text, blob = _chunks(data, name)
    try:
        scene = json.loads(text.decode("utf-8"))
    except (ValueError, RecursionError) as error:
        raise fault("the description in the file is no JSON", name, shown(text[:40])) from error
    try:
        bodies = _Scene(scene, blob, name).bodies()
    except (KeyError, TypeError, IndexError, AttributeError, OverflowError) as error:
        # What a JSON of unknown make may lack is an entry, a list or a number; whichever it is, it is not this format.
        raise fault("an entry of the description is missing or of the wrong kind", name, shown(str(error))) from error
    refuse_empty(bodies, name, f"{len(bodies)} bodies")
    return RawFile(tuple(bodies), 1.0)


def _chunks(data: bytes, name: str) -> tuple[bytes, bytes]:
    """Return the JSON chunk and the chunk of bytes."""
    if data[:4] != b"glTF" or len(data) < _HEADER + _CHUNK_HEADER:
        raise fault("the file does not begin as a GLB file does", name, shown(data[:4]))
    version, length = (int(value) for value in np.frombuffer(data, "<u4", 2, 4))
    if version != 2:  # noqa: PLR2004  # the only version with this layout
        raise fault("only version 2 of glTF is read", name, f"version {version}", "Export it as glTF 2.0")
    if length != len(data):
        what = "the file is cut short" if length > len(data) else "bytes follow after the end of the scene"
        raise fault(what, name, f"{len(data)} bytes where the header says {length}")
    found: dict[bytes, bytes] = {}
    place = _HEADER
    while place + _CHUNK_HEADER <= length:
        size, kind = int(np.frombuffer(data, "<u4", 1, place)[0]), data[place + 4 : place + _CHUNK_HEADER]
        place += _CHUNK_HEADER
        if place + size > length:
            raise fault("a chunk reaches beyond the end of the file", name, f"{size} bytes from byte {place}")
        found.setdefault(kind, data[place : place + size])
        place += size
    if _JSON not in found:
        raise fault("the file holds no description of its contents", name, "no JSON chunk")
    return found[_JSON], found.get(_BYTES, b"")


class _Scene:
    """The description, with the bytes that it refers to."""

    def __init__(self, description: Any, blob: bytes, name: str) -> None:
        self._all = description
        self._blob = blob
        self._name = name
        self._facets = 0
        self._visits = 0
        self._bodies: list[RawBody] = []
        needed = description.get("extensionsRequired", [])
        # Materials do not matter here; anything else may.
        unknown = [one for one in needed if not str(one).startswith("KHR_materials")]
        if unknown:
            raise fault("the file requires an extension that is not read", name, shown(str(unknown[0])), _PLAIN)

    def bodies(self) -> list[RawBody]:
        """Return what the scene shows."""
        scenes = self._all.get("scenes", [])
        nodes = self._all.get("nodes", [])
        if scenes:
            roots = scenes[self._all.get("scene", 0)].get("nodes", [])
        else:
            below = {child for node in nodes for child in node.get("children", [])}
            roots = [index for index in range(len(nodes)) if index not in below]
        for root in roots:
            self._visit(root, np.eye(4), 0)
        return self._bodies

    def _visit(self, index: int, above: FloatArray, depth: int) -> None:
        self._visits += 1
        if depth >= DEEPEST * 4 or self._visits > 10 * MOST_BODIES:
            raise fault("the nodes nest too deep, or are too many", self._name, f"{self._visits} nodes", _PLAIN)
        node = self._all["nodes"][_index(index)]
        with np.errstate(over="ignore", invalid="ignore"):
            here = above @ _matrix(node)
        if not np.isfinite(here).all():
            raise self._wrong("a node's place is not finite", index)
        if "mesh" in node:
            self._show(self._all["meshes"][_index(node["mesh"])], str(node.get("name", "")), here)
        for child in node.get("children", []):
            self._visit(child, here, depth + 1)

    def _show(self, mesh: Any, called: str, here: FloatArray) -> None:
        parts = [self._primitive(primitive) for primitive in mesh["primitives"]]
        parts = [part for part in parts if len(part[1])]
        if not parts:
            return
        first = np.cumsum([0] + [len(points) for points, _ in parts[:-1]])
        points = np.concatenate([points for points, _ in parts])
        corners = np.concatenate([corners + start for (_, corners), start in zip(parts, first, strict=True)])
        self._facets += len(corners)
        refuse_count(self._facets, self._name)
        name = str(mesh.get("name", "")) or called
        body = checked_body(name, points, corners, f'{self._name}, mesh "{name}"')
        self._bodies.append(body.moved(here[:3, :3], here[:3, 3]))
        if len(self._bodies) > MOST_BODIES:
            raise fault(f"more than {MOST_BODIES} bodies are not taken", self._name, remedy="Export fewer of them")

    def _primitive(self, primitive: Any) -> tuple[FloatArray, IntArray]:
        """Return points and facets; points and lines have none."""
        mode = primitive.get("mode", _TRIANGLES)
        if mode < _TRIANGLES:
            return np.empty((0, 3)), np.empty((0, 3), np.int64)
        points = self._values(primitive["attributes"]["POSITION"], "VEC3", (_FLOAT,)).astype(np.float64)
        if "indices" in primitive:
            corners = self._values(primitive["indices"], "SCALAR", _INDEX_TYPES).astype(np.int64).ravel()
        else:
            corners = np.arange(len(points))
        return points, self._triangles(mode, corners)

    def _triangles(self, mode: int, corners: IntArray) -> IntArray:
        if mode == _TRIANGLES:
            if len(corners) % 3:
                raise fault("the corners do not make whole triangles", self._name, f"{len(corners)} corners")
            return corners.reshape(-1, 3)
        if mode == _STRIP:
            strip = np.stack([corners[:-2], corners[1:-1], corners[2:]], axis=1)
            strip[1::2] = strip[1::2][:, [1, 0, 2]]
            return strip
        if mode == _FAN:
            return np.stack([np.full(max(len(corners) - 2, 0), corners[0]), corners[1:-1], corners[2:]], axis=1)
        raise fault("this kind of primitive is not known", self._name, f"mode {mode}")

    def _values(self, index: int, kind: str, types: tuple[int, ...]) -> np.ndarray:
        """Return the numbers (n, width) of an accessor."""
        accessor = self._all["accessors"][_index(index)]
        where = f"{self._name}, accessor {index}"
        if "sparse" in accessor or "bufferView" not in accessor:
            raise fault("sparse or compressed data are not read", where, remedy=_PLAIN)
        if accessor["type"] != kind or accessor["componentType"] not in types:
            read = f"{accessor['type']} of type {accessor['componentType']}"
            raise fault("the numbers are of a kind that a mesh cannot have", where, read)
        view = self._all["bufferViews"][_index(accessor["bufferView"])]
        buffer = self._all["buffers"][_index(view["buffer"])]
        if "uri" in buffer or _index(view["buffer"]) != 0:
            raise fault("the file refers to data outside of it", where, remedy="Export it as one GLB file")
        layout, width, count = np.dtype(_TYPES[accessor["componentType"]]), _WIDTHS[kind], _index(accessor["count"])
        start = _index(view.get("byteOffset", 0)) + _index(accessor.get("byteOffset", 0))
        step = _index(view.get("byteStride", 0)) or layout.itemsize * width
        stop = start + step * (count - 1) + layout.itemsize * width if count else start
        if stop > len(self._blob) or step < layout.itemsize * width:
            raise fault("the data end before its last number", where, f"byte {stop} of {len(self._blob)}")
        return np.ndarray((count, width), layout, self._blob, start, (step, layout.itemsize))

    def _wrong(self, what: str, node: int) -> MeshFileError:
        return fault(what, f"{self._name}, node {node}")


def _index(value: Any) -> int:
    """Return a whole number that may count or point at something."""
    if not isinstance(value, int) or isinstance(value, bool) or value < 0:
        raise TypeError(f"{value!r} in place of a count")
    return value


def _numbers(values: Any, count: int) -> FloatArray:
    """Return a list of so many numbers."""
    if not isinstance(values, list) or len(values) != count or not all(isinstance(one, int | float) for one in values):
        raise TypeError(f"{values!r} in place of {count} numbers")
    return np.array([float(one) for one in values])


def _matrix(node: Any) -> FloatArray:
    """Return where a node stands, (4, 4), columns as in r' = M·r."""
    if "matrix" in node:
        return _numbers(node["matrix"], 16).reshape(4, 4).T
    matrix = np.eye(4)
    x, y, z, w = _numbers(node.get("rotation", [0, 0, 0, 1]), 4).tolist()
    matrix[:3, :3] = [
        [1 - 2 * (y * y + z * z), 2 * (x * y - w * z), 2 * (x * z + w * y)],
        [2 * (x * y + w * z), 1 - 2 * (x * x + z * z), 2 * (y * z - w * x)],
        [2 * (x * z - w * y), 2 * (y * z + w * x), 1 - 2 * (x * x + y * y)],
    ]
    with np.errstate(over="ignore", invalid="ignore"):
        matrix[:3, :3] *= _numbers(node.get("scale", [1, 1, 1]), 3)
    matrix[:3, 3] = _numbers(node.get("translation", [0, 0, 0]), 3)
    return matrix
