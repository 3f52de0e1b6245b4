"""Cylinders and cones cut into irregular needles: the straight lines on them, from all their facets together.

The tangent planes of a cone pass through its tip, those of a cylinder through one point at infinity. So the facets of a
smooth surface are asked for the point (X, w), in homogeneous coordinates, that lies nearest to all their planes: the
eigenvector to the smallest eigenvalue of Σ A a aᵀ with a = (n, −n·c).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.surface import connected
from core.mesh.curvature.vectors import applied, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import PatchForms, Surface

# The planes must pass this near to the common point, as a share of the surface's size, and this much nearer (squared)
# than to any other point.
NEAR: Final = 0.05
NEARER: Final = 0.05


@dataclass(frozen=True, eq=False)
class Rulings:
    """The straight line through the centroid of each patch.

    Attributes:
        ruled: (p,) lone triangles of a cylinder or a cone. directions: (3, p) unit vectors, in the patch's plane.
        taper: (3, p) gradient of −ω: one over the distance from the cone's tip, towards it.
    """

    ruled: BoolArray
    directions: FloatArray
    taper: FloatArray


def rulings(surface: Surface, forms: PatchForms, seams: Seams, curved: IntArray, *, leave: BoolArray) -> Rulings:
    """Return the rulings of the lone triangles among the curved ones (c,), but for patches to leave alone (p,)."""
    count = len(surface.flat)
    edges = np.flatnonzero(seams.peers)
    edges = edges[edges < surface.mates[edges]]
    owners = connected(count, surface.patches[edges // 3], surface.patches[surface.mates[edges] // 3])
    lone = curved[(surface.lone & ~leave)[surface.patches[curved]]]
    none = np.zeros((3, count))
    if not len(lone):
        return Rulings(np.zeros(count, dtype=bool), none, none)
    patches = surface.patches[lone]
    number, owner = np.unique(owners[patches], return_inverse=True)
    (centres, sizes, good), points = _common_points(surface, forms, lone, owner, len(number))
    away = gathered(forms.centroids, patches) - centres[:, owner]
    towards = sizes[owner] * points[:3, owner] - points[3, owner] * away
    normals = gathered(surface.normals, lone)
    towards -= dot(towards, normals) * normals
    distance = np.maximum(length(towards), 1e-300)
    found = Rulings(np.zeros(count, dtype=bool), none, none.copy())
    found.ruled[patches] = good[owner]
    found.directions[:, patches] = towards / distance
    found.taper[:, patches] = towards * (points[3, owner] / distance**2) * good[owner]
    return found


def _common_points(
    surface: Surface, forms: PatchForms, lone: IntArray, owner: IntArray, count: int
) -> tuple[tuple[FloatArray, FloatArray, BoolArray], FloatArray]:
    """Return centres (3, s), sizes (s,) and verdicts (s,) of smooth surfaces, and their points (4, s)."""
    area = surface.areas[lone]
    centroid, normal = gathered(forms.centroids, surface.patches[lone]), gathered(surface.normals, lone)
    total = np.bincount(owner, area, count)
    centres = np.stack([np.bincount(owner, area * part, count) / total for part in centroid])
    away = centroid - centres[:, owner]
    sizes = np.sqrt(np.maximum(np.bincount(owner, area * dot(away, away), count) / total, 1e-300))
    rows = np.concatenate([normal, [-dot(normal, away) / sizes[owner]]])
    planes = np.empty((count, 4, 4))
    for i in range(4):
        for j in range(i + 1):
            planes[:, i, j] = planes[:, j, i] = np.bincount(owner, area * rows[i] * rows[j], count) / total
    values, vectors = np.linalg.eigh(planes)
    good = (values[:, 0] < NEAR**2) & (values[:, 0] < NEARER * values[:, 1])
    return (centres, sizes, good), np.ascontiguousarray(vectors[:, :, 0].T)


def straight_rows(forms: PatchForms, axes: FloatArray, found: Rulings) -> FloatArray:
    """Return the normal equations (6, p) of no curvature along the rulings, for scaled shape operators.

    axes (p, 6) are those of the patches' frames.
    """
    reach = np.sqrt(np.maximum(dot(found.directions, applied(forms.spreads.T, found.directions)), 0.0))
    line = found.directions * reach
    x, y = dot(axes.T[:3], line), dot(axes.T[3:], line)
    row = np.stack([x * x, y * y, np.sqrt(2) * x * y])
    row *= found.ruled / np.maximum(length(row), 1e-300)
    return np.stack([row[0] ** 2, row[1] ** 2, row[2] ** 2, row[0] * row[1], row[0] * row[2], row[1] * row[2]])
