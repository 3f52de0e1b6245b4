"""The surfaces of bodies made from plane loops: drawn out along z, or turned about z."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.facets import Facets
from core.shapes.profile.edges import PIECE, PIECES_PER_CIRCLE
from core.shapes.round_surface import check_steps, turned_surface

if TYPE_CHECKING:
    from collections.abc import Sequence

    from numpy.typing import NDArray

    from core.arrays import BoolArray, FloatArray, IntArray


def extruded_surface(lines: Sequence[FloatArray], length: float) -> Facets:
    """Return the closed surface of a body between z = 0 and z = length, m.

    Args:
        lines: the outer polygon (k, 2) m counter-clockwise, and its holes clockwise.
        length: m.
    """
    flat = np.concatenate(lines)
    number = len(flat)
    cap = triangulated(lines)
    here, there = _steps_along(lines)
    sides = [
        np.stack([here, there, there + number], axis=-1),
        np.stack([here, there + number, here + number], axis=-1),
    ]
    bottom = np.column_stack([flat, np.zeros(number)])
    top = np.column_stack([flat, np.full(number, length)])
    return Facets(np.concatenate([bottom, top]), np.concatenate([cap[:, ::-1], cap + number, *sides]))


def fully_turned_surface(lines: Sequence[FloatArray], steps: int) -> Facets:
    """Return the closed surface of a ring: polygons (k, 2) of radius and z in m, turned once about z.

    Raises:
        ShapeError: too few steps.
    """
    surfaces = [turned_surface(line, steps) for line in lines]
    before = np.cumsum([0, *(len(surface.points) for surface in surfaces[:-1])])
    corners = [surface.corners + start for surface, start in zip(surfaces, before, strict=True)]
    return Facets(np.concatenate([surface.points for surface in surfaces]), np.concatenate(corners))


def partly_turned_surface(lines: Sequence[FloatArray], angle: float, steps: int) -> Facets:
    """Return the closed surface of a body turned from the half plane y = 0, x > 0 through an angle below 2π.

    Args:
        lines: the outer polygon (k, 2) of radius and z in m counter-clockwise, and its holes clockwise.
        angle: rad, counter-clockwise about z.
        steps: facets of a full circle.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    flat = np.concatenate(lines)
    pieces = int(np.ceil(angle / PIECE - 1e-9)) * -(-steps // PIECES_PER_CIRCLE)
    turn = angle * np.arange(pieces + 1) / pieces
    on_axis: BoolArray = flat[:, 0] == 0
    x, y = np.outer(flat[:, 0], np.cos(turn)), np.outer(flat[:, 0], np.sin(turn))
    spots = np.stack([x, y, np.broadcast_to(flat[:, 1:], x.shape)], axis=-1)
    per_point = np.where(on_axis, 1, pieces + 1)
    start = np.cumsum(per_point) - per_point
    index = start[:, None] + np.where(on_axis[:, None], 0, np.arange(pieces + 1))
    points = spots[~on_axis[:, None] | (np.arange(pieces + 1) == 0)]
    cap = triangulated(lines)
    here, there = _steps_along(lines)
    low, high, axis_here, axis_there = index[here], index[there], on_axis[here], on_axis[there]
    first = np.stack([low[:, :-1], low[:, 1:], high[:, 1:]], axis=-1)[~axis_here]
    second = np.stack([low[:, :-1], high[:, 1:], high[:, :-1]], axis=-1)[~axis_there]
    ends = [index[cap, 0], index[cap[:, ::-1], -1]]
    return Facets(points, np.concatenate([first.reshape(-1, 3), second.reshape(-1, 3), *ends]))


def triangulated(lines: Sequence[FloatArray]) -> IntArray:
    """Return triangles (m, 3) over the points of all polygons in turn, counter-clockwise, no points added.

    Args:
        lines: the outer polygon (k, 2) and its holes, in either sense; no point occurs twice.
    """
    import shapely

    flat = np.concatenate(lines)
    found = shapely.constrained_delaunay_triangles(shapely.Polygon(lines[0], lines[1:]))
    spots = shapely.get_coordinates(found).reshape(-1, 4, 2)[:, :3]
    key = _as_keys(flat)
    rank = np.argsort(key)
    corners = rank[np.searchsorted(key[rank], _as_keys(spots.reshape(-1, 2)))].reshape(-1, 3)
    a, b, c = np.moveaxis(flat[corners], 1, 0)
    left = (b[:, 0] - a[:, 0]) * (c[:, 1] - a[:, 1]) - (b[:, 1] - a[:, 1]) * (c[:, 0] - a[:, 0]) > 0
    return np.asarray(np.where(left[:, None], corners, corners[:, ::-1]))


def _as_keys(points: FloatArray) -> NDArray[np.complex128]:
    """Return points (k, 2) as complex numbers, which sort and compare as wholes; −0 becomes 0."""
    return np.asarray((points[:, 0] + 0.0) + 1j * (points[:, 1] + 0.0))


def _steps_along(lines: Sequence[FloatArray]) -> tuple[IntArray, IntArray]:
    """Return the numbers of each point and of the next one on its polygon, among the points of all in turn."""
    sizes = [len(line) for line in lines]
    here = np.arange(sum(sizes))
    ends = np.cumsum(sizes)
    there = here + 1
    there[ends - 1] = ends - sizes
    return here, there
