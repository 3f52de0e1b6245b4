"""Motion laws and duties, by differentiation, by the definition of their limits, and at their borders."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.drive.laws import RAMPED, Law
from core.drive.motion import MOST_STEPS, ByLimits, ByTime, Duty, Move, Repeat, Rest
from core.errors import ValueRefused

SMOOTH = [law for law in Law if law not in RAMPED]


@st.composite
def moves_by_time(draw: st.DrawFn) -> Move:
    sense = draw(st.sampled_from([-1.0, 1.0]))
    up = draw(st.floats(0.05, 0.5))
    return Move(
        sense * draw(st.floats(1e-2, 50.0)), ByTime(draw(st.floats(0.05, 20.0))), draw(st.sampled_from(list(Law))),
        up, draw(st.floats(0.05, 1 - up)), draw(st.floats(0.05, 1.0)),
    )


@st.composite
def ramped_moves_by_limits(draw: st.DrawFn) -> Move:
    law = draw(st.sampled_from(RAMPED))
    positive = st.floats(0.1, 20.0)
    jerk = draw(positive) if law == Law.S_CURVE else None
    limits = ByLimits(draw(positive), draw(positive), draw(st.one_of(st.none(), positive)), jerk)
    return Move(draw(st.floats(0.01, 50.0)) * draw(st.sampled_from([-1, 1])), limits, law)


@given(st.one_of(moves_by_time(), ramped_moves_by_limits()))
def test_a_move_ends_at_its_angle_and_at_rest(move):
    timeline = Duty((move,), start=0.7).timeline
    end = timeline.at([timeline.length])
    assert end.angle[0] == pytest.approx(0.7 + move.angle, rel=1e-9)
    assert abs(end.speed[0]) <= 1e-9 * abs(move.angle) / move.time


@given(moves_by_time())
def test_speed_acceleration_and_jerk_are_the_derivatives_of_the_angle(move):
    timeline = Duty((move,)).timeline
    # Well inside the zones, where a difference quotient sees no border; the step makes its error about 1e-8.
    zone = np.arange(len(timeline.time))
    middle, step = 0.4 * timeline.zones.duration, 1e-4 * timeline.zones.duration
    here, before, after = (timeline.within(zone, middle + shift * step) for shift in (0, -1, 1))
    scale = abs(move.angle) / timeline.zones.duration
    size = np.abs(after.angle).max()
    for lower, higher, order in (("angle", "speed", 0), ("speed", "acceleration", 1), ("acceleration", "jerk", 2)):
        slope = (getattr(after, lower) - getattr(before, lower)) / (2 * step)
        allowed = 1e-5 * scale / timeline.zones.duration**order + 1e-11 * size / step**1 / timeline.zones.duration**order
        assert (np.abs(slope - getattr(here, higher)) <= allowed).all(), (lower, slope, getattr(here, higher))


@given(moves_by_time())
def test_angle_and_speed_never_jump(move):
    timeline = Duty((move,)).timeline
    zone = np.arange(len(timeline.time) - 1)
    before = timeline.within(zone, timeline.zones.duration[zone])
    after = timeline.within(zone + 1, 0.0 * timeline.zones.duration[zone])
    np.testing.assert_allclose(before.angle, after.angle, rtol=0, atol=1e-11 * abs(move.angle))
    np.testing.assert_allclose(before.speed, after.speed, rtol=0, atol=1e-11 * abs(move.angle) / move.time * 100)


@given(moves_by_time())
def test_a_move_backwards_is_the_mirror_image_of_the_move_forwards(move):
    back = Move(-move.angle, move.timing, move.law, move.ramp_up, move.ramp_down, move.smoothing)
    one, other = Duty((move,)).timeline, Duty((back,)).timeline
    time = np.linspace(0, move.time, 57)
    np.testing.assert_array_equal(one.at(time).angle, -other.at(time).angle)
    np.testing.assert_array_equal(one.at(time).direction, -other.at(time).direction)


@given(ramped_moves_by_limits())
def test_a_ramped_move_keeps_its_limits_and_reaches_one_of_them_all_the_time(move):
    limits, timeline = move.timing, Duty((move,)).timeline
    zone = np.repeat(np.arange(len(timeline.time)), 3)
    local = (timeline.zones.duration[:, None] * [0.0, 0.5, 1.0]).ravel()
    motion = timeline.within(zone, local)
    sense = np.sign(move.angle)
    fall = limits.acceleration if limits.deceleration is None else limits.deceleration
    slack = 1 + 1e-9
    assert (sense * motion.speed <= limits.speed * slack).all()
    assert (sense * motion.acceleration <= limits.acceleration * slack).all()
    assert (sense * motion.acceleration >= -fall * slack).all()
    at_speed = np.isclose(sense * motion.speed, limits.speed)
    at_rise = np.isclose(sense * motion.acceleration, limits.acceleration) | np.isclose(sense * motion.acceleration, -fall)
    at_jerk = np.zeros(len(zone), dtype=bool)
    if limits.jerk is not None:
        assert (np.abs(motion.jerk) <= limits.jerk * slack).all()
        at_jerk = np.isclose(np.abs(motion.jerk), limits.jerk)
    assert (at_speed | at_rise | at_jerk)[1::3].all()


@pytest.mark.parametrize("law", SMOOTH)
@pytest.mark.parametrize("limit", ["speed", "acceleration", "jerk"])
def test_a_smooth_law_by_limits_reaches_its_one_limit_and_no_more(law, limit):
    if limit == "jerk" and law in (Law.TRIANGULAR, Law.HARMONIC):
        with pytest.raises(ValueRefused, match="no limit of jerk can be kept"):
            Move(2.0, ByLimits(jerk=5.0), law)
        return
    timeline = Duty((Move(-2.0, ByLimits(**{limit: 5.0}), law),)).timeline
    motion = timeline.at(np.linspace(0, timeline.length, 20_001))
    assert np.abs(getattr(motion, limit)).max() == pytest.approx(5.0, rel=1e-6)


def test_the_tighter_of_two_limits_sets_the_time():
    slow = Move(2.0, ByLimits(speed=0.1, acceleration=100.0), Law.CYCLOIDAL)
    assert slow.time == pytest.approx(2 * 2.0 / 0.1, rel=1e-12)


def test_a_short_trapezoidal_move_by_limits_becomes_a_triangle():
    move = Move(1.0, ByLimits(speed=100.0, acceleration=4.0))
    assert move.time == pytest.approx(1.0, rel=1e-12)
    assert Duty((move,)).timeline.at([0.5]).speed[0] == pytest.approx(2.0, rel=1e-12)


def test_repeats_are_the_same_steps_written_out():
    there, back, rest = Move(1.0, ByTime(1.0)), Move(-1.0, ByTime(2.0)), Rest(0.5)
    folded, flat = Duty((Repeat((there, rest, back), 3),)), Duty((there, rest, back) * 3)
    time = np.linspace(0, 10.5, 200)
    np.testing.assert_array_equal(folded.timeline.at(time).angle, flat.timeline.at(time).angle)
    assert folded.timeline.length == pytest.approx(10.5, rel=1e-15)
    assert folded.comes_back
    assert not Duty((there, rest)).comes_back


def test_a_duty_says_where_each_step_begins_and_ends():
    assert Duty((Move(1.0, ByTime(1.0)), Rest(1.0), Move(-3.0, ByTime(1.0))), start=0.5).positions == (0.5, 1.5, 1.5, -1.5)


def test_a_rest_stands_still_where_the_move_before_it_ended():
    duty = Duty((Move(1.0, ByTime(1.0), Law.CYCLOIDAL), Rest(2.0)))
    still = duty.timeline.at([1.5, 3.0])
    np.testing.assert_allclose(still.angle, 1.0, rtol=1e-15)
    assert not still.speed.any()
    assert not still.direction.any()


def test_both_sides_of_a_jump_in_acceleration_can_be_had():
    timeline = Duty((Move(1.0, ByTime(1.0), Law.TRIANGULAR),)).timeline
    assert timeline.within(np.array([0, 1]), np.array([0.5, 0.0])).acceleration.tolist() == [4.0, -4.0]


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: Move(1.0, ByTime(0.0)), "time of a move: a move needs a time of more than 0; read 0 s."),
        (lambda: Move(1.0, ByTime(float("nan"))), "a move needs a time of more than 0; read nan s"),
        (lambda: Move(0.0, ByTime(1.0)), "angle of a move: a move needs an angle that is not 0; read 0."),
        (lambda: Move(1.0, ByTime(1.0), ramp_up=0.7, ramp_down=0.4), "two ramps take longer than the whole move"),
        (lambda: Move(1.0, ByTime(1.0), ramp_up=0.0), "the ramp up takes a share of the time between 0 and 1; read 0"),
        (lambda: Move(1.0, ByTime(1.0), smoothing=1.5), "the smoothing of a ramp lies between 0 and 1; read 1.5"),
        (lambda: Move(1.0, ByLimits()), "this law needs limits of speed and acceleration"),
        (lambda: Move(1.0, ByLimits(1.0, 1.0), Law.S_CURVE), "needs limits of speed, acceleration and jerk"),
        (lambda: Move(1.0, ByLimits(1.0, 1.0, jerk=1.0)), "no limit of jerk can be kept; read 1 rad/s³"),
        (lambda: Move(1.0, ByLimits(), Law.CYCLOIDAL), "a move by limits needs one at least"),
        (lambda: Move(1.0, ByLimits(1.0, deceleration=2.0), Law.CYCLOIDAL), "slows down as it speeds up"),
        (lambda: ByLimits(speed=-1.0), "limits of a move: the limit of speed has to be more than 0; read -1"),
        (lambda: Rest(0.0), "rest: the time of a rest has to be more than 0"),
        (lambda: Repeat((), 3), "a repeat needs moves or rests, and one time or more"),
        (lambda: Duty((Repeat((Rest(1.0),), MOST_STEPS + 1),)), "at most 20000 moves and rests; read 20001"),
        (lambda: Duty().timeline, "duty: the duty is empty. Add a move."),
    ],
)
def test_motion_that_cannot_be_is_refused(make, sentence):
    with pytest.raises(ValueRefused) as refused:
        make()
    assert sentence in str(refused.value)
