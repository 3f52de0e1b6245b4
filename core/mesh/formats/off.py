"""Object file format: counts, then a line per vertex, then a line per face (geometry center manual, 1990s)."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.mesh.formats.bodies import RawFile, checked_body, fanned, fault, numbers, refuse_count, refuse_empty, shown

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray

_HEADERS = (b"OFF", b"COFF")
_Line = tuple[int, list[bytes]]


def read_off(data: bytes, name: str) -> RawFile:
    """Return the body of an OFF file.

    Raises:
        MeshFileError: no OFF text, or a damaged one, with its line.
    """
    lines = [
        (number, words)
        for number, line in enumerate(data.splitlines(), 1)
        if (words := line.partition(b"#")[0].split())
    ]
    if not lines or lines[0][1][0].upper() not in _HEADERS:
        found = lines[0][1][0] if lines else b""
        raise fault('the file does not begin with "OFF" or "COFF"', name, shown(found))
    first, words = lines[0]
    lines = [(first, words[1:]), *lines[1:]] if words[1:] else lines[1:]
    vertices, faces = _counts(lines, name)
    rows = lines[1:]
    if len(rows) < vertices + faces:
        read = f"{len(rows)} lines after the counts, which announce {vertices} vertices and {faces} faces"
        raise fault("the file is cut short", name, read)
    if len(rows) > vertices + faces:
        raise fault("lines follow after the last face", f"{name}, line {rows[vertices + faces][0]}",
                    shown(b" ".join(rows[vertices + faces][1])))
    points = _points(rows[:vertices], name)
    body = checked_body("", points, _faces(rows[vertices:], name), name)
    refuse_empty([body], name, f"{vertices} vertices and {faces} faces")
    return RawFile((body,), None)


def _counts(lines: list[_Line], name: str) -> tuple[int, int]:
    if not lines:
        raise fault("the counts of vertices and faces are missing", name, "a header and nothing more")
    number, words = lines[0]
    if len(words) not in (2, 3) or not all(word.isdigit() for word in words):
        raise fault("the counts of vertices and faces are missing", f"{name}, line {number}", shown(b" ".join(words)))
    vertices, faces = int(words[0]), int(words[1])
    refuse_count(faces, name)
    return vertices, faces


def _points(rows: list[_Line], name: str) -> FloatArray:
    points = np.empty((len(rows), 3))
    for place, (number, words) in enumerate(rows):
        where = f"{name}, line {number}"
        if len(words) < 3:  # noqa: PLR2004  # x, y, z
            raise fault("a vertex needs three coordinates", where, shown(b" ".join(words)))
        points[place] = numbers(words[:3], where)
    return points


def _faces(rows: list[_Line], name: str) -> IntArray:
    counts: list[int] = []
    corners: list[int] = []
    for number, words in rows:
        count = int(words[0]) if words[0].isdigit() else 0
        if count < 3 or len(words) <= count or not all(word.isdigit() for word in words[1 : count + 1]):  # noqa: PLR2004  # a triangle
            raise fault("a face needs a count of at least 3 and so many vertex numbers", f"{name}, line {number}",
                        shown(b" ".join(words)))
        counts.append(count)
        corners += map(int, words[1 : count + 1])
    return fanned(np.array(counts, np.int64), np.array(corners, np.int64))
