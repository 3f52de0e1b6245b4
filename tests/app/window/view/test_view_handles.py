"""Handles in the picture, what dragging them comes to, and the keys that nudge."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from PySide6.QtCore import Qt
from scipy.spatial.transform import Rotation
from strategies import placements

from app.window.view.camera import LOOKS, Camera
from app.window.view.dragging import NOTHING, Amount, Drag
from app.window.view.handles import GRIPS, REACH, Grip, Handles, grip_at, nearest_to_view, paths_of
from app.window.view.nudging import Nudge, nudge_of
from core.placement import Placement, turn_about

SIZE = (640.0, 480.0)
AT = np.array([3.0, -2.0, 5.0])
CAMERA = Camera(AT + np.array([0.05, -0.02, 0.03]), 1.5, 0.4, 0.5)

cameras = st.builds(
    Camera,
    st.just(AT + np.array([0.02, 0.01, -0.03])),
    st.floats(0.5, 5.0),
    st.floats(-3.1, 3.1),
    st.floats(-1.5, 1.5),
    st.booleans(),
)
spots = st.tuples(st.floats(120, 520), st.floats(90, 390))


def handles(frame: Placement | None = None, *, own: bool = False) -> Handles:
    frame = frame or Placement(np.eye(3), AT)
    return Handles(frame, frame.shift, frame.turn.T if own else np.eye(3), own)


@given(cameras)
def test_handles_keep_their_size_on_the_screen(camera):
    paths = paths_of(handles(), camera, SIZE)
    middle = camera.project(AT, SIZE)[:2]
    lengths = [np.linalg.norm(path - middle, axis=1).max() for path in paths.values()]
    # In perspective what points at the viewer looks a little longer.
    assert max(lengths) <= REACH * 1.12
    # Of three directions square to one another one at least is seen at √(2/3) of its length.
    assert max(lengths) >= REACH * 0.75


@given(cameras)
def test_a_handle_is_found_on_its_own_line_or_yields_to_one_as_near(camera):
    paths = paths_of(handles(), camera, SIZE)
    for grip, path in paths.items():
        spot = tuple(path[:4].mean(axis=0)) if grip.kind == "in" else tuple(path[-1])
        found = grip_at(paths, spot)
        assert found is not None
        if found != grip:
            alone = {found: paths[found]}
            assert grip_at(alone, spot) == found


def test_a_place_away_from_all_handles_is_on_none():
    paths = paths_of(handles(), CAMERA, SIZE)
    assert grip_at(paths, (5.0, 5.0)) is None
    assert grip_at({}, (5.0, 5.0)) is None


@pytest.mark.parametrize(("look", "gone"), [
    ("top", {Grip("along", 2), Grip("in", 0), Grip("in", 1), Grip("about", 0), Grip("about", 1)}),
    ("front", {Grip("along", 1), Grip("in", 0), Grip("in", 2), Grip("about", 0), Grip("about", 2)}),
    ("iso", set()),
])
@pytest.mark.parametrize("parallel", [False, True])
def test_what_is_seen_end_on_or_edge_on_is_left_out(look, gone, parallel):
    camera = Camera(AT, 2.0, *LOOKS[look], parallel)
    assert set(GRIPS) - set(paths_of(handles(), camera, SIZE)) == gone


def test_behind_the_eye_there_are_no_handles():
    camera = Camera(AT, 1.0, *LOOKS["front"])
    away = handles(Placement(np.eye(3), AT - np.array([0, 5.0, 0])))
    assert paths_of(away, camera, SIZE) == {}


@given(cameras, placements(), st.sampled_from(GRIPS), st.floats(-0.15, 0.15), st.floats(-0.15, 0.15))
def test_a_dragged_handle_stays_under_the_pointer(camera, frame, grip, one, other):
    """The pointer goes where a motion carries the place that was taken; the drag tells that motion."""
    stands = handles(Placement(frame.turn, AT), own=True)
    assume(grip in paths_of(stands, camera, SIZE))
    values = np.zeros(3)
    values[list(grip.moves)] = [one, other][: len(grip.moves)]
    amount = Amount(grip.kind == "about", tuple(values))
    if grip.kind == "along":
        taken = AT + 0.1 * stands.directions[grip.axis]
    else:
        taken = AT + 0.1 * stands.directions[(grip.axis + 1) % 3]
    ends = [camera.project(point, SIZE) for point in (taken, amount.motion(stands).apply(taken))]
    assume(all(end[2] > 0.1 for end in ends))
    drag = Drag(stands, grip, camera, SIZE, tuple(ends[0][:2]))
    np.testing.assert_allclose(drag.values(tuple(ends[1][:2]), NOTHING), values, rtol=0, atol=1e-9)


def test_a_turn_goes_on_beyond_half_a_turn():
    camera, grip = Camera(AT, 2.0, *LOOKS["top"]), Grip("about", 2)
    middle = camera.project(AT, SIZE)[:2]
    drag = Drag(handles(), grip, camera, SIZE, tuple(middle + np.array([80, 0])))
    values = NOTHING
    for angle in np.radians(np.arange(10, 410, 10)):
        values = drag.values(tuple(middle + 80 * np.array([np.cos(angle), -np.sin(angle)])), values)
    assert values[2] == pytest.approx(np.radians(400), abs=1e-9)


def test_past_the_point_where_an_axis_vanishes_a_drag_stays_where_it_was():
    """The bar runs away from the viewer; from above its vanishing point on, the pointer would mean behind the eye."""
    camera, grip = Camera(AT, 2.0, -np.pi / 2, 0.25), Grip("along", 1)
    far = camera.project(AT + np.array([0.0, 1e9, 0.0]), SIZE)[:2]
    drag = Drag(handles(), grip, camera, SIZE, tuple(camera.project(AT + np.array([0.0, 0.1, 0.0]), SIZE)[:2]))
    last = drag.values(tuple(far + np.array([0.0, 5.0])), NOTHING)
    assert last[1] > 10
    assert drag.values(tuple(far - np.array([0.0, 5.0])), last) == last


@pytest.mark.parametrize(("step", "amount"), [(0.005, 0.015), (0.0, 0.0126), (0.001, 0.013)])
def test_amounts_come_in_whole_steps(step, amount):
    drag = Drag(handles(), Grip("along", 0), CAMERA, SIZE, (0.0, 0.0))
    assert drag.amount((0.0126, 0.0, 0.0), step).values == (pytest.approx(amount, rel=1e-15), 0.0, 0.0)


@given(placements(), st.floats(-3, 3), st.sampled_from([0, 1, 2]))
def test_a_turn_goes_about_the_handles_middle(frame, angle, axis):
    stands = handles(Placement(frame.turn, AT), own=True)
    values = tuple(angle if each == axis else 0.0 for each in range(3))
    motion = Amount(turning=True, values=values).motion(stands)
    expected = Rotation.from_rotvec(angle * stands.directions[axis]).as_matrix()
    np.testing.assert_allclose(motion.turn, expected, rtol=0, atol=1e-14)
    np.testing.assert_allclose(motion.apply(AT), AT, rtol=0, atol=1e-14)


def test_handles_are_carried_with_the_line_and_turn_when_they_are_its_own():
    motion = Placement(turn_about([0, 0, 1], np.pi / 2), [1, 0, 0])
    own, fixed = handles(own=True).carried(motion), handles().carried(motion)
    np.testing.assert_allclose(own.directions, [[0, 1, 0], [-1, 0, 0], [0, 0, 1]], rtol=0, atol=1e-15)
    np.testing.assert_array_equal(fixed.directions, np.eye(3))
    np.testing.assert_allclose(own.middle, [3.0, 3.0, 5.0], rtol=0, atol=1e-15)


@pytest.mark.parametrize(("look", "expected"), [
    ("front", ((0, 1), (2, 1), (1, -1))), ("back", ((0, -1), (2, 1), (1, 1))), ("right", ((1, 1), (2, 1), (0, 1))),
    ("top", ((0, 1), (1, 1), (2, 1))), ("bottom", ((0, 1), (1, -1), (2, -1))), ("iso", ((0, 1), (2, 1), (1, -1))),
])
def test_right_up_and_toward_the_viewer_are_three_different_axes(look, expected):
    assert nearest_to_view(Camera(AT, 2.0, *LOOKS[look]), np.eye(3)) == expected


@given(cameras, placements())
def test_the_axes_nearest_to_the_picture_are_each_given_once(camera, frame):
    found = nearest_to_view(camera, frame.turn.T)
    assert sorted(axis for axis, _ in found) == [0, 1, 2]
    for row, (axis, sign) in enumerate(found):
        assert sign * (camera.axes[row] @ frame.turn[:, axis]) >= 0


CONTROL, SHIFT, KEYPAD = (
    Qt.KeyboardModifier.ControlModifier, Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.KeypadModifier
)


def test_control_moves_and_with_shift_turns_and_plain_keys_are_no_nudge():
    assert nudge_of(Qt.Key.Key_Left, CONTROL) == Nudge(turning=False, way=0, sign=-1)
    assert nudge_of(Qt.Key.Key_Up, CONTROL | KEYPAD) == Nudge(turning=False, way=1, sign=1)
    assert nudge_of(Qt.Key.Key_PageUp, CONTROL) == Nudge(turning=False, way=2, sign=-1)
    assert nudge_of(Qt.Key.Key_Right, CONTROL | SHIFT) == Nudge(turning=True, way=1, sign=1)
    assert nudge_of(Qt.Key.Key_Left, Qt.KeyboardModifier.NoModifier) is None
    assert nudge_of(Qt.Key.Key_Left, SHIFT) is None
    assert nudge_of(Qt.Key.Key_A, CONTROL) is None
