"""What the facets of a closed mesh are next to: mates across edges, plane patches, and how far normals turn.

Half-edge 3t+k is the edge of triangle t that lies opposite its corner k; it runs from corner k+1 to corner k+2.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.curvature.vectors import PAIRS, applied, cross, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray

# A corner this near to the next facet's plane (relative to the largest coordinate) lies in it: four steps of float32.
COPLANAR = 2.0**-22

# Corners of a plane patch from which on it cannot be one facet of a curved surface: a plane meets such a surface's
# grid in at most four corners.
FLAT_CORNERS = 5

# Edges that are looked at together: they stay in the processor's cache.
CHUNK = 8_000


@dataclass(frozen=True, eq=False)
class Surface:
    """A closed mesh with its neighbourhoods.

    Attributes:
        points: (n, 3). corners: (m, 3) indices into points.
        normals: (m, 3) unit, or 0 where a triangle has no area. areas: (m,).
        mates: (3m,) the half-edge that runs the other way, or −1 where the edge is not shared by exactly two.
        turns: (3m,) angle in rad between both normals, positive where the edge is convex; 0 without a mate.
        coplanar: (3m,) both triangles lie in one plane.
        patches: (m,) number of the plane patch of connected coplanar triangles.
        lone: (patches,) the patch is a single triangle.
        flat: (patches,) the patch has too many corners to be a facet of a curved surface.
        size: the largest coordinate, for tolerances.
    """

    points: FloatArray
    corners: IntArray
    normals: FloatArray
    areas: FloatArray
    mates: IntArray
    turns: FloatArray
    coplanar: BoolArray
    patches: IntArray
    lone: BoolArray
    flat: BoolArray
    size: float


def survey(points: FloatArray, corners: IntArray) -> Surface:
    """Return the neighbourhoods of a mesh; points (n, 3), corners (m, 3)."""
    size = float(np.abs(points).max())
    normals, areas = _normals(points, corners)
    mates = mate_half_edges(corners, len(points))
    turns, coplanar = _turns(points, corners, normals, mates, COPLANAR * size)
    inner = np.flatnonzero(coplanar)
    inner = inner[inner < mates[inner]]
    patches = connected(len(corners), inner // 3, mates[inner] // 3)
    flat = _flat_patches(points, corners, mates, patches)
    lone = np.bincount(patches) == 1
    return Surface(points, corners, normals, areas, mates, turns, coplanar, patches, lone, flat, size)


def _normals(points: FloatArray, corners: IntArray) -> tuple[FloatArray, FloatArray]:
    a = points[corners[:, 0]]
    normals = np.cross(points[corners[:, 1]] - a, points[corners[:, 2]] - a)
    lengths = np.sqrt(np.einsum("ni,ni->n", normals, normals))
    np.divide(normals, lengths[:, None], out=normals, where=lengths[:, None] > 0)
    return normals, 0.5 * lengths


def mate_half_edges(corners: IntArray, point_count: int) -> IntArray:
    """Return for every half-edge (3m,) the one that runs the other way, −1 where not exactly two share the edge."""
    start = corners[:, [1, 2, 0]].ravel()
    end = corners[:, [2, 0, 1]].ravel()
    keys = np.minimum(start, end) * point_count + np.maximum(start, end)
    order = np.argsort(keys, kind="stable")
    keys = keys[order]
    same = keys[1:] == keys[:-1]
    lone_before = np.concatenate([[True], ~same])
    lone_after = np.concatenate([~same, [True]])
    # A pair is two equal keys with another key before and another one after.
    pair = np.flatnonzero(same & lone_before[:-1] & lone_after[1:])
    one, two = order[pair], order[pair + 1]
    opposed = start[one] == end[two]
    one, two = one[opposed], two[opposed]
    mates = np.full(len(start), -1, dtype=np.int64)
    mates[one], mates[two] = two, one
    return mates


def _turns(
    points: FloatArray, corners: IntArray, normals: FloatArray, mates: IntArray, tolerance: float
) -> tuple[FloatArray, BoolArray]:
    turns, coplanar = np.zeros(len(mates)), np.zeros(len(mates), dtype=bool)
    one = np.flatnonzero(mates >= 0)
    one = one[one < mates[one]]
    two = mates[one]
    apexes = corners.ravel()
    for start in range(0, len(one), CHUNK):
        a, b = one[start : start + CHUNK], two[start : start + CHUNK]
        normal_a, normal_b = gathered(normals, a // 3), gathered(normals, b // 3)
        foot = gathered(points, apexes[a // 3 * 3 + (a + 1) % 3])
        above_a = dot(gathered(points, apexes[b]) - foot, normal_a)
        above_b = dot(gathered(points, apexes[a]) - foot, normal_b)
        cosine = dot(normal_a, normal_b)
        angle = np.arctan2(length(cross(normal_a, normal_b)), cosine)
        turns[a] = turns[b] = np.where(above_a <= 0, angle, -angle)
        near = (np.abs(above_a) <= tolerance) & (np.abs(above_b) <= tolerance)
        # A triangle without area has no normal, and so a cosine of 0.
        coplanar[a] = coplanar[b] = near & (cosine > 0)
    return turns, coplanar


def connected(count: int, one: IntArray, two: IntArray) -> IntArray:
    """Number the sets of count things that the pairs one, two (n,) connect (label hooking with pointer jumping)."""
    labels = np.arange(count)
    while len(one):
        low, high = np.minimum(labels[one], labels[two]), np.maximum(labels[one], labels[two])
        np.minimum.at(labels, high, low)
        while True:
            jumped = labels[labels]
            if np.array_equal(jumped, labels):
                break
            labels = jumped
        open_ = labels[one] != labels[two]
        one, two = one[open_], two[open_]
    roots = labels == np.arange(count)
    return (np.cumsum(roots) - 1)[labels]


def _flat_patches(points: FloatArray, corners: IntArray, mates: IntArray, patches: IntArray) -> BoolArray:
    """Return which patches have FLAT_CORNERS corners or more, where their outline turns."""
    triangles = np.bincount(patches)
    flat = np.zeros(len(triangles), dtype=bool)
    owner = np.repeat(patches, 3)
    other = np.where(mates >= 0, owner[mates], -1)
    rim = np.flatnonzero((triangles[owner] >= FLAT_CORNERS - 2) & (owner != other))
    if not len(rim):
        return flat
    triangle, k = rim // 3, rim % 3
    start, end = corners[triangle, (k + 1) % 3], corners[triangle, (k + 2) % 3]
    owner = owner[rim]
    along = points[end] - points[start]
    leaving, arriving = owner * len(points) + start, owner * len(points) + end
    out_order, in_order = np.argsort(leaving, kind="stable"), np.argsort(arriving, kind="stable")
    # Both lists hold the same keys, so the n-th of one meets the n-th of the other at the same corner.
    u, v = along[in_order], along[out_order]
    turn = np.cross(u, v)
    sine_squared = np.einsum("ni,ni->n", turn, turn)
    bound = 1e-8 * np.einsum("ni,ni->n", u, u) * np.einsum("ni,ni->n", v, v)
    bends = np.bincount(owner[out_order], weights=sine_squared > bound, minlength=len(flat))
    flat[bends >= FLAT_CORNERS] = True
    return flat


def conormals(surface: Surface, half_edges: IntArray) -> tuple[FloatArray, FloatArray]:
    """Return the outward unit vectors (3, h) in the triangles' planes across their edges, and the edges' lengths."""
    triangle, k = half_edges // 3, half_edges % 3
    flat = surface.corners.ravel()
    edge = gathered(surface.points, flat[3 * triangle + (k + 2) % 3])
    edge -= gathered(surface.points, flat[3 * triangle + (k + 1) % 3])
    lengths = length(edge)
    out = cross(edge, gathered(surface.normals, triangle))
    out /= np.where(lengths > 0, lengths, 1.0)
    return out, lengths


@dataclass(frozen=True, eq=False)
class PatchForms:
    """Where the plane patches are and how they stretch.

    Attributes:
        centroids: (patches, 3) of their areas.
        spreads: (patches, 6) second moment of area about the centroid, over the area, in PAIRS' order.
    """

    centroids: FloatArray
    spreads: FloatArray


def patch_forms(surface: Surface) -> PatchForms:
    """Return the centroids and spreads of all patches."""
    patches, count = surface.patches, len(surface.flat)
    area = np.bincount(patches, weights=surface.areas, minlength=count)
    area[area == 0] = 1.0
    start = surface.points[surface.corners[0, 0]]
    a, b, c = (gathered(surface.points, surface.corners[:, k]) - start[:, None] for k in range(3))
    centroids, spreads = np.empty((count, 3)), np.empty((count, 6))
    for i in range(3):
        weight = surface.areas * (a[i] + b[i] + c[i]) / 3
        centroids[:, i] = np.bincount(patches, weight, count) / area
    own = gathered(centroids, patches)
    a, b, c = a - own, b - own, c - own
    s = np.add(np.add(a, b, out=own), c, out=own)
    for column, (i, j) in enumerate(PAIRS):
        moment = (a[i] * a[j] + b[i] * b[j] + c[i] * c[j] + s[i] * s[j]) / 12
        spreads[:, column] = np.bincount(patches, surface.areas * moment, count) / area
    centroids += start
    return PatchForms(centroids, spreads)


def patch_widths(spreads: FloatArray, directions: FloatArray) -> FloatArray:
    """Return the widths (n,) of patches with spreads (6, n) along directions (3, n).

    They are those of the rectangle that has the same second moment of area.
    """
    return np.asarray(np.sqrt(12 * np.maximum(dot(directions, applied(spreads, directions)), 0)))
