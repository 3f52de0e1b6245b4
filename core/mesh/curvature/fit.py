"""The shape operator of every plane patch, from what its neighbours say: least squares with three unknowns.

Over a triangle with barycentric coordinates λ, the quadratic surface through its corners is
z = 4 Σ f_k λ_{k+1} λ_{k+2}, where f_k is its height over the middle of the edge opposite corner k; f_k = −eᵀBe/8 with
the shape operator B of the patch. Each neighbour gives one linear equation for B: its far corner lies on the surface
too, or the slope at the common edge is known, or it lies in the same plane. A weak pull towards no curvature settles
the rest; a second round pulls towards the neighbours' mean in directions of which only they know.

Strips of cones taper: there z·ω is quadratic, with ω falling linearly to 0 at the cone's tip.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.frames import Frames, in_fan, patch_frames, straight_edges, tapered, with_taper
from core.mesh.curvature.rulings import rulings, straight_rows
from core.mesh.curvature.seams import COPLANAR, CORNER, CREASED
from core.mesh.curvature.vectors import PAIRS, applied, cofactors, cross, determinant, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import PatchForms, Surface
    from core.progress import Progress

CHUNK: Final = 4_000

# Weight of the pull towards no curvature, and towards the neighbours' mean, beside equations of weight 1.
PULL_FLAT: Final = 1e-7
PULL_MEAN: Final = 3e-2

# Weight of the pull towards straight edges where the surface may be ruled.
PULL_STRAIGHT: Final = 1e-3

# Eigenvalue of the equations below which a direction counts as open, and the certainty below which a patch has one.
OPEN: Final = 1e-2
UNCERTAIN: Final = 0.2


@dataclass(frozen=True, eq=False)
class Fit:
    """The fitted surface.

    Attributes:
        frames: of the patches. scaled: (p, 3) shape operators in them.
        operators: (p, 6) the same along the mesh's axes; z = ½ xᵀBx in the patch's plane.
    """

    frames: Frames
    scaled: FloatArray
    operators: FloatArray


@dataclass(frozen=True, eq=False)
class Chunk:
    """Some triangles (n,) with what the equations need of them: corners and edges three times (3, n)."""

    triangles: IntArray
    patches: IntArray
    corners: list[FloatArray]
    edges: list[FloatArray]
    normals: FloatArray
    double_area: FloatArray


def chunk_of(surface: Surface, triangles: IntArray) -> Chunk:
    """Return the triangles' corners, their edges opposite each corner, normals and areas."""
    indices = surface.corners[triangles]
    corners = [gathered(surface.points, indices[:, k]) for k in range(3)]
    edges = [corners[(k + 2) % 3] - corners[(k + 1) % 3] for k in range(3)]
    return Chunk(triangles, surface.patches[triangles], corners, edges, gathered(surface.normals, triangles),
                 2 * surface.areas[triangles])


def part_of(chunk: Chunk, which: BoolArray) -> Chunk:
    """Return those triangles of the chunk for which which (n,) is true."""
    return Chunk(
        chunk.triangles[which], chunk.patches[which], [corner.compress(which, axis=1) for corner in chunk.corners],
        [edge.compress(which, axis=1) for edge in chunk.edges], chunk.normals.compress(which, axis=1),
        chunk.double_area[which],
    )


def fitted(surface: Surface, forms: PatchForms, seams: Seams, curved: IntArray, progress: Progress) -> Fit:
    """Return the shape operators of all patches; curved (c,) are the triangles to fit, sorted by patch.

    progress counts those triangles twice.
    """
    fans = in_fan(surface, seams)
    frames = patch_frames(surface, forms)
    straight = straight_edges(surface, seams, fans)
    normal, right, pulls = _equations(surface, frames, seams, curved, straight, progress=progress)
    certainty = np.maximum(_certainty(normal) - UNCERTAIN, 0.0) / (1 - UNCERTAIN)
    pulls += normal
    operators = frames.world(_solved(pulls, right, np.zeros(len(forms.spreads)), np.zeros_like(right)))
    fan_patches = np.zeros(len(surface.flat), dtype=bool)
    fan_patches[surface.patches[fans]] = True
    strips = (certainty == 0) & ~surface.flat & (~surface.lone | fan_patches)
    frames = tapered(surface, forms, seams, frames, strips)
    lines = rulings(surface, forms, seams, curved, leave=fan_patches)
    frames = with_taper(frames, forms, lines.taper, lines.ruled)
    pulls += straight_rows(forms, frames.axes, lines)
    again = curved[frames.tapered[surface.patches[curved]]]
    if len(again):
        _, anew, _ = _equations(surface, frames, seams, again, straight, progress=progress)
        right = np.where(frames.tapered, anew, right)
    progress.advance(len(curved) - len(again))
    mean, weight = _neighbours_mean(surface, seams, operators, certainty, curved)
    scaled = _solved(pulls, right, PULL_MEAN * weight, frames.scaled(mean))
    open_ = surface.lone & (certainty == 0) & (weight < UNCERTAIN) & ~frames.tapered & ~lines.ruled
    scaled[:, open_] = _bent_one_way(normal[:, open_], scaled[:, open_])
    return Fit(frames, np.ascontiguousarray(scaled.T), frames.world(scaled))


def _equations(
    surface: Surface, frames: Frames, seams: Seams, curved: IntArray, straight: BoolArray, *, progress: Progress
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return the normal equations (6, p) and right-hand sides (3, p) for scaled shape operators.

    The third array (6, p) is to be added to the first: a weak pull towards straight edges.
    """
    sums = np.zeros((15, len(surface.flat)))
    for start in range(0, len(curved), CHUNK):
        chunk = chunk_of(surface, curved[start : start + CHUNK])
        to_heights = frames.heights_of(chunk.patches, chunk.edges)
        parts = np.zeros((15, len(chunk.triangles)))
        for k in range(3):
            half_edges = 3 * chunk.triangles + k
            row, value = _row(surface, frames, seams, chunk, k)
            scaled = row[0] * to_heights[0] + row[1] * to_heights[1] + row[2] * to_heights[2]
            weight = (seams.kinds[half_edges] != CREASED) / dot(row, row)
            pull = straight[half_edges] * PULL_STRAIGHT / np.maximum(dot(to_heights[k], to_heights[k]), 1e-300)
            for place, (i, j) in enumerate(PAIRS):
                parts[place] += weight * scaled[i] * scaled[j]
                parts[9 + place] += pull * to_heights[k][i] * to_heights[k][j]
            parts[6:9] += weight * value * scaled
        first = np.flatnonzero(np.concatenate([[True], chunk.patches[1:] != chunk.patches[:-1]]))
        sums[:, chunk.patches[first]] += np.add.reduceat(parts, first, axis=1)
        progress.advance(len(chunk.triangles))
    return sums[:6], sums[6:9], sums[9:]


def _row(surface: Surface, frames: Frames, seams: Seams, chunk: Chunk, k: int) -> tuple[FloatArray, FloatArray]:
    """Return the equation row (3, n)·f = value (n,) that the edge opposite corner k gives."""
    half_edges = 3 * chunk.triangles + k
    kind = seams.kinds[half_edges]
    at_corner = (kind == CORNER) | (kind == COPLANAR)
    height = chunk.double_area / length(chunk.edges[k])
    value = -0.5 * height * np.tan(seams.slopes[half_edges])
    row = np.full((3, len(kind)), -1.0)
    row[k] = 1.0
    tapers = bool(frames.tapered[chunk.patches].any())
    if tapers:
        middle = 0.5 * (chunk.corners[(k + 1) % 3] + chunk.corners[(k + 2) % 3])
        value *= frames.omega(chunk.patches, middle)
    if at_corner.any():
        mates = surface.mates[half_edges]
        apex = gathered(surface.points, surface.corners.ravel()[mates])
        corner_row, z = _corner_on_surface(chunk, apex, k)
        if tapers:
            z *= frames.omega(chunk.patches, apex)
        row, value = np.where(at_corner, corner_row, row), np.where(at_corner, z, value)
    return row, value


def _corner_on_surface(chunk: Chunk, apex: FloatArray, k: int) -> tuple[FloatArray, FloatArray]:
    """Return the equation that the neighbour's far corner lies on the surface.

    The term in z² makes it exact for a sphere and a circular cylinder: there z = q + ½·(dᵀBd)·z², with d across
    the edge.
    """
    one, two = (k + 1) % 3, (k + 2) % 3
    reach = apex - chunk.corners[one]
    z = dot(reach, chunk.normals)
    in_plane = cross(chunk.normals, reach)
    # λ_j = (n × e_j)·(t − v)/2A with v on the edge e_j, and (n × e)·r = −e·(n × r).
    share = {k: -dot(chunk.edges[k], in_plane) / chunk.double_area,
             two: -dot(chunk.edges[two], in_plane) / chunk.double_area}
    share[one] = 1 - share[k] - share[two]
    steep = -z / (chunk.double_area * length(chunk.edges[k]))
    rise = [dot(chunk.edges[j], chunk.edges[k]) * steep for j in range(3)]
    row = np.stack([
        share[(j + 1) % 3] * share[(j + 2) % 3] + rise[(j + 1) % 3] * rise[(j + 2) % 3] for j in range(3)
    ])
    row *= 4
    return row, z


def _certainty(normal: FloatArray) -> FloatArray:
    """Return near 1 where the equations (6, p) settle all three unknowns, near 0 where one of them is open."""
    eased = normal.copy()
    eased[:3] += OPEN
    return np.maximum(determinant(normal), 0.0) / determinant(eased)


def _solved(normal: FloatArray, right: FloatArray, pull: FloatArray, prior: FloatArray) -> FloatArray:
    """Return the solution (3, p) of (N + pull·1) β = r + pull·prior, with the pull towards no curvature."""
    pulled = normal.copy()
    pulled[:3] += pull + PULL_FLAT
    return applied(cofactors(pulled), right + pull * prior) / determinant(pulled)


def _bent_one_way(normal: FloatArray, scaled: FloatArray) -> FloatArray:
    """Return the shape operators (3, p) moved along the open direction until the surface bends one way only.

    With one direction open, the surface is taken as developable: det B = 0, the root nearer to what was found.
    """
    xx, yy, zz, xy, xz, yz = cofactors(normal)
    columns = np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]])
    best = np.stack([xx, yy, zz]).argmax(axis=0)
    free = columns[best, :, np.arange(len(best))].T
    free = free / np.maximum(length(free), 1e-300)
    a = free[0] * free[1] - 0.5 * free[2] ** 2
    b = free[0] * scaled[1] + free[1] * scaled[0] - free[2] * scaled[2]
    c = scaled[0] * scaled[1] - 0.5 * scaled[2] ** 2
    root = np.sqrt(np.maximum(b * b - 4 * a * c, 0.0))
    # The smaller root, in the form that does not cancel.
    below = b + np.where(b >= 0, root, -root)
    step = np.divide(-2 * c, below, out=np.zeros_like(c), where=below != 0)
    return np.asarray(scaled + np.where(b * b >= 4 * a * c, step, 0.0) * free)


def _neighbours_mean(
    surface: Surface, seams: Seams, operators: FloatArray, certainty: FloatArray, curved: IntArray
) -> tuple[FloatArray, FloatArray]:
    """Return the neighbours' mean shape operator (6, p), each counting as sure as it is, and their certainty (p,)."""
    count = len(surface.flat)
    total, weight, edges = np.zeros((6, count)), np.zeros(count), np.zeros(count)
    for k in range(3):
        rims = 3 * curved + k
        rims = rims[seams.peers[rims]]
        own, near = surface.patches[rims // 3], surface.patches[surface.mates[rims] // 3]
        sure = certainty[near]
        weight += np.bincount(own, sure, count)
        edges += np.bincount(own, minlength=count)
        for column, values in enumerate(gathered(operators, near)):
            total[column] += np.bincount(own, sure * values, count)
    return total / np.maximum(weight, 1e-300), weight / np.maximum(edges, 1)
