"""A move said in another way, by time or by limits or by another law, with no more changed than has to be."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from core.drive.laws import RAMPED, Law, unit_peaks
from core.drive.motion import ByLimits, ByTime, Move

# A trapezoid has no jerk to take over: its ramps become ones in which half the time goes into changing acceleration.
_SMOOTHING = 0.5
# What the top speed is told by: the round-off of adding up the ramps.
_SAME_SPEED = 1e-9


def limits_taken(law: Law) -> tuple[str, ...]:
    """Return the names of the limits that a move of a law can keep."""
    if law == Law.S_CURVE:
        return ("speed", "acceleration", "deceleration", "jerk")
    if law == Law.TRAPEZOIDAL:
        return ("speed", "acceleration", "deceleration")
    return ("speed", "acceleration") if math.isinf(unit_peaks(law).jerk) else ("speed", "acceleration", "jerk")


def limits_needed(law: Law) -> tuple[str, ...]:
    """Return the names of the limits that a move of a law cannot do without; of the others it needs any one."""
    if law == Law.S_CURVE:
        return ("speed", "acceleration", "jerk")
    return ("speed", "acceleration") if law == Law.TRAPEZOIDAL else ()


def by_limits(move: Move) -> Move:
    """Return the same motion by limits: its own peaks of speed and acceleration, and of jerk where a law needs it.

    An S-curve whose ramps differ gets the jerk of its ramp up, since limits have only one.
    """
    return move if isinstance(move.timing, ByLimits) else replace(move, timing=_peaks(move, move.timing.time))


def by_time(move: Move) -> Move:
    """Return the same motion by the time that it takes, with the ramps that it has."""
    if isinstance(move.timing, ByTime):
        return move
    timing = ByTime(move.time)
    if move.law not in RAMPED:
        return replace(move, timing=timing)
    time, _, speed = move.starts
    fastest = np.flatnonzero(np.abs(speed) >= np.abs(speed).max() * (1 - _SAME_SPEED))
    up, down = float(time[fastest[0]]), float(time[-1] - time[fastest[-1]])
    smoothing = min(2 * float(move.zones.duration[0]) / up, 1.0) if move.law == Law.S_CURVE else move.smoothing
    return replace(
        move, timing=timing, ramp_up=up / timing.time, ramp_down=min(down / timing.time, 1 - up / timing.time),
        smoothing=smoothing,
    )


def with_law(move: Move, law: Law) -> Move:
    """Return the move by another law; of its limits those stay that the law can keep, and those it needs are added."""
    if isinstance(move.timing, ByTime):
        return replace(move, law=law)
    kept = {name: getattr(move.timing, name) for name in limits_taken(law)}
    peaks = _peaks(replace(move, law=law, timing=ByTime(move.time)), move.time)
    needed = limits_needed(law) or (() if any(kept.values()) else ("speed",))
    for name in needed:
        kept[name] = kept[name] or getattr(peaks, name)
    return replace(move, law=law, timing=ByLimits(**kept))


def _peaks(move: Move, time: float) -> ByLimits:
    """Return the largest speed and acceleration of a move by time, and of an S-curve its jerk."""
    size = abs(move.angle)
    if move.law not in RAMPED:
        peaks = unit_peaks(move.law)
        return ByLimits(peaks.speed * size / time, peaks.acceleration * size / time**2)
    up, down = move.ramp_up * time, move.ramp_down * time
    speed = size / (time - (up + down) / 2)
    part = (move.smoothing or _SMOOTHING) / 2 if move.law == Law.S_CURVE else 0.0
    rise, fall = (speed / (ramp - part * ramp) for ramp in (up, down))
    jerk = rise / (part * up) if part else None
    return ByLimits(speed, rise, None if math.isclose(rise, fall) else fall, jerk)
