"""Small drives that tests of core.drive share."""

from __future__ import annotations

import math

import numpy as np
import pytest

from core.assembly import DriveAxis
from core.drive.demand import Demand
from core.drive.motion import Kinematics
from core.drive.train import Motor, ShaftInertia, Train

# What the books that print the examples took for g.
G_OF_THE_BOOKS = (0.0, 0.0, -9.81)
RPM = 2 * math.pi / 60
UP = math.pi / 2
FLAP_AXIS = DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0))


def printed(value: float, last_digit: float) -> object:
    """Half a unit of the last printed digit."""
    return pytest.approx(value, rel=0, abs=last_digit / 2)


def moving(speed: float = 0.0, acceleration: float = 0.0, angle: float = 0.0, direction: float | None = None) -> Kinematics:
    """One moment of a motion of the load; its direction is that of the speed unless it is said."""
    sense = (math.copysign(1.0, speed) if speed else 0.0) if direction is None else direction
    return Kinematics(*(np.array([value]) for value in (0.0, angle, speed, acceleration, 0.0, sense)))


def torque_at(demand: Demand, shaft: str, motion: Kinematics) -> float:
    """The torque that a shaft has to be given at one moment."""
    return float(demand.at_shaft(demand.terms(motion), motion.direction, shaft).sum())


def demand_of(train: Train, axis: DriveAxis = FLAP_AXIS, **rest: object) -> Demand:
    return Demand(train, rest.pop("bodies", ()), axis, gravity=rest.pop("gravity", G_OF_THE_BOOKS), **rest)


def plain(inertia: float, motor: float = 0.0, stages: tuple = (), **rest: object) -> Train:
    """A train with one inertia at the load."""
    return Train(Motor(motor), stages, inertias=(ShaftInertia("load inertia", inertia),), **rest)
