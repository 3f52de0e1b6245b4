"""Cracks: open edges that vanish when vertices close together are made one."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.edges import closing_weld

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray


@dataclass(frozen=True, eq=False)
class Cracks:
    """What a weld closes.

    Attributes:
        tolerance: of the weld, file units.
        gap: the widest crack, file units.
        hairline: whether all are narrower than WELD of the diagonal.
        edges: how many open edges they have.
        facets: those beside them.
        points, corners: the mesh after the weld; facets keep their numbers.
    """

    tolerance: float
    gap: float
    hairline: bool
    edges: int
    facets: IntArray
    points: FloatArray
    corners: IntArray


def cracks_of(points: FloatArray, corners: IntArray, uses: IntArray) -> Cracks | None:
    """Return the cracks that all open uses (o,) of edges are, or None where no weld up to the widest closes them.

    Args:
        points: (m, 3), exactly welded.
        corners: (n, 3).
        uses: 3·facet + side, as of Seams.open.
    """
    ends = np.stack([corners.ravel()[uses], corners[:, [1, 2, 0]].ravel()[uses]], axis=1)
    welded = closing_weld(points, ends)
    if welded is None:
        return None
    moved = np.empty((int(welded.indices.max()) + 1, 3))
    moved[: len(points)] = points
    moved[welded.indices] = welded.places
    return Cracks(
        welded.tolerance, welded.gap, welded.hairline, len(uses), np.unique(uses // 3), moved, welded.indices[corners]
    )
