"""What the readers of all formats share: bodies over points, and the refusals that are the same everywhere."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.errors import MeshFileError
from core.mesh.stl_faults import AGAIN, COARSER, MEND

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.arrays import FloatArray, IntArray

# A text of this size or a model of so many facets is more than any part, and is still held in memory.
MOST_BYTES = 2**30
MOST_FACETS = 20_000_000
MOST_BODIES = 10_000
# Parts in parts in parts, and nodes below nodes.
DEEPEST = 32


@dataclass(frozen=True, eq=False)
class RawBody:
    """One body of a file.

    Attributes:
        name: in the file; "" where it has none.
        points: (m, 3) in the file's unit.
        corners: (n, 3) indices into points, counter-clockwise seen from outside.
    """

    name: str
    points: FloatArray
    corners: IntArray

    def moved(self, linear: FloatArray, shift: FloatArray) -> RawBody:
        """Return the body after every point r has become linear·r + shift; facets of a mirrored one are turned."""
        # What overflows is refused when it is stored.
        with np.errstate(over="ignore", invalid="ignore"):
            corners = self.corners[:, ::-1] if np.linalg.det(linear) < 0 else self.corners
            return RawBody(self.name, self.points @ linear.T + shift, corners)


@dataclass(frozen=True, eq=False)
class RawFile:
    """All bodies of a file, and the unit it names.

    Attributes:
        bodies: at least one.
        metres_per_unit: None where the format says nothing of units.
    """

    bodies: tuple[RawBody, ...]
    metres_per_unit: float | None


def fault(what: str, where: str, read: str = "", remedy: str = AGAIN) -> MeshFileError:
    """Return a refusal; where is the file, with its line or facet."""
    return MeshFileError(what, where=where, read=read, remedy=remedy)


def shown(word: bytes | str) -> str:
    """Return a word of a file as it may stand in a message."""
    text = word[:40].decode("utf-8", "replace") if isinstance(word, bytes) else word[:40]
    return f'"{"".join(sign if sign.isprintable() else "?" for sign in text)}"'


def numbers(words: Sequence[bytes | str], where: str) -> list[float]:
    """Return words as numbers; where is the place of the words in the file.

    Raises:
        MeshFileError: one is no finite number, or has a decimal comma.
    """
    try:
        return list(map(float, words))
    except ValueError:
        for word in words:
            _refuse_word(word, where)
        raise


def _refuse_word(word: bytes | str, where: str) -> None:
    try:
        float(word)
    except ValueError as error:
        comma = (b"," if isinstance(word, bytes) else ",") in word  # type: ignore[operator]  # both of one type
        if comma:
            remedy = "Export the part again with a decimal point; it is not guessed"
            raise fault("a decimal comma stands in a coordinate", where, shown(word), remedy) from error
        raise fault("a coordinate is not a number", where, shown(word)) from error


def checked_body(name: str, points: FloatArray, corners: IntArray, where: str) -> RawBody:
    """Return a body whose numbers are finite and whose corners are points of it.

    Raises:
        MeshFileError: otherwise, with the first point or facet concerned.
    """
    finite = np.isfinite(points).all(axis=1)
    if not finite.all():
        row = int(np.flatnonzero(~finite)[0])
        read = ", ".join(f"{value:g}" for value in points[row].tolist())
        raise fault("a coordinate is not a finite number", f"{where}, vertex {row + 1}", read, MEND)
    sound = ((corners >= 0) & (corners < len(points))).all(axis=1)
    if not sound.all():
        row = int(np.flatnonzero(~sound)[0])
        read = f"vertex numbers {corners[row].tolist()} counted from 0, of {len(points)} vertices"
        raise fault("a facet names a vertex that is not there", f"{where}, facet {row + 1}", read)
    refuse_count(len(corners), where)
    return RawBody(name, points, corners)


def refuse_count(facets: int, where: str) -> None:
    """Refuse more facets than are taken.

    Raises:
        MeshFileError: more than MOST_FACETS.
    """
    if facets > MOST_FACETS:
        what = f"more than {MOST_FACETS} facets of this format are not taken"
        raise fault(what, where, f"{facets} facets", f"{COARSER}, or export it as STL")


def refuse_empty(bodies: Sequence[RawBody], where: str, read: str) -> None:
    """Refuse a file without facets.

    Raises:
        MeshFileError: no body, or none with a facet.
    """
    if not any(len(body.corners) for body in bodies):
        raise fault("the file holds no facets", where, read, "Export the part as a mesh")


def fanned(counts: IntArray, corners: IntArray) -> IntArray:
    """Return polygons as triangles (n, 3), each as a fan from its first corner.

    A fan of a flat polygon adds up to the same integrals whether it bulges inwards or not.

    Args:
        counts: (p,) corners of each polygon, at least 3.
        corners: (sum of counts,) all corners, one polygon after the other.
    """
    if (counts == 3).all():  # noqa: PLR2004  # a triangle
        return corners.reshape(-1, 3)
    starts = np.cumsum(counts) - counts
    pieces = counts - 2
    base = np.repeat(starts, pieces)
    step = np.arange(len(base)) - np.repeat(np.cumsum(pieces) - pieces, pieces) + 1
    return np.stack([corners[base], corners[base + step], corners[base + step + 1]], axis=1)
