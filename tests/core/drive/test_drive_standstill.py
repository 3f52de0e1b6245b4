"""Holding, drifting and stopping: what the load does when the drive does nothing."""

from __future__ import annotations

import math

import numpy as np
import pytest
from drive_cases import FLAP_AXIS, UP, demand_of, plain
from hypothesis import given, settings
from hypothesis import strategies as st

from core.assembly import DriveAxis
from core.drive import (
    AppliedTorque,
    Brake,
    ByTime,
    Demand,
    Duty,
    Friction,
    Gear,
    LeadScrew,
    LimitCurve,
    Move,
    RackOrDrum,
    Rest,
    StopCase,
    Study,
    Train,
    TurningBody,
    standstill,
    stop,
)
from core.drive.limits import judge_continuous, judge_peak
from core.drive.standstill import standstills_of, worst_standstill
from core.errors import ValueRefused
from core.moments import Moments

G = 9.80665
WEIGHT = 10.0 * G * 0.3


def flap_with(train: Train = Train(), **rest: object) -> Demand:  # noqa: B008  # frozen
    body = TurningBody("flap", Moments.from_inertia(10.0, [0.3, 0.0, 0.0], np.eye(3) * 0.1), FLAP_AXIS)
    return Demand(train, (body,), FLAP_AXIS, **rest)


def test_a_level_flap_falls_when_the_drive_is_off_and_says_which_way():
    there = standstill(flap_with(), 0.0)
    assert there.holding == pytest.approx(-WEIGHT, rel=1e-14)
    assert there.push == pytest.approx(WEIGHT, rel=1e-14)
    assert there.drift == "turns forwards"
    assert standstill(flap_with(), math.pi).drift == "turns backwards"


@pytest.mark.parametrize("angle", [math.pi / 2, -math.pi / 2])
def test_a_flap_that_hangs_or_stands_on_its_head_is_not_pushed(angle):
    assert standstill(flap_with(), angle).drift == "stays"


def test_a_load_about_an_upright_axis_stays():
    axis = DriveAxis()
    body = TurningBody("b", Moments.of_points([3.0], [[0.2, 0.1, 0.4]]), axis)
    assert standstill(Demand(Train(), (body,), axis), 0.7).drift == "stays"


@pytest.mark.parametrize(("friction", "drift"), [(WEIGHT * 0.99, "turns forwards"), (WEIGHT * 1.01, "stays")])
def test_friction_holds_what_it_is_larger_than(friction, drift):
    assert standstill(flap_with(frictions=(Friction("seal", friction),)), 0.0).drift == drift
    # The same on a shaft that turns five times as fast takes a fifth.
    geared = Train(stages=(Gear("gear", -5.0),))
    there = standstill(flap_with(geared, frictions=(Friction("seal", friction / 5, shaft="motor"),)), 0.0)
    assert there.friction == pytest.approx(friction, rel=1e-14)
    assert there.drift == drift
    assert there.holding_at_motor == pytest.approx(WEIGHT / 5, rel=1e-14)


def test_a_brake_on_the_motor_shaft_holds_by_the_ratio_more():
    train = Train(stages=(Brake("brake", 0.0, WEIGHT / 10 * 1.01), Gear("gear", 10.0)))
    there = standstill(flap_with(train), 0.0)
    assert there.brakes == pytest.approx(WEIGHT * 1.01, rel=1e-14)
    assert (there.drift, there.drift_braked) == ("turns forwards", "stays")


def test_a_stage_that_the_load_cannot_turn_holds_it():
    worm = Train(stages=(Gear("worm", 40.0, 0.6, braking_efficiency=0.0),))
    assert standstill(flap_with(worm), 0.0).drift == "stays"
    # A weight on the motor's side of it still pushes.
    beyond = Train(
        stages=(Gear("worm", 40.0, 0.6, braking_efficiency=0.0),),
        linear=(RackOrDrum("weight", 0.1, 5.0, UP, shaft="motor"),),
    )
    assert standstill(flap_with(beyond), 0.0).drift == "turns backwards"


def test_a_lifted_mass_falls_unless_its_screw_locks():
    for back, drift in ((None, "turns backwards"), (0.0, "stays")):
        train = Train(linear=(LeadScrew("lift", 0.01, 50.0, UP, 0.3, braking_efficiency=back),))
        assert standstill(demand_of(train), 0.0).drift == drift


def test_a_spring_pushes_but_a_cutting_torque_does_not():
    assert standstill(demand_of(plain(1.0), torques=(AppliedTorque("spring", 2.0),)), 0.0).drift == "turns backwards"
    cutting = AppliedTorque("cut", 2.0, "against motion")
    assert standstill(demand_of(plain(1.0), torques=(cutting,)), 0.0).drift == "stays"


def test_the_rests_of_a_duty_are_named_once_each_with_their_holding_torque():
    duty = Duty((Move(1.0, ByTime(1.0)), Rest(1.0), Move(-1.0, ByTime(1.0)), Rest(1.0), Move(1.0, ByTime(1.0)), Rest(2.0)))
    rests = standstills_of(Study(flap_with(), duty))
    assert [one.angle for one in rests] == pytest.approx([0.0, 1.0])
    assert [one.holding for one in rests] == pytest.approx([-WEIGHT, -WEIGHT * math.cos(1.0)])


def test_the_holding_torque_is_the_torque_of_the_duty_at_its_rests():
    train = Train(stages=(Gear("gear", -4.0, 0.8),))
    study = Study(flap_with(train), Duty((Move(1.0, ByTime(1.0)), Rest(1.0)), start=0.2))
    curves = study.curves("motor")
    assert curves.torque[-1] == pytest.approx(standstills_of(study)[-1].holding_at_motor, rel=1e-12)


@given(st.floats(-3.0, 3.0), st.floats(0.1, 3.0))
def test_the_hardest_push_within_a_range_is_found(start, width):
    worst = worst_standstill(flap_with(), start, start + width)
    angles = np.linspace(start, start + width, 20_001)
    assert abs(worst.push) == pytest.approx(np.abs(WEIGHT * np.cos(angles)).max(), rel=1e-7)
    assert start <= worst.angle <= start + width


# --- stopping --------------------------------------------------------------------------------------------------------


@given(st.floats(0.1, 50.0), st.floats(0.1, 50.0), st.floats(0.1, 100.0), st.sampled_from([1, -1]))
def test_a_level_load_stops_by_the_closed_forms(inertia, torque, speed, sense):
    found = stop(demand_of(plain(inertia)), StopCase(sense * speed, torque))
    assert found.time == pytest.approx(inertia * speed / torque, rel=1e-10)
    assert found.angle == pytest.approx(sense * inertia * speed**2 / (2 * torque), rel=1e-10)
    assert found.heat == pytest.approx(found.energy, rel=1e-10)
    assert found.holds


def test_a_brake_on_a_fast_shaft_counts_by_its_ratio_and_so_does_the_inertia_there():
    train = plain(3.0, 0.01, (Gear("gear", -10.0), Brake("brake", 0.02, 0.7)))
    found = stop(demand_of(train), StopCase(5.0))
    # The rotor lies before the gear, the brake behind it.
    inertia = 3.0 + 0.02 + 0.01 * 100
    assert found.time == pytest.approx(inertia * 5.0 / 0.7, rel=1e-10)
    on_motor = stop(demand_of(train), StopCase(5.0, 0.7, "motor"))
    assert on_motor.time == pytest.approx(inertia * 5.0 / 7.0, rel=1e-10)


def test_viscous_friction_alone_with_a_brake_stops_by_its_exponential():
    demand = demand_of(plain(2.0), frictions=(Friction("oil", viscous=0.5),))
    found = stop(demand, StopCase(8.0, 1.0))
    assert found.time == pytest.approx(2.0 / 0.5 * math.log(1 + 0.5 * 8.0 / 1.0), rel=1e-9)


@settings(max_examples=25)
@given(st.floats(0.5, 20.0), st.floats(1.2, 4.0), st.floats(-3.0, 3.0))
def test_what_gravity_gives_and_what_moves_is_what_the_brake_takes(speed, torque, angle):
    demand = flap_with(frictions=(Friction("seal", 1.5),))
    found = stop(demand, StopCase(speed, torque * WEIGHT, angle=angle))
    lowered = 0.3 * (math.sin(angle + found.angle) - math.sin(angle))
    taken = (torque * WEIGHT + 1.5) * found.angle
    assert taken == pytest.approx(found.energy + 10.0 * G * lowered, rel=1e-7)


def test_a_brake_weaker_than_the_weight_stops_the_load_on_its_way_up_but_does_not_hold_it():
    found = stop(flap_with(), StopCase(-1.0, 0.5 * WEIGHT))
    assert found.angle < 0
    assert not found.holds
    assert stop(flap_with(), StopCase(-1.0, 1.5 * WEIGHT)).holds
    # Friction holds with the brake.
    assert stop(flap_with(frictions=(Friction("seal", 0.6 * WEIGHT),)), StopCase(-1.0, 0.5 * WEIGHT)).holds


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: StopCase(0.0, 1.0), "stop: what stands still needs no stopping; read 0 rad/s."),
        (lambda: StopCase(1.0, -1.0), "stop: the braking torque cannot be less than 0"),
        (lambda: stop(demand_of(plain(1.0)), StopCase(1.0)), "nothing stops the load; read 0 N·m. Give the braking torque."),
        (lambda: stop(demand_of(Train()), StopCase(1.0, 1.0)), "nothing that has mass turns"),
        (lambda: stop(flap_with(), StopCase(20.0, 1e-3 * WEIGHT)), "this braking torque does not stop the load"),
        (lambda: stop(demand_of(plain(1.0)), StopCase(1.0, 1.0, "drum")), "the train has no such shaft; read 'drum'"),
    ],
)
def test_stops_that_do_not_come_about_are_refused(make, sentence):
    with pytest.raises(ValueRefused) as refused:
        make()
    assert sentence in str(refused.value)


# --- limits of the motor ---------------------------------------------------------------------------------------------


def test_limits_go_straight_from_point_to_point_and_end_at_the_last_speed():
    limit = LimitCurve(((10.0, 4.0), (20.0, 2.0)))
    assert limit.at([0.0, 10.0, -15.0, 20.0, 20.1]).tolist() == [4.0, 4.0, 3.0, 2.0, 0.0]


def test_the_moment_that_uses_the_limit_most_is_judged_not_the_largest_torque():
    # Constant acceleration: the torque is the same all the time, the limit falls with the speed.
    study = Study(demand_of(plain(2.0)), Duty((Move(4.0, ByTime(2.0), ramp_up=0.5, ramp_down=0.5),)))
    judged = judge_peak(LimitCurve(((0.0, 20.0), (4.0, 10.0))), study.curves("motor"))
    assert (judged.torque, judged.limit, judged.speed, judged.time) == pytest.approx((8.0, 10.0, 4.0, 1.0))
    assert judged.use == pytest.approx(0.8)
    assert judged.within
    fast = judge_peak(LimitCurve(((0.0, 20.0), (3.9, 10.0))), study.curves("motor"))
    assert math.isinf(fast.use)
    assert not fast.within


def test_the_rms_torque_is_judged_at_the_mean_speed():
    study = Study(demand_of(plain(2.0)), Duty((Move(4.0, ByTime(2.0), ramp_up=0.5, ramp_down=0.5), Rest(2.0))))
    judged = judge_continuous(LimitCurve(((0.0, 6.0), (2.0, 4.0))), study.needs("motor"))
    assert judged.speed == pytest.approx(1.0, rel=1e-9)
    assert judged.torque == pytest.approx(8.0 / math.sqrt(2), rel=1e-9)
    assert judged.limit == pytest.approx(5.0, rel=1e-9)
    assert not judged.within


@pytest.mark.parametrize("points", [(), ((2.0, 1.0), (1.0, 1.0)), ((1.0, 1.0), (1.0, 2.0))])
def test_limits_whose_speeds_do_not_rise_are_refused(points):
    with pytest.raises(ValueRefused, match="one point or more, the speeds rising"):
        LimitCurve(points)


def test_ten_thousand_rests_are_named_once_each_in_their_order():
    steps = tuple(step for number in range(5000) for step in (Move(0.1 + 1e-4 * (number % 50), ByTime(0.1)), Rest(0.1)))
    duty = Duty((*steps, Move(-sum(step.angle for step in steps if isinstance(step, Move)), ByTime(1.0)), Rest(0.5)))
    rests = standstills_of(Study(flap_with(), duty))
    angles = [rest.angle for rest in rests]
    # The last rest is the start again, to the round-off of 5,000 moves.
    assert len(angles) == 5001
    assert angles == sorted(angles)
    assert angles[0] == 0.0
