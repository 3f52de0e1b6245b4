"""What standard sections have in common: exact moments from their edges, fillets included, and rules that hold."""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.shapes.base import Dimension, Shape
from core.shapes.marks import SIDE, span
from core.shapes.profile.edges import Edges, tangents
from core.shapes.profile.extruded import extruded_facets, extruded_moments
from core.shapes.profile.plane_moments import PlaneMoments, plane_moments

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.facets import Facets
    from core.moments import Moments
    from core.shapes.marks import Mark

LENGTH = Dimension("length", "length", 0.5, symbol="L")

# Roundings may use up an edge, and by round-off a little more; relative to the edge.
FIT_SLACK = 1e-9


@dataclass(frozen=True)
class Section(Shape):
    """A bar of constant section along z, from z = 0 to its length. Each dimension a number or an array (...)."""

    @abstractmethod
    def loops(self) -> tuple[Edges, ...]:
        """Return the edges (..., n) of the section: the outer loop counter-clockwise, holes clockwise; m."""

    @property
    def plane(self) -> PlaneMoments:
        """Area (...) m², centroid, second and third moments of area of the section, exactly, fillets included."""
        return plane_moments(self.loops())

    def length_mark(self, x: float, y: float) -> Mark:
        """Return the mark of the length along the edge at (x, y) m, the rightmost one of the picture."""
        return span("length", (x, y, 0), (x, y, self.single("length")), SIDE)

    def moments(self) -> Moments:
        """Return the moments at unit density, exactly, fillets included."""
        return extruded_moments(self.plane, self.array("length"))

    def facets(self, steps: int = 48) -> Facets:
        """Return sides and ends, in m, all points on the true surface."""
        for dimension in self.dimensions:
            self.single(dimension.name)
        return extruded_facets([loop.line(steps) for loop in self.loops()], self.single("length"), steps)


@dataclass(frozen=True)
class CorneredSection(Section):
    """A section of one loop of straight edges with rounded corners."""

    @abstractmethod
    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the corners (..., n, 2) counter-clockwise and the radii (..., n) that round them, in m."""

    @abstractmethod
    def check_proportions(self) -> None:
        """Refuse dimensions, each good by itself, that together leave no section.

        Raises:
            ShapeError: there are such.
        """

    def loops(self) -> tuple[Edges, ...]:
        """Return the one loop of edges (..., n), m."""
        return (Edges.of_corners(*self.corners()),)

    def check(self) -> None:
        """Refuse, beside single dimensions, those that leave no section, and roundings that do not fit.

        Raises:
            ShapeError: there are such.
        """
        super().check()
        self.check_proportions()
        corners, radii = self.corners()
        chord = np.linalg.norm(np.roll(corners, -1, axis=-2) - corners, axis=-1)
        tangent, _ = tangents(corners, radii)
        self.refuse_where(
            tangent + np.roll(tangent, -1, axis=-1) > chord * (1 + FIT_SLACK),
            "the radii {} and {} do not fit on an edge of {}",
            radii, np.roll(radii, -1, axis=-1), chord, remedy="Make a radius smaller",
        )


def stacked(*pairs: tuple[ArrayLike, ArrayLike]) -> FloatArray:
    """Return points (..., n, 2) m from pairs of x and y, each a number or an array (...)."""
    flat = np.broadcast_arrays(*(value for pair in pairs for value in pair))
    return np.stack(flat, axis=-1).reshape(*flat[0].shape, len(pairs), 2)


def radii_of(*radii: ArrayLike) -> FloatArray:
    """Return radii (..., n) m, each a number or an array (...)."""
    return np.stack(np.broadcast_arrays(*radii), axis=-1).astype(np.float64)
