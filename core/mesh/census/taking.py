"""Taking the census of a mesh."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from core.errors import MeshFileError
from core.mesh.census.nesting import Nesting, nesting_of
from core.mesh.census.openings import OpenLoop, openings_of
from core.mesh.census.overlaps import Overlaps, overlaps_of
from core.mesh.census.sheets import Doubles, Seams, doubles_of, facet_hashes, seams_of, sheets_of
from core.mesh.census.shells import THIN, Shells, Sizes, roles_of, sizes_of
from core.mesh.census.winding import Winding, winding_of
from core.mesh.cracks import Cracks, cracks_of
from core.mesh.grouping import group_equal
from core.mesh.stl_faults import MEND
from core.mesh.weld import weld_exactly

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.arrays import BoolArray, FloatArray, IntArray
    from core.progress import Progress

_STAGES = 8


@dataclass(frozen=True, eq=False)
class Evidence:
    """Everything that was found out about a mesh; what it means, the findings say.

    Attributes:
        triangles: (n, 3, 3) as they came.
        points, corners: the mesh over shared points; open edges closer than a crack are sewn.
        doubles, seams, winding, openings, nesting, overlaps: see there.
        cracks: what a weld would close, or None.
        shells: see there.
        twin: (k,) the first shell that is the very same as this one; its own number where there is none.
        turned: whether the mesh as a whole faces inwards.
        loops: the open edges.
    """

    triangles: NDArray[np.floating]
    points: FloatArray
    corners: IntArray
    doubles: Doubles
    seams: Seams
    winding: Winding
    cracks: Cracks | None
    shells: Shells
    twin: IntArray
    nesting: Nesting
    overlaps: Overlaps
    turned: bool
    loops: tuple[OpenLoop, ...]


def evidence_of(triangles: NDArray[np.floating], progress: Progress | None) -> Evidence:
    """Return what can be found out about triangles (n, 3, 3), n at least 1.

    Raises:
        MeshFileError: a coordinate that is not finite.
        Cancelled: progress was cancelled.
    """
    step = _Steps(progress)
    surface = _surface(triangles, step)
    points, corners, seams = surface.points, surface.corners, surface.seams
    sheet = sheets_of(corners, seams)
    step()
    openings = openings_of(points, corners, seams.open)
    winding = winding_of(seams, sheet, areas_of(points, corners) if len(seams.against) else np.empty(0))
    step()
    cap_sheet = np.array([sheet[beside[0]] for beside in openings.facets], np.int64)[openings.cap_loop]
    sizes = sizes_of(points, corners, sheet, openings.caps, cap_sheet)
    step()
    is_open = np.zeros(len(sizes.area), dtype=bool)
    is_open[sheet[np.concatenate([seams.open, seams.against.ravel()]) // 3]] = True
    twin, is_flat = _twins(corners, sizes), _is_flat(sizes)
    nesting = nesting_of(points, corners, sheet, sizes, _alone(twin) & ~is_open & ~is_flat, progress)
    nesting = replace(nesting, inside=nesting.inside[twin], depth=nesting.depth[twin])
    step()
    volume, pairs = sizes.bodies.mass, nesting.crossing
    turned = bool(volume[~is_open | (len(volume) == 1)].sum() < 0)
    counted = -volume if turned else volume
    # Where nobody knows what lies in what, a shell is what its winding says.
    role = roles_of(counted, is_open, is_flat, nesting.depth if nesting.complete else (counted < 0).astype(np.int64))
    same_way = (volume[pairs[:, 0]] > 0) == (volume[pairs[:, 1]] > 0)
    overlaps = overlaps_of(points, corners, sizes, pairs[same_way], progress)
    step()
    shells = Shells(sheet, sizes.bodies, sizes.area, sizes.bounds, nesting.inside, nesting.depth, role, sizes.order,
                    sizes.starts)
    return Evidence(triangles, points, corners, surface.doubles, seams, winding, surface.cracks, shells, twin, nesting,
                    overlaps, turned, openings.described(sheet))


@dataclass(frozen=True, eq=False)
class _Surface:
    points: FloatArray
    corners: IntArray
    doubles: Doubles
    seams: Seams
    cracks: Cracks | None


def _surface(triangles: NDArray[np.floating], step: _Steps) -> _Surface:
    """Return the mesh over shared points, its cracks sewn, and how its facets meet; three steps."""
    points, corners = weld_exactly(triangles)
    if not np.isfinite(points).all():
        raise MeshFileError("a coordinate is not a finite number", where="the mesh", read="nan or inf", remedy=MEND)
    step()
    doubles = doubles_of(corners)
    step()
    seams = seams_of(corners, doubles.copy)
    step()
    cracks = cracks_of(points, corners, seams.open)
    if cracks is None:
        return _Surface(points, corners, doubles, seams, None)
    doubles = doubles_of(cracks.corners)
    return _Surface(cracks.points, cracks.corners, doubles, seams_of(cracks.corners, doubles.copy), cracks)


class _Steps:
    """Stages counted on a progress, if there is one."""

    def __init__(self, progress: Progress | None) -> None:
        self._progress = progress
        if progress is not None:
            progress.begin(_STAGES)

    def __call__(self) -> None:
        if self._progress is not None:
            self._progress.advance()


def areas_of(points: FloatArray, corners: IntArray) -> FloatArray:
    """Return the area (n,) of each facet."""
    a, b, c = (points[column] for column in corners.T)
    areas: FloatArray = 0.5 * np.linalg.norm(np.cross(b - a, c - a), axis=1)
    return areas


def _is_flat(sizes: Sizes) -> BoolArray:
    diagonal = np.linalg.norm(sizes.bounds[:, 1] - sizes.bounds[:, 0], axis=1)
    return np.asarray(np.abs(sizes.bodies.mass) <= THIN * sizes.area * diagonal)


def _twins(corners: IntArray, sizes: Sizes) -> IntArray:
    """Return for each shell the first one that consists of the very same facets."""
    if len(sizes.area) == 1:
        return np.zeros(1, np.int64)
    groups = group_equal(np.add.reduceat(facet_hashes(corners)[sizes.order], sizes.starts))
    return groups.order[groups.starts][groups.of_elements()]


def _alone(twin: IntArray) -> BoolArray:
    return np.asarray(twin == np.arange(len(twin)))
