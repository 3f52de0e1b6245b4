"""A drive with an entry of every kind, for the tests of what a document keeps and what an edit changes."""

from __future__ import annotations

from math import pi

from core.assembly import Assembly, DriveAxis, Group, Part, ShapeBody
from core.drive import (
    AppliedForce,
    AppliedTorque,
    BalanceSettings,
    Belt,
    Brake,
    ByLimits,
    ByTime,
    CorrectionPlane,
    Coupling,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LeadScrew,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    RackOrDrum,
    Repeat,
    Rest,
    ShaftInertia,
    StopCase,
    Train,
    TurnsWith,
)
from core.machine import Machine
from core.material import ByMaterial
from core.placement import Pose
from core.shapes import Box, Cylinder

STEEL = ByMaterial("steel", 7850.0)


def flap() -> Assembly:
    """A leaf on a hinge, and a drum beside it that turns with the motor."""
    leaf = Part("leaf", "leaf", ShapeBody(Box(0.6, 0.4, 0.01)), STEEL, Pose((0.3, 0.0, 0.0)))
    drum = Part("drum", "drum", ShapeBody(Cylinder(0.1, 0.05)), STEEL, Pose((0.0, 0.0, 0.5)))
    axes = (DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0)), DriveAxis("Drum", (0.0, 0.0, 0.5), (0.0, 0.0, 1.0)))
    return Assembly("flap", (Group("flap", "flap", (leaf,)), drum), axes, "Hinge")


def settings() -> DriveSettings:
    """Return settings in which every kind of entry is there once."""
    train = Train(
        Motor(2e-5, 8.0, "drum"),
        (
            Coupling("coupling", 1e-5), Brake("brake", 2e-5, 1.5),
            Gear("gearbox", 20.0, 0.9, 3e-5, "motor side", 0.8), Belt("belt", 0.03, 0.06, 0.97, 1e-4, 2e-3, 0.4),
        ),
        (RackOrDrum("cable", 0.05, 3.0, pi / 2, 0.95), LeadScrew("clamp", 0.005, 1.0, shaft="gearbox")),
        (ShaftInertia("pulley", 1e-4, "gearbox"),),
    )
    duty = Duty(
        (
            Move(0.5, ByTime(0.8), Law.S_CURVE), Rest(0.2),
            Repeat((Move(-0.1, ByLimits(1.0, 4.0)), Move(0.1, ByTime(0.5), Law.CYCLOIDAL)), 3),
            Move(-0.5, ByTime(0.8), Law.MODIFIED_SINE),
        ),
        0.1,
    )
    return DriveSettings(
        (TurnsWith(), TurnsWith("drum", "motor", "Drum")), train, duty,
        (AppliedForce("wind", (0.0, 0.0, -5.0), (0.5, 0.0, 0.0), start=0.0, end=1.0),),
        (AppliedTorque("seal", 0.3, "against motion"),), (Friction("hinge", 0.1, 0.02, 0.15, 0.01),),
        limits=MotorLimits(LimitCurve(((0.0, 1.0), (300.0, 0.8))), LimitCurve(((0.0, 3.0), (300.0, 2.0)))),
        stops=(StopCase(0.5, shaft="motor"),),
        balance=BalanceSettings("load", 3.0, 6.3, (-0.2, 0.2), (CorrectionPlane(0.0, 0.1),), "removing"),
    )


def flap_machine() -> Machine:
    """Return the flap with its drive."""
    return Machine(flap(), settings())
