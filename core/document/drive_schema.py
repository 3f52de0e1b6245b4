"""The schema of what is entered about a drive; each entry is named as the attribute of core.drive that it fills.

Inertia in kg·m², lengths in m, masses in kg, angles in rad, speeds in rad/s, times in s, forces in N, torques in N·m.
"""

from __future__ import annotations

from typing import Annotated, Literal, TypeAlias

from pydantic import Field, Strict

from core.document.schema_base import MOST_ENTRIES, Entry, Name, Number, Three, Two, Typed
from core.drive.motion import MOST_STEPS

Shaft: TypeAlias = Name
Side: TypeAlias = Literal["motor side", "load side"]
Follows: TypeAlias = Literal["space", "part"]


class TurnsWithEntry(Entry):
    """Which shaft a line turns with, and about which axis."""

    key: Name
    shaft: Shaft
    axis: Name


class GearEntry(Entry):
    """A gear pair or gearbox."""

    kind: Literal["gear"]
    name: Name
    ratio: Number
    efficiency: Number
    inertia: Number
    quoted_at: Side
    braking_efficiency: Number | None


class BeltEntry(Entry):
    """A belt or chain over two wheels."""

    kind: Literal["belt"]
    name: Name
    motor_radius: Number
    load_radius: Number
    efficiency: Number
    motor_inertia: Number
    load_inertia: Number
    mass: Number
    braking_efficiency: Number | None


class CouplingEntry(Entry):
    """A coupling."""

    kind: Literal["coupling"]
    name: Name
    inertia: Number


class BrakeEntry(Entry):
    """A brake."""

    kind: Literal["brake"]
    name: Name
    inertia: Number
    torque: Number


StageEntry: TypeAlias = Annotated[GearEntry | BeltEntry | CouplingEntry | BrakeEntry, Field(discriminator="kind")]


class _LinearEntry(Entry):
    """A mass that is moved along a line."""

    name: Name
    mass: Number
    slope: Number
    efficiency: Number
    friction: Number
    friction_coefficient: Number
    inertia: Number
    shaft: Shaft
    braking_efficiency: Number | None


class RackOrDrumEntry(_LinearEntry):
    """Moved by a rack and pinion, a belt's straight run, or a rope on a drum."""

    kind: Literal["rack or drum"]
    radius: Number


class LeadScrewEntry(_LinearEntry):
    """Moved by a screw."""

    kind: Literal["lead screw"]
    lead: Number


LinearEntry: TypeAlias = Annotated[RackOrDrumEntry | LeadScrewEntry, Field(discriminator="kind")]


class ShaftInertiaEntry(Entry):
    """A known inertia on a shaft."""

    name: Name
    inertia: Number
    shaft: Shaft


class MotorEntry(Entry):
    """What the motor's data sheet says, and the user's own limit."""

    inertia: Number
    ratio_limit: Number | None
    rotor: Name


class TrainEntry(Entry):
    """From the motor to the load."""

    motor: MotorEntry
    stages: Annotated[list[StageEntry], Field(max_length=MOST_ENTRIES)]
    linear: Annotated[list[LinearEntry], Field(max_length=MOST_ENTRIES)]
    inertias: Annotated[list[ShaftInertiaEntry], Field(max_length=MOST_ENTRIES)]


class ByTimeEntry(Entry):
    """A move by its time."""

    kind: Literal["by time"]
    time: Number


class ByLimitsEntry(Entry):
    """A move by its limits."""

    kind: Literal["by limits"]
    speed: Number | None
    acceleration: Number | None
    deceleration: Number | None
    jerk: Number | None


TimingEntry: TypeAlias = Annotated[ByTimeEntry | ByLimitsEntry, Field(discriminator="kind")]


class MoveEntry(Entry):
    """A turn of the load from rest to rest."""

    kind: Literal["move"]
    angle: Number
    timing: TimingEntry
    law: Literal[
        "trapezoidal", "triangular", "S-curve", "cycloidal", "harmonic", "modified sine", "modified trapezoid",
        "3-4-5 polynomial", "4-5-6-7 polynomial",
    ]
    ramp_up: Number
    ramp_down: Number
    smoothing: Number


class RestEntry(Entry):
    """A standstill."""

    kind: Literal["rest"]
    time: Number


class RepeatEntry(Entry):
    """Moves and rests done several times over."""

    kind: Literal["repeat"]
    steps: Annotated[
        list[Annotated[MoveEntry | RestEntry, Field(discriminator="kind")]], Field(max_length=MOST_STEPS)
    ]
    times: int


StepEntry: TypeAlias = Annotated[MoveEntry | RestEntry | RepeatEntry, Field(discriminator="kind")]


class DutyEntry(Entry):
    """One cycle."""

    steps: Annotated[list[StepEntry], Field(max_length=MOST_STEPS)]
    start: Number


class AppliedForceEntry(Entry):
    """A force on what turns with the load."""

    name: Name
    force: Three
    point: Three
    direction_in: Follows
    point_in: Follows
    start: Number | None
    end: Number | None


class AppliedTorqueEntry(Entry):
    """A torque that the drive has to overcome."""

    name: Name
    torque: Number
    sense: Literal["fixed", "against motion"]
    shaft: Shaft
    start: Number | None
    end: Number | None


class FrictionEntry(Entry):
    """Friction of a shaft."""

    name: Name
    constant: Number
    viscous: Number
    coefficient: Number
    radius: Number
    load: Number | None
    shaft: Shaft


class LimitCurveEntry(Entry):
    """Torque over speed."""

    points: Annotated[list[Two], Field(max_length=MOST_ENTRIES)]


class MotorLimitsEntry(Entry):
    """What the motor gives for ever and for a moment."""

    continuous: LimitCurveEntry | None
    peak: LimitCurveEntry | None


class StopCaseEntry(Entry):
    """A stop to work out."""

    speed: Number
    torque: Number | None
    shaft: Shaft
    angle: Number


class CorrectionPlaneEntry(Entry):
    """Where a correction can be made."""

    station: Number
    radius: Number


class BalanceEntry(Entry):
    """What balance is judged by."""

    shaft: Shaft
    speed: Number | None
    grade: Number | None
    bearings: Annotated[tuple[Number, Number], Strict(strict=False)] | None
    planes: Annotated[list[CorrectionPlaneEntry], Field(max_length=2)]
    by: Literal["adding", "removing"]


class DriveSettingsEntry(Entry):
    """Everything that is entered about a drive."""

    turning: Annotated[list[TurnsWithEntry], Field(max_length=MOST_ENTRIES)]
    train: TrainEntry
    duty: DutyEntry
    forces: Annotated[list[AppliedForceEntry], Field(max_length=MOST_ENTRIES)]
    torques: Annotated[list[AppliedTorqueEntry], Field(max_length=MOST_ENTRIES)]
    frictions: Annotated[list[FrictionEntry], Field(max_length=MOST_ENTRIES)]
    gravity: Three
    limits: MotorLimitsEntry
    stops: Annotated[list[StopCaseEntry], Field(max_length=MOST_ENTRIES)]
    balance: BalanceEntry
    typed: Typed = Field(default_factory=list)
