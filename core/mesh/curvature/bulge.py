"""How high the true surface stands over the middle of every edge, by the fitted surfaces of the patches."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.fit import CHUNK, Chunk, Fit, chunk_of, fitted
from core.mesh.curvature.seams import COPLANAR, CORNER, CREASED
from core.mesh.curvature.vectors import applied, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import PatchForms, Surface
    from core.progress import Progress

# A bulge higher than this share of its edge is no facet of a surface that turns less than 40° per edge.
HIGHEST: Final = 0.2


@dataclass(frozen=True, eq=False)
class Dome:
    """Tapered surfaces z = q/ω over some triangles, with q quadratic.

    Attributes:
        triangles: (n,). omegas: (3, n) ω at their corners.
    """

    triangles: IntArray
    omegas: FloatArray


@dataclass(frozen=True, eq=False)
class Bulges:
    """The restored surface, as seen from each triangle.

    Attributes:
        heights: (m, 3) over the middles of the edges, along the edge's normal where it is smooth, else the triangle's.
        domes: of the strips of cones, where the surface is not quadratic.
    """

    heights: FloatArray
    domes: list[Dome]


def bulges(surface: Surface, forms: PatchForms, seams: Seams, progress: Progress) -> Bulges:
    """Return how high the surface stands over every triangle.

    progress counts the triangles three times.
    """
    curved = curved_triangles(surface, seams)
    fit = fitted(surface, forms, seams, curved, progress)
    heights, domes = np.zeros((len(surface.corners), 3)), []
    for start in range(0, len(curved), CHUNK):
        chunk = chunk_of(surface, curved[start : start + CHUNK])
        scaled = gathered(fit.scaled, chunk.patches)
        raw = np.stack([dot(row, scaled) for row in fit.frames.heights_of(chunk.patches, chunk.edges)])
        for k in range(3):
            limit = HIGHEST * length(chunk.edges[k])
            heights[chunk.triangles, k] = np.clip(_relative(surface, seams, fit, chunk, k) * raw[k], -limit, limit)
        which = fit.frames.tapered[chunk.patches]
        if which.any():
            omegas = np.stack([fit.frames.omega(chunk.patches, corner) for corner in chunk.corners])
            domes.append(Dome(chunk.triangles[which], omegas[:, which]))
        progress.advance(len(chunk.triangles))
    progress.advance(3 * (len(surface.corners) - len(curved)))
    return Bulges(heights, domes)


def flattened(bulges: Bulges, dropped: BoolArray) -> Bulges:
    """Return the bulges without those of the dropped triangles (m,)."""
    heights = np.where(dropped[:, None], 0.0, bulges.heights)
    kept = [(dome, ~dropped[dome.triangles]) for dome in bulges.domes]
    return Bulges(heights, [Dome(dome.triangles[keep], dome.omegas[:, keep]) for dome, keep in kept])


def curved_triangles(surface: Surface, seams: Seams) -> IntArray:
    """Return the triangles of the patches that an edge calls round, sorted by patch."""
    kinds = seams.kinds
    speaks = (kinds == CORNER) | ((kinds != CREASED) & (kinds != COPLANAR) & (seams.slopes != 0))
    rounded = np.zeros(len(surface.flat), dtype=bool)
    rounded[surface.patches[np.flatnonzero(speaks) // 3]] = True
    found = np.flatnonzero((rounded & ~surface.flat)[surface.patches] & (surface.areas > 0))
    return found[np.argsort(surface.patches[found], kind="stable")]


def _relative(surface: Surface, seams: Seams, fit: Fit, chunk: Chunk, k: int) -> FloatArray:
    """Return the height (n,) over the middle of the edge opposite corner k, relative to the quadratic f_k."""
    half_edges = 3 * chunk.triangles + k
    tilt = np.where(seams.peers[half_edges], np.cos(0.5 * surface.turns[half_edges]), 1.0)
    if fit.frames.tapered[chunk.patches].any():
        middle = 0.5 * (chunk.corners[(k + 1) % 3] + chunk.corners[(k + 2) % 3])
        tilt /= fit.frames.omega(chunk.patches, middle)
    bent = applied(gathered(fit.operators, chunk.patches), chunk.edges[k]) * tilt
    # z = f − ½κz², with κ = |Be|²/|eᵀBe| the curvature that the edge follows: exact for circles.
    return np.asarray(tilt * 2 / (1 + np.sqrt(1 + 0.25 * dot(bent, bent))))
