"""Cracks: open edges that vanish when vertices close together are made one."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.edges import WELD, balances, welded_edges

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray

# Of the diagonal, one after the other: up to the first, cracks are hairline; beyond the last, they are holes.
WIDTHS = (WELD, 1e-5, 1e-4, 1e-3)


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
        points, corners: the mesh over exactly welded points (m, 3), (n, 3).
        uses: 3·facet + side, as of Seams.open.
    """
    if len(uses) == 0:
        return None
    ends = np.stack([corners.ravel()[uses], corners[:, [1, 2, 0]].ravel()[uses]], axis=1)
    diagonal = float(np.linalg.norm(np.ptp(points, axis=0)))
    for width in WIDTHS:
        welded, gap = welded_edges(points, ends, width * diagonal)
        if balances(welded.indices[ends]):
            moved = np.empty((int(welded.indices.max()) + 1, 3))
            moved[: len(points)] = points
            moved[welded.indices] = welded.places
            return Cracks(
                width * diagonal, gap, width == WELD, len(uses), np.unique(uses // 3), moved, welded.indices[corners]
            )
    return None
