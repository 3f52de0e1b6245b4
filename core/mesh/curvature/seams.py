"""Which edges run across a smooth surface, which are creases, and where a flat runs tangent into a round.

An edge is smooth only where the surface goes on bending beyond the next edge as it bends here. So a ridge between
two flats, a bevel and a lead-in chamfer stay sharp, however little they turn.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.surface import conormals, patch_widths
from core.mesh.curvature.vectors import dot, gathered, length

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.curvature.surface import PatchForms, Surface

# Normals turning by this or more make a crease: a regular nonagon turns by 40°.
CREASE: Final = float(np.radians(39.9))

# A neighbour this many times as wide across the edge is a flat (or straight) that runs tangent into a round.
WIDE: Final = 3.0

# From this ratio of widths on, a plane patch of several triangles is taken for a flat when its edge is compared with
# the one across the round: rounds are cut into even steps.
STEPPED: Final = 1.5

# How far the curvature at an edge and beyond the next edge may differ and still be one surface, as the logarithm of a
# factor, by how far the edge turns: coarse steps are only made along arcs, and those are even.
TURNS: Final = (float(np.radians(10)), float(np.radians(25)))
ALIKE: Final = (float(np.log(3.0)), float(np.log(1.5)))

# Share of a patch's far side that must be smooth to speak for the edge.
FAR_SIDE: Final = 0.3

# The half step at the end of a round is believed where it fits this well and the full step misses by the other.
HALF_STEP_FITS: Final = float(np.log(1.25))
FULL_STEP_MISSES: Final = float(np.log(1.5))

# In a mesh of lone triangles, an edge may turn this many times as much as the others around it.
LONE_TURN: Final = 2.5

# Where curvature changes its sign the turns are small beside those across: at most this share of them.
SMALL_TURN: Final = 0.35

# Rim edges of a patch that is one cell of a grid.
QUAD: Final = 4

# Smooth edges that two lone triangles need around the one in question.
ENOUGH: Final = 2

# Edges of a patch whose outward directions are this near to a right angle are beside each other, not opposite.
OBLIQUE: Final = 0.3

# Rim edges that are looked at together: they stay in the processor's cache.
CHUNK: Final = 8_000

# Edges of one patch that are compared with each other; patches with more are flats in all but odd cases.
MOST_COMPARED: Final = 24

# What an edge tells the triangle on its side about its curvature:
# nothing; that the neighbour's far corner lies on the same surface; the slope there, the neighbour being another strip
# of the same round, a flat, or a round beside this flat; that the neighbour lies in the same plane.
CREASED, CORNER, STRIP, ROUND_BESIDE_FLAT, FLAT_BESIDE_ROUND, COPLANAR = (np.int8(kind) for kind in range(6))


@dataclass(frozen=True, eq=False)
class Seams:
    """What the edges of a mesh say.

    Attributes:
        kinds: (3m,) one of CREASED, CORNER, STRIP and so on, for every half-edge.
        slopes: (3m,) rad, the part of the edge's turn that lies on the triangle's own side, where it is known.
        peers: (3m,) which half-edges run across one smooth round.
    """

    kinds: NDArray[np.int8]
    slopes: FloatArray
    peers: BoolArray


@dataclass(frozen=True, eq=False)
class _Rim:
    """The half-edges (r,) on the rims of plane patches, sorted by patch.

    Attributes:
        half_edges, patch, beyond: which, of which patch, next to which (−1: none).
        out: (3, r) unit vectors across the edge, outward. length, turn: of the edge.
        mate: position in this list of the mate, or of itself where there is none.
        smooth: could be smooth: shared by two and no crease.
        width, width_beyond: of the own and the other patch across the edge.
        first, count: where the patch's half-edges start in this list, and how many there are.
    """

    half_edges: IntArray
    patch: IntArray
    beyond: IntArray
    out: FloatArray
    length: FloatArray
    turn: FloatArray
    mate: IntArray
    smooth: BoolArray
    width: FloatArray
    width_beyond: FloatArray
    first: IntArray
    count: IntArray


def classify(surface: Surface, forms: PatchForms) -> Seams:
    """Return what every edge of a mesh says about the curvature of the triangles beside it."""
    kinds, slopes = np.zeros(len(surface.mates), dtype=np.int8), np.zeros(len(surface.mates))
    kinds[surface.coplanar] = COPLANAR
    rim = _rim(surface, forms)
    if not rim.smooth.any():
        return Seams(kinds, slopes, np.zeros(len(kinds), dtype=bool))
    ok, flat_beyond = _spoken_for(surface, rim)
    mate = rim.mate
    believed = _carried(surface, rim, ok, _among_lone(surface, rim))
    believed &= ~_at_corners(surface, rim, believed)
    tangent = flat_beyond & ok & ~(flat_beyond[mate] & ok[mate])
    strips = ~surface.lone[rim.patch] & ~surface.lone[rim.beyond]
    found = np.where(believed, np.where(strips, STRIP, CORNER), CREASED)
    found[believed & tangent] = ROUND_BESIDE_FLAT
    found[believed & tangent[mate]] = FLAT_BESIDE_ROUND
    kinds[rim.half_edges] = found
    both = np.maximum(rim.width + rim.width_beyond, 1e-300)
    share = np.where(found == STRIP, rim.width / both, found == ROUND_BESIDE_FLAT)
    slopes[rim.half_edges] = rim.turn * share
    return Seams(kinds, slopes, (kinds == CORNER) | (kinds == STRIP))


def _rim(surface: Surface, forms: PatchForms) -> _Rim:
    owner = np.repeat(surface.patches, 3)
    other = np.where(surface.mates >= 0, owner[surface.mates], -1)
    half_edges = np.flatnonzero(owner != other)
    half_edges = half_edges[np.argsort(owner[half_edges], kind="stable")]
    mates = surface.mates[half_edges]
    place = np.full(len(owner), -1)
    place[half_edges] = np.arange(len(half_edges))
    turn = surface.turns[half_edges]
    smooth = (mates >= 0) & (np.abs(turn) < CREASE) & (turn != 0)
    smooth &= (surface.areas[half_edges // 3] > 0) & (surface.areas[mates // 3] > 0)
    mate = np.where(mates >= 0, place[mates], np.arange(len(half_edges)))
    patch = owner[half_edges]
    out, lengths, width = np.empty((3, len(patch))), np.empty(len(patch)), np.empty(len(patch))
    for start in range(0, len(patch), CHUNK):
        part = slice(start, start + CHUNK)
        out[:, part], lengths[part] = conormals(surface, half_edges[part])
        width[part] = patch_widths(gathered(forms.spreads, patch[part]), out[:, part])
    count = np.bincount(patch, minlength=len(surface.flat))
    first = np.cumsum(count) - count
    return _Rim(half_edges, patch, other[half_edges], out, lengths, turn, mate, smooth, width, width[mate],
                first[patch], count[patch])


def _spoken_for(surface: Surface, rim: _Rim) -> tuple[BoolArray, BoolArray]:
    """Say where the own patch bends on beyond its far side as it does here, and where it calls the other flat."""
    count = len(rim.patch)
    here, (wide, ok, flat_beyond, doubtful) = np.empty(count), np.zeros((4, count), dtype=bool)
    for start in range(0, count, CHUNK):
        part = slice(start, start + CHUNK)
        full, half = _bends(surface, rim, part)
        wide[part] = rim.width_beyond[part] > WIDE * rim.width[part]
        stepped = (rim.width_beyond[part] > STEPPED * rim.width[part]) & ~surface.lone[rim.beyond[part]]
        here[part] = np.where(wide[part] | stepped, half, full)
    for start in range(0, count, CHUNK):
        part = slice(start, start + CHUNK)
        ok[part], flat_beyond[part], doubtful[part] = _verdicts(surface, rim, here, wide, part)
    small = np.zeros_like(ok)
    at = np.flatnonzero(doubtful)
    small[at] = _small_turns(rim, at)
    return ok | (small & small[rim.mate]), flat_beyond & ok


def _bends(surface: Surface, rim: _Rim, part: slice) -> tuple[FloatArray, FloatArray]:
    """Return the curvatures that the turns mean if both patches are steps of one round, and if the other is flat."""
    floor = 1e-12 * surface.size
    turn, width = 2 * rim.turn[part], rim.width[part]
    return turn / np.maximum(width + rim.width_beyond[part], floor), turn / np.maximum(width, floor)


def _verdicts(
    surface: Surface, rim: _Rim, here: FloatArray, wide: BoolArray, part: slice
) -> tuple[BoolArray, BoolArray, BoolArray]:
    """Return for a part of the rim edges: spoken for; the other patch called flat; open, the far side being smooth."""
    full, half = _bends(surface, rim, part)
    patch, beyond = rim.patch[part], rim.beyond[part]
    share, bend = _far_side(rim, here, wide, part)
    full_miss, half_miss = _miss(full, bend), _miss(half, bend)
    narrow = rim.width[part] > WIDE * rim.width_beyond[part]
    lone = surface.lone[patch] & surface.lone[beyond]
    half_fits = (half_miss < HALF_STEP_FITS) & (full_miss > FULL_STEP_MISSES)
    flat_beyond = (surface.flat[beyond] | wide[part] | half_fits) & ~surface.lone[beyond] | (wide[part] & ~lone)
    miss = np.where(flat_beyond, half_miss, full_miss)
    smooth = rim.smooth[part]
    ok = smooth & (miss < np.interp(np.abs(rim.turn[part]), TURNS, ALIKE)) & (share > FAR_SIDE)
    ok &= ~narrow & ~surface.flat[patch]
    return ok, flat_beyond, smooth & ~ok & ~wide[part] & ~narrow & (share > 1 - FAR_SIDE) & (rim.count[part] <= QUAD)


def _small_turns(rim: _Rim, at: IntArray) -> BoolArray:
    """Say for the rim edges at (n,) whether they and those opposite turn little beside their patch's other edges.

    There the curvature across the edge passes through zero, and the ratio of two small turns says nothing.
    """
    largest, opposite = np.zeros((2, len(at)))
    for step in range(1, QUAD):
        other, facing = _facing(rim, at, step)
        turn = np.abs(rim.turn[other]) * (rim.smooth[other] & (rim.beyond[other] != rim.beyond[at]))
        np.maximum(largest, turn, out=largest)
        np.maximum(opposite, turn * (facing > 0), out=opposite)
    return (np.abs(rim.turn[at]) < SMALL_TURN * largest) & (opposite < SMALL_TURN * largest)


def _facing(rim: _Rim, at: IntArray, step: int) -> tuple[IntArray, FloatArray]:
    """Return the step-th next rim edge of the same patch, and how squarely it faces: 1 opposite, 0 beside."""
    start = rim.first[at]
    other = start + (at - start + step) % rim.count[at]
    facing = -dot(rim.out.take(at, axis=1), rim.out.take(other, axis=1))
    return other, facing * (facing > OBLIQUE) * (rim.beyond[other] != rim.beyond[at])


def _among_lone(surface: Surface, rim: _Rim) -> BoolArray:
    """Say which edges between lone triangles turn no more than the edges around them.

    Those are the other edges of both triangles, and the edges of the triangles beyond those.
    """
    lone = surface.lone[rim.patch]
    if not lone.any():
        return lone
    at = np.arange(len(rim.patch))
    others = [np.where(lone, rim.first + (at - rim.first + step) % 3, at) for step in (1, 2)]
    turn = np.where(rim.smooth & lone, np.abs(rim.turn), 0.0)
    nearby = np.maximum(turn[others[0]], turn[others[1]])
    beyond = np.where(rim.smooth & lone[rim.mate], nearby[rim.mate], 0.0)
    around = np.maximum(nearby, np.maximum(beyond[others[0]], beyond[others[1]]))
    sides = (turn[others[0]] > 0).astype(int) + (turn[others[1]] > 0)
    calm = np.abs(rim.turn) <= LONE_TURN * np.maximum(around, around[rim.mate])
    return np.asarray(rim.smooth & lone & lone[rim.mate] & calm & (sides + sides[rim.mate] >= ENOUGH))


def _carried(surface: Surface, rim: _Rim, ok: BoolArray, calm: BoolArray) -> BoolArray:
    """Return which edges are smooth: both sides speak for them, or one does whose far side is such an edge.

    So a round between two creases needs four facets: three may well be three flats. Lone triangles have no far side.
    """
    either = rim.smooth & (ok | ok[rim.mate] | calm)
    sure = either & ((ok & ok[rim.mate]) | surface.lone[rim.patch] | surface.lone[rim.beyond])
    at = np.flatnonzero(either & ~sure & ok & (rim.count <= MOST_COMPARED))
    backed = np.zeros(len(ok), dtype=bool)
    for step in range(1, MOST_COMPARED):
        at = at[rim.count[at] > step]
        other, facing = _facing(rim, at, step)
        backed[at] |= sure[other] & (facing > 0)
    return sure | backed | (either & backed[rim.mate])


def _at_corners(surface: Surface, rim: _Rim, believed: BoolArray) -> BoolArray:
    """Return the smooth edges that end where a crease turns a corner: the ridges of a pyramid or a tapered block.

    The normals of a flat pyramid turn little from side to side, but its base turns by 90°. An edge that also ends on
    a crease without a corner stays smooth.
    """
    flat = surface.corners.ravel()
    begin = flat[rim.half_edges // 3 * 3 + (rim.half_edges % 3 + 1) % 3]
    end = flat[rim.half_edges // 3 * 3 + (rim.half_edges % 3 + 2) % 3]
    on_crease = np.zeros(len(surface.points), dtype=bool)
    on_crease[begin[~believed]] = True
    corner, plain = np.zeros((2, len(begin)), dtype=bool)
    at = np.flatnonzero(believed & on_crease[end])
    if not len(at):
        return corner
    count = len(surface.points)
    after = _found(rim.patch * count + begin, rim.patch[at] * count + end[at])
    before = _found(rim.patch * count + end, rim.beyond[at] * count + end[at])
    both = ~believed[after] & ~believed[before]
    after, before, at = after[both], before[both], at[both]
    arriving = gathered(surface.points, end[before]) - gathered(surface.points, begin[before])
    leaving = gathered(surface.points, end[after]) - gathered(surface.points, begin[after])
    turned = dot(arriving, leaving) <= np.cos(CREASE) * length(arriving) * length(leaving)
    corner[at[turned]] = True
    plain[at[~turned]] = True
    corner |= corner[rim.mate]
    return corner & ~(plain | plain[rim.mate])


def _found(keys: IntArray, wanted: IntArray) -> IntArray:
    """Return the position of each wanted key among the keys, which hold it."""
    order = np.argsort(keys, kind="stable")
    return order[np.searchsorted(keys, wanted, sorter=order)]


def _miss(here: FloatArray, beyond: FloatArray) -> FloatArray:
    """Return |log| of the ratio of two curvatures, infinite where their signs differ."""
    ratio = np.divide(here, beyond, out=np.zeros_like(here), where=here * beyond > 0)
    return np.abs(np.log(ratio, out=np.full_like(ratio, np.inf), where=ratio > 0))


def _far_side(rim: _Rim, here: FloatArray, wide: BoolArray, part: slice) -> tuple[FloatArray, FloatArray]:
    """Return the share of its patch's opposite edges that is smooth, and their mean curvature.

    An edge with a wide flat beyond hears only those that have none.
    """
    start, stop, _ = part.indices(len(rim.patch))
    everything, lengths, bends = np.zeros((3, stop - start))
    at = start + np.flatnonzero(rim.smooth[part] & (rim.count[part] <= MOST_COMPARED))
    for step in range(1, MOST_COMPARED):
        at = at[rim.count[at] > step]
        if not len(at):
            break
        other, facing = _facing(rim, at, step)
        weight = facing * facing * rim.length[other]
        everything[at - start] += weight
        weight *= rim.smooth[other] & ~(wide[at] & wide[other])
        lengths[at - start] += weight
        bends[at - start] += weight * here[other]
    return lengths / np.where(everything > 0, everything, 1.0), bends / np.maximum(lengths, 1e-300)
