"""Torque term by term: gravity at any tilt, forces, friction, efficiency both ways, peaks, and energy that closes."""

from __future__ import annotations

import math

import numpy as np
import pytest
import strategies
from drive_cases import FLAP_AXIS, UP, demand_of, moving, plain, torque_at
from hypothesis import example, given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from core.assembly import DriveAxis
from core.drive import (
    AppliedForce,
    AppliedTorque,
    Belt,
    ByTime,
    Demand,
    Duty,
    Friction,
    Gear,
    Law,
    LeadScrew,
    Motor,
    Move,
    RackOrDrum,
    Repeat,
    Rest,
    ShaftInertia,
    Study,
    Train,
    TurningBody,
    gravity_wave,
)
from core.drive.demand import ACCELERATION, APPLIED, FRICTION, GRAVITY, LOSSES
from core.errors import ValueRefused
from core.moments import Moments
from core.placement import turn_about

G = 9.80665
LAWS = st.sampled_from(list(Law))


def turned(moments: Moments, axis: DriveAxis, angle: float) -> Moments:
    turn, point = turn_about(axis.direction, angle), np.asarray(axis.point)
    return moments.mapped(turn, point - turn @ point)


def flap(mass: float = 10.0, x: float = 0.3, inertia: float = 0.1) -> TurningBody:
    return TurningBody("flap", Moments.from_inertia(mass, [x, 0.0, 0.0], np.eye(3) * inertia), FLAP_AXIS)


# --- gravity -------------------------------------------------------------------------------------------------------


@given(strategies.realisable_moments(), strategies.points, strategies.directions, strategies.ANGLES, strategies.points)
def test_gravity_asks_the_torque_of_the_weight_at_the_turned_centre_of_mass(moments, point, direction, angle, way):
    axis = DriveAxis("a", tuple(point), tuple(direction))
    demand = Demand(Train(), (TurningBody("b", moments, axis),), axis, gravity=tuple(G * way))
    there = turned(moments, axis, angle)
    by_hand = -axis.unit @ np.cross(there.centre - point, float(moments.mass) * G * way)
    terms = demand.terms(moving(angle=angle))
    assert terms[GRAVITY, 0, 0] == pytest.approx(by_hand, rel=0, abs=1e-12 * float(moments.mass) * G * 4)


@given(strategies.realisable_moments(), strategies.points, strategies.ANGLES)
def test_gravity_asks_nothing_of_an_upright_axis(moments, point, angle):
    axis = DriveAxis("a", tuple(point), (0.0, 0.0, -3.0))
    demand = Demand(Train(), (TurningBody("b", moments, axis),), axis)
    assert demand.terms(moving(angle=angle))[GRAVITY, 0, 0] == pytest.approx(0.0, abs=1e-12 * float(moments.mass) * G)


@pytest.mark.parametrize("tilt", [0.0, 0.3, math.pi / 2, 2.0])
def test_a_tilted_axis_feels_the_part_of_gravity_that_lies_across_it(tilt):
    axis = DriveAxis("a", (0.0, 0.0, 0.0), (math.sin(tilt), 0.0, math.cos(tilt)))
    body = TurningBody("b", Moments.of_points([2.0], [[0.0, 0.4, 0.0]]), axis)
    assert gravity_wave(body).amplitude == pytest.approx(2.0 * G * 0.4 * math.sin(tilt), abs=1e-14)


@given(strategies.ANGLES)
def test_a_body_hangs_where_its_gravity_wave_says(angle):
    body = flap()
    wave = gravity_wave(body)
    assert wave.amplitude == pytest.approx(10.0 * G * 0.3, rel=1e-14)
    lowest = float(turned(body.moments, FLAP_AXIS, wave.hangs_at).centre[2])
    assert lowest == pytest.approx(-0.3, rel=1e-12)
    asked = torque_at(Demand(Train(), (body,), FLAP_AXIS), "load", moving(angle=angle))
    assert asked == pytest.approx(wave.amplitude * math.sin(angle - wave.hangs_at), abs=1e-12 * wave.amplitude)


def test_a_level_flap_asks_to_be_held_up():
    # Turning right-handed about +y carries +x down: the drive has to pull backwards.
    assert torque_at(Demand(Train(), (flap(),), FLAP_AXIS), "load", moving()) == pytest.approx(-10 * G * 0.3, rel=1e-14)


def test_an_unbalanced_body_on_a_geared_shaft_turns_at_its_own_speed():
    body = TurningBody("cam", Moments.of_points([2.0], [[0.1, 0.0, 0.0]]), FLAP_AXIS, "motor")
    demand = Demand(Train(stages=(Gear("gear", -3.0),)), (body,), FLAP_AXIS)
    asked = torque_at(demand, "motor", moving(angle=0.4))
    assert asked == pytest.approx(-2.0 * G * 0.1 * math.cos(-1.2), rel=1e-13)


# --- applied forces and torques --------------------------------------------------------------------------------------


@given(
    strategies.points, strategies.directions, strategies.directions, strategies.points, strategies.ANGLES,
    st.sampled_from(["space", "part"]), st.sampled_from(["space", "part"]),
)
def test_a_force_asks_minus_r_cross_f_along_the_axis(point, direction, force, place, angle, direction_in, point_in):
    axis = DriveAxis("a", tuple(point), tuple(direction))
    demand = Demand(Train(), (), axis, forces=(AppliedForce("f", tuple(force), tuple(place), direction_in, point_in),))
    turn = turn_about(direction, angle)
    at = point + (turn @ (place - point) if point_in == "part" else place - point)
    way = turn @ force if direction_in == "part" else force
    by_hand = -axis.unit @ np.cross(at - point, way)
    assert demand.terms(moving(angle=angle))[APPLIED, 0, 0] == pytest.approx(by_hand, rel=0, abs=1e-13 * 10)


@pytest.mark.parametrize(
    ("angle", "acts"), [(0.4, False), (0.5, True), (1.0, True), (1.5, True), (1.6, False), (1.0 - 4 * math.pi, True)]
)
def test_a_force_over_a_range_acts_in_every_turn_between_its_ends(angle, acts):
    torque = AppliedTorque("press", 5.0, start=0.5, end=1.5)
    demand = Demand(Train(), (), FLAP_AXIS, torques=(torque,))
    assert torque_at(demand, "load", moving(angle=angle)) == (5.0 if acts else 0.0)


def test_a_torque_against_the_motion_turns_round_with_it_and_is_gone_at_rest():
    demand = demand_of(Train(stages=(Gear("gear", -2.0),)), torques=(AppliedTorque("cut", 3.0, "against motion", "motor"),))
    # The motor turns the other way round than the load.
    assert [torque_at(demand, "motor", moving(speed)) for speed in (1.0, -1.0, 0.0)] == [-3.0, 3.0, 0.0]


# --- friction --------------------------------------------------------------------------------------------------------


def test_friction_is_constant_viscous_and_of_the_bearings_weight():
    friction = Friction("bearing", 0.5, 0.2, 0.1, 0.05)
    demand = Demand(Train(), (flap(mass=8.0, x=0.0),), FLAP_AXIS, frictions=(friction,))
    dry = 0.5 + 0.1 * 0.05 * 8.0 * G
    for speed in (3.0, -3.0):
        assert demand.terms(moving(speed))[FRICTION, 0, 0] == pytest.approx(math.copysign(dry, speed) + 0.2 * speed)
    loaded = Demand(Train(), (), FLAP_AXIS, frictions=(Friction("bearing", coefficient=0.1, radius=0.05, load=200.0),))
    assert loaded.terms(moving(1.0))[FRICTION, 0, 0] == pytest.approx(1.0, rel=1e-14)


def test_friction_hinders_a_move_from_its_first_moment():
    starting = moving(0.0, 2.0, direction=-1.0)
    demand = demand_of(plain(1.0), frictions=(Friction("seal", 0.3),))
    assert demand.terms(starting)[FRICTION, 0, 0] == -0.3


@pytest.mark.parametrize("speed", [2.0, -2.0])
def test_friction_on_a_shaft_that_turns_the_other_way_still_hinders(speed):
    train = plain(1.0, 0.0, (Gear("gear", -5.0),))
    demand = demand_of(train, frictions=(Friction("seal", 0.3, 0.02, shaft="motor"),))
    turning = -5.0 * speed
    assert torque_at(demand, "motor", moving(speed)) == pytest.approx(math.copysign(0.3, turning) + 0.02 * turning, rel=1e-14)


# --- efficiency ------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("ratio", [4.0, -4.0])
@pytest.mark.parametrize("speed", [2.0, -2.0])
def test_losses_add_to_the_motors_torque_in_driving_and_take_from_it_in_braking(ratio, speed):
    train = plain(5.0, 0.0, (Gear("gear", ratio, 0.8),))
    driving, braking = (
        torque_at(demand_of(train), "motor", moving(speed, math.copysign(3.0, sign * speed))) for sign in (1, -1)
    )
    sense = math.copysign(1.0, speed * ratio)
    assert driving == pytest.approx(sense * 15.0 / 4.0 / 0.8, rel=1e-14)
    assert braking == pytest.approx(-sense * 15.0 / 4.0 * 0.8, rel=1e-14)


def test_a_stage_can_lose_more_in_braking_than_in_driving_or_let_nothing_back():
    for back, expected in ((0.3, -15.0 / 4.0 * 0.3), (0.0, 0.0)):
        train = plain(5.0, 0.0, (Gear("worm", 4.0, 0.7, braking_efficiency=back),))
        assert torque_at(demand_of(train), "motor", moving(2.0, -3.0)) == pytest.approx(expected, abs=1e-15)


@pytest.mark.parametrize(("speed", "factor"), [(1.0, 1 / 0.5), (-1.0, 0.5)])
def test_a_screw_lifts_with_its_losses_against_it_and_lowers_with_them_for_it(speed, factor):
    train = Train(linear=(LeadScrew("lift", 0.01, 100.0, UP, 0.5),))
    weight = 100.0 * 9.81 * 0.01 / (2 * math.pi)
    assert torque_at(demand_of(train), "motor", moving(speed)) == pytest.approx(weight * factor, rel=1e-13)


def test_the_guide_of_a_sloping_slide_rubs_with_the_part_of_its_weight_across_the_slope():
    slide = RackOrDrum("slide", 0.05, 20.0, math.radians(30), friction=7.0, friction_coefficient=0.1)
    terms = demand_of(Train(linear=(slide,))).terms(moving(-1.0))[:, 0, 0]
    assert terms[GRAVITY] == pytest.approx(20 * 9.81 * 0.5 * 0.05, rel=1e-13)
    assert terms[FRICTION] == pytest.approx(-(7.0 + 0.1 * 20 * 9.81 * math.cos(math.radians(30))) * 0.05, rel=1e-13)


def test_nothing_is_lost_at_rest():
    train = Train(stages=(Gear("gear", 4.0, 0.8),))
    demand = Demand(train, (flap(),), FLAP_AXIS)
    assert torque_at(demand, "motor", moving()) == pytest.approx(-10 * G * 0.3 / 4, rel=1e-14)


# --- over a duty -----------------------------------------------------------------------------------------------------


@st.composite
def closed_duties(draw: st.DrawFn) -> Duty:
    """A duty of moves that ends where it began."""
    moves = [
        Move(draw(st.floats(0.1, 8.0)) * draw(st.sampled_from([1, -1])), ByTime(draw(st.floats(0.1, 3.0))), draw(LAWS))
        for _ in range(draw(st.integers(1, 3)))
    ]
    back = -sum(move.angle for move in moves)
    steps = [*moves, Rest(draw(st.floats(0.1, 1.0)))]
    if abs(back) > 1e-3:
        steps.append(Move(back, ByTime(draw(st.floats(0.2, 3.0))), draw(LAWS)))
    return Duty(tuple(steps), draw(strategies.ANGLES))


@st.composite
def full_demands(draw: st.DrawFn) -> Demand:
    body = flap(draw(st.floats(0.5, 20.0)), draw(st.floats(0.0, 0.5)), draw(st.floats(0.01, 2.0)))
    efficiency = st.floats(0.4, 1.0)
    train = Train(
        Motor(draw(st.floats(0.0, 0.01))),
        (
            Gear("gear", draw(st.sampled_from([-20.0, -3.0, 0.5, 7.0])), draw(efficiency), 1e-4),
            Belt("belt", 0.02, 0.05, draw(efficiency), 1e-4, 1e-3, 0.2),
        ),
        (LeadScrew("table", 0.02, draw(st.floats(0.0, 20.0)), draw(st.floats(-1.5, 1.5)), draw(efficiency), shaft="gear"),),
    )
    frictions = (Friction("seal", draw(st.floats(0.0, 2.0)), draw(st.floats(0.0, 0.5))),)
    return Demand(train, (body,), FLAP_AXIS, frictions=frictions)


@settings(max_examples=30)
@given(full_demands(), closed_duties(), st.sampled_from(["motor", "gear", "load"]))
def test_over_a_closed_duty_the_work_put_in_is_lost_in_friction_and_in_the_stages(demand, duty, shaft):
    energy = Study(demand, duty).needs(shaft).energy
    scale = energy.driving + energy.returned
    terms = energy.by_term
    assert energy.driving - energy.returned == pytest.approx(sum(terms), abs=1e-7 * scale)
    assert terms[ACCELERATION] == pytest.approx(0.0, abs=1e-7 * scale)
    assert terms[GRAVITY] == pytest.approx(0.0, abs=1e-7 * scale)
    assert terms[FRICTION] >= 0.0
    assert terms[LOSSES] >= 0.0
    assert energy.error <= 1e-6 * scale


@settings(max_examples=30)
@given(LAWS, st.floats(-6.0, 6.0).filter(lambda angle: abs(angle) > 0.05), strategies.ANGLES)
def test_without_losses_the_work_is_the_kinetic_and_the_lifted_energy(law, angle, start):
    # Up to the middle of the move: the other half is done by the mirror image of its time.
    body = flap()
    demand, duty = Demand(Train(), (body,), FLAP_AXIS), Duty((Move(angle, ByTime(1.3), law),), start)
    timeline = duty.timeline
    end = timeline.at([0.65])

    def power(time: float) -> float:
        motion = timeline.at([time])
        return torque_at(demand, "load", motion) * float(motion.speed[0])

    work = quad(power, 0.0, 0.65, limit=200, points=[t for t in timeline.time if 0 < t < 0.65] or None)[0]
    lifted = float(
        turned(body.moments, FLAP_AXIS, float(end.angle[0])).centre[2] - turned(body.moments, FLAP_AXIS, start).centre[2]
    )
    stored = body.inertia * float(end.speed[0]) ** 2 / 2 + 10.0 * G * lifted
    assert work == pytest.approx(stored, abs=1e-8 * (body.inertia * float(end.speed[0]) ** 2 + 10 * G * 0.6))


def cusped() -> tuple[Demand, Duty]:
    """A demand whose torque at the motor is highest where braking becomes driving, between two straight lines."""
    train = Train(Motor(0.0078125), (
        Gear("gear", -20.0, 1.0, 1e-4), Belt("belt", 0.02, 0.05, 0.40234375, 1e-4, 1e-3, 0.2),
    ))
    duty = Duty((Move(0.5, ByTime(1.0)), Rest(1.0), Move(-0.5, ByTime(1.0), Law.MODIFIED_TRAPEZOID)), 1.0)
    return Demand(train, (flap(1.0, 0.375, 1.0),), FLAP_AXIS), duty


@settings(max_examples=20)
@given(full_demands(), closed_duties())
@example(*cusped())
def test_the_rms_is_that_of_a_dense_sum_within_its_stated_error(demand, duty):
    study = Study(demand, duty)
    needs = study.needs("motor")
    # Midpoints within each zone, so that what jumps does so between two of them.
    starts, lengths = study.timeline.time, study.timeline.zones.duration
    times = (starts[:, None] + lengths[:, None] * (np.arange(20_000) + 0.5) / 20_000).ravel()
    motion = study.timeline.at(times)
    torque = demand.at_shaft(demand.terms(motion), motion.direction, "motor").sum(axis=0)
    mean = float((torque.reshape(len(lengths), -1) ** 2).mean(axis=1) @ lengths) / study.timeline.length
    assert needs.rms == pytest.approx(math.sqrt(mean), rel=1e-6, abs=1e-12)
    assert needs.rms_error <= 1e-8 * needs.rms + 1e-15
    # Nowhere between is more than at the peak.
    assert np.abs(torque).max() <= abs(needs.peak.torque) * (1 + 1e-9)
    assert abs(needs.peak.torque) <= np.abs(torque).max() * (1 + 1e-2)


def test_the_peak_of_a_turning_weight_is_found_between_the_points_of_the_curve():
    duty = Duty((Move(20.0, ByTime(50.0), Law.CYCLOIDAL),), start=0.123)
    demand = Demand(Train(), (TurningBody("b", Moments.of_points([1.0], [[0.2, 0, 0]]), FLAP_AXIS),), FLAP_AXIS)
    study = Study(demand, duty)
    peak = study.needs("load").lowest
    assert sum(peak.terms) == pytest.approx(peak.torque, rel=1e-14)
    around = study.timeline.at(peak.time + np.linspace(-0.5, 0.5, 100_001))
    torque = demand.at_shaft(demand.terms(around), around.direction, "load").sum(axis=0)
    assert torque.min() == pytest.approx(peak.torque, rel=1e-9)
    assert around.time[torque.argmin()] == pytest.approx(peak.time, abs=1e-4)


def test_a_peak_at_a_jump_is_the_side_that_is_higher():
    duty = Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR), Rest(1.0)))
    needs = Study(demand_of(plain(2.0), torques=(AppliedTorque("load", 1.0, "against motion"),)), duty).needs("load")
    assert (needs.peak.time, needs.peak.torque) == pytest.approx((0.0, 9.0))
    assert needs.lowest.torque == pytest.approx(-7.0)
    assert needs.peak_power.power == pytest.approx(9.0 * 2.0)
    assert needs.peak_braking.power == pytest.approx(-7.0 * 2.0)
    assert needs.peak_power.time == pytest.approx(0.5)
    assert needs.mean_power == pytest.approx(1.0 / 2.0)
    assert needs.mean_speed == pytest.approx(0.5)


def test_driving_and_braking_are_told_apart_where_one_becomes_the_other():
    # J·α = ±8 N·m, and 10 N·m·s/rad from 0 to 2 rad/s and back: slowing down it is driven until 0.8 rad/s.
    train = plain(2.0, 0.0, (Gear("gear", 4.0, 0.5, braking_efficiency=0.25),))
    demand = demand_of(train, frictions=(Friction("seal", viscous=10.0),))
    study = Study(demand, Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR),)))

    def work(dry: float, low: float, high: float) -> float:
        """∫ (dry + 10·ω)·ω dt from one speed to another at 4 rad/s²."""
        return (dry * (high**2 - low**2) / 2 + 10.0 * (high**3 - low**3) / 3) / 4

    def squares(dry: float, low: float, high: float) -> float:
        """∫ (dry + 10·ω)² dt."""
        return ((dry + 10.0 * high) ** 3 - (dry + 10.0 * low) ** 3) / 30.0 / 4

    driving, braking = work(8.0, 0.0, 2.0) + work(-8.0, 0.8, 2.0), -work(-8.0, 0.0, 0.8)
    load, motor = study.needs("load"), study.needs("motor")
    assert (load.energy.driving, load.energy.returned) == pytest.approx((driving, braking), rel=1e-14)
    assert (motor.energy.driving, motor.energy.returned) == pytest.approx((driving / 0.5, braking * 0.25), rel=1e-14)
    driven = squares(8.0, 0.0, 2.0) + squares(-8.0, 0.8, 2.0)
    braked = squares(-8.0, 0.0, 0.8)
    assert motor.rms == pytest.approx(math.sqrt(driven / (4 * 0.5) ** 2 + braked * (0.25 / 4) ** 2), rel=1e-14)


def test_each_side_of_the_end_of_a_range_is_drawn_as_it_is_there():
    duty = Duty((Repeat((Move(2 * math.pi, ByTime(1.0), Law.CYCLOIDAL),), 2), Move(-5.0, ByTime(1.0))), start=-0.3)
    demand = demand_of(Train(), torques=(AppliedTorque("press", 7.0, start=1.0, end=1.25),))
    study = Study(demand, duty)
    # 9 points a piece.
    acting = study.curves("load").terms[APPLIED].reshape(-1, 9)
    np.testing.assert_array_equal(acting, np.repeat(acting[:, 4:5], 9, axis=1))
    assert sorted(set(acting[:, 4].tolist())) == [0.0, 7.0]


def test_a_force_over_a_range_counts_in_rms_and_energy_by_exactly_its_range():
    duty = Duty((Repeat((Move(2 * math.pi, ByTime(1.0), Law.CYCLOIDAL),), 3),))
    demand = demand_of(Train(), torques=(AppliedTorque("press", 7.0, start=1.0, end=1.25),))
    energy = Study(demand, duty).needs("load").energy
    assert energy.driving == pytest.approx(3 * 7.0 * 0.25, rel=1e-12)
    assert energy.by_term[APPLIED] == pytest.approx(3 * 7.0 * 0.25, rel=1e-12)


def test_the_curves_of_the_terms_add_up_and_hold_both_sides_of_a_jump():
    study = Study(demand_of(plain(2.0, 1e-3, (Gear("gear", 5.0, 0.9),))), Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR),)))
    curves = study.curves("motor")
    np.testing.assert_allclose(curves.terms.sum(axis=0), curves.torque, rtol=1e-14)
    assert (np.diff(curves.time) >= 0).all()
    at_the_middle = curves.torque[np.isclose(curves.time, 0.5, rtol=0, atol=1e-12)]
    assert at_the_middle.min() < 0 < at_the_middle.max()


def test_the_motor_sees_the_load_at_its_own_speed_and_the_same_power_without_losses():
    train = plain(2.0, 0.0, (Gear("gear", -5.0), Belt("belt", 0.02, 0.06)))
    study = Study(demand_of(train), Duty((Move(3.0, ByTime(0.7), Law.MODIFIED_SINE),)))
    np.testing.assert_allclose(study.curves("motor").power, study.curves("load").power, rtol=1e-12, atol=1e-12)
    assert study.needs("motor").peak_speed == pytest.approx(15 * study.needs("load").peak_speed, rel=1e-14)


def test_the_motion_for_drawing_is_at_the_times_of_the_curves():
    study = Study(demand_of(plain(2.0)), Duty((Move(1.0, ByTime(1.0), Law.CYCLOIDAL), Rest(0.5))))
    np.testing.assert_array_equal(study.motion.time, study.curves("load").time)
    np.testing.assert_allclose(study.curves("load").torque, 2.0 * study.motion.acceleration, rtol=1e-14)


def test_a_duty_of_very_many_turns_is_still_answered_with_its_error_said():
    demand = Demand(Train(stages=(Gear("gear", 50.0),)), (flap(),), FLAP_AXIS)
    needs = Study(demand, Duty((Move(3e4, ByTime(3e3)),))).needs("load")
    assert needs.rms_error < 1e-3 * needs.rms


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: AppliedForce("push", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0)), "push: a force needs a size and a direction"),
        (lambda: AppliedForce("push", (1.0, 0.0, 0.0), (math.nan, 0.0, 0.0)), "a point needs three finite numbers"),
        (lambda: AppliedForce("push", (1.0, 0.0, 0.0), (1.0, 0.0, 0.0), "room"), "stays in space or turns with the part"),
        (lambda: AppliedForce("push", (1.0, 0.0, 0.0), (1.0, 0.0, 0.0), start=1.0), "a range of angles needs both ends"),
        (lambda: AppliedTorque("press", 1.0, start=2.0, end=1.0), "press: a range of angles ends after it starts"),
        (lambda: AppliedTorque("press", -1.0, "against motion"), "the torque against the motion cannot be less than 0"),
        (lambda: AppliedTorque("press", 1.0, "sideways"), "a torque is fixed or against the motion; read sideways"),
        (lambda: Friction("seal", -1.0), "seal: the constant friction cannot be less than 0; read -1"),
        (lambda: Friction("seal", load=-1.0), "the load on the bearing cannot be less than 0"),
    ],
)
def test_loads_that_cannot_be_are_refused(make, sentence):
    with pytest.raises(ValueRefused) as refused:
        make()
    assert sentence in str(refused.value)


def test_inertias_on_the_shafts_are_counted_once_each():
    train = Train(Motor(1.0), (Gear("gear", 2.0, inertia=0.5),), inertias=(ShaftInertia("hub", 3.0),))
    assert demand_of(train).inertia.tolist() == [1.5, 3.0]
    assert demand_of(train).inertia_at_load == pytest.approx(1.5 * 4 + 3.0, rel=1e-15)
