"""A plane outline drawn out to a length."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.moments import Moments
from core.shapes.base import Dimension, register
from core.shapes.marks import SIDE, span
from core.shapes.profile.outline import Outline, circle_loop, rectangle_loop
from core.shapes.profile.outlined import OutlinedShape
from core.shapes.profile.surface import extruded_surface
from core.shapes.round_surface import check_steps

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.arrays import ArrayLike, FloatArray
    from core.facets import Facets
    from core.shapes.marks import Mark
    from core.shapes.profile.plane_moments import PlaneMoments


@register
@dataclass(frozen=True)
class Extruded(OutlinedShape):
    """A bar, a plate or a bracket: an outline in the plane z = 0 drawn out along z. Length (...) in m."""

    key: ClassVar[str] = "extruded profile"
    title: ClassVar[str] = "extruded profile"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("length", "length", 0.02, symbol="L"),)

    length: ArrayLike

    @classmethod
    def default_outline(cls) -> Outline:
        """Return a plate 80 × 50 mm with rounded corners and a hole."""
        return Outline((rectangle_loop(0.08, 0.05, rounding=0.008), circle_loop(0.02, 0.025, 0.025)))

    def moments(self) -> Moments:
        """Return the moments at unit density, exactly."""
        return extruded_moments(self.outline.plane, self.array("length"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y = self.outline.bounds[1]
        return (span("length", (x, y, 0), (x, y, self.single("length")), SIDE),)

    def facets(self, steps: int = 48) -> Facets:
        """Return sides and ends, in m, all points on the true surface."""
        return extruded_facets(self.outline.lines(steps), self.single("length"), steps)


def extruded_moments(plane: PlaneMoments, length: FloatArray) -> Moments:
    """Return the moments at unit density of an area (...) drawn out along z from 0 to length (...) m."""
    volume = plane.area * length
    batch = np.shape(volume)
    centre = np.zeros((*batch, 3))
    centre[..., :2], centre[..., 2] = plane.centre, length / 2
    spread = np.zeros((*batch, 3, 3))
    spread[..., :2, :2] = plane.second * length[..., None, None]
    spread[..., 2, 2] = volume * length**2 / 12
    return Moments(volume, centre, spread)


def extruded_facets(lines: Sequence[FloatArray], length: float, steps: int) -> Facets:
    """Return the surface of loops, drawn as polygons (k, 2) m, between z = 0 and z = length.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    return extruded_surface(lines, length)
