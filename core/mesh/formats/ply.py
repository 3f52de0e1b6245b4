"""Polygon file format: a header of elements and their properties, then rows in text or in binary (G. Turk, 1994)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.formats.bodies import RawFile, checked_body, fanned, fault, numbers, refuse_count, refuse_empty, shown

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.errors import MeshFileError

_TYPES = {
    "char": "i1", "int8": "i1", "uchar": "u1", "uint8": "u1", "short": "i2", "int16": "i2", "ushort": "u2",
    "uint16": "u2", "int": "i4", "int32": "i4", "uint": "u4", "uint32": "u4", "float": "f4", "float32": "f4",
    "double": "f8", "float64": "f8",
}
_ORDERS = {"ascii": "", "binary_little_endian": "<", "binary_big_endian": ">"}
_FACE_LISTS = ("vertex_indices", "vertex_index")
_LONGEST_HEADER = 1 << 16
_LARGEST_COUNT = 200_000_000
_TRIANGLE = 3


@dataclass(frozen=True)
class _Property:
    name: str
    kind: str
    count_kind: str = ""


@dataclass
class _Element:
    name: str
    count: int
    properties: list[_Property]


@dataclass(frozen=True)
class _Header:
    order: str
    elements: list[_Element]
    length: int
    lines: int


def read_ply(data: bytes, name: str) -> RawFile:
    """Return the body of a PLY file.

    Raises:
        MeshFileError: no PLY file, or a damaged one.
    """
    header = _header(data, name)
    reader = _TextRows(data, header, name) if header.order == "" else _BinaryRows(data, header, name)
    points, faces = np.empty((0, 3)), np.empty((0, 3), np.int64)
    for element in header.elements:
        if element.name == "vertex":
            points = reader.points(element)
        elif element.name == "face":
            faces = _fan(*reader.faces(element), name)
        elif element.name == "tristrips":
            raise fault("triangle strips are not read", name, '"tristrips"', "Export the part with plain faces")
        else:
            reader.skip(element)
    reader.finish()
    body = checked_body("", points, faces, name)
    refuse_empty([body], name, f"{len(points)} vertices and no face")
    return RawFile((body,), None)


def _fan(counts: IntArray, corners: IntArray, name: str) -> IntArray:
    few = np.flatnonzero(counts < _TRIANGLE)
    if len(few):
        where = f"{name}, face {int(few[0]) + 1}"
        raise fault("a face needs three corners", where, f"{int(counts[few[0]])} corners")
    return fanned(counts, corners)


def _header(data: bytes, name: str) -> _Header:
    end = data.find(b"end_header", 0, _LONGEST_HEADER)
    stop = data.find(b"\n", end)
    if data[:3] != b"ply" or end < 0 or stop < 0:
        raise fault('the file does not begin with a header from "ply" to "end_header"', name, shown(data[:40]))
    order, elements = None, []
    lines = data[:end].decode("ascii", "replace").splitlines()
    for number, line in enumerate(lines, 1):
        words, where = line.split(), f"{name}, line {number}"
        if words[:1] == ["format"]:
            if len(words) != 3 or words[1] not in _ORDERS:  # noqa: PLR2004  # format, order, version
                raise fault("this format of PLY is not known", where, shown(line))
            order = _ORDERS[words[1]]
        elif words[:1] == ["element"]:
            elements.append(_element(words, line, where))
        elif words[:1] == ["property"]:
            if not elements:
                raise fault("a property stands before any element", where, shown(line))
            elements[-1].properties.append(_property(words, line, where))
    if order is None:
        raise fault("the header does not say in which format the rows are", name, "no line that begins with format")
    return _Header(order, elements, stop + 1, len(lines) + 1)


def _element(words: list[str], line: str, where: str) -> _Element:
    if len(words) != 3 or not words[2].isdigit() or int(words[2]) > _LARGEST_COUNT:  # noqa: PLR2004  # element, name, count
        raise fault("an element needs a name and a count", where, shown(line))
    if words[1] == "face":
        refuse_count(int(words[2]), where)
    return _Element(words[1], int(words[2]), [])


def _property(words: list[str], line: str, where: str) -> _Property:
    kinds = words[2:4] if words[1:2] == ["list"] else words[1:2]
    # "property", for a list that word too, the types, the name.
    if len(words) != 2 * len(kinds) + 1 or not kinds or any(kind not in _TYPES for kind in kinds):
        raise fault("a property needs a type that is known and a name", where, shown(line))
    if len(kinds) == 1:
        return _Property(words[2], _TYPES[kinds[0]])
    return _Property(words[4], _TYPES[kinds[1]], _TYPES[kinds[0]])


def _places(element: _Element, name: str) -> list[int]:
    """Return where x, y and z stand among the properties."""
    names = [one.name for one in element.properties]
    if any(one.count_kind for one in element.properties) or not {"x", "y", "z"} <= set(names):
        raise fault("a vertex needs x, y and z", name, f"the properties {', '.join(names)}")
    return [names.index(axis) for axis in "xyz"]


def _list_place(element: _Element, name: str) -> int:
    """Return which property of a face lists its corners."""
    for place, one in enumerate(element.properties):
        if one.name in _FACE_LISTS and one.count_kind and "i" in one.kind.replace("u", "i"):
            return place
    names = ", ".join(one.name for one in element.properties)
    raise fault("a face needs a list of vertex numbers", name, f"the properties {names}")


class _TextRows:
    """Rows as lines of text, one after the other."""

    def __init__(self, data: bytes, header: _Header, name: str) -> None:
        self._rows = data[header.length :].splitlines()
        self._before = header.lines
        self._done = 0
        self._name = name

    def _next(self, element: _Element) -> tuple[str, list[bytes]]:
        while self._done < len(self._rows):
            words = self._rows[self._done].split()
            self._done += 1
            if words:
                return f"{self._name}, line {self._before + self._done}", words
        raise fault("the file is cut short", self._name, f"fewer than {element.count} lines for the {element.name}s")

    def points(self, element: _Element) -> FloatArray:
        """Return the vertices (n, 3)."""
        places = _places(element, self._name)
        result = []
        for _ in range(element.count):
            where, words = self._next(element)
            if len(words) != len(element.properties):
                raise _wrong_row(element, where, words)
            result.append(numbers([words[place] for place in places], where))
        return np.array(result, dtype=np.float64).reshape(-1, 3)

    def faces(self, element: _Element) -> tuple[IntArray, IntArray]:
        """Return the counts (p,) of corners and all corners."""
        wanted = _list_place(element, self._name)
        counts: list[int] = []
        corners: list[int] = []
        for _ in range(element.count):
            where, words = self._next(element)
            place = 0
            for number, one in enumerate(element.properties):
                size = 1
                if one.count_kind:
                    if place >= len(words) or not words[place].isdigit():
                        raise _wrong_row(element, where, words)
                    size = int(words[place])
                    place += 1
                part = words[place : place + size]
                place += size
                if number == wanted:
                    if len(part) < size or not all(word.isdigit() for word in part):
                        raise _wrong_row(element, where, words)
                    counts.append(size)
                    corners += map(int, part)
            if place != len(words):
                raise _wrong_row(element, where, words)
        return np.array(counts, np.int64), np.array(corners, np.int64)

    def skip(self, element: _Element) -> None:
        """Pass over the rows of an element."""
        for _ in range(element.count):
            self._next(element)

    def finish(self) -> None:
        """Refuse rows that are left."""
        for number, line in enumerate(self._rows[self._done :], self._before + self._done + 1):
            if line.strip():
                raise fault("lines follow after the last row", f"{self._name}, line {number}", shown(line))


def _wrong_row(element: _Element, where: str, words: list[bytes]) -> MeshFileError:
    return fault(f"a row does not fit the properties of a {element.name}", where, shown(b" ".join(words)))


class _BinaryRows:
    """Rows as bytes, one after the other."""

    def __init__(self, data: bytes, header: _Header, name: str) -> None:
        self._data = data
        self._place = header.length
        self._order = header.order
        self._name = name

    def _table(self, layout: np.dtype[np.void], count: int, element: _Element) -> np.ndarray:
        needed = self._place + layout.itemsize * count
        if needed > len(self._data):
            read = f"{len(self._data)} bytes where the {element.name}s alone reach to byte {needed}"
            raise fault("the file is cut short", self._name, read)
        return np.frombuffer(self._data, layout, count, self._place)

    def points(self, element: _Element) -> FloatArray:
        """Return the vertices (n, 3)."""
        places = _places(element, self._name)
        layout = self._plain(element)
        table = self._table(layout, element.count, element)
        self._place += layout.itemsize * element.count
        return np.stack([table[f"p{place}"].astype(np.float64) for place in places], axis=1)

    def _plain(self, element: _Element) -> np.dtype[np.void]:
        return np.dtype([(f"p{i}", self._order + one.kind) for i, one in enumerate(element.properties)])

    def faces(self, element: _Element) -> tuple[IntArray, IntArray]:
        """Return the counts (p,) of corners and all corners."""
        wanted = _list_place(element, self._name)
        lists = [one for one in element.properties if one.count_kind]
        if len(lists) == 1 and element.count:
            alike = self._triangles(element, wanted)
            if alike is not None:
                return alike
        return self._one_by_one(element, wanted)

    def _triangles(self, element: _Element, wanted: int) -> tuple[IntArray, IntArray] | None:
        """Return all faces at once if all are triangles, as they nearly always are."""
        fields = []
        for i, one in enumerate(element.properties):
            if i == wanted:
                fields += [("count", self._order + one.count_kind), ("corners", self._order + one.kind, (3,))]
            else:
                fields.append((f"p{i}", self._order + one.kind))
        layout = np.dtype(fields)
        if self._place + layout.itemsize * element.count > len(self._data):
            return None
        table = np.frombuffer(self._data, layout, element.count, self._place)
        if not (table["count"] == _TRIANGLE).all():
            return None
        self._place += layout.itemsize * element.count
        return np.full(element.count, _TRIANGLE), table["corners"].astype(np.int64).ravel()

    def _one_by_one(self, element: _Element, wanted: int) -> tuple[IntArray, IntArray]:
        counts, parts = [], [np.empty(0, np.int64)]
        for _ in range(element.count):
            for i, one in enumerate(element.properties):
                size = 1
                if one.count_kind:
                    size = int(self._values(one.count_kind, 1, element)[0])
                values = self._values(one.kind, size, element)
                if i == wanted:
                    counts.append(size)
                    parts.append(values.astype(np.int64))
        return np.array(counts, np.int64), np.concatenate(parts)

    def _values(self, kind: str, count: int, element: _Element) -> np.ndarray:
        layout = np.dtype(self._order + kind)
        stop = self._place + layout.itemsize * count
        if count < 0 or stop > len(self._data):
            read = f"{len(self._data)} bytes, which end inside a {element.name}"
            raise fault("the file is cut short", self._name, read)
        values = np.frombuffer(self._data, layout, count, self._place)
        self._place = stop
        return values

    def skip(self, element: _Element) -> None:
        """Pass over the rows of an element."""
        if any(one.count_kind for one in element.properties):
            for _ in range(element.count):
                for one in element.properties:
                    size = int(self._values(one.count_kind, 1, element)[0]) if one.count_kind else 1
                    self._values(one.kind, size, element)
            return
        layout = self._plain(element)
        self._table(layout, element.count, element)
        self._place += layout.itemsize * element.count

    def finish(self) -> None:
        """Refuse bytes that are left."""
        if self._place != len(self._data):
            read = f"{len(self._data)} bytes where the rows end at byte {self._place}"
            raise fault("bytes follow after the last row", self._name, read)
