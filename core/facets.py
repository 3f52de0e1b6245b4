"""A surface made of triangles, as the view draws it and as checks walk over it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from core.arrays import ArrayLike, FloatArray, IntArray, frozen
from core.errors import ValueRefused


@dataclass(frozen=True, eq=False)
class Facets:
    """Triangles over shared points.

    Attributes:
        points: (n, 3) m.
        corners: (m, 3) indices into points, counter-clockwise seen from outside.
    """

    points: FloatArray
    corners: IntArray

    def __init__(self, points: ArrayLike, corners: ArrayLike) -> None:
        object.__setattr__(self, "points", frozen(points))
        indices = np.array(corners, dtype=np.int64)
        indices.flags.writeable = False
        object.__setattr__(self, "corners", indices)

    @property
    def triangles(self) -> FloatArray:
        """The corner points of every facet, (m, 3, 3) m."""
        return self.points[self.corners]

    @property
    def box(self) -> FloatArray:
        """Lowest and highest corner of the box around the surface, (2, 3) m.

        Raises:
            ValueRefused: a surface without points.
        """
        if not len(self.points):
            raise ValueRefused("a surface without points has no extent")
        return frozen([self.points.min(axis=0), self.points.max(axis=0)])
