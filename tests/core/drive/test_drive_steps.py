"""A duty as a list to be edited: ends, repeats, pasted rows; a move said by time and by limits."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.drive import ByLimits, ByTime, DriveSettings, Duty, Gear, Law, Move, Repeat, Rest, Train
from core.drive.fields import number_at, typed_at, with_number
from core.drive.items import free_name, items_at, with_item_doubled, with_items, with_items_moved, without_items
from core.drive.steps import (
    STEPS,
    called,
    path_of,
    step_rows,
    steps_of_block,
    with_end,
    with_repeat,
    without_repeat,
)
from core.drive.timing import by_limits, by_time, limits_needed, limits_taken, with_law
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity import UNITS

MOVE = Move(math.pi / 2, ByTime(0.5))
angles = st.floats(0.01, 20.0).flatmap(lambda size: st.sampled_from([size, -size]))
times = st.floats(0.01, 30.0)
plain = st.one_of(
    st.builds(Move, angles, st.builds(ByTime, times), st.sampled_from(Law)), st.builds(Rest, times),
)
steps = st.lists(
    st.one_of(plain, st.builds(Repeat, st.lists(plain, min_size=1, max_size=3).map(tuple), st.integers(1, 4))),
    min_size=1, max_size=6,
).map(tuple)
duties = st.builds(Duty, steps, st.floats(-7.0, 7.0))


def settings(*steps: Move | Rest | Repeat, start: float = 0.0) -> DriveSettings:
    return DriveSettings(duty=Duty(steps, start))


@given(duties)
def test_rows_stand_where_the_duty_written_out_stands(duty):
    written_out = list(duty.positions)
    rows = step_rows(duty)
    at = 0
    for row in rows:
        if len(row.place) == 2:
            continue
        count = row.step.times * len(row.step.steps) if isinstance(row.step, Repeat) else 1
        assert row.start == pytest.approx(written_out[at], abs=1e-11)
        at += count
        assert row.end == pytest.approx(written_out[at], abs=1e-11)
    assert sum(row.time for row in rows if len(row.place) == 1) == pytest.approx(duty.timeline.length, rel=1e-12)


def test_rows_of_a_repeat_stand_where_its_first_pass_does():
    duty = Duty((Rest(1.0), Repeat((MOVE, Rest(0.25)), 3)), start=0.5)
    rows = step_rows(duty)
    assert [row.place for row in rows] == [(0,), (1,), (1, 0), (1, 1)]
    assert [called(row.place) for row in rows] == ["step 1", "step 2", "step 2.1", "step 2.2"]
    assert (rows[1].start, rows[1].end) == (0.5, pytest.approx(0.5 + 1.5 * math.pi, rel=1e-15))
    assert (rows[2].start, rows[2].end) == (0.5, 0.5 + math.pi / 2)
    assert rows[1].time == 2.25


@given(duties, st.floats(-9.0, 9.0), st.data())
def test_a_move_ends_where_it_is_told_to(duty, end, data):
    rows = [row for row in step_rows(duty) if isinstance(row.step, Move)]
    if not rows:
        return
    row = data.draw(st.sampled_from(rows))
    if end == row.start:
        return
    after = with_end(DriveSettings(duty=duty), row.place, end)
    found = next(each for each in step_rows(after.duty) if each.place == row.place)
    assert found.end == pytest.approx(end, abs=1e-12)
    assert found.start == row.start


def test_an_end_that_leaves_nothing_of_a_move_is_refused_and_a_rest_has_none():
    before = settings(MOVE, Rest(1.0), start=0.25)
    with pytest.raises(ValueRefused, match="step 1: the move begins where it is to end"):
        with_end(before, (0,), 0.25)
    with pytest.raises(EditRefused, match="step 2: only a move ends at another angle"):
        with_end(before, (1,), 1.0)


def test_steps_are_put_into_a_repeat_and_back_with_what_was_typed_for_them():
    before = settings(MOVE, Rest(0.5), replace(MOVE, angle=-1.0), Rest(0.75))
    for path, value, text in (
        ("duty.steps.0.angle", math.pi / 2, "90 deg"), ("duty.steps.1.time", 0.5, "1/2 s"),
        ("duty.steps.2.timing.time", 0.5, "a/2"), ("duty.steps.3.time", 0.75, "3/4 s"),
    ):
        before = with_number(before, path, value, text)
    within = with_repeat(before, 1, 2, 4)
    assert within.duty.steps[1] == Repeat((Rest(0.5), replace(MOVE, angle=-1.0)), 4)
    assert typed_at(within, "duty.steps.0.angle") == "90 deg"
    assert typed_at(within, "duty.steps.1.steps.0.time") == "1/2 s"
    assert typed_at(within, "duty.steps.1.steps.1.timing.time") == "a/2"
    assert typed_at(within, "duty.steps.2.time") == "3/4 s"
    assert without_repeat(with_number(within, "duty.steps.1.times", 2, "1+1"), 1) == before


def test_a_repeat_holds_no_repeat_and_only_a_repeat_is_dissolved():
    before = settings(MOVE, Repeat((Rest(1.0),)))
    with pytest.raises(EditRefused, match="no other repeat"):
        with_repeat(before, 0, 1)
    with pytest.raises(EditRefused, match="step 1: only a repeat can be dissolved"):
        without_repeat(before, 0)
    with pytest.raises(EditRefused, match="no such steps"):
        with_repeat(before, 1, 4)


def test_a_block_of_rows_is_moves_and_rests():
    text = "angle\ttime\n90\t0,5\n\t0,25\n-45 deg\t250 ms\n\n0\t1"
    read = steps_of_block(text, UNITS["°"], UNITS["s"], replace(MOVE, law=Law.CYCLOIDAL))
    assert read == (
        Move(math.pi / 2, ByTime(0.5), Law.CYCLOIDAL), Rest(0.25), Move(-math.pi / 4, ByTime(0.25), Law.CYCLOIDAL),
        Rest(1.0),
    )


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("90\t0.5\n45", "row 2: a row has an angle and a time; read 45"),
        ("90\t0.5\t7", "row 1: a row has an angle and a time"),
        ("90\t0", "row 1: a move or rest needs a time of more than 0"),
        ("90\t0.5\n45\tfast", "row 2, time"),
        ("90\t2 kg", "row 1, time"),
        ("\n", "there is nothing to paste"),
        ("90\t1.500", "cannot be told whether"),
        ("90,5\t1.5", "two decimal marks"),
    ],
)
def test_a_block_that_is_no_duty_is_refused_with_the_row(text, sentence):
    with pytest.raises((ValueRefused, QuantityError), match=sentence):
        steps_of_block(text, UNITS["°"], UNITS["s"], MOVE)


def test_the_decimal_mark_of_a_block_can_be_said():
    degrees, seconds = UNITS["°"], UNITS["s"]
    assert steps_of_block("90\t1.500", degrees, seconds, MOVE, ".")[0].timing.time == 1.5
    with pytest.raises(QuantityError, match="the decimal mark of this block"):
        steps_of_block("90\t1.500", degrees, seconds, MOVE, ",")


# A move in other words


@given(angles, times, st.sampled_from(Law), st.floats(0.05, 0.5), st.floats(0.05, 0.5), st.floats(0.01, 1.0))
def test_a_move_by_limits_is_the_same_motion(angle, time, law, up, down, smoothing):
    if law == Law.S_CURVE:
        down = up
    move = Move(angle, ByTime(time), law, up, down, smoothing)
    other = by_limits(move)
    assert other.time == pytest.approx(time, rel=1e-9)
    there = np.linspace(0.0, time, 41)
    wanted = Duty((move,)).timeline.at(there)
    found = Duty((other,)).timeline.at(there * other.time / time)
    np.testing.assert_allclose(found.angle, wanted.angle, atol=1e-8 * abs(angle))
    np.testing.assert_allclose(found.speed, wanted.speed, atol=2e-6 * abs(angle) / time)


@given(angles, st.floats(0.1, 50.0), st.floats(0.1, 50.0), st.floats(0.1, 50.0), st.sampled_from(Law), st.data())
def test_a_move_by_time_is_the_same_motion(angle, speed, acceleration, deceleration, law, data):
    limits = {"speed": speed, "acceleration": acceleration}
    if law == Law.TRAPEZOIDAL:
        limits["deceleration"] = deceleration
    if "jerk" in limits_taken(law):
        limits["jerk"] = data.draw(st.floats(0.1, 500.0))
    move = Move(angle, ByLimits(**limits), law)
    other = by_time(move)
    assert other.time == pytest.approx(move.time, rel=1e-12)
    there = np.linspace(0.0, move.time, 41)
    wanted, found = Duty((move,)).timeline.at(there), Duty((other,)).timeline.at(there)
    np.testing.assert_allclose(found.angle, wanted.angle, atol=1e-8 * abs(angle))
    np.testing.assert_allclose(found.speed, wanted.speed, atol=2e-6 * abs(angle) / move.time)


@given(st.sampled_from(Law), st.sets(st.sampled_from(["speed", "acceleration", "deceleration", "jerk"])))
def test_a_law_takes_and_needs_just_the_limits_that_are_said(law, given_limits):
    limits = ByLimits(**dict.fromkeys(given_limits, 2.0))
    allowed = given_limits <= set(limits_taken(law)) and given_limits >= set(limits_needed(law)) and bool(given_limits)
    try:
        Move(1.0, limits, law)
    except ValueRefused:
        assert not allowed
    else:
        assert allowed


@given(st.sampled_from(Law), st.sampled_from(Law), angles, st.floats(0.1, 9.0), st.floats(0.1, 9.0))
def test_a_move_changes_its_law_and_keeps_the_limits_that_the_new_one_has(old, new, angle, speed, acceleration):
    extra = {"jerk": 50.0} if old == Law.S_CURVE else {}
    move = Move(angle, ByLimits(speed, acceleration, **extra), old)
    after = with_law(move, new)
    assert after.law == new
    assert (after.timing.speed, after.timing.acceleration) == (speed, acceleration)
    assert with_law(replace(move, timing=ByTime(0.5)), new) == replace(move, timing=ByTime(0.5), law=new)


# Lists


@given(st.lists(st.floats(0.1, 9.0), min_size=1, max_size=7), st.data())
def test_several_entries_go_together_and_take_their_texts_along(durations, data):
    drive = settings(*(Rest(time) for time in durations))
    for at, time in enumerate(durations):
        drive = with_number(drive, f"{STEPS}.{at}.time", time, f"{time!r} s + 0")
    chosen = data.draw(st.sets(st.sampled_from(range(len(durations))), min_size=1))
    to = data.draw(st.integers(0, len(durations) - len(chosen)))
    moved = with_items_moved(drive, STEPS, chosen, to)
    together = [durations[at] for at in sorted(chosen)]
    assert [step.time for step in moved.duty.steps[to : to + len(chosen)]] == together
    assert sorted(step.time for step in moved.duty.steps) == sorted(durations)
    less = without_items(drive, STEPS, chosen)
    assert [step.time for step in less.duty.steps] == [t for at, t in enumerate(durations) if at not in chosen]
    for after in (moved, less):
        for at, step in enumerate(after.duty.steps):
            assert typed_at(after, f"{STEPS}.{at}.time") == f"{step.time!r} s + 0"
        assert len(after.typed) == len(after.duty.steps)


def test_a_copy_stands_behind_its_original_with_its_texts_under_a_free_name():
    drive = DriveSettings(train=Train(stages=(Gear("gearbox", 12.0), Gear("gearbox 2", 3.0))))
    drive = with_number(drive, "train.stages.0.ratio", 12.0, "3*4")
    after = with_item_doubled(drive, "train.stages", 0)
    assert [stage.name for stage in after.train.stages] == ["gearbox", "gearbox 3", "gearbox 2"]
    assert typed_at(after, "train.stages.1.ratio") == typed_at(after, "train.stages.0.ratio") == "3*4"
    assert free_name(after, "train.stages", "gearbox 2") == "gearbox 4"
    assert free_name(after, "train.stages", "brake") == "brake"


def test_a_block_is_put_in_as_one_and_what_lies_behind_moves_on():
    drive = with_number(settings(MOVE, Rest(0.5)), "duty.steps.1.time", 0.5, "1/2")
    after = with_items(drive, STEPS, (Rest(1.0), Rest(2.0)), 1)
    assert [step.time for step in items_at(after, STEPS)] == [0.5, 1.0, 2.0, 0.5]
    assert typed_at(after, path_of((3,)) + ".time") == "1/2"
    assert number_at(after, "duty.steps.3.time") == 0.5
