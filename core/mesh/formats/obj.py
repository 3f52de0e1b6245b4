"""Wavefront OBJ: vertices by "v", faces by "f", objects by "o"; everything else is passed over."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.mesh.formats.bodies import RawBody, RawFile, checked_body, fanned, fault, numbers, refuse_empty, shown

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.progress import Progress

# Surfaces that are no facets; leaving them out would leave half a part.
_FREE_FORM = frozenset({b"surf", b"curv", b"cstype", b"bzp", b"bsp"})
_BLOCK = 100_000


class _Text:
    """The vertices met so far and the faces of each object."""

    def __init__(self, name: str) -> None:
        self._name = name
        self.points: list[list[float]] = []
        self.objects: dict[str, tuple[list[int], list[int]]] = {}
        self._current: tuple[list[int], list[int]] | None = None
        self._called = ""

    def take(self, number: int, words: list[bytes]) -> None:
        """Take one line in."""
        key = words[0]
        if key == b"v":
            self._vertex(number, words)
        elif key in (b"f", b"fo"):
            self._face(number, words)
        elif key == b"o":
            self._called = b" ".join(words[1:]).decode("utf-8", "replace")
            self._current = None
        elif key in _FREE_FORM:
            raise fault(
                "free-form curves and surfaces are not read", f"{self._name}, line {number}", shown(b" ".join(words)),
                "Export the part as facets",
            )

    def _vertex(self, number: int, words: list[bytes]) -> None:
        where = f"{self._name}, line {number}"
        if len(words) < 4:  # noqa: PLR2004  # "v" and x, y, z
            raise fault("a vertex needs three coordinates", where, shown(b" ".join(words)))
        self.points.append(numbers(words[1:4], where))

    def _face(self, number: int, words: list[bytes]) -> None:
        if len(words) < 4:  # noqa: PLR2004  # "f" and three corners
            raise fault("a face needs three corners", f"{self._name}, line {number}", shown(b" ".join(words)))
        try:
            corners = [int(word.partition(b"/")[0]) for word in words[1:]]
        except ValueError as error:
            where = f"{self._name}, line {number}"
            raise fault("a corner of a face is no vertex number", where, shown(b" ".join(words))) from error
        # From 1 upwards; or from −1 downwards, counted back from the vertices that stand before the face.
        here = len(self.points)
        places = [corner - 1 if corner > 0 else here + corner for corner in corners]
        if min(places) < 0 or 0 in corners:
            raise fault("a face names a vertex that is not there", f"{self._name}, line {number}",
                        shown(b" ".join(words)))
        if self._current is None:
            self._current = self.objects.setdefault(self._called, ([], []))
        self._current[0].append(len(places))
        self._current[1].extend(places)


def read_obj(data: bytes, name: str, progress: Progress | None = None) -> RawFile:
    """Return the objects of an OBJ file that have faces, each as a body.

    Raises:
        MeshFileError: no OBJ text, or a damaged one, with its line.
        Cancelled: progress was cancelled.
    """
    text = _Text(name)
    before: list[bytes] = []
    for number, line in enumerate(data.splitlines(), 1):
        if number % _BLOCK == 0 and progress is not None:
            progress.advance(0)
        words = line.partition(b"#")[0].split()
        if words and words[-1].endswith(b"\\"):
            before += [*words[:-1], words[-1][:-1]] if words[-1] != b"\\" else words[:-1]
            continue
        words, before = before + words, []
        if words:
            text.take(number, words)
    points = np.array(text.points, dtype=np.float64).reshape(-1, 3)
    bodies = tuple(
        _body(called, points, counts, corners, name) for called, (counts, corners) in text.objects.items()
    )
    refuse_empty(bodies, name, f"{len(points)} vertices and no face")
    return RawFile(bodies, None)


def _body(
    called: str, points: FloatArray, counts: list[int], corners: list[int], name: str
) -> RawBody:
    facets = fanned(np.array(counts, np.int64), np.array(corners, np.int64))
    return checked_body(called, points, facets, f'{name}, object "{called}"' if called else name)
