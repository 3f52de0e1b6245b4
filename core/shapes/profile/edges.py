"""The edges of a plane outline: straight lines and circular arcs, as arrays over a whole loop or a batch of loops.

An edge runs from start to end. Its bulge is tan(θ/4) of the arc's angle θ: 0 for a straight edge, positive where
the arc turns left (counter-clockwise) on its way, ±1 for a half circle; arcs are half circles at most.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Self

import numpy as np

from core.arrays import ArrayLike, BoolArray, FloatArray, frozen

# An arc is drawn in pieces of this angle, or of equal parts of it: 24 to the circle.
PIECE = np.pi / 12
PIECES_PER_CIRCLE = 24

# What two roundings leave of an edge, relative to it, is nothing but round-off below this.
USED_UP = 1e-12

# Round-off in an arc's angle: an arc this little over a whole number of pieces takes no further one.
ANGLE_SLACK = 1e-9


@dataclass(frozen=True, eq=False)
class Edges:
    """The edges of one loop, in order; the leading axes (...) are a batch of loops.

    Attributes:
        start: (..., n, 2) m.
        end: (..., n, 2) m; of the last edge, the start of the first.
        bulge: (..., n) tan(θ/4), from −1 to 1. Edges of no length are harmless.
    """

    start: FloatArray
    end: FloatArray
    bulge: FloatArray

    def __init__(self, start: ArrayLike, end: ArrayLike, bulge: ArrayLike) -> None:
        object.__setattr__(self, "start", frozen(start))
        object.__setattr__(self, "end", frozen(end))
        object.__setattr__(self, "bulge", frozen(bulge))

    @classmethod
    def of_corners(cls, corners: ArrayLike, radii: ArrayLike = 0.0, bulge: ArrayLike = 0.0) -> Self:
        """Return the loop through corners, each rounded by an arc that touches both of its edges.

        Args:
            corners: (..., n, 2) m, no two neighbours equal.
            radii: (..., n) m of the roundings; 0 leaves a corner sharp. Only corners between straight edges.
            bulge: (..., n) of the edge from each corner to the next.
        """
        points = np.asarray(corners, dtype=float)
        size = np.broadcast_shapes(points.shape[:-1], np.shape(radii), np.shape(bulge))
        points = np.broadcast_to(points, (*size, 2))
        out = _directions(points)
        tangent, turn = tangents(points, np.broadcast_to(radii, size))
        first = points - tangent[..., None] * np.roll(out, 1, axis=-2)
        last = points + tangent[..., None] * out
        first, last = _joined(points, tangent, first, last)
        start = np.stack([first, last], axis=-2).reshape(*size[:-1], -1, 2)
        end = np.stack([last, np.roll(first, -1, axis=-2)], axis=-2).reshape(*size[:-1], -1, 2)
        rounded = np.where(tangent == 0, 0.0, turn)
        rounding = rounded / (1 + np.hypot(1, rounded))
        between = np.broadcast_to(np.asarray(bulge, dtype=float), size)
        return cls(start, end, np.stack([rounding, between], axis=-1).reshape(*size[:-1], -1))

    @classmethod
    def circle(cls, radius: ArrayLike) -> Self:
        """Return a circle (...) about the origin, counter-clockwise, as two half circles; radius in m."""
        right = np.stack([np.asarray(radius, dtype=float), np.zeros(np.shape(radius))], axis=-1)
        start = np.stack([right, -right], axis=-2)
        return cls(start, -start, np.ones(start.shape[:-1]))

    @property
    def chord(self) -> FloatArray:
        """From start to end, (..., n, 2) m."""
        return np.asarray(self.end - self.start)

    @property
    def length(self) -> FloatArray:
        """Length (..., n) m along the edge: R·θ of an arc, in the form chord·(1 + b²)·atan(b)/b."""
        b = np.abs(self.bulge)
        with np.errstate(invalid="ignore", divide="ignore"):
            stretch = np.where(b > 0, (1 + b * b) * np.arctan(b) / b, 1.0)
        return np.asarray(np.hypot(self.chord[..., 0], self.chord[..., 1]) * stretch)

    def reversed(self) -> Self:
        """Return the same loops, run through the other way."""
        return type(self)(self.end[..., ::-1, :], self.start[..., ::-1, :], -self.bulge[..., ::-1])

    def mirrored(self) -> Self:
        """Return the mirror images in the y axis, run through in the same sense as before."""
        flip = np.array([-1.0, 1.0])
        return type(self)(self.start * flip, self.end * flip, -self.bulge).reversed()

    def kept(self, which: BoolArray) -> Self:
        """Return some edges (n) of a single loop."""
        return type(self)(self.start[which], self.end[which], self.bulge[which])

    def cut(self, parts: ArrayLike) -> Self:
        """Return a single loop with its edges (n) cut into so many equal parts each."""
        number = np.broadcast_to(np.asarray(parts, dtype=np.int64), self.bulge.shape)
        edge = np.repeat(np.arange(len(number)), number)
        place = np.arange(len(edge)) - np.repeat(np.cumsum(number) - number, number)
        start = self.points_at(edge, place / number[edge])
        return type(self)(start, np.roll(start, -1, axis=0), np.tan(np.arctan(self.bulge[edge]) / number[edge]))

    def points_at(self, edge: ArrayLike, share: ArrayLike) -> FloatArray:
        """Return points (k, 2) m on edges of a single loop, at a share (k) from 0 to 1 of their length."""
        which = np.asarray(edge, dtype=np.int64)
        b, half = self.bulge[which], self.chord[which] / 2
        along = 2 * np.asarray(share, dtype=float) - 1
        # With τ = tan(t/2)/b for the angle t from the arc's middle, the arc is a quotient of two parabolas.
        with np.errstate(invalid="ignore", divide="ignore"):
            tau = np.where(b == 0, along, np.tan(np.arctan(b) * along) / b)
        below = 1 + (b * tau) ** 2
        right = np.stack([half[:, 1], -half[:, 0]], axis=-1)
        middle = self.start[which] + half
        points = middle + ((1 + b * b) * tau / below)[:, None] * half + (b * (1 - tau**2) / below)[:, None] * right
        return np.where((np.asarray(share) == 0)[:, None], self.start[which], points)

    def line(self, steps: int) -> FloatArray:
        """Return a polygon (k, 2) m of a single loop, its corners on the true outline, to draw.

        A full circle has at least `steps` corners: each 15° of an arc, or a part of it, is drawn in steps/24
        pieces, so that twice the steps halve every piece.
        """
        edges = self.kept(np.any(self.start != self.end, axis=-1))
        pieces = np.ceil(4 * np.arctan(np.abs(edges.bulge)) / PIECE - ANGLE_SLACK).astype(np.int64)
        return edges.cut(np.maximum(pieces * -(-steps // PIECES_PER_CIRCLE), 1)).start

    def lowest_x(self) -> FloatArray:
        """Return the smallest x (n) m on each edge of a single loop, of an arc including its leftmost point."""
        ends = np.minimum(self.start[:, 0], self.end[:, 0])
        b = self.bulge
        with np.errstate(invalid="ignore", divide="ignore"):
            # Where the tangent is upright: dx/dτ = 0 for x = (cx·(1+b²)·τ + cy·b·(1−τ²))/(1+b²τ²).
            cx, cy = self.chord.T / 2
            spots = np.stack(_upright(cx, b * cy, b * b))
        inside = (b != 0) & (np.abs(spots) < 1)
        tau = np.where(inside, spots, 0.0)
        below = 1 + (b * tau) ** 2
        x = self.start[:, 0] + cx + ((1 + b * b) * tau * cx + b * (1 - tau**2) * cy) / below
        return np.asarray(np.minimum(ends, np.where(inside, x, np.inf).min(axis=0)))


def tangents(corners: ArrayLike, radii: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return how far from each corner its rounding touches the edges, (..., n) m, and tan(turn/2) (..., n).

    Args:
        corners: (..., n, 2) m, no two neighbours equal.
        radii: (..., n) m.
    """
    out = _directions(np.asarray(corners, dtype=float))
    into = np.roll(out, 1, axis=-2)
    cross = into[..., 0] * out[..., 1] - into[..., 1] * out[..., 0]
    dot = (into * out).sum(axis=-1)
    # tan(turn/2), whose two forms are exact where the other one is not.
    with np.errstate(divide="ignore", invalid="ignore"):
        turn = np.where(dot > 0, cross / (1 + dot), (1 - dot) / cross)
    radius = np.asarray(radii, dtype=float)
    return radius * np.abs(np.where(radius == 0, 0.0, turn)), turn


def _joined(
    corners: FloatArray, tangent: FloatArray, first: FloatArray, last: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return where each rounding begins and ends, (..., n, 2) m, roundings that meet on an edge in one point."""
    chord = np.roll(corners, -1, axis=-2) - corners
    length = np.hypot(chord[..., 0], chord[..., 1])
    meets = (length - tangent - np.roll(tangent, -1, axis=-1) <= USED_UP * length)[..., None]
    middle = (last + np.roll(first, -1, axis=-2)) / 2
    first = np.where(np.roll(meets, 1, axis=-2), np.roll(middle, 1, axis=-2), first)
    return first, np.where(meets, middle, last)


def _directions(corners: FloatArray) -> FloatArray:
    """Return the unit vectors (..., n, 2) from each corner to the next."""
    chord = np.roll(corners, -1, axis=-2) - corners
    return np.asarray(chord / np.hypot(chord[..., 0], chord[..., 1])[..., None])


def _upright(cx: FloatArray, by: FloatArray, bb: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return both τ at which an arc runs upright: cx·(1 − b²τ²) = 2·b·cy·τ."""
    root = np.hypot(by, np.sqrt(bb) * cx)
    reach = by + np.where(by < 0, -root, root)
    return cx / reach, -reach / (bb * cx)
