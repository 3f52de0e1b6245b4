"""The two calls that restore curvature, and what they answer."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.errors import ValueRefused
from core.mesh.curvature.bent import bent_sums, displacements, dome_sums, flat_sums
from core.mesh.curvature.bulge import Bulges, bulges, flattened
from core.mesh.curvature.coherence import broken_surfaces, creased
from core.mesh.curvature.fit import CHUNK, Chunk, chunk_of, part_of
from core.mesh.curvature.seams import CREASED, FLAT_BESIDE_ROUND, ROUND_BESIDE_FLAT, Seams, classify
from core.mesh.curvature.surface import Surface, patch_forms, survey
from core.mesh.curvature.vectors import dot, gathered
from core.mesh.weld import weld_exactly
from core.moments import Moments
from core.progress import Progress

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray, IntArray

# What may be left of a facet's own correction: a share for its turn squared (the next term of the series; the largest
# factor met on bodies with exact values is 0.6), a floor for the weak pulls in the fit and a share of what its edges'
# two triangles disagree about.
LEFT_PER_TURN_SQUARED: Final = 0.6
LEFT_FLOOR: Final = 0.03
LEFT_OF_DISPUTE: Final = 0.2

# From the first turn on, a facet may belong to a true prism; at the second one nothing speaks for the round any more.
DOUBT_FROM, DOUBT_FULL = np.radians(20.0), np.radians(30.0)

# An edge that turns by less than this and was kept sharp is worth a look: a coarse round of up to 6 facets a turn.
NEARLY_SHARP: Final = np.radians(61.0)


@dataclass(frozen=True)
class Left:
    """What may be left of the error, relative to the restored value.

    Attributes:
        volume: of the volume.
        inertia: of the trace of the inertia tensor about the centre.
    """

    volume: float
    inertia: float


@dataclass(frozen=True, eq=False)
class Restored:
    """A body's moments at unit density with its curvature restored, in the units of its points.

    Attributes:
        moments: mass (= volume), centre and spread with the curvature restored.
        faceted: the same of the mesh as it is; the very same object as moments where nothing was restored.
        left: an estimate of the error that remains in moments. It adds up, facet by facet, a share of the facet's own
            correction: a floor, the square of how far its edges turn (the term after the one that is restored), and
            how far both sides of its edges disagree. The whole correction counts where facets turn by 30° and
            more (a part of it from 20° on): a prism of twelve sides and a cylinder in twelve facets are the same
            mesh, and if the prism is meant, the correction itself is the error. Edges kept sharp count
            nothing: a coarse round that was cut unevenly may be among them, and kept_sharp counts them.
        round_facets: how many triangles belong to rounds.
        smooth_edges: how many edges were found to run across or along a round.
        kept_sharp: how many edges turn by less than 61° and were kept sharp: bevels, or the corners of a
            prism, or a very coarse round.
    """

    moments: Moments
    faceted: Moments
    left: Left
    round_facets: int
    smooth_edges: int
    kept_sharp: int


def restore(points: ArrayLike, corners: ArrayLike, progress: Progress | None = None) -> Restored:
    """Return the moments of the body behind a closed, welded mesh, with an estimate of what is left.

    Edges where normals turn by 40° or more are creases (a hexagon turns by 60°, an octagon by 45°). So are smaller
    turns where the surface does not go on bending beyond the next edge: bevels, low ridges and lead-in chamfers stay
    sharp, and flats that run tangent into a round stay flat. True prisms of up to nine sides stay exactly as they
    are. From ten sides on, a prism and a coarse cylinder are the same mesh; it is taken for the cylinder, and `left`
    holds the whole correction.

    A smooth surface whose facets contradict each other (the hull of random points, a very coarse free form) stays
    faceted too. In a body whose convex and concave rounds happen to balance, mending only some of them can leave the
    total further off than it was; that was met once, on a coarse turned vase whose edges were mostly kept sharp.

    Args:
        points: (n, 3) in any length unit.
        corners: (m, 3) indices of each triangle's corners, consistently wound. An edge that is not shared by exactly
            two triangles counts as a crease, and stays where it is.
        progress: counts triangles; stops the work when cancelled.

    Raises:
        ValueRefused: other shapes, no triangle, coordinates that are not finite, or a body without volume.
        Cancelled: progress was cancelled.

    >>> from math import cos, pi, sin
    >>> ring = [(cos(2 * pi * k / 24), sin(2 * pi * k / 24), z) for z in (0, 1) for k in range(24)]
    >>> wall = [(k, (k + 1) % 24, 24 + k) for k in range(24)]
    >>> wall += [((k + 1) % 24, 24 + (k + 1) % 24, 24 + k) for k in range(24)]
    >>> caps = [(0, k + 1, k) for k in range(1, 23)] + [(24, 24 + k, 25 + k) for k in range(1, 23)]
    >>> cylinder = restore(ring, wall + caps)
    >>> round(float(cylinder.faceted.mass / pi), 4), round(float(cylinder.moments.mass / pi), 4)
    (0.9886, 1.0)
    """
    where, triangles = _checked(points, corners)
    tracker = progress or Progress("restoring curvature")
    tracker.begin(6 * len(triangles))
    surface = survey(where, triangles)
    tracker.advance(len(triangles))
    forms = patch_forms(surface)
    seams = classify(surface, forms)
    tracker.advance(len(triangles))
    found = bulges(surface, forms, seams, tracker)
    broken = broken_surfaces(surface, seams, found.heights)
    if broken.any():
        seams, found = creased(seams, broken), flattened(found, broken)
    return _summed(surface, seams, found, tracker)


def restore_triangles(triangles: ArrayLike, progress: Progress | None = None) -> Restored:
    """Return restore() of triangles (n, 3, 3), welded where their corners agree bit for bit (−0.0 being 0.0)."""
    array = np.asarray(triangles, dtype=np.float64)
    if array.shape[1:] != (3, 3):
        raise ValueRefused("a mesh needs triangles of three points", read=f"an array of shape {array.shape}")
    return restore(*weld_exactly(array), progress)


def _checked(points: ArrayLike, corners: ArrayLike) -> tuple[FloatArray, IntArray]:
    where, triangles = np.asarray(points, dtype=np.float64), np.asarray(corners, dtype=np.int64)
    if where.shape[1:] != (3,) or triangles.shape[1:] != (3,):
        raise ValueRefused(
            "a mesh needs points (n, 3) and corners (m, 3)", read=f"shapes {where.shape} and {triangles.shape}"
        )
    if len(triangles) == 0:
        raise ValueRefused("the mesh is empty")
    if triangles.min() < 0 or triangles.max() >= len(where):
        raise ValueRefused("a triangle names a point that is not there", read=f"index {triangles.max()}")
    if not np.isfinite(where).all():
        raise ValueRefused("a coordinate is not a finite number")
    return where, triangles


class _Sums:
    """Volume, first and second moment about a reference point, with what may be left of the error."""

    def __init__(self) -> None:
        self.volume, self.first, self.second = 0.0, np.zeros(3), np.zeros((3, 3))

    def add(self, sums: tuple[float, FloatArray, FloatArray], sign: float = 1.0) -> None:
        self.volume += sign * sums[0]
        self.first += sign * sums[1]
        self.second += sign * sums[2]

    def moments(self, reference: FloatArray) -> Moments:
        lever = self.first / self.volume
        return Moments(self.volume, reference + lever, self.second - self.volume * np.outer(lever, lever))


def _summed(surface: Surface, seams: Seams, found: Bulges, progress: Progress) -> Restored:
    """Integrate both surfaces: the flat triangles, and the bent ones in their place."""
    reference = surface.points[surface.corners[0, 0]]
    flat, more = _Sums(), _Sums()
    doubts, places = [], []
    for start in range(0, len(surface.corners), CHUNK):
        chunk = chunk_of(surface, np.arange(start, min(start + CHUNK, len(surface.corners))))
        corners = _seen_from(reference, chunk)
        as_it_is = flat_sums(corners)
        flat.add(as_it_is)
        moved = displacements(surface, seams, found.heights, chunk)
        bent = (moved != 0).any(axis=(0, 1))
        progress.advance(len(bent))
        if not bent.all():
            chunk, moved = part_of(chunk, bent), moved.compress(bent, axis=2)
            corners = _seen_from(reference, chunk)
            as_it_is = flat_sums(corners)
        if len(chunk.triangles):
            more.add(bent_sums(corners, moved))
            more.add(as_it_is, -1.0)
            doubts.append(_doubts(surface, seams, found, chunk, moved))
            places.append((corners[0] + corners[1] + corners[2]) / 3)
    if flat.volume == 0:
        raise ValueRefused("the mesh encloses no volume", remedy="Check that it is closed and wound one way")
    faceted = flat.moments(reference)
    if not doubts:
        return Restored(faceted, faceted, Left(0.0, 0.0), 0, 0, _kept_sharp(surface, seams))
    for dome in found.domes:
        corners = _seen_from(reference, chunk_of(surface, dome.triangles))
        more.add(dome_sums(corners, dome, gathered(found.heights, dome.triangles)))
    flat.add((more.volume, more.first, more.second))
    moments = flat.moments(reference)
    left = _left(moments, reference, np.concatenate(doubts), np.concatenate(places, axis=1))
    smooth = seams.peers | (seams.kinds == ROUND_BESIDE_FLAT) | (seams.kinds == FLAT_BESIDE_ROUND)
    return Restored(moments, faceted, left, sum(map(len, doubts)), int(smooth.sum()) // 2, _kept_sharp(surface, seams))


def _seen_from(reference: FloatArray, chunk: Chunk) -> list[FloatArray]:
    return [corner - reference[:, None] for corner in chunk.corners]


def _doubts(surface: Surface, seams: Seams, found: Bulges, chunk: Chunk, moved: FloatArray) -> FloatArray:
    """Return how much of what each triangle's bend adds to the volume may be wrong (n,)."""
    shift, turn, dispute = np.zeros((3, len(chunk.triangles)))
    heights = found.heights.ravel()
    for k in range(3):
        half_edges = 3 * chunk.triangles + k
        smooth, peers = seams.kinds[half_edges] != CREASED, seams.peers[half_edges]
        shift += dot(moved[k], chunk.normals)
        np.maximum(turn, np.abs(surface.turns[half_edges]) * smooth, out=turn)
        dispute += np.abs(heights[half_edges] - heights[surface.mates[half_edges]]) * peers
    prism = np.clip((turn - DOUBT_FROM) / (DOUBT_FULL - DOUBT_FROM), 0, 1)
    share = np.maximum(LEFT_FLOOR + LEFT_PER_TURN_SQUARED * turn**2, prism)
    return np.asarray((np.abs(shift) * share + 0.5 * LEFT_OF_DISPUTE * dispute) * chunk.double_area / 6)


def _left(moments: Moments, reference: FloatArray, doubts: FloatArray, places: FloatArray) -> Left:
    lever = places - (moments.centre - reference)[:, None]
    second = float(doubts @ dot(lever, lever))
    return Left(float(doubts.sum() / abs(moments.mass)), second / abs(float(np.trace(moments.spread))))


def _kept_sharp(surface: Surface, seams: Seams) -> int:
    turn = np.abs(surface.turns)
    return int(np.count_nonzero((seams.kinds == CREASED) & (turn > 0) & (turn < NEARLY_SHARP))) // 2
