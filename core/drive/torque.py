"""What a duty asks of the drive at a shaft: curves term by term, peaks, RMS, power and energy.

Torque is positive where it turns its shaft forwards; power T·ω is positive where the shaft is driven and negative
where it is braked. Curves hold both sides of every jump: two points at one time.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Self

import numpy as np

from core.arrays import frozen
from core.drive.sampling import CURVE_POINTS, Pieces, cut_where, integrate, pieces_of
from core.drive.train import LOAD, MOTOR
from core.once import Once

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.arrays import FloatArray, IntArray
    from core.drive.demand import Demand
    from core.drive.motion import Duty, Kinematics, Timeline

# Times that a peak is closed in on, and the points around it, in steps of the last time.
_CLOSER, _AROUND = 4, np.linspace(-1.0, 1.0, 17)

# How far the points of a curve may lie below a peak between them, relative to the largest value: half a wave in
# 9 points misses its top by 2 %. At most so many pieces are closed in on.
_NEAR, _MOST_NEAR = 0.03, 100

# Among peaks equal to this, relative, the first one is named.
_TIE = 1e-12


@dataclass(frozen=True, eq=False)
class Curves:
    """A duty at one shaft, (m,) each.

    Attributes:
        shaft: its name.
        time: s, never falling; the same time twice where something jumps.
        angle: rad, of the load.
        speed: rad/s, of the shaft.
        terms: (5, m) N·m, the rows of TERMS.
        torque: N·m, their sum.
    """

    shaft: str
    time: FloatArray
    angle: FloatArray
    speed: FloatArray
    terms: FloatArray
    torque: FloatArray

    @property
    def power(self) -> FloatArray:
        """Power at the shaft, W."""
        return np.asarray(self.torque * self.speed)


@dataclass(frozen=True)
class Peak:
    """One moment of the duty: time s, angle of the load rad, speed of the shaft rad/s, torque N·m with its terms, W."""

    time: float
    angle: float
    speed: float
    torque: float
    terms: tuple[float, ...]
    power: float


@dataclass(frozen=True)
class Energy:
    """Over one cycle, J.

    Attributes:
        driving: ∫ of the power where the shaft is driven.
        returned: ∫ of the power where it is braked, as a positive number: what braking gives back.
        by_term: ∫ term·ω dt for each of TERMS; their sum is driving − returned.
        error: how far any of these may be off.
    """

    driving: float
    returned: float
    by_term: tuple[float, ...]
    error: float


@dataclass(frozen=True)
class Needs:
    """What a duty asks at one shaft.

    Attributes:
        shaft: its name.
        peak: where the torque is largest, whichever its sign.
        highest, lowest: where it is highest and lowest.
        rms: N·m, √(∫T² dt / cycle).
        rms_error: N·m, how far it may be off.
        mean_speed: rad/s, mean of |ω| over the cycle.
        peak_speed: rad/s, largest |ω|.
        mean_power: W, net over the cycle.
        peak_power, peak_braking: where the power is highest and lowest.
        energy: over the cycle.
    """

    shaft: str
    peak: Peak
    highest: Peak
    lowest: Peak
    rms: float
    rms_error: float
    mean_speed: float
    peak_speed: float
    mean_power: float
    peak_power: Peak
    peak_braking: Peak
    energy: Energy


@dataclass(frozen=True, eq=False)
class Study:
    """A demand over a duty; everything is worked out when it is first asked for.

    >>> from core.drive.demand import Demand
    >>> from core.drive.motion import ByTime, Duty, Law, Move
    >>> from core.drive.train import ShaftInertia, Train
    >>> from core.assembly import DriveAxis
    >>> demand = Demand(Train(inertias=(ShaftInertia("dial", 2.0),)), (), DriveAxis())
    >>> needs = Study(demand, Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR),))).needs("load")
    >>> round(needs.peak.torque, 9), round(needs.rms, 9), round(needs.energy.returned, 9)
    (8.0, 8.0, 4.0)
    """

    demand: Demand
    duty: Duty

    @Once
    def timeline(self) -> Timeline:
        """The duty laid out in time."""
        return self.duty.timeline

    @Once
    def pieces(self) -> Pieces:
        """Stretches in which nothing jumps, driving does not turn to braking and no unbalanced shaft turns far."""
        waves, speeds = self.demand.waves, self.demand.train.speeds
        varying = (waves.cosine != 0) | (waves.sine != 0)
        fastest = float(np.abs(speeds[waves.shaft[varying]]).max(initial=0.0))
        limited = np.isfinite(waves.span)
        edges = np.unique(np.concatenate([waves.start[limited], (waves.start + waves.span)[limited]]))
        pieces = pieces_of(self.timeline, fastest, edges)
        return cut_where(pieces, self.timeline, self.demand.passed_on)

    @Once
    def _middles(self) -> FloatArray:
        return self.pieces.middles(self.timeline)

    @Once
    def _sampled(self) -> tuple[Kinematics, FloatArray]:
        _, local = self.pieces.points(np.linspace(0.0, 1.0, CURVE_POINTS))
        every = np.repeat(np.arange(len(self.pieces.zone)), CURVE_POINTS)
        motion = self.pieces.within(self.timeline, self._middles, every, local)
        return motion, self.demand.terms(motion)

    @property
    def motion(self) -> Kinematics:
        """The motion of the load at the times of the curves, for drawing."""
        return self._sampled[0]

    def curves(self, shaft: str = LOAD) -> Curves:
        """Return the curves at a shaft, for drawing: 9 points a piece, both its ends among them."""
        if shaft not in self._drawn:
            self._drawn[shaft] = self._seen_from(shaft, *self._sampled)
        return self._drawn[shaft]

    @Once
    def _drawn(self) -> dict[str, Curves]:
        """The curves that were asked for, by their shaft."""
        return {}

    def needs(self, shaft: str = MOTOR) -> Needs:
        """Return peaks, RMS, power and energy at a shaft."""
        curves, length = self.curves(shaft), self.timeline.length
        value, error = self._integrals[self.demand.train.index(shaft)]
        rms = math.sqrt(value[0] / length)
        highest, lowest, most, least = self._peaks(curves)
        return Needs(
            shaft, _larger(highest, lowest), highest, lowest,
            rms, float(error[0] / (2 * length * rms)) if rms else 0.0,
            float(value[3] / length), float(np.abs(curves.speed).max()), float((value[1] - value[2]) / length),
            most, least, Energy(float(value[1]), float(value[2]), tuple(value[4:].tolist()), float(error[1:3].sum())),
        )

    @Once
    def _integrals(self) -> tuple[tuple[FloatArray, FloatArray], ...]:
        """Integrals (9,) and their errors of each shaft, the motor's first: all shafts take one pass."""
        shafts = self.demand.train.shafts

        def integrand(zone: IntArray, local: FloatArray) -> FloatArray:
            motion = self.timeline.within(zone, local)
            terms = self.demand.terms(motion)
            return np.vstack([_rows(self._seen_from(shaft, motion, terms)) for shaft in shafts])

        value, error = integrate(self.pieces, integrand)
        return tuple(zip(value.reshape(len(shafts), -1), error.reshape(len(shafts), -1), strict=True))

    def _seen_from(self, shaft: str, motion: Kinematics, terms: FloatArray) -> Curves:
        train = self.demand.train
        rows = self.demand.at_shaft(terms, motion.direction, shaft)
        speed = motion.speed * train.speeds[train.index(shaft)]
        return Curves(
            shaft, frozen(motion.time), frozen(motion.angle), frozen(speed), frozen(rows), frozen(rows.sum(axis=0))
        )

    def _peaks(self, curves: Curves) -> list[Peak]:
        """Return where torque is highest and lowest and power highest and lowest, closed in on between the points.

        A peak may lie between the points of a piece whose own points are not the highest, so all pieces that come
        near are closed in on together.
        """
        searches = [_Search.begun(score, curves, self.pieces) for score in _SCORES]
        for _ in range(_CLOSER):
            locals_ = [search.around for search in searches]
            near = np.concatenate([np.repeat(search.near, len(_AROUND)) for search in searches])
            local = np.concatenate([one.ravel() for one in locals_])
            motion = self.pieces.within(self.timeline, self._middles, near, local)
            closer = self._seen_from(curves.shaft, motion, self.demand.terms(motion))
            edges = np.cumsum([0, *(one.size for one in locals_)])
            searches = [search.closer(closer, int(edge)) for search, edge in zip(searches, edges[:-1], strict=True)]
        return [search.found for search in searches]


_SCORES: tuple[Callable[[Curves], FloatArray], ...] = (
    lambda at: at.torque, lambda at: -at.torque, lambda at: at.power, lambda at: -at.power
)


def _rows(at: Curves) -> FloatArray:
    """Return what is integrated: T², power of driving and of braking, speed, and the power of each term."""
    power = at.power
    return np.vstack([
        at.torque**2, np.maximum(power, 0), np.maximum(-power, 0), np.abs(at.speed), at.terms * at.speed
    ])


@dataclass(frozen=True, eq=False)
class _Search:
    """A peak that is being closed in on, in the pieces near (c,) that may hold it.

    Attributes:
        score: what is to be highest.
        size: the largest value of the score, whichever its sign.
        near: (c,) the pieces.
        start, end, middle, step: (c, 1) s, of the pieces, and where each is looked at next.
        found, top: the best moment so far, and its score.
    """

    score: Callable[[Curves], FloatArray]
    size: float
    near: IntArray
    start: FloatArray
    end: FloatArray
    middle: FloatArray
    step: FloatArray
    found: Peak
    top: float

    @classmethod
    def begun(cls, score: Callable[[Curves], FloatArray], curves: Curves, pieces: Pieces) -> Self:
        """Return the search that starts from the points of the curves."""
        values = score(curves).reshape(-1, CURVE_POINTS)
        of_piece, size = values.max(axis=1), float(np.abs(values).max())
        near = np.flatnonzero(of_piece >= of_piece.max() - _NEAR * size)
        near = np.sort(near[np.argsort(-of_piece[near], kind="stable")[:_MOST_NEAR]])
        point = values[near].argmax(axis=1)
        start, end = pieces.start[near, None], pieces.end[near, None]
        step = (end - start) / (CURVE_POINTS - 1)
        first = _moment(curves, int(near[0] * CURVE_POINTS + point[0]))
        return cls(score, size, near, start, end, start + point[:, None] * step, step, first, -math.inf)

    @property
    def around(self) -> FloatArray:
        """Local times (c, 17) to look at; the ends are hit exactly, so that a peak at a jump is as high as the jump."""
        return np.clip(self.middle + self.step * _AROUND, self.start, self.end)

    def closer(self, curves: Curves, first: int) -> Self:
        """Return the search one step on; curves hold what is around from index first on."""
        local = self.around
        values = self.score(curves)[first : first + local.size].reshape(local.shape)
        best = int(np.argmax(values >= values.max() - _TIE * self.size))
        middle = np.take_along_axis(local, values.argmax(axis=1)[:, None], axis=1)
        ahead = replace(self, middle=middle, step=self.step / (len(_AROUND) // 2))
        if values.flat[best] <= self.top + _TIE * self.size:
            return ahead
        return replace(ahead, found=_moment(curves, first + best), top=float(values.flat[best]))


def _moment(curves: Curves, at: int) -> Peak:
    return Peak(
        float(curves.time[at]), float(curves.angle[at]), float(curves.speed[at]), float(curves.torque[at]),
        tuple(curves.terms[:, at].tolist()), float(curves.power[at]),
    )


def _larger(highest: Peak, lowest: Peak) -> Peak:
    """Return the one of larger size; of two that are equal, the first in time."""
    apart = abs(highest.torque) - abs(lowest.torque)
    if abs(apart) <= _TIE * abs(highest.torque):
        return min(highest, lowest, key=lambda peak: peak.time)
    return highest if apart > 0 else lowest
