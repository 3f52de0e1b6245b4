"""The surface that a plane outline leaves when it turns once about the z axis, as facets."""

import numpy as np

from core.arrays import ArrayLike
from core.errors import ShapeError
from core.facets import Facets
from core.shapes.base import FEWEST_STEPS


def turned_surface(outline: ArrayLike, steps: int) -> Facets:
    """Return the closed surface of a body of revolution about z; its points lie on the true surface.

    Args:
        outline: (n, 2) radius and z in m, a closed polygon, counter-clockwise in the (radius, z) plane;
            no radius is negative, and a point of radius 0 becomes the tip of a fan.
        steps: facets around.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    radius, height = np.asarray(outline, dtype=float).T
    on_axis = radius == 0.0
    around = np.arange(steps)
    angle = 2 * np.pi * around / steps
    per_point = np.where(on_axis, 1, steps)
    start = np.cumsum(per_point) - per_point
    index = start[:, None] + np.where(on_axis[:, None], 0, around)
    x, y = np.outer(radius, np.cos(angle)), np.outer(radius, np.sin(angle))
    spots = np.stack([x, y, np.broadcast_to(height[:, None], x.shape)], axis=-1)
    points = spots[~on_axis[:, None] | (around == 0)]

    here, there = index, np.roll(index, -1, axis=0)
    here_next, there_next = np.roll(here, -1, axis=1), np.roll(there, -1, axis=1)
    lower = np.stack([here, here_next, there_next], axis=-1)[~on_axis]
    upper = np.stack([here, there_next, there], axis=-1)[~np.roll(on_axis, -1)]
    return Facets(points, np.concatenate([lower.reshape(-1, 3), upper.reshape(-1, 3)]))


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
