"""The surface that a plane line leaves when it turns once about the z axis, as facets."""

import numpy as np

from core.arrays import ArrayLike, BoolArray, FloatArray, IntArray
from core.errors import ShapeError
from core.facets import Facets
from core.shapes.base import FEWEST_STEPS


def turned_surface(outline: ArrayLike, steps: int) -> Facets:
    """Return the closed surface of a body of revolution about z; its points lie on the true surface.

    Args:
        outline: (n, 2) radius and z in m, a closed polygon, counter-clockwise in the (radius, z) plane;
            no radius is negative, and a point of radius 0 becomes the tip of a fan. Of equal neighbours one is kept.
        steps: facets around.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    line = np.asarray(outline, dtype=float)
    line = line[np.any(line != np.roll(line, 1, axis=0), axis=1)]
    points, index, on_axis = _turned_points(line, steps)
    return Facets(points, _bands(index, np.roll(index, -1, axis=0), on_axis, np.roll(on_axis, -1)))


def turned_sheet(line: ArrayLike, steps: int) -> Facets:
    """Return the surface that an open line leaves; its points lie on the true surface.

    Args:
        line: (n, 2) radius and z in m from end to end; what lies on its right, looking along it with z up and
            the radius to the right, is outside.
        steps: facets around.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    points, index, on_axis = _turned_points(np.asarray(line, dtype=float), steps)
    return Facets(points, _bands(index[:-1], index[1:], on_axis[:-1], on_axis[1:]))


def check_steps(steps: int) -> None:
    """Refuse a number of facets around that makes no closed surface.

    Raises:
        ShapeError: fewer than FEWEST_STEPS.
    """
    if steps < FEWEST_STEPS:
        raise ShapeError(
            "a circle cannot be drawn in so few steps",
            read=str(steps),
            remedy=f"Take at least {FEWEST_STEPS}",
        )


def _turned_points(line: FloatArray, steps: int) -> tuple[FloatArray, IntArray, BoolArray]:
    """Return the points (k, 3), their numbers (n, steps) by place on the line and step, and what is on the axis."""
    radius, height = line.T
    on_axis = radius == 0.0
    around = np.arange(steps)
    angle = 2 * np.pi * around / steps
    per_point = np.where(on_axis, 1, steps)
    start = np.cumsum(per_point) - per_point
    index = start[:, None] + np.where(on_axis[:, None], 0, around)
    x, y = np.outer(radius, np.cos(angle)), np.outer(radius, np.sin(angle))
    spots = np.stack([x, y, np.broadcast_to(height[:, None], x.shape)], axis=-1)
    return spots[~on_axis[:, None] | (around == 0)], index, on_axis


def _bands(here: IntArray, there: IntArray, here_on_axis: BoolArray, there_on_axis: BoolArray) -> IntArray:
    """Return the facets (m, 3) between neighbouring circles (n, steps); a circle on the axis is one point."""
    here_next, there_next = np.roll(here, -1, axis=1), np.roll(there, -1, axis=1)
    lower = np.stack([here, here_next, there_next], axis=-1)[~here_on_axis]
    upper = np.stack([here, there_next, there], axis=-1)[~there_on_axis]
    return np.concatenate([lower.reshape(-1, 3), upper.reshape(-1, 3)])
