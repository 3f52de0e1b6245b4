"""The motor's limits over speed, as the user enters them, and whether a duty keeps to them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from core.drive.refusals import refuse_if_negative
from core.errors import ValueRefused

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.drive.torque import Curves, Needs


@dataclass(frozen=True)
class LimitCurve:
    """The torque that a motor gives, straight from point to point over its speed.

    Attributes:
        points: (speed rad/s, torque N·m), speeds rising. Below the first the torque is the first's; above the last
            the motor does not turn at all.
    """

    points: tuple[tuple[float, float], ...]

    def __post_init__(self) -> None:
        speeds = [speed for speed, _ in self.points]
        for speed, torque in self.points:
            refuse_if_negative(speed, "speed", "limits of the motor")
            refuse_if_negative(torque, "torque", "limits of the motor")
        if not speeds or any(b <= a for a, b in pairwise(speeds)):
            raise ValueRefused(
                "limits over speed need one point or more, the speeds rising", where="limits of the motor",
                read=", ".join(f"{speed:g}" for speed in speeds) or "none",
            )

    def at(self, speed: ArrayLike) -> FloatArray:
        """Return the torque (m,) N·m at speeds (m,) rad/s of either sign."""
        speeds, torques = zip(*self.points, strict=True)
        return np.asarray(np.interp(np.abs(np.asarray(speed, dtype=float)), speeds, torques, right=0.0))


@dataclass(frozen=True)
class MotorLimits:
    """What the motor gives for ever and for a moment; None: not judged."""

    continuous: LimitCurve | None = None
    peak: LimitCurve | None = None


@dataclass(frozen=True)
class Judged:
    """A torque against a limit.

    Attributes:
        what: "peak" or "continuous".
        within: whether it keeps to it.
        use: torque per limit; inf where the limit is 0, above the motor's last speed.
        speed, torque, limit: rad/s and N·m, where the use is highest.
        time: s, when; None for the whole cycle.
    """

    what: str
    within: bool
    use: float
    speed: float
    torque: float
    limit: float
    time: float | None


def judge_peak(limit: LimitCurve, curves: Curves) -> Judged:
    """Return the moment of the duty that comes nearest to a limit; curves are those at the motor."""
    allowed, asked = limit.at(curves.speed), np.abs(curves.torque)
    # No torque at a speed that the motor does not reach is too much all the same.
    too_fast = np.abs(curves.speed) > limit.points[-1][0]
    with np.errstate(divide="ignore", invalid="ignore"):
        use = np.where(too_fast, math.inf, np.where(asked > 0, asked / allowed, 0.0))
    worst = int(use.argmax())
    return Judged(
        "peak", bool(use[worst] <= 1), float(use[worst]), float(abs(curves.speed[worst])), float(asked[worst]),
        float(allowed[worst]), float(curves.time[worst]),
    )


def judge_continuous(limit: LimitCurve, needs: Needs) -> Judged:
    """Return the RMS torque at the mean speed against a limit; needs are those at the motor."""
    allowed = float(limit.at([needs.mean_speed])[0])
    use = needs.rms / allowed if allowed else math.inf
    return Judged("continuous", use <= 1, use, needs.mean_speed, needs.rms, allowed, None)
