"""A mesh of fewer facets with the same form, to be drawn: points that lie close together become one."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.facets import Facets
from core.mesh.grouping import running_count

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.arrays import IntArray

# More cells than this along a side would make the table of all cells large (8 million entries).
_MOST_CELLS = 200
# Facets handled at a time, so that the copies stay small.
_CHUNK = 16_000


def lighter_facets(triangles: NDArray[np.floating], most: int) -> Facets:
    """Return at most so many facets with the same form, over shared points.

    The points in each cell of a grid are drawn together into their mean, and the facets that this leaves without
    three corners are dropped: what was closed stays closed (vertex clustering, Rossignac and Borrel 1993). The grid
    is made coarser until the facets that are left are few enough.

    Args:
        triangles: (n, 3, 3) corners, any length unit; finite.
        most: facets, at least 1.
    """
    low, high = triangles.min(axis=(0, 1)).astype(float), triangles.max(axis=(0, 1)).astype(float)
    size = float((high - low).max())
    # A closed surface passes through some 6 cells² of a cells³ grid, and leaves about two facets in each.
    cells = int(np.clip(np.sqrt(most / 3), 2, _MOST_CELLS))
    while True:
        points, corners = _clustered(triangles, low, size / max(cells, 1) or 1.0, cells)
        if len(corners) <= most:
            return Facets(points, corners)
        # At 0 everything is one point, and no facet is left.
        cells = max(0, min(cells - 1, int(0.95 * cells * np.sqrt(most / len(corners)))))


def _clustered(
    triangles: NDArray[np.floating], low: NDArray[np.float64], step: float, cells: int
) -> tuple[NDArray[np.float64], IntArray]:
    """Return points and corners with the mean of the points in each cell of the grid that is met."""
    keys = np.empty((len(triangles), 3), dtype=np.int32)
    used = np.zeros((cells + 1) ** 3, dtype=bool)
    for start in range(0, len(triangles), _CHUNK):
        part = triangles[start : start + _CHUNK].reshape(-1, 3)
        key = np.zeros(len(part), dtype=np.int32)
        for column, lowest in zip(part.T, low, strict=True):
            place = ((column - part.dtype.type(lowest)) * part.dtype.type(1 / step)).astype(np.int32)
            key = key * (cells + 1) + np.clip(place, 0, cells)
        keys[start : start + _CHUNK] = key.reshape(-1, 3)
        used[key] = True
    number = running_count(used) - np.int32(1)
    count = int(number[-1]) + 1
    sums, weights = np.zeros((3, count)), np.zeros(count)
    for start in range(0, len(triangles), _CHUNK):
        keys[start : start + _CHUNK] = number[keys[start : start + _CHUNK]]
        here = keys[start : start + _CHUNK].ravel()
        np.add.at(weights, here, 1.0)
        for total, column in zip(sums, triangles[start : start + _CHUNK].reshape(-1, 3).T, strict=True):
            np.add.at(total, here, column.astype(np.float64))
    a, b, c = keys.T
    kept = keys[(a != b) & (b != c) & (c != a)].astype(np.int64)
    return (sums / weights).T, _without_folds(kept, count)


def _without_folds(corners: IntArray, points: int) -> IntArray:
    """Return the facets (m, 3) without those that lie back to back with another one: such pairs bound nothing."""
    order = np.argsort(corners, axis=1)
    ordered = np.take_along_axis(corners, order, axis=1)
    # An even order of three is a turn of (0, 1, 2): each place is followed by the next.
    sign = np.where((order[:, 1] - order[:, 0]) % 3 == 1, 1, -1)
    edge = np.unique(ordered[:, 0] * points + ordered[:, 1], return_inverse=True)[1]
    _, first, same = np.unique(edge * points + ordered[:, 2], return_index=True, return_inverse=True)
    net = np.bincount(same, weights=sign).astype(np.int64)
    facets = np.where((net * sign[first] > 0)[:, None], corners[first], corners[first][:, ::-1])
    return np.repeat(facets, np.abs(net), axis=0)
