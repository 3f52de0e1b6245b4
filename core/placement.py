"""Where a body stands in a frame, and how equal bodies repeat: rigid placement, mirror, ring and row.

A placement named tf_group_part carries points of the part into the group: p_group = tf_group_part.apply(p_part).
Turns are about the fixed axes of the outer frame, x first, then y, then z: R = Rz·Ry·Rx.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import ClassVar, TypeAlias

import numpy as np

from core.arrays import ArrayLike, FloatArray, frozen, settled
from core.errors import ValueRefused
from core.moments import Moments, unit_vector

Triple: TypeAlias = tuple[float, float, float]

# Refused above this: nobody means it, and each copy costs a placement.
MOST_COPIES = 100_000

# rad: a span this near to a full turn is one (360° typed or converted).
_FULL_TURN_GAP = 1e-9

# Cosine of the turn about y below which y counts as ±90°.
_UPRIGHT = 1e-12

# Cosine of half the angle below which a turn counts as half a turn, and sine below which directions are parallel.
_HALF_TURN_GAP = 1e-15
_PARALLEL = 1e-15


@dataclass(frozen=True, eq=False)
class Placement:
    """A turn or mirror followed by a shift, or a batch of them: p_outer = turn·p_inner + shift.

    Attributes:
        turn: (..., 3, 3) orthogonal; its determinant is −1 where the placement mirrors.
        shift: (..., 3) m.
    """

    turn: FloatArray
    shift: FloatArray

    def __init__(self, turn: ArrayLike, shift: ArrayLike) -> None:
        object.__setattr__(self, "turn", frozen(turn))
        object.__setattr__(self, "shift", frozen(shift))

    @classmethod
    def identity(cls) -> Placement:
        """Return the placement that leaves every point where it is."""
        return cls(np.eye(3), np.zeros(3))

    @classmethod
    def about(cls, point: ArrayLike, direction: ArrayLike, angle: ArrayLike) -> Placement:
        """Return the turns by angles (...) rad about the axis through point (3,) m along direction (3,)."""
        turns, fixed = turn_about(direction, angle), np.asarray(point, dtype=float)
        return cls(turns, fixed - turns @ fixed)

    def __matmul__(self, inner: Placement) -> Placement:
        """Return the placement that does inner first: tf_a_c = tf_a_b @ tf_b_c."""
        return Placement(self.turn @ inner.turn, self.apply(inner.shift))

    def apply(self, points: ArrayLike) -> FloatArray:
        """Return the points (..., 3) m carried over; the batch of the placement broadcasts against theirs."""
        return np.asarray(np.einsum("...ij,...j->...i", self.turn, np.asarray(points, dtype=float)) + self.shift)

    def turn_only(self, directions: ArrayLike) -> FloatArray:
        """Return directions (..., 3) carried over, without the shift."""
        return np.asarray(np.einsum("...ij,...j->...i", self.turn, np.asarray(directions, dtype=float)))

    def inverse(self) -> Placement:
        """Return the placement that undoes this one."""
        back = np.swapaxes(self.turn, -1, -2)
        return Placement(back, -np.einsum("...ij,...j->...i", back, self.shift))

    @property
    def mirrors(self) -> bool:
        """Whether this single placement turns left into right."""
        return bool(np.linalg.det(self.turn) < 0)

    @property
    def matrix(self) -> FloatArray:
        """Homogeneous matrices (..., 4, 4) of the same placements."""
        matrix = np.zeros((*self.turn.shape[:-2], 4, 4))
        matrix[..., :3, :3], matrix[..., :3, 3], matrix[..., 3, 3] = self.turn, self.shift, 1.0
        return matrix

    def place(self, moments: Moments) -> Moments:
        """Return the moments (of the same batch, or of one body for all of it) of the body standing here."""
        return moments.mapped(self.turn, self.shift)


def turn_about(direction: ArrayLike, angle: ArrayLike) -> FloatArray:
    """Return the rotation matrices (..., 3, 3) about direction (3,) by angles (...) rad (Rodrigues' formula)."""
    unit, angles = unit_vector(direction), np.asarray(angle, dtype=float)[..., None, None]
    x, y, z = unit
    cross = np.array([[0.0, -z, y], [z, 0.0, -x], [-y, x, 0.0]])
    return np.asarray(np.eye(3) + np.sin(angles) * cross + (1 - np.cos(angles)) * (cross @ cross))


def matrix_of_turns(turns: ArrayLike) -> FloatArray:
    """Return Rz·Ry·Rx (3, 3) for turns (3,) rad about the fixed axes x, then y, then z."""
    x, y, z = (float(angle) for angle in np.asarray(turns, dtype=float))
    cx, sx, cy, sy, cz, sz = math.cos(x), math.sin(x), math.cos(y), math.sin(y), math.cos(z), math.sin(z)
    # Written out: a document of 10,000 parts asks for as many of them at once.
    return np.array([
        [cz * cy, cz * sy * sx - sz * cx, cz * sy * cx + sz * sx],
        [sz * cy, sz * sy * sx + cz * cx, sz * sy * cx - cz * sx],
        [-sy, cy * sx, cy * cx],
    ])


def turns_of_matrix(turn: ArrayLike) -> Triple:
    """Return the turns (x, y, z) rad that make a rotation matrix (3, 3); at y = ±90° the turn about x is 0."""
    matrix = np.asarray(turn, dtype=float)
    level = np.hypot(matrix[2, 1], matrix[2, 2])
    about_y = np.arctan2(-matrix[2, 0], level)
    about_x = np.arctan2(matrix[2, 1], matrix[2, 2]) if level > _UPRIGHT else 0.0
    # The turn about z is read after the one about x is undone: near y = ±90° the two blur, but never their sum.
    cosine, sine = np.cos(about_x), np.sin(about_x)
    about_z = np.arctan2(
        sine * matrix[0, 2] - cosine * matrix[0, 1], cosine * matrix[1, 1] - sine * matrix[1, 2]
    )
    return float(about_x), float(about_y), float(about_z)


def axis_and_angle_of(turn: ArrayLike) -> tuple[FloatArray, float]:
    """Return the axis (3,), of length one, and the angle from 0 to π rad of a rotation matrix (3, 3).

    Of no turn the axis is z; of half a turn its largest component is positive. Read from the unit quaternion, which
    is as exact near no turn and near half a turn as anywhere (Shepperd, J. Guidance and Control 1 (1978) 223).
    """
    matrix = np.asarray(turn, dtype=float)
    # Rows: 4·q·(w, x, y, z) for each component q of the quaternion; the row of the largest one is read.
    xx, yy, zz = matrix.diagonal()
    wx, wy, wz = matrix[2, 1] - matrix[1, 2], matrix[0, 2] - matrix[2, 0], matrix[1, 0] - matrix[0, 1]
    xy, xz, yz = matrix[0, 1] + matrix[1, 0], matrix[0, 2] + matrix[2, 0], matrix[1, 2] + matrix[2, 1]
    rows = np.array([
        [1 + xx + yy + zz, wx, wy, wz],
        [wx, 1 + xx - yy - zz, xy, xz],
        [wy, xy, 1 - xx + yy - zz, yz],
        [wz, xz, yz, 1 - xx - yy + zz],
    ])
    row = rows[rows.diagonal().argmax()]
    quaternion = row / np.linalg.norm(row)
    if quaternion[0] < 0:
        quaternion = -quaternion
    length = math.hypot(*quaternion[1:].tolist())
    if length == 0:
        return np.array([0.0, 0.0, 1.0]), 0.0
    axis = unit_vector(quaternion[1:])
    angle = 2 * math.atan2(length, float(quaternion[0]))
    if quaternion[0] <= _HALF_TURN_GAP and axis[np.abs(axis).argmax()] < 0:
        axis = -axis
    return axis, angle


def smallest_turn(start: ArrayLike, end: ArrayLike) -> FloatArray:
    """Return the rotation matrix (3, 3) of the smallest turn that carries one direction (3,) to another, any lengths.

    From a direction to its opposite it is half a turn about the axis, square to it, that is nearest to x, y or z.
    """
    one, other = unit_vector(start), unit_vector(end)
    normal, cosine = np.cross(one, other), float(one @ other)
    sine = float(np.linalg.norm(normal))
    if sine > _PARALLEL:
        return turn_about(normal, math.atan2(sine, cosine))
    if cosine > 0:
        return np.eye(3)
    helper = np.eye(3)[np.abs(one).argmin()]
    return turn_about(helper - (helper @ one) * one, math.pi)


@dataclass(frozen=True)
class Pose:
    """Where a part or group stands in the frame that holds it, as typed numbers.

    Attributes:
        position: of its origin, m.
        turns: rad, about the outer frame's axes x, then y, then z.
    """

    position: Triple = (0.0, 0.0, 0.0)
    turns: Triple = (0.0, 0.0, 0.0)

    @classmethod
    def of(cls, placement: Placement) -> Pose:
        """Return the pose that stands as a single placement does, which does not mirror; round-off is left out."""
        x, y, z = settled(placement.shift, np.abs(placement.shift).max()).tolist()
        a, b, c = settled(turns_of_matrix(placement.turn), np.pi).tolist()
        return cls((x, y, z), (a, b, c))

    @property
    def placement(self) -> Placement:
        """The placement tf_outer_inner."""
        return Placement(matrix_of_turns(self.turns) if any(self.turns) else np.eye(3), self.position)


@dataclass(frozen=True)
class Several:
    """Equal bodies at one place: a quantity whose spacing does not matter, or only one."""

    count: int = 1

    def __post_init__(self) -> None:
        _check_count(self.count)

    def placements(self, tf_outer_first: Placement) -> Placement:
        """Return the placements of all copies, a batch (count,)."""
        return _batch(tf_outer_first, self.count)


@dataclass(frozen=True)
class Ring:
    """Equal bodies on a pitch circle.

    Attributes:
        count: how many.
        point, direction: the ring's axis in the outer frame, m; direction of any length.
        start: rad, turn of the first copy away from the placed body.
        span: rad; a full turn spaces the copies span/count apart, a part of a turn span/(count−1).
        turning: whether the copies turn with the ring, or all keep the first one's orientation.
    """

    count: int = 6
    point: Triple = (0.0, 0.0, 0.0)
    direction: Triple = (0.0, 0.0, 1.0)
    start: float = 0.0
    span: float = 2 * np.pi
    turning: bool = True

    def __post_init__(self) -> None:
        _check_count(self.count)
        unit_vector(self.direction)

    def placements(self, tf_outer_first: Placement) -> Placement:
        """Return the placements of all copies, a batch (count,)."""
        closed = abs(abs(self.span) - 2 * np.pi) < _FULL_TURN_GAP
        pitch = self.span / (self.count if closed else max(self.count - 1, 1))
        round_axis = Placement.about(self.point, self.direction, self.start + pitch * np.arange(self.count))
        if self.turning:
            return round_axis @ tf_outer_first
        return Placement(_batch(tf_outer_first, self.count).turn, round_axis.apply(tf_outer_first.shift))


@dataclass(frozen=True)
class Row:
    """Equal bodies in a straight row, each one step (m, in the outer frame) from the one before."""

    count: int = 2
    step: Triple = (0.1, 0.0, 0.0)

    def __post_init__(self) -> None:
        _check_count(self.count)

    def placements(self, tf_outer_first: Placement) -> Placement:
        """Return the placements of all copies, a batch (count,)."""
        steps = np.arange(self.count)[:, None] * np.asarray(self.step)
        return Placement(_batch(tf_outer_first, self.count).turn, tf_outer_first.shift + steps)


@dataclass(frozen=True)
class Mirrored:
    """A body and its mirror image in the plane through point (m) across normal (any length), in the outer frame."""

    point: Triple = (0.0, 0.0, 0.0)
    normal: Triple = (1.0, 0.0, 0.0)
    count: ClassVar[int] = 2

    def __post_init__(self) -> None:
        unit_vector(self.normal)

    def placements(self, tf_outer_first: Placement) -> Placement:
        """Return the body's own placement and the mirrored one, a batch (2,)."""
        unit = unit_vector(self.normal)
        flip = np.eye(3) - 2 * np.outer(unit, unit)
        point = np.asarray(self.point)
        image = Placement(flip, point - flip @ point) @ tf_outer_first
        return Placement(
            np.stack([tf_outer_first.turn, image.turn]), np.stack([tf_outer_first.shift, image.shift])
        )


Copies: TypeAlias = Several | Ring | Row | Mirrored


def _batch(tf: Placement, count: int) -> Placement:
    return Placement(np.repeat(tf.turn[None], count, axis=0), np.repeat(tf.shift[None], count, axis=0))


def _check_count(count: int) -> None:
    if not isinstance(count, int | np.integer) or not 1 <= count <= MOST_COPIES:
        raise ValueRefused(
            f"a quantity lies between 1 and {MOST_COPIES}", read=str(count), remedy="Give a whole number of equal parts"
        )
