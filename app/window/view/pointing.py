"""Which named place of a part lies under the pointer: an edge that is near, else the face or round that is hit."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.picking import pick
from core.arrays import frozen
from core.assembly import MeshBody, Part, ShapeBody
from core.assembly.seat import Anchor
from core.assembly.seats import datum_named
from core.assembly.seats.datums import name_in_copy, surface_datums
from core.placement import Placement

if TYPE_CHECKING:
    from collections.abc import Iterator

    from app.window.view.camera import Camera, Size
    from app.window.view.scene import Bodies, Scene
    from core.arrays import FloatArray
    from core.assembly import Assembly
    from core.assembly.seats import Datum
    from core.assembly.seats.datums import DatumSet
    from core.facets import Facets

# px: an edge this near to the pointer is meant rather than the face beside it.
_NEAR_EDGE = 7.0
# Of the size of a body: a facet this far from what was hit is another surface.
_SAME_SPOT = 2e-3
# Of the size of a body: how far an axis without a surface is drawn beyond it.
_OVERHANG = 0.6


@dataclass(frozen=True, eq=False)
class Pointed:
    """A named place under the pointer.

    Attributes:
        anchor: the place.
        part: key of the part that was hit.
        edges: (k, 2, 3) m of the document frame, to light up.
    """

    anchor: Anchor
    part: str
    edges: FloatArray


@dataclass(frozen=True, eq=False)
class _Solid:
    """A body or one copy of a cut: its places, and where it stands in the part's frame."""

    key: str
    copy: int
    found: DatumSet
    standing: Placement

    def anchor(self, datum: Datum) -> Anchor:
        return Anchor(self.key, name_in_copy(datum.name, self.copy))


def pointed_at(
    assembly: Assembly, scene: Scene, camera: Camera, spot: tuple[float, float], size: Size
) -> Pointed | None:
    """Return the named place at a pixel of a picture of that size; None where there is none.

    Of a part with copies the place is lit up on the first one, which is the one that counts.
    """
    start, direction = camera.ray(spot, size)
    hit = pick(scene, start, direction)
    if hit is None or hit.key not in assembly:
        return None
    part = assembly.node(hit.key)
    bodies = next(each for each in scene.bodies if each.key == hit.key)
    assert isinstance(part, Part)
    if not isinstance(part.body, ShapeBody | MeshBody):
        return _lit(assembly, Anchor(part.key, "axis z"), bodies)
    # Into the frame of the copy that was hit: turns and mirrors are undone by their transpose.
    turn, shift = bodies.turn[hit.copy], bodies.shift[hit.copy]
    start, direction = turn.T @ (start - shift), turn.T @ direction
    point = start + hit.distance * direction
    depth = float(camera.project(turn @ point + shift, size)[2])
    reach = _NEAR_EDGE * camera.metres_per_pixel(size) * (1.0 if camera.parallel else depth / camera.distance)
    solids = [*_solids(part, point, reach)]
    anchor = _edge_near(solids, point, reach) or _surface_hit(solids, start, direction, hit.distance)
    return None if anchor is None else _lit(assembly, anchor, bodies)


def _solids(part: Part, point: FloatArray, reach: float) -> Iterator[_Solid]:
    """Yield the body of a part, and those copies of its cuts that the point (3,) m may lie on."""
    assert isinstance(part.body, ShapeBody | MeshBody)
    yield _Solid(part.key, 0, surface_datums(part.body), Placement.identity())
    for cut in part.cuts:
        body = ShapeBody(cut.shape)
        local = cut.standing.inverse().apply(point)
        slack = reach + _SAME_SPOT * float(np.ptp(body.bounds, axis=0).max())
        near = ((local >= body.bounds[0] - slack) & (local <= body.bounds[1] + slack)).all(axis=1)
        for copy in np.flatnonzero(near).tolist():
            standing = Placement(cut.standing.turn[copy], cut.standing.shift[copy])
            yield _Solid(cut.key, copy, surface_datums(body), standing)


def _edge_near(solids: list[_Solid], point: FloatArray, reach: float) -> Anchor | None:
    """Return the edge or rim that the point (3,) m lies nearest to, within reach m; None where none is near."""
    best: tuple[float, Anchor] | None = None
    for solid in solids:
        local = solid.standing.inverse().apply(point)
        for datum in solid.found.datums:
            if datum.kind in {"rim", "edge"}:
                away = _distance_to(datum.edges, local)
                if away <= reach and (best is None or away < best[0]):
                    best = (away, solid.anchor(datum))
    return None if best is None else best[1]


def _distance_to(edges: FloatArray, point: FloatArray) -> float:
    """Return how far a point (3,) is from the nearest of edges (k, 2, 3)."""
    start, along = edges[:, 0], edges[:, 1] - edges[:, 0]
    squares = np.maximum((along**2).sum(axis=1), np.finfo(float).tiny)
    share = np.clip(((point - start) * along).sum(axis=1) / squares, 0.0, 1.0)
    return float(np.linalg.norm(start + share[:, None] * along - point, axis=1).min(initial=np.inf))


def _surface_hit(solids: list[_Solid], start: FloatArray, direction: FloatArray, distance: float) -> Anchor | None:
    """Return the face or round whose facet the ray meets at the distance (m) at which it met the part."""
    best: tuple[float, Anchor | None] | None = None
    for solid in solids:
        back = solid.standing.inverse()
        facets = solid.found.facets
        at, facet = _nearest_facet(facets, back.apply(start), back.turn_only(direction), distance)
        size = float(np.ptp(facets.points, axis=0).max())
        if facet is None or at > _SAME_SPOT * size or (best is not None and at >= best[0]):
            continue
        found = next((datum for datum in solid.found.datums if (datum.facets == facet).any()), None)
        best = (at, None if found is None else solid.anchor(found))
    return None if best is None else best[1]


def _nearest_facet(
    facets: Facets, start: FloatArray, direction: FloatArray, distance: float
) -> tuple[float, int | None]:
    """Return how far from a distance along a ray (m) the nearest facet on it is met, and which one; None for none.

    Möller & Trumbore, "Fast, minimum storage ray/triangle intersection" (1997), for all facets at once.
    """
    corner = facets.points[facets.corners[:, 0]]
    one = facets.points[facets.corners[:, 1]] - corner
    two = facets.points[facets.corners[:, 2]] - corner
    across = np.cross(direction, two)
    volume = np.einsum("ij,ij->i", one, across)
    with np.errstate(divide="ignore", invalid="ignore"):
        away = start - corner
        u = np.einsum("ij,ij->i", away, across) / volume
        turned = np.cross(away, one)
        v = turned @ direction / volume
        met = np.einsum("ij,ij->i", two, turned) / volume
        slack = 1e-6
        inside = (u >= -slack) & (v >= -slack) & (u + v <= 1 + slack) & np.isfinite(met)
    rows = np.flatnonzero(inside)
    if not len(rows):
        return np.inf, None
    off = np.abs(met[rows] - distance)
    return float(off.min()), int(rows[off.argmin()])


def _lit(assembly: Assembly, anchor: Anchor, bodies: Bodies) -> Pointed:
    return Pointed(anchor, bodies.key, edges_of(assembly, anchor, bodies))


def edges_of(assembly: Assembly, anchor: Anchor, bodies: Bodies) -> FloatArray:
    """Return what to light up (k, 2, 3) m for a place of a part, on its first copy, in the document frame."""
    datum = datum_named(assembly.line(anchor.key), anchor.datum)
    if datum is None:
        return frozen(np.zeros((0, 2, 3)))
    edges = datum.edges
    if not len(edges) or datum.kind == "axis":
        reach = _OVERHANG * float(np.ptp(bodies.surface.bounds, axis=0).max())
        middle = bodies.surface.bounds.mean(axis=0)
        centre = datum.point + (middle - datum.point) @ datum.direction * datum.direction
        axis = np.array([[centre - reach * datum.direction, centre + reach * datum.direction]])
        edges = np.concatenate([edges, axis])
    return Placement(bodies.turn[0], bodies.shift[0]).apply(edges)
