"""How high the true surface stands over the middle of every edge: a quadratic surface fitted to each plane patch.

Over a triangle with barycentric coordinates λ, the quadratic surface through its corners is
z = 4 Σ f_k λ_{k+1} λ_{k+2}, where f_k is its height over the middle of the edge opposite corner k; f_k = −eᵀBe/8 with
the shape operator B of the patch. Each neighbour gives one linear equation for B: its far corner lies on the surface
too, or the slope at the common edge is known, or it lies in the same plane. That is least squares with three unknowns
per patch, with a weak pull towards no curvature; a second round pulls towards the neighbours' mean in directions of
which only they know.

Strips of cones taper: there z·ω is quadratic, with ω falling linearly to 0 at the cone's tip.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.seams import COPLANAR, CORNER, CREASED
from core.mesh.curvature.surface import PAIRS, applied, conormals

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import PatchForms, Surface
    from core.progress import Progress

CHUNK: Final = 8_000

# Weight of the pull towards no curvature, and towards the neighbours' mean, beside equations of weight 1.
PULL_FLAT: Final = 1e-5
PULL_MEAN: Final = 3e-2

# Weight of the pull towards straight edges where the surface may be ruled.
PULL_STRAIGHT: Final = 1e-3

# Eigenvalue of the equations below which a direction counts as open, and the certainty below which a patch has one.
OPEN: Final = 1e-2
UNCERTAIN: Final = 0.2

# Sides of a strip whose outward directions add up to more than this share of their lengths are not opposite sides.
OPPOSITE: Final = 0.6

# The two other edges of a triangle, counted on from its base.
SIDES: Final = (1, 2)

# A bulge higher than this share of its edge is no facet of a surface that turns less than 40° per edge.
HIGHEST: Final = 0.2


@dataclass(frozen=True, eq=False)
class Frames:
    """A frame in the plane of every patch, scaled by its widths.

    Attributes:
        first, second: (patches, 3) unit vectors. scales: (patches, 2) radii of gyration along them.
        taper: (patches, 3) gradient of −ω, with ω = 1 at the centroid; 0 but for strips of cones.
        centroids: (patches, 3).
    """

    first: FloatArray
    second: FloatArray
    scales: FloatArray
    taper: FloatArray
    centroids: FloatArray

    def heights_of(self, patches: IntArray, edges: FloatArray) -> FloatArray:
        """Return E (n, 3, 3) with f = E·β for β = (B₁₁, B₂₂, √2·B₁₂) in scaled coordinates; edges (n, 3, 3)."""
        scales = self.scales[patches]
        x = np.einsum("nki,ni->nk", edges, self.first[patches]) / scales[:, :1]
        y = np.einsum("nki,ni->nk", edges, self.second[patches]) / scales[:, 1:]
        return np.asarray(np.stack([x * x, y * y, np.sqrt(2) * x * y], axis=-1) / -8)

    def world(self, scaled: FloatArray) -> FloatArray:
        """Return shape operators (patches, 6) along the mesh's axes of scaled ones (patches, 3)."""
        u, v = self.first / self.scales[:, :1], self.second / self.scales[:, 1:]
        return np.stack([
            scaled[:, 0] * u[:, i] * u[:, j] + scaled[:, 1] * v[:, i] * v[:, j]
            + scaled[:, 2] * (u[:, i] * v[:, j] + v[:, i] * u[:, j]) / np.sqrt(2)
            for i, j in PAIRS
        ], axis=1)

    def scaled(self, world: FloatArray) -> FloatArray:
        """Return scaled shape operators (patches, 3) of those along the mesh's axes (patches, 6)."""
        u, v = self.first * self.scales[:, :1], self.second * self.scales[:, 1:]
        bu, bv = applied(world, u), applied(world, v)
        return np.stack([
            np.einsum("ni,ni->n", u, bu), np.einsum("ni,ni->n", v, bv), np.sqrt(2) * np.einsum("ni,ni->n", u, bv)
        ], axis=1)

    def omega(self, patches: IntArray, points: FloatArray) -> FloatArray:
        """Return ω (n,) at points (n, 3) of patches (n,)."""
        away = points - self.centroids[patches]
        return np.asarray(np.maximum(1 - np.einsum("ni,ni->n", self.taper[patches], away), 1e-9))


@dataclass(frozen=True, eq=False)
class Bulges:
    """The restored surface, as seen from each triangle.

    Attributes:
        heights: (m, 3) over the middles of the edges, along the edge's normal where it is smooth, else the triangle's.
        domes: of the strips of cones, where the surface is not quadratic.
    """

    heights: FloatArray
    domes: list[Dome]


@dataclass(frozen=True, eq=False)
class Dome:
    """Tapered surfaces z = q/ω over some triangles (n,).

    Attributes:
        triangles: (n,). raw: (n, 3) heights of q over the middles of the edges. omegas: (n, 3) ω at the corners.
    """

    triangles: IntArray
    raw: FloatArray
    omegas: FloatArray


def bulges(surface: Surface, forms: PatchForms, seams: Seams, progress: Progress) -> Bulges:
    """Return how high the surface stands over every triangle.

    progress counts the triangles three times.
    """
    curved = curved_triangles(surface, seams)
    frames = patch_frames(surface, forms)
    normal, right, straight = _equations(surface, frames, seams, curved, progress)
    certainty = np.maximum(_certainty(normal) - UNCERTAIN, 0.0) / (1 - UNCERTAIN)
    operators = frames.world(_solved(normal + straight, right, PULL_FLAT, np.zeros_like(right)))
    frames = replace(frames, taper=_tapers(surface, forms, seams, certainty))
    normal, right, straight = _equations(surface, frames, seams, curved, progress)
    mean, weight = _neighbours_mean(surface, seams, operators, certainty, curved)
    scaled = _solved(normal + straight, right, PULL_FLAT + PULL_MEAN * weight, frames.scaled(mean))
    open_ = surface.lone & (certainty == 0) & (weight < UNCERTAIN) & ~(frames.taper != 0).any(1)
    scaled[open_] = _bent_one_way(normal[open_], scaled[open_])
    progress.advance(3 * (len(surface.corners) - len(curved)))
    return _heights(surface, seams, _Fit(frames, scaled, frames.world(scaled)), curved, progress)


def curved_triangles(surface: Surface, seams: Seams) -> IntArray:
    """Return the triangles of the patches that an edge calls round, sorted by patch."""
    speaks = (seams.kinds != CREASED) & (seams.kinds != COPLANAR) & (seams.slopes != 0) | (seams.kinds == CORNER)
    rounded = np.zeros(len(surface.flat), dtype=bool)
    rounded[surface.patches[speaks.reshape(-1, 3).any(1)]] = True
    found = np.flatnonzero((rounded & ~surface.flat)[surface.patches] & (surface.areas > 0))
    return found[np.argsort(surface.patches[found], kind="stable")]


def patch_frames(surface: Surface, forms: PatchForms) -> Frames:
    """Return the principal frames of all patches, without taper."""
    count = len(surface.flat)
    weighted = surface.areas[:, None] * surface.normals
    normals = np.stack([np.bincount(surface.patches, weighted[:, i], count) for i in range(3)], 1)
    normals = normals / np.maximum(np.sqrt(np.einsum("ni,ni->n", normals, normals)), 1e-300)[:, None]
    axis = np.eye(3)[np.abs(normals).argmin(1)]
    x = np.cross(axis, normals)
    x /= np.maximum(np.sqrt(np.einsum("ni,ni->n", x, x)), 1e-300)[:, None]
    y = np.cross(normals, x)
    spread_x, spread_y = applied(forms.spreads, x), applied(forms.spreads, y)
    xx, yy = np.einsum("ni,ni->n", x, spread_x), np.einsum("ni,ni->n", y, spread_y)
    xy = np.einsum("ni,ni->n", x, spread_y)
    angle = 0.5 * np.arctan2(2 * xy, xx - yy)
    cosine, sine = np.cos(angle)[:, None], np.sin(angle)[:, None]
    half_gap = np.hypot(0.5 * (xx - yy), xy)
    large = np.maximum(0.5 * (xx + yy) + half_gap, 1e-300)
    small = np.maximum(0.5 * (xx + yy) - half_gap, 1e-12 * large)
    scales = np.sqrt(np.stack([large, small], axis=1))
    return Frames(cosine * x + sine * y, cosine * y - sine * x, scales, np.zeros((count, 3)), forms.centroids)


@dataclass(frozen=True, eq=False)
class _Chunk:
    """Some triangles (n,) with what the equations need of them."""

    triangles: IntArray
    patches: IntArray
    corners: FloatArray
    edges: FloatArray
    gram: FloatArray
    normals: FloatArray
    double_area: FloatArray


def _chunk(surface: Surface, triangles: IntArray) -> _Chunk:
    corners = surface.points[surface.corners[triangles]]
    edges = np.stack([corners[:, 2] - corners[:, 1], corners[:, 0] - corners[:, 2], corners[:, 1] - corners[:, 0]], 1)
    gram = np.einsum("nki,nli->nkl", edges, edges)
    return _Chunk(triangles, surface.patches[triangles], corners, edges, gram, surface.normals[triangles],
                  2 * surface.areas[triangles])


def _equations(
    surface: Surface, frames: Frames, seams: Seams, curved: IntArray, progress: Progress
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return the normal equations (patches, 3, 3) and right-hand sides (patches, 3) for scaled shape operators.

    The third array (patches, 3, 3) is to be added to the first: a weak pull towards straight edges.
    """
    normal, right = np.zeros((len(surface.flat), 3, 3)), np.zeros((len(surface.flat), 3))
    pull = np.zeros_like(normal)
    straight = _straight_edges(surface, seams)
    for start in range(0, len(curved), CHUNK):
        chunk = _chunk(surface, curved[start : start + CHUNK])
        to_heights = frames.heights_of(chunk.patches, chunk.edges)
        part = np.zeros((len(chunk.triangles), 3, 3))
        sides = np.zeros((len(chunk.triangles), 3))
        for k in range(3):
            row, value = _row(surface, frames, seams, chunk, k)
            weight = (seams.kinds[3 * chunk.triangles + k] != CREASED) / np.einsum("ni,ni->n", row, row)
            scaled = np.einsum("ni,nij->nj", row, to_heights)
            part += (weight[:, None] * scaled)[:, :, None] * scaled[:, None, :]
            sides += (weight * value)[:, None] * scaled
        first = np.flatnonzero(np.concatenate([[True], chunk.patches[1:] != chunk.patches[:-1]]))
        pulls = PULL_STRAIGHT * _straight(to_heights, straight[chunk.triangles])
        pull[chunk.patches[first]] += np.add.reduceat(pulls, first, axis=0)
        normal[chunk.patches[first]] += np.add.reduceat(part, first, axis=0)
        right[chunk.patches[first]] += np.add.reduceat(sides, first, axis=0)
        progress.advance(len(chunk.triangles))
    return normal, right, pull


def _row(surface: Surface, frames: Frames, seams: Seams, chunk: _Chunk, k: int) -> tuple[FloatArray, FloatArray]:
    """Return the equation (n, 3)·f = (n,) that the edge opposite corner k gives."""
    half_edges = 3 * chunk.triangles + k
    kind = seams.kinds[half_edges]
    row, value = _corner_on_surface(surface, frames, chunk, k)
    sloped = (kind != CORNER) & (kind != COPLANAR)
    middle = 0.5 * (chunk.corners[:, (k + 1) % 3] + chunk.corners[:, (k + 2) % 3])
    height = chunk.double_area / np.sqrt(chunk.gram[:, k, k])
    slope = -0.5 * height * np.tan(seams.slopes[half_edges]) * frames.omega(chunk.patches, middle)
    slope_row = np.full((len(kind), 3), -1.0)
    slope_row[:, k] = 1.0
    return np.where(sloped[:, None], slope_row, row), np.where(sloped, slope, value)


def _corner_on_surface(surface: Surface, frames: Frames, chunk: _Chunk, k: int) -> tuple[FloatArray, FloatArray]:
    """Return the equation that the neighbour's far corner lies on the surface.

    The term in z² makes it exact for a sphere and a circular cylinder: there z = q + ½·(dᵀBd)·z², with d across
    the edge.
    """
    one = (k + 1) % 3
    mates = surface.mates[3 * chunk.triangles + k]
    apex = surface.points[surface.corners[mates // 3, mates % 3]]
    reach = apex - chunk.corners[:, one]
    z = np.einsum("ni,ni->n", reach, chunk.normals)
    # λ_j = (n × e_j)·(t − v)/2A, with v on the edge e_j.
    turned = np.cross(chunk.normals[:, None, :], chunk.edges)
    share = np.einsum("nji,ni->nj", turned, reach) / chunk.double_area[:, None]
    share[:, one] += 1.0
    length = np.sqrt(chunk.gram[:, k, k])
    rate = -chunk.gram[:, :, k] / (chunk.double_area * length)[:, None]
    row = 4 * np.stack([
        share[:, (j + 1) % 3] * share[:, (j + 2) % 3] + z * z * rate[:, (j + 1) % 3] * rate[:, (j + 2) % 3]
        for j in range(3)
    ], axis=1)
    return row, z * frames.omega(chunk.patches, apex)


def _straight_edges(surface: Surface, seams: Seams) -> BoolArray:
    """Return which edges (m, 3) are rulings unless an equation says otherwise.

    They are the smooth edges of plane patches of several triangles (strips of cylinders and cones), and the sides
    of fans around the tip of a cone.
    """
    return seams.peers.reshape(-1, 3) & (~surface.lone[surface.patches] | _in_fan(surface, seams))[:, None]


def _in_fan(surface: Surface, seams: Seams) -> BoolArray:
    """Return which triangles (m,) fan out around the tip of a cone: one edge a crease, two smooth, tips shared."""
    kinds = seams.kinds.reshape(-1, 3)
    alike = ((kinds == CORNER).sum(1) == len(SIDES)) & ((kinds == CREASED).sum(1) == 1)
    base = np.where(alike, (kinds == CREASED).argmax(1), 0)
    rows = np.arange(len(kinds))
    tip = np.where(alike, surface.corners[rows, base], -1)
    for step in SIDES:
        mates = surface.mates[3 * rows + (base + step) % 3]
        alike &= tip[mates // 3] == tip
    return np.asarray(alike)


def _straight(to_heights: FloatArray, straight: BoolArray) -> FloatArray:
    """Return the normal equations (n, 3, 3) of f = 0 for the edges that are straight unless told otherwise."""
    lengths = np.sqrt(np.einsum("nij,nij->ni", to_heights, to_heights))
    rows = to_heights * (straight / np.maximum(lengths, 1e-300))[:, :, None]
    return np.asarray(np.einsum("nij,nik->njk", rows, rows))


def _tapers(surface: Surface, forms: PatchForms, seams: Seams, certainty: FloatArray) -> FloatArray:
    """Return the gradient of −ω (patches, 3) of strips whose two smooth sides run together.

    The distances from both sides add up to a linear function that vanishes where the sides meet.
    """
    count = len(surface.flat)
    candidates = (certainty == 0) & ~surface.flat
    candidates &= ~surface.lone | (np.bincount(surface.patches, _in_fan(surface, seams), count) > 0)
    sides = np.flatnonzero(seams.peers & np.repeat(candidates[surface.patches], 3))
    out, length = conormals(surface, sides)
    patch = surface.patches[sides // 3]
    start = surface.points[surface.corners[sides // 3, (sides % 3 + 1) % 3]]
    offset = np.einsum("ni,ni->n", out, start - forms.centroids[patch])
    gradient = np.stack([np.bincount(patch, length * out[:, i], count) for i in range(3)], 1)
    together = np.bincount(patch, length, count)
    at_centroid = np.bincount(patch, length * offset, count)
    size = np.sqrt(np.einsum("ni,ni->n", gradient, gradient))
    good = candidates & (size < OPPOSITE * together) & (at_centroid > 0)
    return np.where(good[:, None], gradient / np.where(good, at_centroid, 1.0)[:, None], 0.0)


def _certainty(normal: FloatArray) -> FloatArray:
    """Return near 1 where the equations settle all three unknowns, near 0 where one of them is open."""
    eased = normal + OPEN * np.eye(3)
    return np.maximum(_determinant(normal), 0.0) / _determinant(eased)


def _determinant(n: FloatArray) -> FloatArray:
    a, b, c, d, e, f = n[:, 0, 0], n[:, 1, 1], n[:, 2, 2], n[:, 0, 1], n[:, 0, 2], n[:, 1, 2]
    return np.asarray(a * (b * c - f * f) - d * (d * c - e * f) + e * (d * f - b * e))


def _cofactors(n: FloatArray) -> FloatArray:
    """Return the cofactors (p, 3, 3) of symmetric matrices (p, 3, 3)."""
    a, b, c, d, e, f = n[:, 0, 0], n[:, 1, 1], n[:, 2, 2], n[:, 0, 1], n[:, 0, 2], n[:, 1, 2]
    aa, ab, ac = b * c - f * f, e * f - c * d, d * f - b * e
    bb, bc, cc = a * c - e * e, d * e - a * f, a * b - d * d
    return np.stack([aa, ab, ac, ab, bb, bc, ac, bc, cc], axis=1).reshape(-1, 3, 3)


def _solved(normal: FloatArray, right: FloatArray, pull: FloatArray | float, prior: FloatArray) -> FloatArray:
    """Return the solution of (N + pull·1) β = r + pull·prior for symmetric N (p, 3, 3)."""
    pulls = np.broadcast_to(pull, len(normal))
    pulled = normal + pulls[:, None, None] * np.eye(3)
    sides = right + pulls[:, None] * prior
    return np.asarray(np.einsum("nij,nj->ni", _cofactors(pulled), sides) / _determinant(pulled)[:, None])


def _bent_one_way(normal: FloatArray, scaled: FloatArray) -> FloatArray:
    """Return the shape operators (p, 3) moved along the open direction until the surface bends one way only.

    With one direction open, the surface is taken as developable: det B = 0, the root nearer to what was found.
    """
    cofactors = _cofactors(normal)
    best = np.einsum("nii->ni", cofactors).argmax(1)
    free = cofactors[np.arange(len(normal)), best]
    free /= np.maximum(np.sqrt(np.einsum("ni,ni->n", free, free)), 1e-300)[:, None]
    a = free[:, 0] * free[:, 1] - 0.5 * free[:, 2] ** 2
    b = free[:, 0] * scaled[:, 1] + free[:, 1] * scaled[:, 0] - free[:, 2] * scaled[:, 2]
    c = scaled[:, 0] * scaled[:, 1] - 0.5 * scaled[:, 2] ** 2
    root = np.sqrt(np.maximum(b * b - 4 * a * c, 0.0))
    # The smaller root, in the form that does not cancel.
    below = b + np.where(b >= 0, root, -root)
    step = np.divide(-2 * c, below, out=np.zeros_like(c), where=below != 0)
    return np.asarray(scaled + np.where(b * b >= 4 * a * c, step, 0.0)[:, None] * free)


def _neighbours_mean(
    surface: Surface, seams: Seams, operators: FloatArray, certainty: FloatArray, curved: IntArray
) -> tuple[FloatArray, FloatArray]:
    """Return the neighbours' mean shape operator (patches, 6), each counting as sure as it is, and their certainty."""
    count = len(surface.flat)
    rims = (3 * curved[:, None] + np.arange(3)).ravel()
    rims = rims[seams.peers[rims]]
    own, near = surface.patches[rims // 3], surface.patches[surface.mates[rims] // 3]
    sure = certainty[near]
    weight = np.bincount(own, sure, count)
    total = np.stack([np.bincount(own, sure * operators[near, i], count) for i in range(6)], 1)
    return total / np.maximum(weight, 1e-300)[:, None], weight / np.maximum(np.bincount(own, minlength=count), 1)


@dataclass(frozen=True, eq=False)
class _Fit:
    """The fitted surface: frames, and shape operators both scaled (patches, 3) and along the mesh's axes (.., 6)."""

    frames: Frames
    scaled: FloatArray
    operators: FloatArray


def _heights(surface: Surface, seams: Seams, fit: _Fit, curved: IntArray, progress: Progress) -> Bulges:
    frames = fit.frames
    heights = np.zeros((len(surface.corners), 3))
    domes = []
    for start in range(0, len(curved), CHUNK):
        chunk = _chunk(surface, curved[start : start + CHUNK])
        raw = np.einsum("nij,nj->ni", frames.heights_of(chunk.patches, chunk.edges), fit.scaled[chunk.patches])
        own = np.empty_like(raw)
        for k in range(3):
            own[:, k] = _height(surface, seams, fit, chunk, k) * raw[:, k]
            limit = HIGHEST * np.sqrt(chunk.gram[:, k, k])
            np.clip(own[:, k], -limit, limit, out=own[:, k])
        heights[chunk.triangles] = own
        tapered = (frames.taper[chunk.patches] != 0).any(1)
        if tapered.any():
            omegas = np.stack([frames.omega(chunk.patches, chunk.corners[:, k]) for k in range(3)], axis=1)
            domes.append(Dome(chunk.triangles[tapered], raw[tapered], omegas[tapered]))
        progress.advance(len(chunk.triangles))
    return Bulges(heights, domes)


def _height(surface: Surface, seams: Seams, fit: _Fit, chunk: _Chunk, k: int) -> FloatArray:
    """Return the height (n,) over the middle of the edge opposite corner k, relative to the quadratic f_k."""
    half_edges = 3 * chunk.triangles + k
    middle = 0.5 * (chunk.corners[:, (k + 1) % 3] + chunk.corners[:, (k + 2) % 3])
    tilt = np.where(seams.peers[half_edges], np.cos(0.5 * surface.turns[half_edges]), 1.0)
    tilt = tilt / fit.frames.omega(chunk.patches, middle)
    bent = applied(fit.operators[chunk.patches], chunk.edges[:, k]) * tilt[:, None]
    # z = f − ½κz², with κ = |Be|²/|eᵀBe| the curvature that the edge follows: exact for circles.
    return np.asarray(tilt * 2 / (1 + np.sqrt(1 + 0.25 * np.einsum("ni,ni->n", bent, bent))))
