"""The torque found, put into the equation of motion written out for points and solved by SciPy, gives the motion back.

Also by SciPy: RMS and energies by adaptive quadrature, and a stop under gravity by an event of the integration.
"""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad, solve_ivp

from core.assembly import DriveAxis
from core.drive import (
    AppliedForce,
    ByLimits,
    ByTime,
    Demand,
    Duty,
    Friction,
    Gear,
    Law,
    Motor,
    Move,
    Rest,
    StopCase,
    Study,
    Train,
    TurningBody,
    stop,
)
from core.moments import Moments

G = np.array([0.0, 0.0, -9.80665])
HINGE = DriveAxis("Hinge", (0.2, -0.1, 0.3), (0.3, 1.0, 0.4))
MASSES = np.array([4.0, 2.5, 1.0])
PLACES = np.array([[0.6, 0.0, 0.3], [0.3, 0.4, 0.9], [-0.4, 0.2, 0.1]])
PUSH, AT = np.array([12.0, -5.0, 30.0]), np.array([0.7, 0.1, 0.2])
ROTOR, RATIO, EFFICIENCY = 0.004, -12.0, 0.82
DRY, VISCOUS = 1.7, 0.35

DUTY = Duty(
    (
        Move(2.2, ByTime(0.9), Law.MODIFIED_SINE), Rest(0.3), Move(-3.0, ByLimits(5.0, 12.0, 8.0, 90.0), Law.S_CURVE),
        Move(0.8, ByTime(0.5), Law.POLYNOMIAL_4567), Move(1.1, ByTime(0.6), Law.TRAPEZOIDAL),
    ),
    start=0.25,
)
DEMAND = Demand(
    Train(Motor(ROTOR), (Gear("gear", RATIO, EFFICIENCY),)),
    (TurningBody("arm", Moments.of_points(MASSES, PLACES), HINGE),),
    HINGE, (AppliedForce("push", tuple(PUSH), tuple(AT)),), (), (Friction("seal", DRY, VISCOUS),), tuple(G),
)
STUDY = Study(DEMAND, DUTY)
INERTIA = float(sum(m * np.linalg.norm(np.cross(p - HINGE.point, HINGE.unit)) ** 2 for m, p in zip(MASSES, PLACES, strict=True)))


def carried(place: np.ndarray, angle: float) -> np.ndarray:
    """A lever from the hinge after a turn, by its parts along and across the axis."""
    unit, lever = HINGE.unit, place - np.asarray(HINGE.point)
    along = (lever @ unit) * unit
    return along + math.cos(angle) * (lever - along) + math.sin(angle) * np.cross(unit, lever)


def outside_torque(angle: float) -> float:
    """What weight and push turn the arm with."""
    torque = np.cross(carried(AT, angle), PUSH)
    for mass, place in zip(MASSES, PLACES, strict=True):
        torque = torque + np.cross(carried(place, angle), mass * G)
    return float(torque @ HINGE.unit)


def motor_torque(time: float) -> float:
    motion = STUDY.timeline.at([time])
    return float(DEMAND.at_shaft(DEMAND.terms(motion), motion.direction, "motor").sum())


def acceleration(time: float, angle: float, speed: float, sense: float) -> float:
    """Solve rotor and arm together: what the gear passes on is multiplied or divided by its efficiency."""
    against = outside_torque(angle) - DRY * sense - VISCOUS * speed
    driven, answers = motor_torque(time) * RATIO, []
    for factor, driving in ((EFFICIENCY, True), (1 / EFFICIENCY, False)):
        found = (driven * factor + against) / (INERTIA + ROTOR * RATIO**2 * factor)
        passed_on = INERTIA * found - against
        if (passed_on * sense > 0) == driving:
            answers.append(found)
    # At the moment where nothing is passed on both hold, and agree.
    return answers[0]


def test_the_arms_inertia_is_that_of_its_points():
    assert DEMAND.bodies[0].inertia == pytest.approx(INERTIA, rel=1e-13)


def test_the_torque_found_moves_the_arm_as_the_duty_says():
    timeline = STUDY.timeline
    edges = [*timeline.time, timeline.length]
    for zone, (low, high) in enumerate(pairwise(edges)):
        sense = float(timeline.direction[zone])
        if sense == 0:
            continue
        inside = np.nextafter(high, low)
        solved = solve_ivp(
            lambda t, y, sense=sense, end=inside: (y[1], acceleration(min(t, end), y[0], y[1], sense)), (low, high),
            (timeline.angle[zone], timeline.speed[zone]), rtol=1e-10, atol=1e-12,
        )
        end = timeline.within(np.array([zone]), timeline.zones.duration[[zone]])
        assert solved.y[0, -1] == pytest.approx(end.angle[0], abs=1e-7)
        assert solved.y[1, -1] == pytest.approx(end.speed[0], abs=1e-6)


def by_quadrature(value: object) -> float:
    """The integral over the duty, zone by zone."""
    timeline = STUDY.timeline
    return sum(
        quad(value, low, np.nextafter(high, low), epsabs=1e-11, epsrel=1e-11, limit=400)[0]
        for low, high in pairwise([*timeline.time, timeline.length])
    )


def test_rms_and_energies_are_those_of_adaptive_quadrature():
    needs, timeline = STUDY.needs("motor"), STUDY.timeline

    def power(time: float) -> float:
        return motor_torque(time) * float(timeline.at([time]).speed[0]) * RATIO

    assert needs.rms == pytest.approx(math.sqrt(by_quadrature(lambda t: motor_torque(t) ** 2) / timeline.length), rel=1e-8)
    assert needs.energy.driving == pytest.approx(by_quadrature(lambda t: max(power(t), 0.0)), rel=1e-7)
    assert needs.energy.returned == pytest.approx(by_quadrature(lambda t: max(-power(t), 0.0)), rel=1e-7)


@pytest.mark.parametrize(("speed", "brake"), [(6.0, 60.0), (-6.0, 60.0), (9.0, 45.0)])
def test_a_stop_under_gravity_takes_the_time_and_angle_of_the_integrated_motion(speed, brake):
    sense = math.copysign(1.0, speed)
    inertia = INERTIA + ROTOR * RATIO**2

    def rate(_time: float, state: np.ndarray) -> tuple[float, float]:
        torque = outside_torque(state[0]) - sense * (brake + DRY) - VISCOUS * state[1]
        return state[1], torque / inertia

    def standing(_time: float, state: np.ndarray) -> float:
        return state[1]

    standing.terminal, standing.direction = True, -sense
    solved = solve_ivp(rate, (0.0, 60.0), (0.4, speed), events=standing, rtol=1e-11, atol=1e-12)
    found = stop(DEMAND, StopCase(speed, brake, angle=0.4))
    assert found.time == pytest.approx(solved.t[-1], rel=1e-7)
    assert found.angle == pytest.approx(solved.y[0, -1] - 0.4, rel=1e-7)
