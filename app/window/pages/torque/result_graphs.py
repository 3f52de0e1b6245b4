"""What the curves of the result show: a graph for each of the choices, straight from the answer."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from app.window.plots.graph import Column, Graph, Spot, Trace
from core.drive import LOAD, MOTOR, TERMS
from core.drive.drawing import limit_line, over_speed, peak_over_speed
from core.quantity import Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.drive import Curves, DriveAnswer, MotorLimits, Study
    from core.drive.drawing import OverSpeed
    from core.quantity import UnitSet

TERM_WORDS = dict(zip(TERMS, ("acceleration", "gravity", "applied loads", "friction", "losses"), strict=True))
OVER_TIME, OVER_ANGLE, POWER, OVER_SPEED, OVER_TURN = "torque time", "torque angle", "power", "speed torque", "turn"
POSITION, SPEED, ACCELERATION, JERK = "position", "speed", "acceleration", "jerk"
CHOICES: list[tuple[str, object]] = [
    ("Torque over time", OVER_TIME), ("Torque over angle", OVER_ANGLE), ("Power over time", POWER),
    ("Torque over speed", OVER_SPEED), ("Position over time", POSITION), ("Speed over time", SPEED),
    ("Acceleration over time", ACCELERATION), ("Jerk over time", JERK), ("Gravity over a full turn", OVER_TURN),
]
# Which curves are of a shaft that one can choose; the others are of the load, or of the motor's limits.
OF_EITHER_SHAFT = frozenset({OVER_TIME, OVER_ANGLE, POWER})


def graph_of(answer: DriveAnswer, limits: MotorLimits, units: UnitSet, what: str, shaft: str) -> Graph | None:
    """Return what a choice draws, at the load or the motor shaft where that can be chosen; None without a duty."""
    if what == OVER_TURN:
        return _over_turn(answer, units)
    study = answer.study
    if study is None:
        return None
    if what == OVER_SPEED:
        return _over_speed(answer, study, limits, units)
    if what in _MOTIONS:
        return _motion(study, units, what)
    curves = study.curves(shaft)
    if what == POWER:
        return _power(answer, study, curves, units)
    return _torque(answer, study, curves, units, OVER_ANGLE if what == OVER_ANGLE else OVER_TIME)


def _at(shaft: str) -> str:
    return f"at the {shaft} shaft"


def _torque(answer: DriveAnswer, study: Study, curves: Curves, units: UnitSet, what: str) -> Graph:
    torque = units[Kind.TORQUE]
    over_time = what == OVER_TIME
    x = curves.time if over_time else curves.angle
    traces = [Trace("sum", "sum", x, curves.torque)]
    traces += [
        Trace(TERM_WORDS[term], term, x, row) for term, row in zip(TERMS, curves.terms, strict=True) if row.any()
    ]
    needs = answer.load if curves.shaft == LOAD else answer.motor
    spots: tuple[Spot, ...] = ()
    if needs is not None:
        peak = needs.peak
        spots = (Spot("peak", peak.time if over_time else peak.angle, peak.torque, "diamond"),)
        ends = np.array([x.min(), x.max()])
        traces.append(Trace("RMS of the sum", "mean", ends, np.full(2, needs.rms)))
    columns = (
        *_moments(study, units), Column("sum", curves.torque, torque),
        *(Column(TERM_WORDS[term], row, torque) for term, row in zip(TERMS, curves.terms, strict=True)),
    )
    axis = ("Time", units[Kind.TIME]) if over_time else ("Angle of the load", units[Kind.ANGLE])
    words = "Torque over time" if over_time else "Torque over angle"
    return Graph(
        f"{words} {_at(curves.shaft)}", axis, ("Torque", torque), tuple(traces), columns, x,
        curves.torque, spots,
    )


def _power(answer: DriveAnswer, study: Study, curves: Curves, units: UnitSet) -> Graph:
    power, needs = curves.power, answer.load if curves.shaft == LOAD else answer.motor
    spots: tuple[Spot, ...] = ()
    if needs is not None:
        spots = (
            Spot("peak in driving", needs.peak_power.time, needs.peak_power.power, "diamond"),
            Spot("peak in braking", needs.peak_braking.time, needs.peak_braking.power, "square"),
        )
    columns = (*_moments(study, units), Column("power", power, units[Kind.POWER]))
    return Graph(
        f"Power over time {_at(curves.shaft)}, braking below 0", ("Time", units[Kind.TIME]),
        ("Power", units[Kind.POWER]),
        (Trace("power", "single", curves.time, power),), columns, curves.time, power, spots,
    )


def _moments(study: Study, units: UnitSet) -> tuple[Column, Column]:
    return (
        Column("time", study.motion.time, units[Kind.TIME]), Column("angle", study.motion.angle, units[Kind.ANGLE])
    )


# Words, kind, and what of the motion is drawn.
_MOTIONS: dict[str, tuple[str, Kind, Callable[[Study], np.ndarray]]] = {
    POSITION: ("Position", Kind.ANGLE, lambda study: study.motion.angle),
    SPEED: ("Speed", Kind.SPEED, lambda study: study.motion.speed),
    ACCELERATION: ("Acceleration", Kind.ANGULAR_ACCELERATION, lambda study: study.motion.acceleration),
    JERK: ("Jerk", Kind.ANGULAR_JERK, lambda study: study.motion.jerk),
}


def _motion(study: Study, units: UnitSet, what: str) -> Graph:
    words, kind, of = _MOTIONS[what]
    motion, values = study.motion, of(study)
    columns = (
        Column("time", motion.time, units[Kind.TIME]),
        *(Column(name.lower(), each(study), units[one]) for name, one, each in _MOTIONS.values()),
    )
    return Graph(
        f"{words} over time of the load shaft", ("Time", units[Kind.TIME]), (words, units[kind]),
        (Trace(words.lower(), "single", motion.time, values),), columns, motion.time, values,
    )


def _over_speed(answer: DriveAnswer, study: Study, limits: MotorLimits, units: UnitSet) -> Graph:
    points, motor = over_speed(study.curves(MOTOR)), answer.motor
    traces = [Trace("points of the duty", "single", points.speed, points.torque, joined=False)]
    for limit, name, look in (
        (limits.peak, "your peak limit", "peak"), (limits.continuous, "your continuous limit", "continuous"),
    ):
        if limit is not None:
            traces.append(_both_ways(limit_line(limit), name, look))
    spots = []
    if motor is not None:
        spots = [
            Spot("peak torque", *peak_over_speed(motor.peak), "diamond"),
            Spot("RMS torque at the mean speed", motor.mean_speed, motor.rms, "triangle"),
        ]
    columns = (
        *_moments(study, units), Column("speed", points.speed, units[Kind.SPEED]),
        Column("torque along the motion", points.torque, units[Kind.TORQUE]),
    )
    return Graph(
        f"Torque over speed {_at(MOTOR)}, braking below 0",
        (f"Speed of the {MOTOR} shaft, of either sense", units[Kind.SPEED]), ("Torque", units[Kind.TORQUE]),
        tuple(traces), columns, points.speed, points.torque, tuple(spots),
    )


def _both_ways(line: OverSpeed, name: str, look: str) -> Trace:
    """Return a limit for driving and for braking; the two are not joined."""
    gap = [np.nan]
    return Trace(
        name, look, np.concatenate([line.speed, gap, line.speed]), np.concatenate([line.torque, gap, -line.torque])
    )


def _over_turn(answer: DriveAnswer, units: UnitSet) -> Graph:
    turn, torque = answer.over_turn, units[Kind.TORQUE]
    traces = [Trace("gravity", "gravity", turn.angle, turn.gravity)]
    if (turn.holding != turn.gravity).any():
        traces.append(Trace("gravity and applied loads", "sum", turn.angle, turn.holding))
    spots = [Spot("rest of the duty", angle, held, "disc") for angle, held in zip(turn.rests, turn.held, strict=True)]
    spots += [
        Spot("angle at which it hangs", wave.hangs_at, 0.0, "triangle")
        for body, wave in zip(answer.bodies, answer.gravity, strict=True)
        if wave.amplitude and answer.demand.train.index(body.shaft) == answer.demand.train.index(LOAD)
    ]
    columns = (
        Column("angle", turn.angle, units[Kind.ANGLE]), Column("gravity", turn.gravity, torque),
        Column("with applied loads", turn.holding, torque),
    )
    return Graph(
        f"Torque that holds the load at rest over a full turn, {_at(LOAD)}", ("Angle of the load", units[Kind.ANGLE]),
        ("Torque", torque), tuple(traces), columns, turn.angle, turn.holding, tuple(spots),
    )
