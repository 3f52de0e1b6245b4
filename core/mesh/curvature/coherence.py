"""Which smooth surfaces hold together: a polyhedron of many small turns does not, however smooth each edge may look."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.seams import CREASED, STRIP
from core.mesh.curvature.surface import connected

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import Surface

# The heights that both sides see over an edge of a tessellated round differ by at most 0.2 of the heights (30° steps).
DISPUTED: Final = 0.25

# Share of edges within a smooth surface that turn a little too far to be smooth; at most 0.08 on the hulls of random
# points of a ball, and 0.14 and more on those of random points of a cube.
NEARLY_SMOOTH: Final = 0.12

# Smooth edges between lone triangles that make a round; fewer may be the blunt corner of a polyhedron.
FEWEST: Final = 8

NEAR_CREASE: Final = float(np.radians(61.0))


def broken_surfaces(surface: Surface, seams: Seams, heights: FloatArray) -> BoolArray:
    """Return which triangles (m,) belong to smooth surfaces that do not hold together; heights (m, 3)."""
    smooth = np.flatnonzero(seams.peers)
    smooth = smooth[smooth < surface.mates[smooth]]
    mates = surface.mates[smooth]
    surfaces = connected(len(surface.flat), surface.patches[smooth // 3], surface.patches[mates // 3])
    owner = surfaces[surface.patches]
    seen = np.bincount(owner, np.abs(heights).sum(axis=1) * surface.areas)
    flat = heights.ravel()
    apart = np.abs(flat[smooth] - flat[mates]) * (surface.areas[smooth // 3] + surface.areas[mates // 3])
    disputed = np.bincount(owner[smooth // 3], apart, len(seen)) > DISPUTED * seen
    sharp = np.flatnonzero((seams.kinds == CREASED) & (surface.turns != 0) & (np.abs(surface.turns) < NEAR_CREASE))
    sharp = sharp[(owner[sharp // 3] == owner[surface.mates[sharp] // 3]) & (sharp < surface.mates[sharp])]
    edges, nearly = (np.bincount(owner[some // 3], minlength=len(seen)) for some in (smooth, sharp))
    strips = np.bincount(owner[smooth // 3], seams.kinds[smooth] == STRIP, len(seen))
    few = (strips == 0) & (edges < FEWEST) & (edges > 0)
    return np.asarray((disputed | few | (nearly > NEARLY_SMOOTH * edges))[owner])


def creased(seams: Seams, triangles: BoolArray) -> Seams:
    """Return the seams with every smooth edge of some triangles (m,) turned into a crease."""
    peers = seams.peers & ~np.repeat(triangles, 3)
    return replace(seams, kinds=np.where(peers == seams.peers, seams.kinds, CREASED), peers=peers)
