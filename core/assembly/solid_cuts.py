"""Cuts that stick out of a body or overlap one another: what they share with it, from faceted solids.

The facets of a round surface are inscribed, so a solid of n steps around is too small by c/n² and a remainder of the
order n⁻³; (4·M₂ₙ − Mₙ)/3 is free of the first term (Richardson 1911). Of a cut that crosses round walls about 1e-6
of its own moments is left, 1e-5 at most; where everything is flat, nothing but round-off.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from core.assembly.bodies import MeshBody, ShapeBody
from core.errors import EditRefused
from core.facets import Facets
from core.mesh.mend import close_flat, weld_cracks
from core.mesh.solids import facets_of_solid, solid_of, united
from core.mesh.source import ArraySource
from core.mesh.summing import sum_up
from core.mesh.survey import CRACKED, INSIDE_OUT, OPEN
from core.mesh.weld import weld_exactly
from core.moments import Moments

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.arrays import BoolArray, FloatArray
    from core.placement import Placement
    from core.progress import Progress
    from core.shapes import Shape

# Steps around a full circle: of the finer solids, and of those that the order n⁻² is told from.
FINE, COARSE = 192, 96
DRAWN = 48
# Relative to a cut's volume: what is missing below this is the round-off of cutting faceted solids.
INSIDE = 1e-9


@dataclass(frozen=True, eq=False)
class Piece:
    """What one copy of a cut takes out of a body.

    Attributes:
        moments: in the part frame at unit density, where the copy is not whole.
        whole: all of it lies in the body, and no earlier copy has taken any of it.
        outside: m³ of it that lie outside the body.
        shared: m³ of it in the body that earlier copies have taken.
    """

    moments: Moments
    whole: bool
    outside: float
    shared: float


def pieces_of_solids(
    body: ShapeBody | MeshBody, copies: Sequence[tuple[Shape, Placement]], meeting: BoolArray, where: str,
    progress: Progress | None = None,
) -> list[Piece]:
    """Return what each copy of a cut takes out of a body, after those before it.

    Args:
        body: a solid.
        copies: shapes and their single placements tf_part_cut.
        meeting: (n, n) which of the copies may have something in common.
        where: the part's name, for a refusal.
        progress: to watch and stop it by.

    Raises:
        EditRefused: the body's surface, or a cut's, bounds no volume clearly.
        Cancelled: progress was cancelled.
    """
    low, high = body.bounds
    middle = 0.5 * (low + high)
    if progress is not None:
        progress.begin(2 * len(copies) + 2)
    fine = _cut(body, copies, meeting, middle, FINE, where, progress)
    if all(piece.whole for piece in fine):
        return fine
    coarse = _cut(body, copies, meeting, middle, COARSE, where, progress)
    return [
        Piece(_without_facets(one.moments, other.moments), one.whole, one.outside, one.shared)
        for one, other in zip(fine, coarse, strict=True)
    ]


def drawn_without(body: ShapeBody | MeshBody, copies: Sequence[tuple[Shape, Placement]]) -> Facets | None:
    """Return the surface of a body less cuts as it is drawn, m in the part frame; None where it cannot be made."""
    surface = body.surface
    middle = 0.5 * (surface.points.min(axis=0) + surface.points.max(axis=0))
    solid = solid_of(surface.points, surface.corners, middle)
    cuts = [_placed(shape.facets(DRAWN), standing, middle) for shape, standing in copies]
    if solid is None or any(cut is None for cut in cuts):
        return None
    mesh = (solid - united(cuts)).to_mesh64()
    if not len(mesh.tri_verts):
        return None
    return Facets(mesh.vert_properties[:, :3] + middle, mesh.tri_verts.astype(np.int64))


def _cut(
    body: ShapeBody | MeshBody, copies: Sequence[tuple[Shape, Placement]], meeting: BoolArray, middle: FloatArray,
    steps: int, where: str, progress: Progress | None,
) -> list[Piece]:
    solid = _solid_of_body(body, middle, steps, where)
    cuts = [_solid_of_cut(shape, standing, middle, steps, where) for shape, standing in copies]
    if isinstance(body, MeshBody) and len(cuts) > 1:
        # A mesh may have a million facets: it is cut once, and what came out is then told apart.
        solid = united(cuts) ^ solid
    _advance(progress)
    pieces = []
    for at, cut in enumerate(cuts):
        before = [cuts[other] for other in np.flatnonzero(meeting[at, :at])]
        inside = cut ^ solid
        moments = moments_of_solid(inside - united(before) if before else inside, middle)
        volume, held, taken = cut.volume(), inside.volume(), float(moments.mass)
        whole = volume - taken <= INSIDE * volume
        pieces.append(Piece(moments, whole, max(volume - held, 0.0), max(held - taken, 0.0)))
        _advance(progress)
    return pieces


def _solid_of_body(body: ShapeBody | MeshBody, middle: FloatArray, steps: int, where: str) -> Any:
    if isinstance(body, ShapeBody):
        facets = body.shape.facets(steps)
        solid = solid_of(facets.points, facets.corners, middle)
    else:
        kept: dict[str, Any] = body.__dict__.setdefault("_solid_to_cut", {})
        if "solid" not in kept:
            kept["solid"] = _solid_of_mesh(body, middle)
        solid = kept["solid"]
    if solid is None:
        raise EditRefused(
            "the surface does not close edge to edge, so nothing can be taken out of it", where=where,
            remedy="Mend the mesh, or leave the cuts out",
        )
    return solid


def _solid_of_mesh(body: MeshBody, middle: FloatArray) -> Any | None:
    """Return the body that is weighed: hairline cracks welded, holes closed flat, turned right side out."""
    triangles = np.ascontiguousarray(body.asset.triangles)
    close = {CRACKED: weld_cracks, OPEN: close_flat}.get(body.asset.survey.verdict)
    try:
        points, corners = weld_exactly(triangles if close is None else close(triangles))
    except EditRefused:
        return None  # refused below in words about the cut
    turned = corners[:, ::-1] if body.asset.survey.verdict == INSIDE_OUT else corners
    return solid_of(points.astype(np.float64) * body.metres_per_unit, turned, middle)


def _solid_of_cut(shape: Shape, standing: Placement, middle: FloatArray, steps: int, where: str) -> Any:
    solid = _placed(shape.facets(steps), standing, middle)
    if solid is None:
        raise EditRefused(
            "the surface of this cut does not bound a volume clearly", where=where, read=shape.title,
            remedy="Change its dimensions",
        )
    return solid


def _placed(facets: Facets, standing: Placement, middle: FloatArray) -> Any | None:
    corners = facets.corners[:, ::-1] if standing.mirrors else facets.corners
    return solid_of(standing.apply(facets.points), corners, middle)


def moments_of_solid(solid: Any, middle: FloatArray) -> Moments:
    """Return the moments of a solid at unit density, moved by middle (3,) m; those of nothing where it is empty."""
    triangles = facets_of_solid(solid)
    if not len(triangles):
        return Moments.nothing()
    sums, reference = sum_up(ArraySource(triangles))
    return sums.moments(reference + middle) if sums.volume > 0 else Moments.nothing()


def _without_facets(fine: Moments, coarse: Moments) -> Moments:
    extrapolated = fine.times(4 / 3) - coarse.times(1 / 3)
    return extrapolated if extrapolated.mass > 0 else Moments.nothing()


def _advance(progress: Progress | None) -> None:
    if progress is not None:
        progress.advance()
