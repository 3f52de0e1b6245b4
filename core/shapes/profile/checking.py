"""Whether the loops of an outline bound one area: shapely finds crossings, and the sentence names them."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from core.errors import ShapeError
from core.shapes.profile.outline import COINCIDENT, Outline, edges_of, name_of, place_of, points_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from shapely import Polygon

    from core.arrays import FloatArray, IntArray
    from core.shapes.profile.edges import Edges

# Arcs are checked as fine polygons that leave them by this much of the outline's size at most; a wall between
# two arcs has to be thicker.
ARC_GAP = 1e-5
_FEWEST_PIECES = 4

# Neighbours that are not rounded are this far apart in number: the rounding between them has no length.
_NEIGHBOUR = 2


def check_outline(outline: Outline) -> None:
    """Refuse loops that bound no single area. Points and neighbours have been checked before.

    Raises:
        ShapeError: a line crosses or touches itself, bounds no area, a hole lies outside or crosses the outer
            line, or two holes meet; the sentence names the edges by their points and where it is, in mm.
    """
    import shapely

    made = [edges_of(loop) for loop in outline.loops]
    rings = [_Ring(edges, number, outline) for number, edges in enumerate(made)]
    for ring in rings:
        ring.check_itself()
    if len(rings) == 1:
        return
    outer, holes = rings[0].polygon, [ring.polygon for ring in rings[1:]]
    shapely.prepare(outer)
    for number, hole in enumerate(holes, start=1):
        if not shapely.contains_properly(outer, hole):
            raise _hole_fault(rings[0], rings[number])
    tree = shapely.STRtree(holes)
    first, second = tree.query(holes, predicate="intersects")
    apart = first < second
    if apart.any():
        one, other = rings[int(first[apart][0]) + 1], rings[int(second[apart][0]) + 1]
        raise ShapeError(
            f"{name_of(one.number)} and {name_of(other.number)} meet at {_meeting(one.polygon, other.polygon)}",
            where="outline", remedy="Move them apart, or draw them as one hole",
        )


class _Ring:
    """A loop as a fine polygon, which knows from which edge each of its pieces comes."""

    def __init__(self, edges: Edges, number: int, outline: Outline) -> None:
        import shapely

        self.number = number
        self._edges = edges
        self._size = outline.size
        self._points = points_of(outline.loops[number])[:, :2]
        pieces = _pieces(edges, outline.size)
        self._fine = edges.cut(pieces)
        self._owner: IntArray = np.repeat(np.arange(len(pieces)), pieces)
        self.polygon: Polygon = shapely.Polygon(self._fine.start)

    def check_itself(self) -> None:
        import shapely

        if float(shapely.convex_hull(self.polygon).area) <= COINCIDENT * self._size**2:
            raise ShapeError(
                f"{name_of(self.number)} encloses no area", where="outline",
                read=f"{len(self._points)} points from {place_of(*self._points[0])}",
                remedy="Give points that do not lie on one line",
            )
        if not shapely.is_valid(self.polygon):
            raise self._crossing(shapely.is_valid_reason(self.polygon))

    def _crossing(self, reason: str) -> ShapeError:
        """Return the refusal for what shapely says as "Self-intersection[x y]"."""
        x, y = (float(text) for text in reason.partition("[")[2].rstrip("]").split()[:2])
        near = self._nearest_edges(np.array([x, y]))
        return ShapeError(
            f"{name_of(self.number)} crosses or touches itself at {place_of(x, y)}: "
            f"{self._said_edge(near[0])} meets {self._said_edge(near[1])}",
            where="outline", remedy="Put the points into the order in which the line runs, and move it apart there",
        )

    def _nearest_edges(self, spot: FloatArray) -> Sequence[int]:
        """Return the two edges, neighbours only if there is no other way, that come nearest to a point (2) m."""
        start, chord = self._fine.start, self._fine.chord
        square = np.maximum((chord**2).sum(axis=1), np.finfo(float).tiny)
        share = np.clip(((spot - start) * chord).sum(axis=1) / square, 0, 1)
        apart = np.hypot(*(start + share[:, None] * chord - spot).T)
        rank = np.argsort(apart, kind="stable")
        order = list(dict.fromkeys(self._owner[rank].tolist()))
        here = set(self._owner[apart <= COINCIDENT * self._size].tolist())
        first, number = order[0], len(self._edges.bulge)
        far = [e for e in order[1:] if e in here and min((e - first) % number, (first - e) % number) > _NEIGHBOUR]
        return first, (far or order[1:])[0]

    def _said_edge(self, edge: int) -> str:
        """Return an edge in words; even edges are the roundings of points, odd ones run between points."""
        point, after = edge // 2 + 1, (edge // 2 + 1) % len(self._points) + 1
        return f"the rounding at point {point}" if edge % 2 == 0 else f"the edge from point {point} to {after}"


def _pieces(edges: Edges, size: float) -> IntArray:
    """Return into how many pieces (n) each edge is cut so that its chords stay within ARC_GAP of the arc."""
    theta = 4 * np.arctan(np.abs(edges.bulge))
    with np.errstate(divide="ignore", invalid="ignore"):
        radius = np.where(theta > 0, np.hypot(*edges.chord.T) / 2 / np.sin(theta / 2), 0.0)
    # The gap of a chord of angle a is R·a²/8.
    pieces = np.ceil(theta * np.sqrt(radius / (8 * ARC_GAP * size))).astype(np.int64)
    length = np.any(edges.start != edges.end, axis=-1)
    return np.where(length, np.where(theta > 0, np.maximum(pieces, _FEWEST_PIECES), 1), 0)


def _hole_fault(outer: _Ring, hole: _Ring) -> ShapeError:
    import shapely

    where = place_of(*hole.polygon.exterior.coords[0])
    if not shapely.intersects(outer.polygon, hole.polygon):
        what = f"{name_of(hole.number)} lies outside the outer line, from {where}"
    elif shapely.contains_properly(hole.polygon, outer.polygon):
        what = f"{name_of(hole.number)} goes round the outer line, from {where}"
    elif not shapely.intersects(outer.polygon.exterior, hole.polygon.exterior):
        what = f"{name_of(hole.number)} lies outside the outer line, from {where}"
    else:
        met = _meeting(outer.polygon.exterior, hole.polygon.exterior)
        what = f"{name_of(hole.number)} crosses or touches the outer line at {met}"
    remedy = "Give the outer line first, and holes that lie inside it, clear of it"
    return ShapeError(what, where="outline", remedy=remedy)


def _meeting(one: Any, other: Any) -> str:
    """Return where two geometries meet, as a sentence shows it: the leftmost, lowest point of what they share."""
    import shapely

    lines = [shape.exterior if hasattr(shape, "exterior") else shape for shape in (one, other)]
    shared = shapely.intersection(*lines)
    if shapely.is_empty(shared):
        shared = shapely.intersection(one, other)
    spots = shapely.get_coordinates(shared)
    return place_of(*spots[np.lexsort(spots.T[::-1])[0]])
