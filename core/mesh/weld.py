"""Making vertices one: by equal bits, or by lying close together."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.mesh.closure import EdgeSum
from core.mesh.grouping import group_equal

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.arrays import FloatArray, IntArray

_CHUNK = 16_000
# Real meshes need two or three; points laid out on purpose could ask for one round per two points.
_MOST_ROUNDS = 30


def weld_exactly(triangles: NDArray[np.floating]) -> tuple[FloatArray, IntArray]:
    """Return points (m, 3) and corners (n, 3) of triangles (n, 3, 3); equal bits are one point, −0.0 is 0.0."""
    stored: np.dtype[np.floating] = np.dtype(np.float32 if triangles.dtype == np.float32 else np.float64)
    hashes = np.empty((len(triangles), 3), np.uint64)
    edges = EdgeSum(_CHUNK, words=stored.itemsize // 4)
    for start in range(0, len(triangles), _CHUNK):
        part = triangles[start : start + _CHUNK]
        columns = np.ascontiguousarray(part.reshape(len(part), 9).T, dtype=stored) + 0.0
        hashes[start : start + _CHUNK] = edges.vertex_hashes(columns).T
    groups = group_equal(hashes.ravel())
    # The first of each group, whatever its sign of zero: adding 0.0 makes both zeros one.
    facet, corner = np.divmod(groups.order[groups.starts], 3)
    points = triangles[facet, corner] + 0.0
    corners = groups.of_elements().reshape(len(triangles), 3)
    if not _same(points, corners, triangles):
        # Two vertices with one hash: never met, but then the slow way is the right one.
        points, corners = np.unique(triangles.reshape(-1, 3) + 0.0, axis=0, return_inverse=True)
        corners = corners.reshape(len(triangles), 3)
    return points.astype(np.float64), corners.astype(np.int64, copy=False)


def _same(points: NDArray[np.floating], corners: IntArray, triangles: NDArray[np.floating]) -> bool:
    return all(
        np.array_equal(points.take(corners[start : start + _CHUNK], axis=0), triangles[start : start + _CHUNK])
        for start in range(0, len(corners), _CHUNK)
    )


def clusters_within(points: FloatArray, tolerance: float) -> IntArray:
    """Return a group number (n,) for points (n, 3): groups are apart by more than tolerance along some axis.

    A group is split wherever its points leave a gap wider than tolerance along x, y or z, until none can be, or
    after _MOST_ROUNDS: what then still hangs together stays one group.
    """
    groups = np.zeros(len(points), dtype=np.int64)
    count = 0
    for _ in range(_MOST_ROUNDS):
        for axis in range(3):
            groups = _split_along(points[:, axis], groups, tolerance)
        now = int(groups.max(initial=-1)) + 1
        if now == count:
            break
        count = now
    return groups


def _split_along(values: FloatArray, groups: IntArray, tolerance: float) -> IntArray:
    order = np.lexsort((values, groups))
    new = np.diff(groups[order], prepend=-1) != 0
    new |= np.diff(values[order], prepend=-np.inf) > tolerance
    result = np.empty_like(groups)
    result[order] = np.cumsum(new) - 1
    return result
