"""Where a mesh that is not closed leaks, and what can still be said about it.

Nothing here is needed for a closed mesh. The whole mesh is held in memory, about 250 bytes a triangle.

Vertices are one where their bits are equal. The directed edges that meet no reverse are the open edges. Then:
- "hairline cracks": all of them vanish once their vertices are welded within WELD of the mesh's diagonal. Narrow
  strips from each open edge to its welded place close the surface.
- "mixed winding": every edge is shared by pairs of facets, but some of these turn opposite ways.
- "open": anything else. The open edges form loops, each of which a fan about its centroid closes. Where they are wider
  cracks, and sewing them leaves less open than fans would, they are sewn.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.weld import clusters_within, weld_exactly

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.arrays import FloatArray, IntArray

# Of the diagonal of the bounding box: cracks narrower than this come from rounding, not from a missing facet.
WELD = 1e-6
# Wider cracks are looked for within these, one after the other; what is wider still is a hole.
WIDTHS = (WELD, 1e-5, 1e-4, 1e-3)


@dataclass(frozen=True, eq=False)
class Leaks:
    """What is wrong with a mesh that is not closed.

    Attributes:
        verdict: "hairline cracks", "mixed winding" or "open".
        open_edges: how many directed edges meet no reverse.
        edges: (k, 2, 3) their end points, each edge as often as it is unmatched.
        fill: (m, 3, 3) triangles that close the surface, or None where it cannot be closed.
        gap: the widest crack that was sewn, file units; 0 where none was.
        reason: why fill is None, else "".
        bulge: volume that flat caps may be wrong by, see bulge_of; 0 without caps.
    """

    verdict: str
    open_edges: int
    edges: FloatArray
    fill: FloatArray | None
    gap: float
    reason: str
    bulge: float = 0.0


@dataclass(frozen=True, eq=False)
class EdgeTally:
    """Undirected edges that are out of balance: ends (k, 2), net uses along them (k,), uses in all (k,)."""

    ends: IntArray
    net: IntArray
    uses: IntArray


def find_leaks(triangles: NDArray[np.floating], area: float) -> Leaks:
    """Return where triangles (n, 3, 3) of that area, file units, do not close, and the facets that would close them."""
    points, corners = weld_exactly(triangles)
    tally = unbalanced_edges(corners)
    ends = _directed(tally)
    count, edges = len(ends), points[ends]
    sewn = closing_weld(points, ends)
    if sewn is not None and sewn.hairline:
        return Leaks("hairline cracks", count, edges, _strips(edges, sewn.places[ends]), sewn.gap, "")
    if not (tally.uses % 2).any():
        return Leaks("mixed winding", count, edges, None, 0.0, "facets wind both ways")
    if np.abs(tally.net).max() > 1:
        return Leaks("open", count, edges, None, 0.0, "open edges on which several facets end")
    loops = loops_of(ends)
    caps = caps_of(points, loops)
    _, bulges = bulge_of(caps, np.repeat(np.arange(len(loops)), [len(loop) for loop in loops]))
    if sewn is not None and sewn.gap * area < bulges.sum():
        return Leaks("open", count, edges, _strips(edges, sewn.places[ends]), sewn.gap, "")
    return Leaks("open", count, edges, caps, 0.0, "", float(bulges.sum()))


def unbalanced_edges(corners: IntArray) -> EdgeTally:
    """Return the edges of facets corners (n, 3) whose uses one way and the other do not cancel."""
    starts = corners.ravel()
    stops = corners[:, [1, 2, 0]].ravel()
    proper = starts != stops
    starts, stops = starts[proper], stops[proper]
    most = int(corners.max()) + 1
    keys = np.minimum(starts, stops) * most + np.maximum(starts, stops)
    order = np.argsort(keys)
    keys, signs = keys[order], np.where(starts < stops, 1, -1)[order]
    first = np.flatnonzero(np.diff(keys, prepend=-1))
    net = np.add.reduceat(signs, first)
    uses = np.diff(first, append=len(keys))
    wrong = net != 0
    ends = np.stack(np.divmod(keys[first[wrong]], most), axis=1)
    return EdgeTally(ends, net[wrong], uses[wrong])


def loops_of(ends: IntArray) -> list[IntArray]:
    """Return directed edges (k, 2) that balance at every vertex as simple loops, each its vertices in order.

    Where loops touch at a vertex, a walk is cut off as soon as it comes back to one, so that no loop passes a vertex
    twice.
    """
    leaving: dict[int, list[int]] = {}
    for start, stop in ends.tolist():
        leaving.setdefault(start, []).append(stop)
    loops = []
    for root in list(leaving):
        while leaving[root]:
            path, places = [root], {root: 0}
            while path:
                # Edges that do not balance lead nowhere: what was walked of them is no loop.
                if not leaving.get(path[-1]):
                    break
                vertex = leaving[path[-1]].pop()
                if vertex not in places:
                    places[vertex] = len(path)
                    path.append(vertex)
                    continue
                loops.append(np.array(path[places[vertex]:], dtype=np.int64))
                for passed in path[places[vertex] + 1:]:
                    del places[passed]
                del path[places[vertex] + 1:]
    return loops


def _directed(tally: EdgeTally) -> IntArray:
    """Return the open edges (k, 2) along the way their facets run, each as often as it is unmatched."""
    along = np.where((tally.net > 0)[:, None], tally.ends, tally.ends[:, ::-1])
    return np.repeat(along, np.abs(tally.net), axis=0)


@dataclass(frozen=True, eq=False)
class Welded:
    """Points after a weld of those on open edges.

    Attributes:
        indices: (n,) the new index of each point.
        places: (n, 3) its new place.
        tolerance: within which points were made one, file units.
        gap: the farthest that two of them were apart, at most.
        hairline: whether the tolerance is WELD of the diagonal.
    """

    indices: IntArray
    places: FloatArray
    tolerance: float
    gap: float
    hairline: bool = False


def closing_weld(points: FloatArray, ends: IntArray) -> Welded | None:
    """Return the narrowest weld in which open edges (k, 2) vanish because others meet them; None where none does.

    Beyond hairline cracks an edge has to meet another: a small hole drawn together into one point is no crack.
    """
    if len(ends) == 0:
        return None
    diagonal = float(np.linalg.norm(np.ptp(points, axis=0)))
    for width in WIDTHS:
        welded = welded_edges(points, ends, width * diagonal)
        there = welded.indices[ends]
        if balances(there):
            if width == WELD:
                return replace(welded, hairline=True)
            collapsed = there[:, 0] == there[:, 1]
            return welded if 2 * np.count_nonzero(collapsed) < len(ends) else None
    return None


def welded_edges(points: FloatArray, ends: IntArray, tolerance: float) -> Welded:
    """Return points (n, 3) after those on open edges (k, 2) were made one within tolerance, at their mean."""
    on_edge = np.unique(ends)
    groups = clusters_within(points[on_edge], tolerance)
    sizes = np.bincount(groups)
    middle = np.stack([np.bincount(groups, points[on_edge, axis]) / sizes for axis in range(3)], axis=1)
    indices = np.arange(len(points))
    indices[on_edge] = len(points) + groups
    places = points.copy()
    places[on_edge] = middle[groups]
    gap = 2 * float(np.linalg.norm(places[on_edge] - points[on_edge], axis=1).max(initial=0.0))
    return Welded(indices, places, tolerance, gap)


def balances(ends: IntArray) -> bool:
    """Tell whether directed edges (k, 2) cancel one another."""
    proper = ends[ends[:, 0] != ends[:, 1]]
    if len(proper) == 0:
        return True
    low, high = proper.min(axis=1), proper.max(axis=1)
    keys = low * (int(proper.max()) + 1) + high
    _, places = np.unique(keys, return_inverse=True)
    net = np.bincount(places, np.where(proper[:, 0] == low, 1.0, -1.0))
    return not net.any()


def _strips(edges: FloatArray, places: FloatArray) -> FloatArray:
    """Return two triangles (2k, 3, 3) from each open edge (k, 2, 3) to its welded place (k, 2, 3)."""
    start, stop = edges[:, 0], edges[:, 1]
    new_start, new_stop = places[:, 0], places[:, 1]
    return np.concatenate([
        np.stack([stop, start, new_start], axis=1), np.stack([stop, new_start, new_stop], axis=1)
    ])


def caps_of(points: FloatArray, loops: list[IntArray]) -> FloatArray:
    """Return the fans (m, 3, 3) that close loops against their own direction, about their lines' centroids."""
    sizes = np.array([len(loop) for loop in loops])
    first = np.cumsum(sizes) - sizes
    after = np.arange(1, sizes.sum() + 1)
    after[first + sizes - 1] = first
    start = points[np.concatenate(loops)]
    stop = start[after]
    # Weighted by length, so that a side split into many edges draws the centroid no nearer.
    weights = np.linalg.norm(stop - start, axis=1)
    # Sides below about 1e-162 units have squares too small for a number: all of them count alike.
    lost = np.add.reduceat(weights, first) == 0
    weights[np.repeat(lost, sizes)] = 1.0
    middles = np.add.reduceat(weights[:, None] * 0.5 * (start + stop), first)
    centres = middles / np.add.reduceat(weights, first)[:, None]
    return np.stack([stop, start, np.repeat(centres, sizes, axis=0)], axis=1)


def bulge_of(caps: FloatArray, loop: IntArray) -> tuple[FloatArray, FloatArray]:
    """Return the area of each loop's flat cap, and how much volume the surface that is missing there may hold.

    What is missing is taken to bulge at most as far as a hemisphere on a round hole of equal area A:
    2/3·A·√(A/π). That is an estimate, not a bound: it grows with the hole, as what nobody knows about it does.

    Args:
        caps: (m, 3, 3) triangles.
        loop: (m,) which loop each closes, from 0.
    """
    normal = np.cross(caps[:, 1] - caps[:, 0], caps[:, 2] - caps[:, 0])
    area: FloatArray = np.bincount(loop, 0.5 * np.linalg.norm(normal, axis=1)).astype(np.float64)
    return area, 2 / 3 * area * np.sqrt(area / np.pi)
