"""What happens when nothing moves: the torque that holds the load, and what it does when the drive is off."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.arrays import ROUND_OFF, ArrayLike, FloatArray
from core.drive.demand import GRAVITY
from core.drive.motion import Rest
from core.drive.train import Brake

if TYPE_CHECKING:
    from core.drive.demand import Demand
    from core.drive.torque import Study

# Angles that are tried at first, and how often the hardest push is closed in on.
_ANGLES, _CLOSER = 1441, 4

# Relative to a radian or to the angle: positions of rests that differ by less are one.
_SAME_ANGLE = 1e-9

Drift: TypeAlias = Literal["stays", "turns forwards", "turns backwards"]


@dataclass(frozen=True)
class Standstill:
    """The load at rest at one angle, all torques as seen from the load shaft.

    Attributes:
        angle: rad, of the load.
        holding: N·m that the drive has to give there to hold it, friction and losses not counted on.
        holding_at_motor: N·m, the same at the motor.
        push: N·m that turns the load when the drive is off; positive forwards. A stage or screw that the load cannot
            turn lets nothing through.
        friction: N·m of dry friction against it, of all shafts, losses not counted.
        brakes: N·m of all brakes of the train together when they are applied.
        drift: what the load does when the drive is off and no brake is applied.
        drift_braked: the same with every brake applied.
    """

    angle: float
    holding: float
    holding_at_motor: float
    push: float
    friction: float
    brakes: float
    drift: Drift
    drift_braked: Drift


def standstill(demand: Demand, angle: float) -> Standstill:
    """Return what the load does at rest at an angle (rad)."""
    turned = np.array([angle])
    push, size = (float(values[0]) for values in _push(demand, turned))
    holding = float(holding_torque(demand, turned)[0])
    friction, brakes = dry_friction_at_load(demand), brakes_at_load(demand)
    slack = ROUND_OFF * size
    return Standstill(
        angle, holding, holding / demand.train.ratio, push, friction, brakes,
        _drift(push, friction + slack), _drift(push, friction + brakes + slack),
    )


def standstills_of(study: Study) -> tuple[Standstill, ...]:
    """Return one for the start of the duty and one for each of its rests, an angle named once."""
    duty = study.duty
    after = zip(duty.positions[1:], duty.flat, strict=True)
    angles = [duty.start, *(angle for angle, step in after if isinstance(step, Rest))]
    return tuple(standstill(study.demand, angle) for angle in _different(angles))


def worst_standstill(demand: Demand, lowest: float, highest: float) -> Standstill:
    """Return the standstill between two angles (rad) from which the load is pushed hardest."""
    angles = np.linspace(lowest, highest, _ANGLES)
    step = angles[1] - angles[0]
    for _ in range(_CLOSER):
        push, size = _push(demand, angles)
        # The first of equals, so that round-off does not choose.
        best = float(angles[int(np.argmax(np.abs(push) >= np.abs(push).max() - ROUND_OFF * size))])
        angles = np.clip(best + step * np.linspace(-1, 1, 65), lowest, highest)
        step /= 32
    return standstill(demand, best)


def holding_torque(demand: Demand, angle: ArrayLike) -> FloatArray:
    """Return the torque (m,) N·m at the load shaft that balances all others at angles (m,) rad, nothing moving."""
    gravity, applied = held_terms(demand, np.asarray(angle, dtype=float))
    return gravity + applied


def held_terms(
    demand: Demand, angle: FloatArray, ranged: FloatArray | None = None
) -> tuple[FloatArray, FloatArray]:
    """Return what gravity and what applied loads ask for at rest, (m,) N·m each at the load shaft.

    Args:
        demand: all that acts.
        angle: (m,) rad, of the load.
        ranged: (m,) rad, angles on the same side of the ends of all ranges; None: the angles themselves.
    """
    waves, speeds = demand.waves, demand.train.speeds
    torques = waves.at(angle, speeds, np.zeros(len(angle)), ranged) * speeds[waves.shaft][:, None]
    lifted = sum(torque for _, torque in _lifts(demand))
    return torques[waves.term == GRAVITY].sum(axis=0) + lifted, torques[waves.term != GRAVITY].sum(axis=0)


def dry_friction_at_load(demand: Demand) -> float:
    """Return the friction that does not depend on speed, of all shafts and guides, N·m at the load shaft."""
    guides = (
        (load.friction + load.friction_coefficient * load.mass * demand.weight_factor * math.cos(load.slope))
        * load.travel * abs(float(demand.train.speeds[demand.train.index(load.shaft)]))
        for load in demand.train.linear
    )
    return float(demand.dry @ np.abs(demand.train.speeds)) + math.fsum(guides)


def brakes_at_load(demand: Demand) -> float:
    """Return the torque of all brakes of the train applied together, N·m at the load shaft."""
    stages, speeds = demand.train.stages, demand.train.speeds
    return math.fsum(
        stage.torque * abs(float(speeds[at])) for at, stage in enumerate(stages) if isinstance(stage, Brake)
    )


def _lifts(demand: Demand) -> list[tuple[int, float]]:
    """Return (shaft, N·m at the load shaft that holds it) of every mass moved along a line."""
    lifts = []
    for load in demand.train.linear:
        at = demand.train.index(load.shaft)
        pull = load.mass * demand.weight_factor * math.sin(load.slope) * load.travel
        lifts.append((at, pull * float(demand.train.speeds[at])))
    return lifts


def _push(demand: Demand, angle: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return what turns the load when the drive is off (m,), and the size of the terms it is made of (m,), N·m."""
    train, waves = demand.train, demand.waves
    torques = -waves.at(angle, train.speeds, np.zeros(len(angle))) * train.speeds[waves.shaft][:, None]
    of_shaft = np.zeros((len(train.shafts), len(angle)))
    np.add.at(of_shaft, waves.shaft, torques)
    size = (np.abs(waves.constant) + np.hypot(waves.cosine, waves.sine)) @ np.abs(train.speeds[waves.shaft])
    for load, (at, lift) in zip(train.linear, _lifts(demand), strict=True):
        size += abs(lift)
        if load.braking_efficiency != 0:
            of_shaft[at] -= lift
    push = of_shaft[-1]
    for at in range(len(train.stages) - 1, -1, -1):
        if train.stages[at].braking_efficiency == 0:
            push = np.zeros(len(angle))
        push = push + of_shaft[at]
    return push, np.full(len(angle), size)


def _drift(push: float, against: float) -> Drift:
    if abs(push) <= against:
        return "stays"
    return "turns forwards" if push > 0 else "turns backwards"


def _different(angles: list[float]) -> list[float]:
    """Return the angles without those that differ from an earlier one by round-off only."""
    values = np.asarray(angles)
    order = np.argsort(values, kind="stable")
    rising = values[order]
    new = np.diff(rising) > _SAME_ANGLE * np.maximum(1.0, np.abs(rising[1:]))
    run = np.concatenate([[0], np.cumsum(new)])
    first = np.full(run[-1] + 1, len(values))
    np.minimum.at(first, run, order)
    return [angles[at] for at in np.sort(first)]
