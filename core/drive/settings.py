"""What a document keeps about its drive: plain numbers, strings and tuples of them, nothing worked out."""

from __future__ import annotations

from dataclasses import dataclass, replace
from types import MappingProxyType
from typing import TYPE_CHECKING, TypeVar

import numpy as np

from core.drive.axis import TurnsWith
from core.drive.balance import refuse_unless_apart
from core.drive.demand import STANDARD_GRAVITY
from core.drive.limits import MotorLimits
from core.drive.motion import Duty
from core.drive.refusals import refuse_unless_finite, refuse_unless_positive
from core.drive.train import FIXED, LOAD, MOTOR, Train
from core.errors import ValueRefused

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.drive.balance import By, CorrectionPlane
    from core.drive.loads import AppliedForce, AppliedTorque, Friction
    from core.drive.stopping import StopCase
    from core.drive.train import LeadScrew, RackOrDrum, ShaftInertia, Stage
    from core.placement import Triple

_OnShaft = TypeVar(
    "_OnShaft", "TurnsWith", "RackOrDrum", "LeadScrew", "ShaftInertia", "AppliedTorque", "Friction", "StopCase",
    "BalanceSettings", "RackOrDrum | LeadScrew",
)


@dataclass(frozen=True)
class BalanceSettings:
    """What balance is judged by.

    Attributes:
        shaft: name of the shaft whose bodies are the rotor.
        speed: rad/s of that shaft in service; None: not known.
        grade: mm/s, the balance quality grade wanted; None: none. It needs a speed.
        bearings: stations of the two bearings along the axis, m from its point; None: not known.
        planes: where corrections can be made, none, one or two.
        by: adding masses or removing material.

    Raises:
        ValueRefused: a grade without a speed, bearings at one place, more than two planes.
    """

    shaft: str = LOAD
    speed: float | None = None
    grade: float | None = None
    bearings: tuple[float, float] | None = None
    planes: tuple[CorrectionPlane, ...] = ()
    by: By = "adding"

    def __post_init__(self) -> None:
        if self.speed is not None:
            refuse_unless_positive(self.speed, "service speed", "balance")
        if self.grade is not None:
            refuse_unless_positive(self.grade, "balance quality grade", "balance")
            if self.speed is None:
                raise ValueRefused(
                    "a balance grade needs a service speed", where="balance", read=f"G {self.grade:g} alone",
                    remedy="Give the speed that the rotor runs at",
                )
        if self.bearings is not None:
            refuse_unless_apart(*self.bearings, "the two bearings")
        if len(self.planes) > 2:  # noqa: PLR2004  # two planes correct any rigid rotor
            raise ValueRefused(
                "an unbalance is corrected in one plane or in two", where="balance", read=f"{len(self.planes)}"
            )
        if len(self.planes) == 2:  # noqa: PLR2004  # as above
            refuse_unless_apart(self.planes[0].station, self.planes[1].station, "the two correction planes")


@dataclass(frozen=True)
class DriveSettings:
    """Everything that a user enters about a drive.

    Attributes:
        turning: which lines turn with which shaft; at first the whole document with the load shaft.
        train: motor, stages, moved masses, typed inertias.
        duty: the cycle; no steps: not entered.
        forces, torques, frictions: what acts on it besides its own weight.
        gravity: (3) m/s², document frame.
        limits: of the motor.
        stops: stops to work out.
        balance: what balance is judged by.
        typed: what a person typed for a number, by its path in core.drive.fields, where that says more than it.

    Raises:
        ValueRefused: gravity that is not finite, or something on a shaft that the train has not.
    """

    turning: tuple[TurnsWith, ...] = (TurnsWith(),)
    train: Train = Train()
    duty: Duty = Duty()
    forces: tuple[AppliedForce, ...] = ()
    torques: tuple[AppliedTorque, ...] = ()
    frictions: tuple[Friction, ...] = ()
    gravity: Triple = STANDARD_GRAVITY
    limits: MotorLimits = MotorLimits()
    stops: tuple[StopCase, ...] = ()
    balance: BalanceSettings = BalanceSettings()
    typed: tuple[tuple[str, str], ...] = ()

    def __post_init__(self) -> None:
        for value in np.asarray(self.gravity, dtype=float).tolist():
            refuse_unless_finite(value, "acceleration of gravity", "drive")
        for torque in self.torques:
            self.train.index(torque.shaft, torque.name)
        for friction in self.frictions:
            self.train.index(friction.shaft, friction.name)
        for one in self.stops:
            self.train.index(one.shaft, "stop")
        self.train.index(self.balance.shaft, "balance")
        for entry in self.turning:
            if entry.shaft != FIXED:
                self.train.index(entry.shaft, "what turns")

    def with_stages(
        self, stages: tuple[Stage, ...], renamed: Mapping[str, str] = MappingProxyType({})
    ) -> DriveSettings:
        """Return the settings with other stages; what was on a shaft that is gone is on the load shaft.

        Args:
            stages: from the motor to the load.
            renamed: new names of stages by their old ones.

        Raises:
            ValueRefused: the stages make no train.
        """
        known = {MOTOR, LOAD, FIXED, *(stage.name for stage in stages)}

        def hung(item: _OnShaft) -> _OnShaft:
            shaft = renamed.get(item.shaft, item.shaft)
            return replace(item, shaft=shaft if shaft in known else LOAD)

        train = replace(
            self.train, stages=stages, linear=tuple(hung(one) for one in self.train.linear),
            inertias=tuple(hung(one) for one in self.train.inertias),
        )
        return replace(
            self, train=train, turning=tuple(hung(one) for one in self.turning),
            torques=tuple(hung(one) for one in self.torques), frictions=tuple(hung(one) for one in self.frictions),
            stops=tuple(hung(one) for one in self.stops), balance=hung(self.balance),
        )
