"""Where a duty is looked at: pieces in which nothing jumps, integrals over them with their error, and curves.

Integrals are Gauss–Legendre sums over pieces that are halved until both answers agree; the sum of what they still
differ by is the stated error.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.arrays import FloatArray, IntArray
    from core.drive.motion import Kinematics, Timeline

# rad: no piece turns any shaft on which a torque varies with the angle further than this.
_PIECE_TURN = math.pi / 2

# Pieces of a duty before halving and while it is done; a duty of more turns gets longer pieces, and the stated error
# grows.
MOST_PIECES, _MOST_HALVES = 8_000, 32_000

# Relative to the integral of the absolute value: where the halving stops, and the most times it is done.
TOLERANCE = 1e-9
_MOST_HALVINGS = 14

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(8)
# Steps to a border of a range of angles at most, and where they end, relative to the zone.
_MOST_NEWTON, _CLOSE, _LAST_DIGIT = 60, 1e-14, 2.0**-52

# Secants to a passage through zero at most, some eight do; and where they end, relative to the stretch looked at.
_MOST_SECANTS, _FOUND = 60, 1e-12

# Points of a curve per piece, both ends among them.
CURVE_POINTS = 9


@dataclass(frozen=True, eq=False)
class Pieces:
    """Stretches of a timeline, (p,) each: the zone, and start and end in s from the zone's start."""

    zone: IntArray
    start: FloatArray
    end: FloatArray

    def points(self, fractions: FloatArray) -> tuple[IntArray, FloatArray]:
        """Return zones and local times (p·f,) of points at these fractions (f,) of each piece."""
        local = self.start[:, None] + (self.end - self.start)[:, None] * fractions
        # The last point lies exactly on the end, whatever the rounding of the product.
        local = np.where(fractions == 1.0, self.end[:, None], local)
        return np.repeat(self.zone, len(fractions)), local.ravel()

    def middles(self, timeline: Timeline) -> FloatArray:
        """Return the angle (p,) rad of the load in the middle of each piece."""
        return timeline.within(self.zone, (self.start + self.end) / 2).angle

    def within(self, timeline: Timeline, middles: FloatArray, piece: IntArray, local: FloatArray) -> Kinematics:
        """Return the motion at local times (m,) of pieces (m,), their ends seen from inside them.

        `middles` (p,) are the angles that `middles` gives.
        """
        return replace(timeline.within(self.zone[piece], local), ranged=middles[piece])


def pieces_of(timeline: Timeline, fastest: float, edges: FloatArray) -> Pieces:
    """Return the pieces of a timeline.

    Args:
        timeline: the duty.
        fastest: turns, per turn of the load, of the fastest shaft on which a torque varies with the angle; 0: none.
        edges: (e,) rad, angles of the load at which a range begins or ends, in every turn.
    """
    duration = timeline.zones.duration
    count = len(duration)
    every = np.arange(count)
    end = timeline.within(every, duration)
    turned = np.abs(end.angle - timeline.angle)
    parts = np.ceil(fastest * turned / _PIECE_TURN)
    if parts.sum() > MOST_PIECES:
        parts = np.ceil(parts * (MOST_PIECES / parts.sum()))
    parts = np.maximum(parts, 1).astype(np.int64)
    zone = np.repeat(every, parts)
    number = np.arange(len(zone)) - np.repeat(np.cumsum(parts) - parts, parts)
    step = (duration / parts)[zone]
    cut_zone, cut = _crossings(timeline, end.angle, edges)
    return _laid(duration, np.concatenate([zone, cut_zone]), np.concatenate([number * step, cut]))


def cut_where(pieces: Pieces, timeline: Timeline, turns: Callable[[Kinematics], FloatArray]) -> Pieces:
    """Return the pieces cut where a function passes through zero, as far as the points of the curves show it.

    Args:
        pieces: of the whole timeline.
        timeline: what they are of.
        turns: gives (s, m) for a motion (m,), continuous within each piece.
    """
    _, local = pieces.points(np.linspace(0.0, 1.0, CURVE_POINTS))
    middles = pieces.middles(timeline)
    motion = pieces.within(timeline, middles, np.repeat(np.arange(len(pieces.zone)), CURVE_POINTS), local)
    values = turns(motion).reshape(-1, len(pieces.zone), CURVE_POINTS)
    above = values > 0
    row, piece, point = np.nonzero(above[..., :-1] != above[..., 1:])
    if not len(row):
        return pieces
    local, every = local.reshape(-1, CURVE_POINTS), np.arange(len(row))
    cut = _zero(
        lambda at: turns(pieces.within(timeline, middles, piece, at))[row, every],
        (local[piece, point], local[piece, point + 1]), (values[row, piece, point], values[row, piece, point + 1]),
    )
    zones = np.concatenate([pieces.zone, pieces.zone[piece]])
    return _laid(timeline.zones.duration, zones, np.concatenate([pieces.start, cut]))


def _laid(duration: FloatArray, zones: IntArray, starts: FloatArray) -> Pieces:
    """Return pieces that fill zones of these durations, from their zones and starts in any order."""
    order = np.lexsort((starts, zones))
    zones, starts = zones[order], starts[order]
    last = np.concatenate([zones[1:] != zones[:-1], [True]])
    ends = np.where(last, duration[zones], np.concatenate([starts[1:], [0.0]]))
    kept = ends > starts
    return Pieces(zones[kept], starts[kept], ends[kept])


def _zero(
    function: Callable[[FloatArray], FloatArray], bounds: tuple[FloatArray, FloatArray],
    values: tuple[FloatArray, FloatArray],
) -> FloatArray:
    """Return where functions (m,) are 0 between two bounds at which their values differ in sign.

    By secants; the value that stays is halved (the Illinois rule), so that both bounds close in.
    """
    (left, right), (low, high) = bounds, values
    width = right - left
    for _ in range(_MOST_SECANTS):
        at = np.clip(right - high * (right - left) / (high - low), np.minimum(left, right), np.maximum(left, right))
        value = function(at)
        moved = np.abs(at - right)
        beyond = value * high < 0
        left, low = np.where(beyond, right, left), np.where(beyond, high, low / 2)
        right, high = at, value
        if ((moved <= _FOUND * width) | (value == 0)).all():
            break
        # Where it is found both values may be 0: it stays there while others are looked for.
        low = np.where(low == high, 1.0, low)
    return right


def _crossings(timeline: Timeline, end: FloatArray, edges: FloatArray) -> tuple[IntArray, FloatArray]:
    """Return zones and local times at which the load passes an edge; it turns one way only within a zone."""
    low, high = np.minimum(timeline.angle, end), np.maximum(timeline.angle, end)
    zones: list[IntArray] = [np.zeros(0, dtype=np.int64)]
    angles: list[FloatArray] = [np.zeros(0)]
    turn = 2 * math.pi
    for edge in edges:
        first = np.ceil((low - edge) / turn)
        times = np.maximum(np.floor((high - edge) / turn) - first + 1, 0).astype(np.int64)
        if times.sum() > MOST_PIECES:
            continue
        zone = np.repeat(np.arange(len(low)), times)
        number = np.arange(len(zone)) - np.repeat(np.cumsum(times) - times, times)
        zones.append(zone)
        angles.append(edge + turn * (first[zone] + number))
    zone, target = np.concatenate(zones), np.concatenate(angles)
    return zone, _reached(timeline, zone, target)


def _reached(timeline: Timeline, zone: IntArray, target: FloatArray) -> FloatArray:
    """Return the local times (m,) at which zones (m,) come to angles (m,): Newton's steps kept between two bounds."""
    sense = timeline.direction[zone]
    left, right = np.zeros(len(zone)), timeline.zones.duration[zone].copy()
    at = (left + right) / 2
    for _ in range(_MOST_NEWTON if len(zone) else 0):
        motion = timeline.within(zone, at)
        behind = (motion.angle - target) * sense
        left, right = np.where(behind < 0, at, left), np.where(behind < 0, right, at)
        with np.errstate(divide="ignore", invalid="ignore"):
            step = at - behind / (motion.speed * sense)
        following = np.where((step > left) & (step < right), step, (left + right) / 2)
        # Where it all but stands still, the angle is there to its last digit long before the time is.
        following = np.where(np.abs(behind) <= _LAST_DIGIT * np.abs(target), at, following)
        moved = np.abs(following - at)
        at = following
        if (moved <= _CLOSE * timeline.zones.duration[zone]).all():
            break
    return at


def integrate(
    pieces: Pieces, integrand: Callable[[IntArray, FloatArray], FloatArray]
) -> tuple[FloatArray, FloatArray]:
    """Return the integrals (q,) of an integrand over all pieces, and how far each may be off (q,).

    Args:
        pieces: where to integrate.
        integrand: gives (q, m) for zones (m,) and local times (m,).
    """
    whole = _gauss(pieces, integrand)
    size = np.zeros(len(whole))
    value, error = np.zeros(len(whole)), np.zeros(len(whole))
    for _ in range(_MOST_HALVINGS):
        middle = (pieces.start + pieces.end) / 2
        halves = Pieces(
            np.repeat(pieces.zone, 2), np.stack([pieces.start, middle], axis=1).ravel(),
            np.stack([middle, pieces.end], axis=1).ravel(),
        )
        parts = _gauss(halves, integrand)
        both = parts[:, ::2] + parts[:, 1::2]
        apart = np.abs(both - whole)
        size = np.maximum(size, np.abs(both).sum(axis=1) + np.abs(value))
        good = (apart <= TOLERANCE * size[:, None] / len(pieces.zone)).all(axis=0)
        value, error = value + both[:, good].sum(axis=1), error + apart[:, good].sum(axis=1)
        if good.all():
            return value, error
        if 2 * int((~good).sum()) > _MOST_HALVES:
            return value + both[:, ~good].sum(axis=1), error + apart[:, ~good].sum(axis=1)
        again = np.repeat(~good, 2)
        whole, left = parts[:, again], both[:, ~good]
        missing = apart[:, ~good]
        pieces = Pieces(halves.zone[again], halves.start[again], halves.end[again])
    return value + left.sum(axis=1), error + missing.sum(axis=1)


def _gauss(pieces: Pieces, integrand: Callable[[IntArray, FloatArray], FloatArray]) -> FloatArray:
    """Return the integral over each piece, (q, p)."""
    zone, local = pieces.points((_NODES + 1) / 2)
    values = integrand(zone, local)
    shape = (len(values), len(pieces.zone), len(_NODES))
    # Not by the matrix product, whose threads take longer to wake than this takes.
    sums = np.einsum("qpn,n->qp", values.reshape(shape), _WEIGHTS)
    return np.asarray(sums * (pieces.end - pieces.start) / 2)
