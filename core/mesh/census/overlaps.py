"""What two shells of a mesh have in common, and so count twice."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from core.mesh.edges import WELD
from core.mesh.source import ArraySource
from core.mesh.summing import sum_up

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.mesh.census.shells import Sizes
    from core.moments import Moments
    from core.progress import Progress

# Pairs that are cut with one another at most; each takes a millisecond or more.
MOST_CUTS = 2_000
# Of the largest coordinate: a few units in the last place of float32.
ROUNDING = 2.0**-22


@dataclass(frozen=True, eq=False)
class Overlap:
    """Two shells that fill the same room.

    Attributes:
        shells: their numbers.
        common: what both enclose, unit density, file units.
        facets: of both shells, those whose boxes reach into it.
    """

    shells: tuple[int, int]
    common: Moments
    facets: IntArray


@dataclass(frozen=True, eq=False)
class Overlaps:
    """All pairs that were found.

    Attributes:
        found: the pairs with a volume in common.
        refused: shells that the boolean library does not take.
        skipped: pairs that were not looked at, because there are more than MOST_CUTS.
    """

    found: tuple[Overlap, ...]
    refused: IntArray
    skipped: int


class _Cutter:
    def __init__(self, points: FloatArray, corners: IntArray, sizes: Sizes) -> None:
        self._points, self._corners, self._sizes = points, corners, sizes
        self._origin = 0.5 * (points.min(axis=0) + points.max(axis=0))
        self._rounding = ROUNDING * float(np.abs(points).max())
        self._solids: dict[int, Any] = {}
        self.refused: set[int] = set()

    def _facets(self, shell: int) -> IntArray:
        starts, order = self._sizes.starts, self._sizes.order
        stop = starts[shell + 1] if shell + 1 < len(starts) else len(order)
        return order[starts[shell] : stop]

    def _solid(self, shell: int) -> Any | None:
        from core.mesh.solids import solid_of

        if shell not in self._solids:
            corners = self._corners[self._facets(shell)]
            outward = corners if self._sizes.bodies.mass[shell] > 0 else corners[:, ::-1]
            self._solids[shell] = solid_of(self._points, outward, self._origin)
            if self._solids[shell] is None:
                self.refused.add(shell)
        return self._solids[shell]

    def overlap(self, one: int, other: int) -> Overlap | None:
        """Return what two shells have in common, or None where that is nothing or not known."""
        bounds = self._sizes.bounds
        low = np.maximum(bounds[one, 0], bounds[other, 0])
        high = np.minimum(bounds[one, 1], bounds[other, 1])
        near = [self._reaching(shell, low, high) for shell in (one, other)]
        # Surfaces that cross do so in what the boxes share; where one has no facet there, they do not.
        if min(map(len, near)) == 0:
            return None
        first, second = self._solid(one), self._solid(other)
        if first is None or second is None:
            return None
        common = first ^ second
        # A film no thicker than a crack or a coordinate's last digit, over all of the smaller surface, is touching.
        smaller = min((one, other), key=lambda shell: float(self._sizes.area[shell]))
        film = max(WELD * float(np.linalg.norm(bounds[smaller, 1] - bounds[smaller, 0])), self._rounding)
        if common.volume() <= film * self._sizes.area[smaller]:
            return None
        from core.mesh.solids import facets_of_solid

        sums, reference = sum_up(ArraySource(facets_of_solid(common)))
        body = sums.moments(reference).mapped(np.eye(3), self._origin)
        return Overlap((one, other), body, np.sort(np.concatenate(near)))

    def _reaching(self, shell: int, low: FloatArray, high: FloatArray) -> IntArray:
        facets = self._facets(shell)
        triangles = self._points[self._corners[facets]]
        meets = ((triangles.min(axis=1) <= high) & (triangles.max(axis=1) >= low)).all(axis=1)
        return np.asarray(facets[meets])


def overlaps_of(
    points: FloatArray, corners: IntArray, sizes: Sizes, pairs: IntArray, progress: Progress | None
) -> Overlaps:
    """Return what the pairs (p, 2) of closed shells have in common."""
    cutter = _Cutter(points, corners, sizes)
    found = []
    for one, other in pairs[:MOST_CUTS].tolist():
        overlap = cutter.overlap(one, other)
        if overlap is not None:
            found.append(overlap)
        if progress is not None:
            progress.advance(0)
    return Overlaps(tuple(found), np.array(sorted(cutter.refused), np.int64), max(0, len(pairs) - MOST_CUTS))
