"""Mends: triangles in, triangles out, each doing one thing that a reader asked for. Nothing here is done unasked.

All take triangles (n, 3, 3), n at least 1, float32 or float64, and return new ones of the same type; all refuse with
an EditRefused where there is nothing to do or where the mend would leave something worse behind.
"""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING, Any

import numpy as np

from core.errors import EditRefused
from core.mesh.census.openings import openings_of
from core.mesh.census.sheets import doubles_of, seams_of, sheets_of
from core.mesh.census.shells import FLAT, INSIDE_OUT, OPEN, VOID
from core.mesh.census.taking import Evidence, areas_of, evidence_of
from core.mesh.census.winding import winding_of
from core.mesh.cracks import Cracks, cracks_of
from core.mesh.edges import balances, welded_edges
from core.mesh.weld import weld_exactly

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping
    from typing import TypeAlias

    from numpy.typing import NDArray

    from core.arrays import FloatArray, IntArray
    from core.mesh.census.sheets import Seams
    from core.progress import Progress

    Triangles: TypeAlias = NDArray[np.floating]


@dataclass(frozen=True)
class Mend:
    """One kind of mend.

    Attributes:
        name: its key.
        words: what a button says.
        done: what the list of mends says.
        function: (triangles, facets, progress) → triangles; facets (k,) are those of the finding it stands beside, or
            None for the whole mesh. Only turning goes by them.
    """

    name: str
    words: str
    done: str
    function: Callable[[Triangles, IntArray | None, Progress | None], Triangles]


def turn(triangles: Triangles, facets: IntArray | None = None) -> Triangles:
    """Return the triangles with some facets (k,), or all of them, wound the other way round."""
    turned: Triangles = triangles.copy()
    rows = slice(None) if facets is None else facets
    turned[rows] = turned[rows][:, ::-1]
    return turned


def weld(triangles: Triangles, tolerance: float) -> Triangles:
    """Return the triangles with the vertices on open edges that lie within tolerance (file units) made one.

    Facets of which two corners fall together are dropped.

    Raises:
        EditRefused: nothing is open, or open edges remain.
    """
    points, corners = weld_exactly(triangles)
    seams = _seams(corners)
    ends = np.stack([corners.ravel()[seams.open], corners[:, [1, 2, 0]].ravel()[seams.open]], axis=1)
    if len(ends) == 0:
        raise EditRefused("there are no open edges to weld", remedy="Look at the other findings")
    welded = welded_edges(points, ends, tolerance)
    if not balances(welded.indices[ends]):
        raise EditRefused(
            "a weld within this distance leaves edges open", read=f"{tolerance:.3g}", remedy="Close the holes flat"
        )
    return without_collapsed(welded.places[corners].astype(triangles.dtype))


def weld_cracks(triangles: Triangles) -> Triangles:
    """Return the triangles welded within the smallest distance that closes all of their cracks.

    Raises:
        EditRefused: no open edges, or some that are no cracks.
    """
    cracks = _cracks(triangles)
    return without_collapsed(cracks.points[cracks.corners].astype(triangles.dtype))


def close_flat(triangles: Triangles) -> Triangles:
    """Return the triangles with a fan about the centroid of its edge added over each hole.

    Raises:
        EditRefused: no holes, or edges that form no loops.
    """
    points, corners = weld_exactly(triangles)
    seams = _seams(corners)
    openings = openings_of(points, corners, seams.open)
    if not len(openings.caps):
        raise EditRefused("there is no hole to close", remedy="Look at the other findings")
    if len(openings.caps) < len(seams.open) or len(seams.against):
        raise EditRefused(
            "the open edges do not form loops", remedy="Rewind the facets first, or mend the part where it was made"
        )
    return np.concatenate([triangles, openings.caps.astype(triangles.dtype)])


def drop_duplicates(triangles: Triangles) -> Triangles:
    """Return the triangles without those that occur before, and without pairs that lie back to back.

    Raises:
        EditRefused: there are none, or nothing would be left.
    """
    _, corners = weld_exactly(triangles)
    spare = doubles_of(corners).spare
    if not spare.any():
        raise EditRefused("no facet occurs twice", remedy="Look at the other findings")
    if spare.all():
        raise EditRefused("all facets lie back to back, so that none would be left", remedy="Leave the part out")
    kept: Triangles = triangles[~spare]
    return kept


def rewind(triangles: Triangles) -> Triangles:
    """Return the triangles with those turned that wind against the larger part of the surface they belong to.

    Raises:
        EditRefused: all agree, or the surface is one-sided.
    """
    points, corners = weld_exactly(triangles)
    seams = _seams(corners)
    winding = winding_of(seams, sheets_of(corners, seams), areas_of(points, corners))
    if len(winding.against) == 0:
        why = "the surface has only one side" if len(winding.one_sided) else "all facets wind alike"
        raise EditRefused(why, remedy="Mend the part where it was made" if len(winding.one_sided) else "")
    return turn(triangles, winding.against)


def unite(triangles: Triangles, progress: Progress | None = None) -> Triangles:
    """Return the surface of everything that lies in one body or another; a body is a solid shell without its voids.

    Shells in others that face outwards count as material.

    Raises:
        EditRefused: a shell is open, faces inwards without being a void, or touches itself.
        Cancelled: progress was cancelled.
    """
    from core.mesh.solids import facets_of_solid, united

    evidence = evidence_of(triangles, progress)
    origin = 0.5 * (evidence.points.min(axis=0) + evidence.points.max(axis=0))
    solids = {}
    for shell, role in enumerate(evidence.shells.role):
        if role in (OPEN, INSIDE_OUT):
            raise EditRefused(
                f"shell {shell + 1} of {len(evidence.shells)} {'is open' if role == OPEN else 'faces inwards'}",
                remedy="Close or turn it first",
            )
        if role != FLAT:
            solids[shell] = _solid(evidence, shell, origin)
        if progress is not None:
            progress.advance(0)
    bodies = []
    for shell, solid in solids.items():
        if evidence.shells.role[shell] == VOID:
            continue
        voids = [solids[i] for i in solids if evidence.shells.inside[i] == shell and evidence.shells.role[i] == VOID]
        bodies.append(solid - united(voids) if voids else solid)
    if not bodies:
        raise EditRefused("no shell encloses anything", remedy="Leave the part out")
    made: Triangles = (facets_of_solid(united(bodies)) + origin).astype(triangles.dtype)
    return made


def without_collapsed(triangles: Triangles) -> Triangles:
    """Return the triangles without those that have two corners at one place; what was closed stays so."""
    a, b, c = np.moveaxis(triangles, 1, 0)
    collapsed = (a == b).all(axis=1) | (b == c).all(axis=1) | (c == a).all(axis=1)
    kept: Triangles = triangles[~collapsed]
    return kept


def _seams(corners: IntArray) -> Seams:
    return seams_of(corners, doubles_of(corners).copy)


def _cracks(triangles: Triangles) -> Cracks:
    points, corners = weld_exactly(triangles)
    seams = _seams(corners)
    cracks = cracks_of(points, corners, seams.open)
    if cracks is None:
        raise EditRefused(
            "there are no cracks to weld" if not len(seams.open) else "the open edges are no cracks but holes",
            remedy="Look at the other findings" if not len(seams.open) else "Close the holes flat",
        )
    return cracks


def _solid(evidence: Evidence, shell: int, origin: FloatArray) -> Any:
    from core.mesh.solids import solid_of

    corners = evidence.corners[evidence.shells.facets_of(shell)]
    outward = corners if evidence.shells.volume[shell] > 0 else corners[:, ::-1]
    solid = solid_of(evidence.points, outward, origin)
    if solid is None:
        raise EditRefused(
            f"shell {shell + 1} of {len(evidence.shells)} touches or cuts itself, so it cannot be united with others",
            remedy="Mend the part where it was made",
        )
    return solid


MENDS: Mapping[str, Mend] = MappingProxyType({
    mend.name: mend for mend in (
        Mend("turn", "Turn", "turned", lambda mesh, facets, _: turn(mesh, facets)),
        Mend("weld", "Weld", "welded", lambda mesh, _facets, _: weld_cracks(mesh)),
        Mend("close flat", "Close flat", "holes closed flat", lambda mesh, _facets, _: close_flat(mesh)),
        Mend("drop duplicates", "Drop duplicates", "duplicates dropped", lambda mesh, _, __: drop_duplicates(mesh)),
        Mend("rewind", "Rewind", "rewound", lambda mesh, _facets, _: rewind(mesh)),
        Mend("unite", "Unite", "shells united", lambda mesh, _facets, progress: unite(mesh, progress)),
    )
})
