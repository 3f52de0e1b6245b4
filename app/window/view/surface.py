"""A surface made ready for drawing: soft normals, the sharp edges, and the edges that may become a rim.

All of it is found once per surface, without a loop over facets. Coordinates are kept relative to the middle
of the surface, so that single precision is enough wherever the part stands.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, TypeAlias

import numpy as np
from numpy.typing import NDArray

from core.facets import Facets
from core.mesh.lighter import lighter_facets

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray

Float32Array: TypeAlias = NDArray[np.float32]
Uint32Array: TypeAlias = NDArray[np.uint32]

# Edges that turn further than this are drawn, and not shaded over.
SHARP = np.radians(30.0)
# A corner whose soft normal leans further than this from its facet (the tip of a cone) keeps the facet's own.
_LEAN = np.cos(np.radians(50.0))
_FLAT = 1 - 1e-9
_SIDES = 2
# A surface of more facets than this is fine enough for lone sharp edges to be noise.
_FINE = 50_000


@dataclass(frozen=True, eq=False)
class Surface:
    """Triangles to draw, relative to a middle point.

    Attributes:
        middle: (3,) m, in the part frame; every other coordinate is relative to it.
        bounds: (2, 3) m, lowest and highest corner, in the part frame.
        vertices, normals: (k, 3), m and unit; a point on a sharp edge is there once for each side.
        faces: (m, 3) indices into vertices.
        facet_normals: (m, 3) unit; zero for a facet without area.
        sharp: (e, 2, 3) m, the ends of the edges that turn by more than SHARP or have no neighbour.
        rims: (s, 2, 3) m, the ends of the other edges that are not flat.
        rim_normals: (s, 2, 3) the normals on both sides of those.
        closed: whether every edge has exactly one neighbour that runs the other way.

    """

    middle: FloatArray
    bounds: FloatArray
    vertices: Float32Array
    normals: Float32Array
    faces: Uint32Array
    facet_normals: Float32Array
    sharp: Float32Array
    rims: Float32Array
    rim_normals: Float32Array
    closed: bool

    @property
    def count(self) -> int:
        """How many triangles it has."""
        return len(self.faces)

    @cached_property
    def blocks(self) -> Float32Array:
        """Boxes (b, 2, 3) m around BLOCK facets at a time, relative to the middle."""
        starts = np.arange(0, self.count, BLOCK)
        corners = self.vertices[self.faces]
        low, high = corners.min(axis=1), corners.max(axis=1)
        return np.stack([np.minimum.reduceat(low, starts), np.maximum.reduceat(high, starts)], axis=1)

    @cached_property
    def light(self) -> Surface:
        """A surface of far fewer triangles with the same outline in the large, for a camera that moves."""
        return self if self.count <= LIGHT_COUNT else lighter(self)


# Facets that are picked among together.
BLOCK = 256
# A surface of at most so many triangles needs no lighter one.
LIGHT_COUNT = 12_000


def surface_of(facets: Facets) -> Surface:
    """Return the surface made ready for drawing; facets has at least one facet."""
    points, corners = facets.points, facets.corners
    bounds = np.stack([points.min(axis=0), points.max(axis=0)])
    middle = 0.5 * (bounds[0] + bounds[1])
    normals = _facet_normals(points - middle, corners)
    edges = _edges(corners, len(points), normals)
    if not edges.closed:
        # Facets that do not share their points look open until equal points are made one.
        points, corners = _welded(facets)
        edges = _edges(corners, len(points), normals)
    local = (points - middle).astype(np.float32)
    sharp = np.concatenate([edges.lonely, edges.ends[edges.turn < np.cos(SHARP)]])
    if len(corners) > _FINE:
        sharp = _in_chains(sharp, len(points))
    soft = (edges.turn >= np.cos(SHARP)) & (edges.turn < _FLAT)
    vertices, soft_normals, faces = _softened(local, corners, normals, edges)
    return Surface(
        middle,
        bounds,
        vertices,
        soft_normals,
        faces,
        normals.astype(np.float32),
        local[sharp],
        local[edges.ends[soft]],
        normals[edges.sides[soft]].astype(np.float32),
        edges.closed,
    )


def _in_chains(ends: IntArray, points: int) -> IntArray:
    """Return the edges (e, 2) that go on at both ends: in a fine mesh a lone sharp edge is noise, not form."""
    for _ in range(2):
        degree = np.bincount(ends.ravel(), minlength=points)
        ends = ends[(degree[ends] >= _SIDES).all(axis=1)]
    return ends


def lighter(surface: Surface) -> Surface:
    """Return a surface of the same form with at most LIGHT_COUNT triangles."""
    facets = lighter_facets(surface.vertices[surface.faces], LIGHT_COUNT)
    if not len(facets.corners):
        return surface
    return surface_of(Facets(facets.points + surface.middle, facets.corners))


@dataclass(frozen=True, eq=False)
class _Edges:
    """What meets along the edges.

    Attributes:
        ends: (e, 2) points of the edges that have two sides.
        sides: (e, 2) the facets on both sides.
        corners: (e, 2, 2) the corners (3·facet + place) of those facets at the two ends, by side.
        turn: (e,) cosine of the angle between the facets.
        lonely: (l, 2) points of the edges that have one side, or more than two.
        closed: whether every edge has two sides that run opposite ways.

    """

    ends: IntArray
    sides: IntArray
    corners: IntArray
    turn: FloatArray
    lonely: IntArray
    closed: bool


def _welded(facets: Facets) -> tuple[FloatArray, IntArray]:
    """Return points and corners with bitwise equal points made one."""
    points = facets.points + 0.0  # −0.0 becomes 0.0
    key = np.zeros(len(points), dtype=np.int64)
    for column in points.T:
        values, rank = np.unique(column, return_inverse=True)
        # Ranks again after each step, so that the product stays below 2⁶³.
        key = np.unique(key * len(values) + rank, return_inverse=True)[1]
    _, first, owner = np.unique(key, return_index=True, return_inverse=True)
    return points[first], np.asarray(owner[facets.corners])


def _facet_normals(points: FloatArray, corners: IntArray) -> FloatArray:
    a, b, c = (points[corners[:, i]] for i in range(3))
    normals = np.cross(b - a, c - a)
    length = np.linalg.norm(normals, axis=1, keepdims=True)
    return np.asarray(np.divide(normals, length, out=np.zeros_like(normals), where=length > 0))


def _edges(corners: IntArray, points: int, normals: FloatArray) -> _Edges:
    start, end = corners.ravel(), np.roll(corners, -1, axis=1).ravel()
    forward = start < end
    key = np.where(forward, start * points + end, end * points + start)
    order = np.argsort(key)
    ordered = key[order]
    first = np.flatnonzero(np.concatenate([[True], ordered[1:] != ordered[:-1]]))
    run = np.diff(np.append(first, len(ordered)))
    pair = first[run == _SIDES]
    one, two = order[pair], order[pair + 1]
    lonely = order[first[run != _SIDES]]
    sides = np.stack([one // 3, two // 3], axis=1)
    turn = np.einsum("ij,ij->i", normals[sides[:, 0]], normals[sides[:, 1]])
    same_way = forward[one] == forward[two]
    turn = np.where(same_way, -turn, turn)
    # A facet without area has no direction; its neighbours are not parted by it.
    turn = np.where((np.abs(normals).sum(axis=1) == 0)[sides].any(axis=1), 1.0, turn)
    here = np.stack([one, _next_corner(one)], axis=1)
    there = np.where(
        same_way[:, None],
        np.stack([two, _next_corner(two)], axis=1),
        np.stack([_next_corner(two), two], axis=1),
    )
    return _Edges(
        np.stack([start[one], end[one]], axis=1),
        sides,
        np.stack([here, there], axis=1),
        turn,
        np.stack([start[lonely], end[lonely]], axis=1),
        closed=not len(lonely) and not same_way.any(),
    )


def _next_corner(corner: IntArray) -> IntArray:
    return np.asarray(corner - corner % 3 + (corner + 1) % 3)


def _softened(
    local: Float32Array, corners: IntArray, normals: FloatArray, edges: _Edges
) -> tuple[Float32Array, Float32Array, Uint32Array]:
    """Return vertices, normals and faces with one vertex for all corners that meet softly in a point."""
    soft = edges.corners[edges.turn >= np.cos(SHARP)]
    group = _joined(3 * len(corners), soft[:, 0].ravel(), soft[:, 1].ravel())
    own = np.repeat(normals, 3, axis=0)
    # Weighted by the angle in the corner, so that how a face is cut into triangles does not show.
    weight = own * _corner_angles(local, corners).reshape(-1, 1)
    summed = np.stack([np.bincount(group, weights=weight[:, i], minlength=len(group)) for i in range(3)], axis=1)
    length = np.linalg.norm(summed, axis=1, keepdims=True)
    mean = np.divide(summed, length, out=np.zeros_like(summed), where=length > 0)
    leaning = np.einsum("ij,ij->i", mean[group], own) < _LEAN
    group = np.where(leaning, np.arange(len(group)), group)
    # A corner that left its group owns its number only if no group goes by it; then it takes a new one.
    group[leaning] += len(group)
    is_used = np.zeros(2 * len(group), dtype=bool)
    is_used[group] = True
    used, faces = np.flatnonzero(is_used), (np.cumsum(is_used) - 1)[group]
    alone = used >= len(group)
    source = np.where(alone, used - len(group), used)
    vertex_normals = np.where(alone[:, None], own[source], mean[source])
    vertices = local[corners.ravel()[source]]
    return vertices, vertex_normals.astype(np.float32), faces.reshape(-1, 3).astype(np.uint32)


def _corner_angles(points: Float32Array, corners: IntArray) -> FloatArray:
    """Return the angle in each corner of each facet, (m, 3) rad."""
    a, b, c = (points[corners[:, i]] for i in range(3))
    sides = [b - a, c - b, a - c]
    length = [np.sqrt(np.einsum("ij,ij->i", side, side)) for side in sides]
    cosines = np.ones((len(corners), 3), dtype=np.float32)
    for place in range(3):
        before = place - 1
        scale = length[place] * length[before]
        dots = -np.einsum("ij,ij->i", sides[place], sides[before])
        np.divide(dots, scale, out=cosines[:, place], where=scale > 0)
    return np.arccos(np.clip(cosines, -1.0, 1.0)).astype(np.float64)


def _joined(count: int, one: IntArray, two: IntArray) -> IntArray:
    """Return for each of count things the smallest number in its group; one[i] and two[i] belong together.

    Smallest labels are handed on and short-cut by pointer jumping; about log(group size) rounds.
    """
    label = np.arange(count)
    while True:
        low = np.minimum(label[one], label[two])
        before = label.copy()
        np.minimum.at(label, before[one], low)
        np.minimum.at(label, before[two], low)
        while True:
            jumped = label[label]
            if np.array_equal(jumped, label):
                break
            label = jumped
        if np.array_equal(label, before):
            return label
