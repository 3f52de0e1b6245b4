"""A scaled frame in the plane of every patch, and the taper of the strips of cones."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.seams import CORNER, CREASED
from core.mesh.curvature.surface import conormals
from core.mesh.curvature.vectors import PAIRS, applied, cross, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import PatchForms, Surface

# The two other edges of a triangle, counted on from its base.
SIDES: Final = (1, 2)

# Sides of a strip whose outward directions add up to more than this share of their lengths are not opposite sides.
OPPOSITE: Final = 0.6

# ω is held above this, at the very tip of a cone.
LEAST_OMEGA: Final = 1e-9


@dataclass(frozen=True, eq=False)
class Frames:
    """Frames of patches (p,) in which shape operators have elements near one size.

    Attributes:
        axes: (p, 6) two unit vectors along the patch's principal directions, each over its scale.
        scales: (2, p) radii of gyration along them.
        taper: (p, 4) gradient of −ω, and its product with the centroid, ω being 1 there; 0 but for strips of cones.
        tapered: (p,) where it is not 0.
    """

    axes: FloatArray
    scales: FloatArray
    taper: FloatArray
    tapered: BoolArray

    def heights_of(self, patches: IntArray, edges: list[FloatArray]) -> list[FloatArray]:
        """Return for each of three edges (3, n) the row (3, n) E with f = E·β, β = (B₁₁, B₂₂, √2·B₁₂) scaled."""
        axes = gathered(self.axes, patches)
        rows = []
        for edge in edges:
            x, y = dot(axes[:3], edge), dot(axes[3:], edge)
            rows.append(np.stack([x * x, y * y, np.sqrt(2) * (x * y)]) * -0.125)
        return rows

    def world(self, scaled: FloatArray) -> FloatArray:
        """Return shape operators (p, 6) along the mesh's axes of scaled ones (3, p)."""
        u, v = self.axes.T[:3], self.axes.T[3:]
        found = np.empty((len(self.axes), len(PAIRS)))
        for column, (i, j) in enumerate(PAIRS):
            mixed = scaled[2] * (u[i] * v[j] + v[i] * u[j]) / np.sqrt(2)
            found[:, column] = scaled[0] * u[i] * u[j] + scaled[1] * v[i] * v[j] + mixed
        return found

    def scaled(self, world: FloatArray) -> FloatArray:
        """Return scaled shape operators (3, p) of those along the mesh's axes (6, p)."""
        u, v = self.axes.T[:3] * self.scales[0] ** 2, self.axes.T[3:] * self.scales[1] ** 2
        bu, bv = applied(world, u), applied(world, v)
        return np.stack([dot(u, bu), dot(v, bv), np.sqrt(2) * dot(u, bv)])

    def omega(self, patches: IntArray, points: FloatArray) -> FloatArray:
        """Return ω (n,) at points (3, n) of patches (n,)."""
        taper = gathered(self.taper, patches)
        return np.asarray(np.maximum(1 + taper[3] - dot(taper, points), LEAST_OMEGA))


def patch_frames(surface: Surface, forms: PatchForms) -> Frames:
    """Return the principal frames of all patches, without taper."""
    count = len(surface.flat)
    normals = np.empty((3, count))
    for i in range(3):
        normals[i] = np.bincount(surface.patches, surface.areas * surface.normals[:, i], count)
    normals /= np.maximum(length(normals), 1e-300)
    x = cross(np.eye(3)[np.abs(normals).argmin(axis=0)].T, normals)
    x /= np.maximum(length(x), 1e-300)
    y = cross(normals, x)
    spreads = forms.spreads.T
    spread_x, spread_y = applied(spreads, x), applied(spreads, y)
    xx, yy, xy = dot(x, spread_x), dot(y, spread_y), dot(x, spread_y)
    angle = 0.5 * np.arctan2(2 * xy, xx - yy)
    cosine, sine = np.cos(angle), np.sin(angle)
    half_gap = np.hypot(0.5 * (xx - yy), xy)
    large = np.maximum(0.5 * (xx + yy) + half_gap, 1e-300)
    small = np.maximum(0.5 * (xx + yy) - half_gap, 1e-12 * large)
    scales = np.sqrt(np.stack([large, small]))
    axes = np.concatenate([(cosine * x + sine * y) / scales[0], (cosine * y - sine * x) / scales[1]])
    return Frames(np.ascontiguousarray(axes.T), scales, np.zeros((count, 4)), np.zeros(count, dtype=bool))


def straight_edges(surface: Surface, seams: Seams, fans: BoolArray) -> BoolArray:
    """Return which half-edges (3m,) are rulings unless an equation says otherwise.

    They are the smooth edges of plane patches of several triangles (strips of cylinders and cones), and the sides
    of fans around the tip of a cone.
    """
    return seams.peers & np.repeat(~surface.lone[surface.patches] | fans, 3)


def in_fan(surface: Surface, seams: Seams) -> BoolArray:
    """Return which triangles (m,) fan out around the tip of a cone: one edge a crease, two smooth, tips shared."""
    kinds = seams.kinds.reshape(-1, 3)
    corners, creases = ((kinds == kind).view(np.int8) for kind in (CORNER, CREASED))
    alike = (corners.sum(axis=1) == len(SIDES)) & (creases.sum(axis=1) == 1)
    rows = np.flatnonzero(alike)
    base = creases[rows].argmax(axis=1)
    tip = np.full(len(kinds), -1)
    tip[rows] = surface.corners[rows, base]
    for step in SIDES:
        mates = surface.mates[3 * rows + (base + step) % 3]
        alike[rows] &= tip[mates // 3] == tip[rows]
    return np.asarray(alike)


def tapered(surface: Surface, forms: PatchForms, seams: Seams, frames: Frames, candidates: BoolArray) -> Frames:
    """Return the frames with the taper of those candidate patches (p,) whose two smooth sides run together.

    The distances from both sides add up to a linear function that vanishes where the sides meet.
    """
    count = len(surface.flat)
    sides = np.flatnonzero(seams.peers & np.repeat(candidates[surface.patches], 3))
    out, lengths = conormals(surface, sides)
    patch = surface.patches[sides // 3]
    start = gathered(surface.points, surface.corners[sides // 3, (sides % 3 + 1) % 3])
    offset = dot(out, start - gathered(forms.centroids, patch))
    # A side may be cut into several edges, and one side may be longer than the other: each side counts once.
    _, side = np.unique(patch * count + surface.patches[surface.mates[sides] // 3], return_inverse=True)
    lengths /= np.bincount(side, lengths)[side] if len(side) else 1.0
    gradient = np.empty((3, count))
    for i in range(3):
        gradient[i] = np.bincount(patch, lengths * out[i], count)
    together = np.bincount(patch, lengths, count)
    at_centroid = np.bincount(patch, lengths * offset, count)
    good = candidates & (length(gradient) < OPPOSITE * together) & (at_centroid > 0)
    return with_taper(frames, forms, gradient / np.where(good, at_centroid, 1.0), good)


def with_taper(frames: Frames, forms: PatchForms, taper: FloatArray, where: BoolArray) -> Frames:
    """Return the frames with the gradient of −ω (3, p) set where (p,) is true."""
    table = np.concatenate([taper, dot(taper, forms.centroids.T)[None]]).T
    return replace(frames, taper=np.where(where[:, None], table, frames.taper), tapered=frames.tapered | where)
