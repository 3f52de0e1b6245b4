"""Cuts whose closed form is seen at once: bars and blocks along the body's own axis, and what lies well inside.

Everything here errs to one side: what it calls inside or apart is; what it cannot tell is left to the solids.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.moments import Moments
from core.shapes import Box, Cone, Cylinder, Ellipsoid, Frustum, RegularPrism, Sphere, Tube

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray
    from core.placement import Placement
    from core.shapes import Shape

# Relative to the body's size: what reaches this far beyond a wall is flush with it.
FLUSH = 1e-12
# Sine of the angle up to which two axes are parallel: sin 180° comes out as 1e-16.
_PARALLEL = 1e-12
# Shapes whose box is exact when drawn in quarter turns; the facets of others may fall short of their extent.
_BOXED = (Box, Cylinder, Tube, Cone, Frustum, Sphere, Ellipsoid, RegularPrism)
_SLACK = 0.01


@dataclass(frozen=True, eq=False)
class Section:
    """The section of a bar along z, from z = 0 to length.

    Attributes:
        radius: of the circle around it about the z axis, m.
        bore: radius of the hole in it, m.
        corners: (n, 2) m of a convex polygon, counter-clockwise; None where the section is round.
        length: m.
        length_name: the dimension that is its length.
    """

    radius: float
    bore: float
    corners: FloatArray | None
    length: float
    length_name: str

    def holds(self, other: Section, turn: FloatArray, shift: FloatArray) -> BoolArray:
        """Return whether the sections of other, standing turned (n, 3, 3) and shifted (n, 3), lie in this one."""
        slack = FLUSH * self.radius
        if other.corners is None:
            points, around = shift[:, None, :2], other.radius
        else:
            points, around = other.corners @ np.swapaxes(turn[:, :2, :2], 1, 2) + shift[:, None, :2], 0.0
        far = np.linalg.norm(points, axis=2)
        if self.corners is None:
            inside = far.max(axis=1) + around <= self.radius + slack
            if self.bore and other.corners is not None:
                return np.zeros(len(shift), dtype=bool)
            return np.asarray(inside & ((far.min(axis=1) - around >= self.bore - slack) | (self.bore == 0)))
        edges = np.roll(self.corners, -1, axis=0) - self.corners
        outward = np.stack([edges[:, 1], -edges[:, 0]], axis=1) / np.linalg.norm(edges, axis=1)[:, None]
        reach = points @ outward.T - np.einsum("ij,ij->i", outward, self.corners)
        return np.asarray(reach.max(axis=(1, 2)) + around <= slack)


def section_of(shape: Shape) -> Section | None:
    """Return the section of a shape that is a bar along z; None of any other."""
    if isinstance(shape, Cylinder):
        return Section(shape.single("diameter") / 2, 0.0, None, shape.single("length"), "length")
    if isinstance(shape, Tube):
        bore = shape.single("bore") / 2
        return Section(shape.single("outer_diameter") / 2, bore, None, shape.single("length"), "length")
    if isinstance(shape, Box):
        half = np.array([shape.single("length_x"), shape.single("length_y")]) / 2
        corners = half * np.array([[1, 1], [-1, 1], [-1, -1], [1, -1]])
        return Section(float(np.hypot(*half)), 0.0, corners, shape.single("length_z"), "length_z")
    if isinstance(shape, RegularPrism):
        angles = 2 * np.pi * np.arange(shape.single("sides")) / shape.single("sides")
        radius = shape.single("across_flats") / 2 / np.cos(np.pi / shape.single("sides"))
        corners = radius * np.stack([np.cos(angles), np.sin(angles)], axis=1)
        return Section(float(radius), 0.0, corners, shape.single("length"), "length")
    return None


def pieces_along(body: Shape, shape: Shape, standing: Placement) -> tuple[Moments, BoolArray]:
    """Return what copies of a bar take out of a bar along the same axis, and (n,) for which of them that is known.

    Args:
        body: in the part frame.
        shape: of the cut.
        standing: placements tf_part_cut, a batch (n,).

    Returns:
        Moments of n pieces in the part frame at unit density (0 of a copy beyond either end), exact where known.
    """
    turn, shift = standing.turn, standing.shift
    nothing = Moments(np.zeros(len(shift)), np.zeros((len(shift), 3)), np.zeros((len(shift), 3, 3)))
    outer, inner = section_of(body), section_of(shape)
    if outer is None or inner is None:
        return nothing, np.zeros(len(shift), dtype=bool)
    along = turn[:, 2, 2]
    known = (np.linalg.norm(turn[:, :2, 2], axis=1) <= _PARALLEL) & outer.holds(inner, turn, shift)
    if not known.any():
        return nothing, known
    ends = shift[:, 2, None] + along[:, None] * np.array([0.0, inner.length])
    low, high = ends.min(axis=1), ends.max(axis=1)
    slack = FLUSH * max(outer.length, inner.length)
    whole = (low >= -slack) & (high <= outer.length + slack)
    start, stop = np.maximum(low, 0.0), np.minimum(high, outer.length)
    missed = known & (stop - start <= slack)
    length = np.where(whole | (stop <= start), inner.length, stop - start)
    short = type(shape).of({**shape.values(), inner.length_name: length}).moments()
    begin = np.where(along > 0, start - low, high - stop)
    shifted = shift + turn[:, :, 2] * np.where(whole, 0.0, begin)[:, None]
    pieces = short.mapped(turn, shifted)
    keep = np.where(missed | ~known, 0.0, 1.0)
    return pieces.times(keep), known


def box_of(shape: Shape) -> FloatArray:
    """Return a box (2, 3) m in the shape's own frame that nothing of it sticks out of."""
    bar = section_of(shape)
    if bar is not None and bar.corners is None:
        return np.array([[-bar.radius, -bar.radius, 0.0], [bar.radius, bar.radius, bar.length]])
    points = shape.facets(48).points
    box = np.array([points.min(axis=0), points.max(axis=0)])
    if not isinstance(shape, _BOXED):
        box += np.array([[-1.0], [1.0]]) * _SLACK * np.ptp(box, axis=0).max()
    return box


def corners_of(box: FloatArray, standing: Placement) -> FloatArray:
    """Return the corners (n, 8, 3) m of a box (2, 3) as it stands in the part frame n times."""
    corners = np.array([[box[i, 0], box[j, 1], box[k, 2]] for i in (0, 1) for j in (0, 1) for k in (0, 1)])
    return np.asarray(corners @ np.swapaxes(standing.turn, 1, 2) + standing.shift[:, None])


def well_inside(body: Shape, corners: FloatArray) -> BoolArray:
    """Return (n,) whether boxes with these corners (n, 8, 3) m surely lie inside a convex bar or a ball."""
    if isinstance(body, Sphere):
        radius = body.single("diameter") / 2
        return np.asarray(np.linalg.norm(corners, axis=2).max(axis=1) <= radius)
    section = section_of(body)
    if section is None or section.bore:
        return np.zeros(len(corners), dtype=bool)
    slack = FLUSH * max(section.radius, section.length)
    level = (corners[..., 2].min(axis=1) >= -slack) & (corners[..., 2].max(axis=1) <= section.length + slack)
    flat = Section(0.0, 0.0, np.zeros((1, 2)), 0.0, "")
    each = section.holds(flat, np.broadcast_to(np.eye(3), (corners[..., 0].size, 3, 3)), corners.reshape(-1, 3))
    return np.asarray(level & each.reshape(corners.shape[:2]).all(axis=1))
