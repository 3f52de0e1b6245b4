"""Curves of a drawing as strands: open lines of straight pieces and circular arcs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from core.errors import OutlineFileError
from core.shapes.profile.outline import MOST_POINTS

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from core.arrays import FloatArray

# Relative to the drawing's size: how far a curve that is no arc may lie from the arcs taken for it.
CURVE_GAP = 1e-6

# Arcs of up to 170°: beyond that the ends of an arc say little about its middle.
LARGEST_BULGE = float(np.tan(np.radians(170 / 4)))

_MOST_PIECES = 1024
_AT = np.array([0.125, 0.25, 0.375, 0.625, 0.75, 0.875])


@dataclass(frozen=True)
class StraightCurve:
    """A line through points (k, 2), in the file's unit."""

    points: FloatArray


@dataclass(frozen=True)
class BentCurve:
    """A smooth curve: at(t) gives its points (k, 2) for t (k) from 0 to 1, in the file's unit."""

    at: Callable[[FloatArray], FloatArray]


Curve: TypeAlias = StraightCurve | BentCurve


@dataclass(frozen=True, eq=False)
class Strand:
    """A line from end to end: points (k, 2) in the file's unit, and the bulge (k − 1) of each piece."""

    points: FloatArray
    bulge: FloatArray

    def reversed(self) -> Strand:
        """Return the strand run through the other way."""
        return Strand(self.points[::-1], -self.bulge[::-1])


def strands_of_curves(curves: Sequence[Curve]) -> list[Strand]:
    """Return each curve as a strand; one that is no line or arc as arcs that leave it by CURVE_GAP at most.

    Raises:
        OutlineFileError: there is none, a number is not finite, or more points than an outline has.
    """
    rough = [curve.points if isinstance(curve, StraightCurve) else curve.at(np.linspace(0, 1, 9)) for curve in curves]
    if not rough:
        raise OutlineFileError(
            "the drawing holds no lines or arcs", remedy="Export the outline as lines, arcs, polylines or curves"
        )
    spots = np.concatenate(rough)
    if not np.isfinite(spots).all():
        raise OutlineFileError("the drawing holds a number that is not finite", remedy="Export it anew")
    size = float(np.hypot(*np.ptp(spots, axis=0)))
    strands, number = [], 0
    for curve in curves:
        strands.append(
            Strand(curve.points, np.zeros(len(curve.points) - 1))
            if isinstance(curve, StraightCurve)
            else _arcs(curve, CURVE_GAP * size)
        )
        number += len(strands[-1].bulge)
        if number > MOST_POINTS:
            raise OutlineFileError(
                f"the drawing has more than {MOST_POINTS} pieces", remedy="Export the outline alone, without details"
            )
    return strands


def _arcs(curve: BentCurve, gap: float) -> Strand:
    """Return a curve in equal steps of its parameter, as few as keep the arcs within the gap."""
    pieces = 1
    while True:
        t = np.linspace(0, 1, 2 * pieces + 1)
        points = curve.at(t)
        start, middle, end = points[:-2:2], points[1::2], points[2::2]
        bulge = _bulge_through(start, middle, end)
        if pieces >= _MOST_PIECES or (
            np.all(np.abs(bulge) <= LARGEST_BULGE) and _farthest(curve, start, end, bulge) <= gap
        ):
            return Strand(points[::2], bulge)
        pieces *= 2


def _bulge_through(start: FloatArray, middle: FloatArray, end: FloatArray) -> FloatArray:
    """Return the bulge (n) of the arcs through three points (n, 2) each: half the turn at the middle one."""
    into, out = middle - start, end - middle
    cross = into[:, 0] * out[:, 1] - into[:, 1] * out[:, 0]
    return np.asarray(np.tan(np.arctan2(cross, (into * out).sum(axis=1)) / 2))


def _farthest(curve: BentCurve, start: FloatArray, end: FloatArray, bulge: FloatArray) -> float:
    """Return how far the curve goes from its arcs, in the file's unit."""
    pieces = len(bulge)
    t = (np.arange(pieces)[:, None] + _AT) / pieces
    spots = curve.at(t.ravel()).reshape(pieces, -1, 2)
    half = (end - start) / 2
    length = np.hypot(*half.T)
    if not np.all(length > 0):
        return np.inf
    right = np.stack([half[:, 1], -half[:, 0]], axis=-1)
    apart = spots - ((start + end) / 2)[:, None]
    v = (apart * half[:, None]).sum(axis=-1) / length[:, None] ** 2
    u = (apart * right[:, None]).sum(axis=-1) / length[:, None] ** 2
    # In units of half the chord the arc is b·(v² + u² − 1) + u·(1 − b²) = 0, with a gradient of length 1 + b².
    b = bulge[:, None]
    return float(np.max(np.abs(b * (v * v + u * u - 1) + u * (1 - b * b)) / (1 + b * b) * length[:, None]))
