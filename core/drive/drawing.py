"""What is drawn of a drive besides its curves over time: torque over a full turn, and torque over speed."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import frozen
from core.drive.standstill import held_terms

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.drive.demand import Demand
    from core.drive.limits import LimitCurve
    from core.drive.standstill import Standstill
    from core.drive.torque import Curves, Peak

# Angles of a full turn that are drawn: one each degree.
_ANGLES = 361


@dataclass(frozen=True, eq=False)
class OverTurn:
    """What holds the load at rest over a full turn from −π to π, at the load shaft.

    Attributes:
        angle: (m,) rad, of the load, never falling; the same one twice where an applied load begins or ends.
        gravity: (m,) N·m, what gravity alone asks for.
        holding: (m,) N·m, with everything that acts at rest.
        rests: (r,) rad, the angles at which the load rests, brought into the turn.
        held: (r,) N·m, the holding torque there.
    """

    angle: FloatArray
    gravity: FloatArray
    holding: FloatArray
    rests: FloatArray
    held: FloatArray


def over_a_turn(demand: Demand, rests: tuple[Standstill, ...]) -> OverTurn:
    """Return the torques at rest over a full turn of the load shaft; rests are the standstills to mark."""
    waves = demand.waves
    limited = np.isfinite(waves.span)
    edges = np.concatenate([waves.start[limited], (waves.start + waves.span)[limited]])
    marks = np.unique(np.concatenate([np.linspace(-math.pi, math.pi, _ANGLES), _into_turn(edges)]))
    middle = (marks[:-1] + marks[1:]) / 2
    angle = np.repeat(marks, 2)[1:-1]
    gravity, applied = held_terms(demand, angle, np.repeat(middle, 2))
    at_rest = np.array([rest.angle for rest in rests])
    return OverTurn(
        frozen(angle), frozen(gravity), frozen(gravity + applied), frozen(_into_turn(at_rest)),
        frozen(np.array([rest.holding for rest in rests])),
    )


def _into_turn(angles: FloatArray) -> FloatArray:
    """Return angles (r,) brought into −π…π by whole turns; those that lie there stay."""
    outside = np.abs(angles) > math.pi
    return np.where(outside, (angles + math.pi) % (2 * math.pi) - math.pi, angles)


@dataclass(frozen=True, eq=False)
class OverSpeed:
    """The torque of a shaft over the size of its speed.

    Attributes:
        speed: (m,) rad/s, never below 0.
        torque: (m,) N·m along the motion: above 0 in driving, below 0 in braking.
    """

    speed: FloatArray
    torque: FloatArray


def over_speed(curves: Curves) -> OverSpeed:
    """Return the points of a duty at a shaft as limits over speed see them; a standstill counts as forwards."""
    sense = np.where(curves.speed < 0, -1.0, 1.0)
    return OverSpeed(frozen(np.abs(curves.speed)), frozen(curves.torque * sense))


def peak_over_speed(peak: Peak) -> tuple[float, float]:
    """Return the speed (rad/s) and torque (N·m) of one moment of a duty as `over_speed` gives them."""
    return abs(peak.speed), -peak.torque if peak.speed < 0 else peak.torque


def limit_line(limit: LimitCurve) -> OverSpeed:
    """Return a limit as a line from standstill to the motor's last speed, where it falls to 0."""
    speeds, torques = (np.array(values) for values in zip(*limit.points, strict=True))
    return OverSpeed(
        frozen(np.concatenate([[0.0], speeds, speeds[-1:]])), frozen(np.concatenate([torques[:1], torques, [0.0]]))
    )
