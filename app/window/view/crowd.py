"""What is drawn of an assembly of thousands of bodies: the largest parts whole, the small ones as their boxes."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.surface import Surface, surface_of
from core.shapes import Box

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly import Table

# Of more bodies than this, only so many parts are drawn whole; the others are a few pixels large.
CROWD, WHOLE = 4_000, 500


def drawn_whole(table: Table) -> list[bool]:
    """Return which parts of a table are drawn with their own surface."""
    count = len(table.parts)
    if len(table.owner) <= CROWD or count <= WHOLE:
        return [True] * count
    sizes = np.linalg.norm(np.ptp(np.array([part.bounds for part in table.parts]), axis=1), axis=1)
    # Of equal ones the first, so that an edit of one part does not change what is drawn of others.
    whole = np.zeros(count, dtype=bool)
    whole[np.argsort(-sizes, kind="stable")[:WHOLE]] = True
    return [bool(one) for one in whole]


def box_surface(bounds: FloatArray) -> Surface:
    """Return the surface of a box (2, 3) m, without lines on it; all of them share their faces and normals."""
    unit = _unit_box()
    size = np.ptp(bounds, axis=0)
    return replace(
        unit, middle=bounds.mean(axis=0), bounds=bounds, vertices=unit.vertices * size.astype(np.float32)
    )


@cache
def _unit_box() -> Surface:
    surface = surface_of(Box(1.0, 1.0, 1.0).facets())
    none = surface.sharp[:0]
    return replace(surface, sharp=none, rims=none, rim_normals=none)
