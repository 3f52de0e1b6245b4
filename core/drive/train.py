"""The train from the motor to the load: its stages, what hangs on its shafts, and inertia seen from any of them.

Shafts carry names: "motor", then the name of each stage for the shaft on its load side; the last one is also
called "load". One angle moves them all: shaft i turns s_i = ω_i/ω_load times as fast as the load shaft.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.arrays import FloatArray, frozen
from core.drive.refusals import (
    refuse_if_negative,
    refuse_unless_braking_efficiency,
    refuse_unless_efficiency,
    refuse_unless_finite,
    refuse_unless_positive,
)
from core.errors import ValueRefused
from core.once import Once

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.drive.axis import TurningBody

MOTOR, LOAD, FIXED = "motor", "load", "fixed"

Side: TypeAlias = Literal["motor side", "load side"]


@dataclass(frozen=True)
class Gear:
    """A gear pair or gearbox.

    Attributes:
        name: as shown; also the name of the shaft on its load side.
        ratio: turns of the motor side for one turn of the load side; negative where the load side turns the other way.
        efficiency: 0…1, power out per power in while the motor drives.
        inertia: kg·m², of the stage itself, as quoted at one of its sides.
        quoted_at: which side the inertia is quoted at.
        braking_efficiency: the same while the load drives the motor; None: as in driving; 0: the load cannot.

    Raises:
        ValueRefused: a ratio of 0, an efficiency that is not 0…1, a negative inertia.
    """

    name: str
    ratio: float
    efficiency: float = 1.0
    inertia: float = 0.0
    quoted_at: Side = "motor side"
    braking_efficiency: float | None = None

    def __post_init__(self) -> None:
        refuse_unless_finite(self.ratio, "ratio", self.name)
        if self.ratio == 0:
            raise ValueRefused(
                "a ratio of 0 turns nothing", where=self.name, read="0",
                remedy="Give the turns of the motor side for one turn of the load side",
            )
        _refuse_efficiencies(self.efficiency, self.braking_efficiency, self.name)
        refuse_if_negative(self.inertia, "inertia", self.name)
        if self.quoted_at not in ("motor side", "load side"):
            raise ValueRefused(
                "an inertia is quoted at the motor side or the load side", where=self.name, read=self.quoted_at
            )

    @property
    def inertias(self) -> tuple[float, float]:
        """Its inertia on the shafts of the motor side and of the load side, kg·m²."""
        return (self.inertia, 0.0) if self.quoted_at == "motor side" else (0.0, self.inertia)


@dataclass(frozen=True)
class Belt:
    """A belt or chain over two wheels.

    Attributes:
        name: as shown; also the name of the shaft on its load side.
        motor_radius, load_radius: m, of the pitch circles of the two wheels.
        efficiency, braking_efficiency: as of a gear.
        motor_inertia, load_inertia: kg·m², of the wheels on their own shafts.
        mass: kg, of the belt or chain, which moves as the pitch circles do.
    """

    name: str
    motor_radius: float
    load_radius: float
    efficiency: float = 1.0
    motor_inertia: float = 0.0
    load_inertia: float = 0.0
    mass: float = 0.0
    braking_efficiency: float | None = None

    def __post_init__(self) -> None:
        refuse_unless_positive(self.motor_radius, "radius of the wheel on the motor side", self.name)
        refuse_unless_positive(self.load_radius, "radius of the wheel on the load side", self.name)
        _refuse_efficiencies(self.efficiency, self.braking_efficiency, self.name)
        refuse_if_negative(self.motor_inertia, "inertia of the wheel on the motor side", self.name)
        refuse_if_negative(self.load_inertia, "inertia of the wheel on the load side", self.name)
        refuse_if_negative(self.mass, "mass of the belt or chain", self.name)

    @property
    def ratio(self) -> float:
        """Turns of the motor side for one turn of the load side."""
        return self.load_radius / self.motor_radius

    @property
    def inertias(self) -> tuple[float, float]:
        """Inertia on the shafts of the motor side (with the belt, m·r²) and of the load side, kg·m²."""
        return self.motor_inertia + self.mass * self.motor_radius**2, self.load_inertia


@dataclass(frozen=True)
class Coupling:
    """A coupling; inertia in kg·m² of the whole of it."""

    name: str
    inertia: float = 0.0
    ratio = 1.0
    efficiency = 1.0
    braking_efficiency = None

    def __post_init__(self) -> None:
        refuse_if_negative(self.inertia, "inertia", self.name)

    @property
    def inertias(self) -> tuple[float, float]:
        """Its inertia, which both of its shafts share, kg·m²."""
        return self.inertia, 0.0


@dataclass(frozen=True)
class Brake:
    """A brake on the shaft that runs through it.

    Attributes:
        name: as shown.
        inertia: kg·m², of what turns in it.
        torque: N·m, the braking torque at its own shaft when it is applied.
    """

    name: str
    inertia: float = 0.0
    torque: float = 0.0
    ratio = 1.0
    efficiency = 1.0
    braking_efficiency = None

    def __post_init__(self) -> None:
        refuse_if_negative(self.inertia, "inertia", self.name)
        refuse_if_negative(self.torque, "braking torque", self.name)

    @property
    def inertias(self) -> tuple[float, float]:
        """Its inertia on its shaft, kg·m²."""
        return self.inertia, 0.0


Stage: TypeAlias = Gear | Belt | Coupling | Brake


@dataclass(frozen=True)
class RackOrDrum:
    """A mass moved by a rack and pinion, a belt's straight run, or a rope on a drum.

    Attributes:
        name: as shown.
        radius: m, of the pinion's pitch circle or the drum, so that v = radius·ω.
        mass: kg, of what moves along.
        slope: rad, how steeply it climbs as its shaft turns forwards: 0 level, π/2 lifted straight up.
        efficiency, braking_efficiency: of turning to moving, as of a gear.
        friction: N, of the guide, whatever the load.
        friction_coefficient: of the guide, times the mass's weight across the slope.
        inertia: kg·m², of the pinion or drum on its shaft.
        shaft: name of the shaft it is on.
    """

    name: str
    radius: float
    mass: float
    slope: float = 0.0
    efficiency: float = 1.0
    friction: float = 0.0
    friction_coefficient: float = 0.0
    inertia: float = 0.0
    shaft: str = LOAD
    braking_efficiency: float | None = None

    def __post_init__(self) -> None:
        refuse_unless_positive(self.radius, "radius", self.name)
        _refuse_linear(self)

    @property
    def travel(self) -> float:
        """How far the mass moves for a turn of one radian, m/rad."""
        return self.radius


@dataclass(frozen=True)
class LeadScrew:
    """A mass moved by a screw; lead in m for a full turn, the rest as of RackOrDrum."""

    name: str
    lead: float
    mass: float
    slope: float = 0.0
    efficiency: float = 1.0
    friction: float = 0.0
    friction_coefficient: float = 0.0
    inertia: float = 0.0
    shaft: str = LOAD
    braking_efficiency: float | None = None

    def __post_init__(self) -> None:
        refuse_unless_positive(self.lead, "lead", self.name)
        _refuse_linear(self)

    @property
    def travel(self) -> float:
        """How far the mass moves for a turn of one radian, m/rad."""
        return self.lead / (2 * math.pi)


LinearLoad: TypeAlias = RackOrDrum | LeadScrew


@dataclass(frozen=True)
class ShaftInertia:
    """Something of known inertia (kg·m²) that turns with a shaft and has no torque of gravity: a pulley, a hub."""

    name: str
    inertia: float
    shaft: str = LOAD

    def __post_init__(self) -> None:
        refuse_if_negative(self.inertia, "inertia", self.name)


@dataclass(frozen=True)
class Motor:
    """What the motor's data sheet says, and the user's own limit.

    Attributes:
        inertia: kg·m², of the rotor.
        ratio_limit: the user's own limit of load inertia per motor inertia; None: not judged.
        rotor: key of a ledger line that is this rotor, "" where there is none.
    """

    inertia: float = 0.0
    ratio_limit: float | None = None
    rotor: str = ""

    def __post_init__(self) -> None:
        refuse_if_negative(self.inertia, "inertia of the rotor", "motor")
        if self.ratio_limit is not None:
            refuse_unless_positive(self.ratio_limit, "limit of the inertia ratio", "motor")


@dataclass(frozen=True)
class Train:
    """Everything between the motor and the load.

    Attributes:
        motor: at the first shaft.
        stages: from the motor to the load.
        linear: masses moved by the shafts.
        inertias: typed inertias on the shafts.

    Raises:
        ValueRefused: two stages of one name, a reserved name, or something on a shaft that is not there.
    """

    motor: Motor = Motor()
    stages: tuple[Stage, ...] = ()
    linear: tuple[LinearLoad, ...] = ()
    inertias: tuple[ShaftInertia, ...] = ()

    def __post_init__(self) -> None:
        names = [stage.name for stage in self.stages]
        for name in names:
            if names.count(name) > 1 or name in ("", MOTOR, LOAD, FIXED):
                raise ValueRefused(
                    "each stage needs a name of its own, other than motor, load and fixed", where="train",
                    read=repr(name), remedy="Name it for what it is, such as gearbox",
                )
        for item in (*self.linear, *self.inertias):
            self.index(item.shaft, item.name)

    @Once
    def shafts(self) -> tuple[str, ...]:
        """The names of the shafts, from the motor to the load."""
        return MOTOR, *(stage.name for stage in self.stages)

    def index(self, shaft: str, where: str = "train") -> int:
        """Return which shaft has this name, 0 the motor's.

        Raises:
            ValueRefused: none has.
        """
        if shaft == LOAD:
            return len(self.stages)
        if shaft not in self.shafts:
            raise ValueRefused(
                "the train has no such shaft", where=where, read=repr(shaft),
                remedy=f"Choose one of {', '.join((*self.shafts, LOAD))}",
            )
        return self.shafts.index(shaft)

    @Once
    def shaft_words(self) -> dict[str, str]:
        """What each shaft is called where it is shown, by its first name, from the motor to the load."""
        if not self.stages:
            return {LOAD: "motor and load"}
        return {MOTOR: MOTOR, **{stage.name: f"behind {stage.name}" for stage in self.stages[:-1]}, LOAD: LOAD}

    def first_name(self, shaft: str) -> str:
        """Return the one name of a shaft that has two: behind the last stage, and of the motor without stages, LOAD.

        Raises:
            ValueRefused: the train has no such shaft.
        """
        at = self.index(shaft)
        return LOAD if at == len(self.stages) else self.shafts[at]

    def words_of(self, shaft: str) -> str:
        """Return what a shaft is called where it is shown.

        Raises:
            ValueRefused: the train has no such shaft.
        """
        return self.shaft_words[self.first_name(shaft)]

    @Once
    def speeds(self) -> FloatArray:
        """Turns s (k,) of each shaft for one turn of the load shaft, negative for the other way round."""
        ratios = np.array([stage.ratio for stage in self.stages] + [1.0])
        return frozen(np.cumprod(ratios[::-1])[::-1])

    @property
    def ratio(self) -> float:
        """Turns of the motor for one turn of the load."""
        return float(self.speeds[0])


@dataclass(frozen=True)
class ReflectedRow:
    """One item of the train and what it adds to the inertia at the shaft that is spoken of.

    Attributes:
        name: of the item.
        shaft: the name of the shaft it is on.
        inertia: kg·m², on its own shaft; of a moving mass m·(v/ω)² there.
        mass: kg, of what moves along a line; None for what turns.
        travel: m/rad, v/ω on its own shaft; None for what turns.
        speed_ratio: ω of its shaft per ω of the shaft spoken of.
        reflected: kg·m², inertia × speed_ratio².
    """

    name: str
    shaft: str
    inertia: float
    mass: float | None
    travel: float | None
    speed_ratio: float
    reflected: float


@dataclass(frozen=True)
class Reflected:
    """J = Σ J_i·(ω_i/ω)² + Σ m·(v/ω)² at the shaft of this name, row by row; `inertia` is the sum in kg·m²."""

    shaft: str
    rows: tuple[ReflectedRow, ...]
    inertia: float

    @property
    def shares(self) -> tuple[float | None, ...]:
        """Share of each row in the sum, 0…1; None where the sum is 0."""
        return tuple(row.reflected / self.inertia if self.inertia else None for row in self.rows)


def reflected(train: Train, bodies: Sequence[TurningBody], shaft: str = MOTOR) -> Reflected:
    """Return what everything that moves adds up to at a shaft, the motor's rotor included.

    Raises:
        ValueRefused: the train has no such shaft.
    """
    at = train.index(shaft)
    rows = []
    for name, on, inertia, mass, travel in _items(train, bodies):
        speed = float(train.speeds[on] / train.speeds[at])
        rows.append(ReflectedRow(name, _shown(train, on), inertia, mass, travel, speed, inertia * speed**2))
    return Reflected(shaft, tuple(rows), math.fsum(row.reflected for row in rows))


def inertias_of_shafts(train: Train, bodies: Sequence[TurningBody]) -> FloatArray:
    """Return the inertia (k,) kg·m² on each shaft, moving masses as m·(v/ω)²."""
    sums = np.zeros(len(train.shafts))
    for _, on, inertia, _, _ in _items(train, bodies):
        sums[on] += inertia
    return frozen(sums)


@dataclass(frozen=True)
class InertiaRatio:
    """Inertia of the load as the motor sees it, per inertia of its rotor; None where the rotor's is not known.

    `within` says whether it keeps to the user's own limit; None where there is no limit.
    """

    ratio: float | None
    limit: float | None
    within: bool | None


def inertia_ratio(train: Train, bodies: Sequence[TurningBody]) -> InertiaRatio:
    """Return load : motor, both at the motor shaft."""
    rotor, limit = train.motor.inertia, train.motor.ratio_limit
    if rotor == 0:
        return InertiaRatio(None, limit, None)
    ratio = (reflected(train, bodies, MOTOR).inertia - rotor) / rotor
    return InertiaRatio(ratio, limit, None if limit is None else ratio <= limit)


def _items(
    train: Train, bodies: Sequence[TurningBody]
) -> list[tuple[str, int, float, float | None, float | None]]:
    """Return (name, shaft, inertia there, mass, travel) of everything that moves, from the motor to the load."""
    items: list[tuple[str, int, float, float | None, float | None]] = []
    if train.motor.inertia:
        items.append(("motor", 0, train.motor.inertia, None, None))
    for at, stage in enumerate(train.stages):
        near, far = stage.inertias
        items += [(stage.name, on, inertia, None, None) for on, inertia in ((at, near), (at + 1, far)) if inertia]
    items += [(one.name, train.index(one.shaft), one.inertia, None, None) for one in train.inertias]
    for moved in train.linear:
        on = train.index(moved.shaft)
        if moved.inertia:
            items.append((moved.name, on, moved.inertia, None, None))
        items.append((moved.name, on, moved.mass * moved.travel**2, moved.mass, moved.travel))
    items += [(body.name, train.index(body.shaft, body.name), body.inertia, None, None) for body in bodies]
    return sorted(items, key=lambda item: item[1])


def _shown(train: Train, at: int) -> str:
    return LOAD if at == len(train.stages) and at > 0 else train.shafts[at]


def _refuse_efficiencies(driving: float, braking: float | None, where: str) -> None:
    refuse_unless_efficiency(driving, where)
    refuse_unless_braking_efficiency(braking, where)


def _refuse_linear(load: LinearLoad) -> None:
    refuse_if_negative(load.mass, "moving mass", load.name)
    _refuse_efficiencies(load.efficiency, load.braking_efficiency, load.name)
    refuse_if_negative(load.friction, "friction of the guide", load.name)
    refuse_if_negative(load.friction_coefficient, "coefficient of friction", load.name)
    refuse_if_negative(load.inertia, "inertia", load.name)
    if not abs(load.slope) <= math.pi / 2:
        raise ValueRefused(
            "a slope lies between −90° and 90°", where=load.name, read=f"{math.degrees(load.slope):g}°",
            remedy="Give 0 for level, 90° for straight up",
        )
