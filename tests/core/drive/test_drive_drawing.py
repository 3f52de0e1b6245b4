"""What is drawn besides curves over time: torque over a full turn, torque over speed, limits."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from drive_cases import FLAP_AXIS, UP, plain

from core.assembly import Assembly, Part, ShapeBody
from core.drive import (
    AppliedTorque,
    ByTime,
    Demand,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LimitCurve,
    Move,
    RackOrDrum,
    Rest,
    Study,
    Train,
    TurningBody,
    drive_answer,
    standstill,
)
from core.drive.drawing import limit_line, over_a_turn, over_speed, peak_over_speed
from core.material import Weighed
from core.moments import Moments
from core.placement import Pose
from core.shapes import Sphere

G = 9.80665


def weight(mass: float = 2.0, x: float = 0.3) -> TurningBody:
    return TurningBody("arm", Moments.of_points([mass], [[x, 0.0, 0.0]]), FLAP_AXIS)


def test_over_a_turn_gravity_asks_a_cosine_wave_and_moved_masses_add_their_lift():
    demand = Demand(Train(linear=(RackOrDrum("cable", 0.05, 3.0, UP),)), (weight(),), FLAP_AXIS)
    turn = over_a_turn(demand, ())
    assert (turn.angle[0], turn.angle[-1]) == (-math.pi, math.pi)
    expected = -2.0 * G * 0.3 * np.cos(turn.angle) + 3.0 * G * 0.05
    np.testing.assert_allclose(turn.gravity, expected, rtol=0, atol=1e-13)
    np.testing.assert_array_equal(turn.holding, turn.gravity)


def test_over_a_turn_an_applied_load_is_there_within_its_range_only_with_both_sides_of_its_ends():
    press = AppliedTorque("press", 7.0, start=1.0, end=1.2503)
    turn = over_a_turn(Demand(Train(), (weight(),), FLAP_AXIS, torques=(press,)), ())
    applied = turn.holding - turn.gravity
    for edge, sides in ((1.0, [0.0, 7.0]), (1.2503, [7.0, 0.0])):
        assert applied[np.isclose(turn.angle, edge, rtol=0, atol=1e-12)] == pytest.approx(sides, abs=1e-13)
    inside = (turn.angle > 1.0) & (turn.angle < 1.2503)
    assert set(np.round(applied[inside], 12).tolist()) == {7.0}
    assert set(np.round(applied[(turn.angle < 1.0) | (turn.angle > 1.2503)], 12).tolist()) == {0.0}


@pytest.mark.parametrize(("angle", "shown"), [(0.5, 0.5), (math.pi, math.pi), (7.0, 7.0 - 2 * math.pi), (-4.0, 2 * math.pi - 4.0)])
def test_rests_are_marked_within_the_turn_at_the_torque_that_holds_them(angle, shown):
    demand = Demand(Train(), (weight(),), FLAP_AXIS)
    turn = over_a_turn(demand, (standstill(demand, angle),))
    assert turn.rests == pytest.approx([shown], rel=1e-14)
    assert turn.held == pytest.approx([-2.0 * G * 0.3 * math.cos(angle)], rel=1e-13)


def test_over_speed_driving_is_above_and_braking_below_whichever_way_the_shaft_turns():
    train = plain(2.0, 1e-3, (Gear("gear", -5.0),))
    study = Study(Demand(train, (), FLAP_AXIS), Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR), Move(-1.0, ByTime(1.0), Law.TRIANGULAR))))
    for shaft in ("load", "motor"):
        curves, points = study.curves(shaft), over_speed(study.curves(shaft))
        assert (points.speed >= 0).all()
        np.testing.assert_allclose(points.speed * points.torque, curves.power, rtol=1e-14, atol=1e-14)
        needs = study.needs(shaft)
        speed, torque = peak_over_speed(needs.peak_braking)
        assert (speed, torque) == (abs(needs.peak_braking.speed), -abs(needs.peak_braking.torque))


def test_a_limit_is_drawn_from_standstill_to_the_last_speed_and_down():
    line = limit_line(LimitCurve(((100.0, 5.0), (300.0, 2.0))))
    assert line.speed.tolist() == [0.0, 100.0, 300.0, 300.0]
    assert line.torque.tolist() == [5.0, 5.0, 2.0, 0.0]


def test_the_answer_gives_everything_at_any_shaft_with_shares_that_add_up():
    ball = Part("ball", "ball", ShapeBody(Sphere(0.2)), Weighed(3.0), Pose((0.4, 0.0, 0.0)))
    train = replace(plain(0.5, 1e-3, (Gear("first", 3.0, inertia=2e-4), Gear("last", 4.0))))
    answer = drive_answer(Assembly("arm", (ball,), (FLAP_AXIS,), "Hinge"), DriveSettings(train=train))
    at_motor = answer.reflected_at("motor").inertia
    assert answer.reflected_at("first").inertia == pytest.approx(9 * at_motor, rel=1e-14)
    assert answer.reflected_at("last").inertia == pytest.approx(144 * at_motor, rel=1e-14)
    for shaft in ("motor", "first", "load"):
        assert math.fsum(answer.reflected_at(shaft).shares) == pytest.approx(1.0, rel=1e-14)
    assert answer.over_turn.gravity.max() == pytest.approx(3.0 * G * 0.4, rel=1e-12)


def test_shares_of_nothing_are_none():
    answer = drive_answer(Assembly(), DriveSettings(duty=Duty((Rest(1.0),)), frictions=(Friction("seal", 1.0),)))
    assert set(answer.reflected_at("load").shares) <= {None}
