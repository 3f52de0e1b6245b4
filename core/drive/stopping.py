"""How long and how far the load turns until a braking torque has stopped it, the drive being off."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from core.drive.refusals import refuse_if_negative, refuse_unless_finite
from core.drive.standstill import brakes_at_load, dry_friction_at_load, standstill
from core.drive.train import LOAD
from core.errors import ValueRefused

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.drive.demand import Demand

# Steps of the integration (classical Runge–Kutta, 4th order): over the time that a level load would take, for each
# turn of the fastest unbalanced shaft, and at most.
_STEPS, _STEPS_PER_TURN, _MOST_STEPS = 400, 60, 40_000

# Halvings that bring the end of the last step to the last bit.
_HALVINGS = 60

_State: TypeAlias = tuple[float, float]


@dataclass(frozen=True)
class StopCase:
    """A stop to work out.

    Attributes:
        speed: rad/s of the load when braking begins; its sign is the sense.
        torque: N·m of the brake, at its shaft; None: the brakes of the train, all applied.
        shaft: name of the shaft that it brakes.
        angle: rad, of the load when braking begins.
    """

    speed: float
    torque: float | None = None
    shaft: str = LOAD
    angle: float = 0.0

    def __post_init__(self) -> None:
        refuse_unless_finite(self.speed, "speed", "stop")
        refuse_unless_finite(self.angle, "angle", "stop")
        if self.speed == 0:
            raise ValueRefused(
                "what stands still needs no stopping", where="stop", read="0 rad/s", remedy="Give a speed"
            )
        if self.torque is not None:
            refuse_if_negative(self.torque, "braking torque", "stop")


@dataclass(frozen=True)
class Stop:
    """A stop worked out.

    Attributes:
        case: what was asked.
        time: s until it stands.
        angle: rad that the load turns until then, signed.
        energy: J, ½·J·ω² of everything that moves when braking begins.
        heat: J that the brake takes up.
        holds: whether brake and friction then hold the load where it is.
    """

    case: StopCase
    time: float
    angle: float
    energy: float
    heat: float
    holds: bool


def stop(demand: Demand, case: StopCase) -> Stop:
    """Return the stop, gravity, friction and applied loads working on; losses of the train, which help, left out.

    Raises:
        ValueRefused: the load is not stopped.
    """
    train = demand.train
    at = train.index(case.shaft, "stop")
    brake = brakes_at_load(demand) if case.torque is None else case.torque * abs(float(train.speeds[at]))
    inertia, sense = demand.inertia_at_load, math.copysign(1.0, case.speed)
    if inertia <= 0:
        raise ValueRefused("nothing that has mass turns", where="stop", remedy="Say what turns with the shafts")
    slow = brake + dry_friction_at_load(demand)
    rate = _rate(demand, sense * slow, sense)
    step = _first_step(demand, case, slow, inertia)
    time, state = 0.0, (case.angle, case.speed)
    for _ in range(_MOST_STEPS):
        after = _stepped(rate, state, step)
        if after[1] * sense <= 0:
            time, state = _last_step(rate, state, step, time, sense)
            break
        time, state = time + step, after
    else:
        raise ValueRefused(
            "this braking torque does not stop the load", where="stop", read=f"{brake:.4g} N·m at the load",
            remedy="Give a larger one",
        )
    turned = state[0] - case.angle
    rest = standstill(demand, state[0])
    holds = abs(rest.push) <= slow
    return Stop(case, time, turned, inertia * case.speed**2 / 2, brake * abs(turned), holds)


def _rate(demand: Demand, constant: float, sense: float) -> Callable[[_State], _State]:
    """Return dθ/dt and dω/dt of the load as a function of (θ, ω)."""
    speeds, waves, inertia = demand.train.speeds.tolist(), demand.waves, demand.inertia_at_load
    viscous = float(demand.viscous @ demand.train.speeds**2)
    lift = math.fsum(
        load.mass * demand.weight_factor * math.sin(load.slope) * load.travel * speeds[demand.train.index(load.shaft)]
        for load in demand.train.linear
    )
    rows = [
        (speeds[shaft], *row)
        for shaft, *row in zip(
            waves.shaft.tolist(), waves.constant.tolist(), waves.cosine.tolist(), waves.sine.tolist(),
            waves.against.tolist(), waves.start.tolist(), waves.span.tolist(), strict=True,
        )
    ]

    def rate(state: _State) -> _State:
        angle, speed = state
        torque = constant + lift + viscous * speed
        for turn, fixed, cosine, sine, against, start, span in rows:
            if (angle - start) % (2 * math.pi) > span:
                continue
            asked = (fixed + cosine * math.cos(turn * angle) + sine * math.sin(turn * angle)) * turn
            torque += math.copysign(asked, sense) if against else asked
        return speed, -torque / inertia

    return rate


def _first_step(demand: Demand, case: StopCase, slow: float, inertia: float) -> float:
    """Return the time step: a share of the stop of a level load, and of a turn where a torque varies with it."""
    waves = demand.waves
    varying = (waves.cosine != 0) | (waves.sine != 0)
    fastest = float(abs(demand.train.speeds[waves.shaft[varying]]).max(initial=0.0))
    steps = [inertia * abs(case.speed) / slow / _STEPS] if slow else []
    steps += [2 * math.pi / (fastest * abs(case.speed)) / _STEPS_PER_TURN] if fastest else []
    if not steps:
        raise ValueRefused(
            "without a braking torque, friction or weight nothing stops the load", where="stop", read="0 N·m",
            remedy="Give the braking torque",
        )
    return min(steps)


def _stepped(rate: Callable[[_State], _State], state: _State, step: float) -> _State:
    """Return the state one step later (classical Runge–Kutta)."""
    angle, speed = state
    a = rate(state)
    b = rate((angle + step / 2 * a[0], speed + step / 2 * a[1]))
    c = rate((angle + step / 2 * b[0], speed + step / 2 * b[1]))
    d = rate((angle + step * c[0], speed + step * c[1]))
    return (
        angle + step / 6 * (a[0] + 2 * b[0] + 2 * c[0] + d[0]), speed + step / 6 * (a[1] + 2 * b[1] + 2 * c[1] + d[1])
    )


def _last_step(
    rate: Callable[[_State], _State], state: _State, step: float, time: float, sense: float
) -> tuple[float, _State]:
    low, high = 0.0, step
    for _ in range(_HALVINGS):
        middle = (low + high) / 2
        if _stepped(rate, state, middle)[1] * sense > 0:
            low = middle
        else:
            high = middle
    return time + high, _stepped(rate, state, high)
