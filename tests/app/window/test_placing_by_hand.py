"""Dragging handles in the view: steps, Escape, one edit each, in groups, rings and cuts."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from placing_driver import (
    ABOUT_Z,
    CONTROL,
    IN_XY,
    NO,
    SHIFT,
    X,
    Z,
    carried_spot,
    drag,
    grip_spot,
    let_go,
    position,
    select,
    send,
)
from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QAction, QMouseEvent
from PySide6.QtWidgets import QApplication
from scipy.spatial.transform import Rotation

from app.window.manner import Manner
from core.assembly.placing import standing_of, standing_rows
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import with_seat

pytestmark = pytest.mark.qt_log_ignore("^This plugin does not support")


def test_a_drag_along_an_axis_is_one_edit_in_whole_steps(either):
    window = either
    select(window, "plate")
    to = carried_spot(window, X, (0.0803, 0.0, 0.0))
    drag(window, X, to)
    assert not window.session.history.past
    assert window.view.hand.shown.words.startswith("x +")
    let_go(window, to)
    moved = position(window, "plate")
    assert moved[0] == pytest.approx(0.0803, abs=0.0006)
    assert moved[0] * 1000 == pytest.approx(round(moved[0] * 1000), abs=1e-9)
    assert moved[1:].tolist() == [0, 0]
    assert window.session.history.undo_name == f"Move plate x +{round(moved[0] * 1000)} mm"
    assert len(window.session.history.past) == 1
    window.session.undo()
    assert position(window, "plate").tolist() == [0, 0, 0]


def test_what_is_dragged_follows_the_pointer_before_it_is_let_go(either):
    window = either
    select(window, "plate")
    to = carried_spot(window, X, (0.1, 0.0, 0.0))
    drag(window, X, to)
    shown = next(bodies for bodies in window.view.scene.bodies if bodies.key == "plate")
    assert shown.shift[0, 0] == pytest.approx(0.1, abs=0.0006)
    assert position(window, "plate").tolist() == [0, 0, 0]
    QApplication.processEvents()
    window.view.grab()
    let_go(window, to)
    after = next(bodies for bodies in window.view.scene.bodies if bodies.key == "plate")
    np.testing.assert_array_equal(after.shift[0], position(window, "plate"))


def test_escape_puts_back_what_is_dragged_and_leaves_no_edit(either, qtbot):
    window = either
    select(window, "plate")
    before = window.session.machine
    to = carried_spot(window, X, (0.1, 0.0, 0.0))
    window.view.setFocus()
    drag(window, X, to)
    qtbot.keyClick(window.view, Qt.Key.Key_Escape)
    send(window.view, QEvent.Type.MouseMove, to + 20)
    let_go(window, to + 20)
    assert window.session.machine is before
    assert not window.session.history.past
    assert next(bodies for bodies in window.view.scene.bodies if bodies.key == "plate").shift[0].tolist() == [0, 0, 0]
    assert window.session.selected == {"plate"}


def test_a_turn_goes_about_an_axis_through_the_origin_in_whole_steps(either):
    window = either
    select(window, "block")
    to = carried_spot(window, ABOUT_Z, (0.0, 0.0, np.radians(61)))
    drag(window, ABOUT_Z, to, steps=20)
    assert window.view.hand.shown.words == "about z +60°"
    let_go(window, to)
    standing = standing_of(window.session.assembly, "block")
    np.testing.assert_allclose(standing.turn, Rotation.from_euler("z", 60, degrees=True).as_matrix(), atol=1e-14)
    np.testing.assert_allclose(standing.shift, [-0.2, -0.1, 0.1], rtol=0, atol=1e-15)
    assert window.session.history.undo_name == "Turn block about z +60°"


@pytest.mark.gui
def test_a_turn_about_the_centre_of_mass_leaves_it_where_it_is(placed):
    window = placed
    window.session.set_manner(replace(Manner(), pivot="centre"))
    select(window, "bar")
    before = window.session.assembly.table.moments.centre[1]
    to = carried_spot(window, ABOUT_Z, (0.0, 0.0, np.radians(-45)))
    drag(window, ABOUT_Z, to, steps=20)
    let_go(window, to)
    assert window.session.history.undo_name == "Turn bar about z −45°"
    np.testing.assert_allclose(window.session.assembly.table.moments.centre[1], before, rtol=0, atol=1e-13)


@pytest.mark.gui
def test_a_drag_in_a_plane_moves_along_both_of_its_axes(placed):
    window = placed
    select(window, "plate")
    to = carried_spot(window, IN_XY, (0.05, -0.03, 0.0))
    drag(window, IN_XY, to)
    let_go(window, to)
    moved = position(window, "plate")
    np.testing.assert_allclose(moved, [0.05, -0.03, 0], rtol=0, atol=0.001)
    x, y = (round(value * 1000) for value in moved[:2])
    assert window.session.history.undo_name == f"Move plate x +{x} mm, y −{-y} mm"


@pytest.mark.gui
def test_shift_makes_the_steps_finer_and_a_step_of_nothing_lets_it_slide(placed):
    window = placed
    window.session.set_manner(replace(Manner(), length_step=0.01))
    select(window, "plate")
    to = carried_spot(window, X, (0.0537, 0.0, 0.0))
    drag(window, X, to, SHIFT)
    let_go(window, to)
    assert position(window, "plate")[0] * 1000 == pytest.approx(round(position(window, "plate")[0] * 1000), abs=1e-9)
    assert position(window, "plate")[0] * 100 != pytest.approx(round(position(window, "plate")[0] * 100), abs=1e-9)
    window.session.undo()
    window.session.set_manner(replace(Manner(), length_step=0.0))
    drag(window, X, to)
    let_go(window, to)
    moved = position(window, "plate")[0]
    assert moved == pytest.approx(0.0537, abs=0.0006)
    assert moved * 1000 != pytest.approx(round(moved * 1000), abs=1e-6)


@pytest.mark.gui
@pytest.mark.parametrize("key", ["bar", "pins", "group"])
def test_lines_in_turned_groups_and_rings_and_groups_themselves_move_along_the_document(placed, key):
    window = placed
    select(window, key)
    before = {each: rows.shift for each, rows in standing_rows(window.session.assembly, key).items()}
    to = carried_spot(window, Z, (0.0, 0.0, 0.06))
    drag(window, Z, to)
    let_go(window, to)
    for each, rows in standing_rows(window.session.assembly, key).items():
        step = rows.shift[0] - before[each][0]
        np.testing.assert_allclose(step[:2], 0, atol=1e-13)
        assert step[2] == pytest.approx(0.06, abs=0.0006)
    shown = {bodies.key: bodies for bodies in window.view.scene.bodies}
    for each, rows in standing_rows(window.session.assembly, key).items():
        np.testing.assert_allclose(shown[each].shift, rows.shift, rtol=0, atol=1e-15)


@pytest.mark.gui
def test_handles_along_the_lines_own_axes_move_along_them(placed):
    window = placed
    window.session.set_manner(replace(Manner(), along="own"))
    select(window, "bar")
    before = standing_of(window.session.assembly, "bar")
    to = carried_spot(window, Z, (0.0, 0.0, 0.05))
    drag(window, Z, to)
    let_go(window, to)
    step = position(window, "bar") - before.shift
    np.testing.assert_allclose(np.cross(step, before.turn[:, 2]), 0, atol=1e-13)
    assert window.session.history.undo_name.startswith("Move bar along its z +")


@pytest.mark.gui
def test_several_lines_move_as_one(placed):
    window = placed
    select(window, "plate", "block")
    before = [position(window, key) for key in ("plate", "block")]
    to = carried_spot(window, X, (0.05, 0.0, 0.0))
    drag(window, X, to)
    let_go(window, to)
    steps = [position(window, key) - was for key, was in zip(("plate", "block"), before, strict=True)]
    np.testing.assert_allclose(steps[0], steps[1], rtol=0, atol=1e-15)
    assert window.session.history.undo_name.startswith("Move 2 lines x +")
    assert len(window.session.history.past) == 1


@pytest.mark.gui
def test_a_cut_is_dragged_too(placed):
    window = placed
    select(window, "bore")
    mass = window.session.assembly.node("block").single.mass
    # Over the block's edge, so that less is taken out.
    to = carried_spot(window, X, (0.045, 0.0, 0.0))
    drag(window, X, to)
    let_go(window, to)
    assert window.session.assembly.cut("bore").pose.position[0] == pytest.approx(0.045, abs=0.0006)
    assert window.session.assembly.node("block").single.mass > mass


@pytest.mark.gui
def test_a_refused_drag_puts_it_back_and_says_why(placed):
    window = placed
    select(window, "bore")
    told = []
    window.session.refused.connect(told.append)
    before = window.session.machine
    # Beside the block it takes nothing out.
    window.session.set_manner(replace(Manner(), length_step=0.0))
    to = carried_spot(window, X, (0.25, 0.0, 0.0))
    drag(window, X, to)
    let_go(window, to)
    assert window.session.machine is before
    assert len(told) == 1
    assert "bore" in told[0]


def seat_bar(window):
    """Set the bar with its lower face on the plate's upper one."""
    seat = Seat(Anchor("bar", "face −z"), Anchor("plate", "face +z"))
    assert window.session.edit("Seat bar", lambda before: with_seat(before, "bar", seat))


@pytest.mark.gui
def test_dragging_a_seated_line_is_refused_in_words_as_soon_as_it_begins(placed, qtbot):
    window, told = placed, []
    seat_bar(window)
    window.session.refused.connect(told.append)
    before = window.session.machine
    select(window, "bar")
    to = carried_spot(window, X, (0.1, 0.0, 0.0))
    drag(window, X, to)
    assert not window.view.hand.holds
    let_go(window, to)
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    assert window.session.machine is before
    assert told[0].startswith("bar: a seated line stands where its seat says")
    assert set(told) == {told[0]}


@pytest.mark.gui
def test_what_is_seated_on_the_dragged_line_follows_at_once(placed):
    window = placed
    seat_bar(window)
    select(window, "plate")
    to = carried_spot(window, Z, (0.0, 0.0, 0.05))
    drag(window, Z, to)
    shown = {bodies.key: bodies.shift[0] for bodies in window.view.scene.bodies}
    was = position(window, "bar")
    assert shown["bar"][2] - was[2] == pytest.approx(0.05, abs=0.0006)
    let_go(window, to)
    np.testing.assert_allclose(position(window, "bar"), shown["bar"], rtol=0, atol=1e-12)


@pytest.mark.gui
def test_a_cut_is_outlined_while_it_is_dragged(placed):
    window = placed
    select(window, "bore")
    to = carried_spot(window, X, (0.02, 0.0, 0.0))
    drag(window, X, to)
    edges = window.view._picture.found
    middle = edges.reshape(-1, 3).mean(axis=0)
    np.testing.assert_allclose(middle[:2], [-0.18, -0.1], rtol=0, atol=0.0006)
    let_go(window, to)
    assert not len(window.view._picture.found)


@pytest.mark.gui
def test_a_click_on_a_handle_selects_what_lies_behind_it(placed):
    window = placed
    select(window, "plate")
    spot = grip_spot(window, IN_XY)
    behind = window.view.key_at(QPointF(*spot))
    send(window.view, QEvent.Type.MouseButtonPress, spot)
    send(window.view, QEvent.Type.MouseMove, spot + 1)
    let_go(window, spot + 1)
    assert behind
    assert window.session.selected == {behind}
    assert not window.session.history.past


@pytest.mark.gui
def test_a_drag_leaves_the_camera_alone_and_a_drag_beside_the_handles_turns_it(placed):
    window = placed
    select(window, "plate")
    camera = window.view.camera
    to = carried_spot(window, X, (0.2, 0.0, 0.0))
    drag(window, X, to)
    let_go(window, to)
    assert window.view.camera is camera
    corner = np.array(window.view.frame_size) - 8
    send(window.view, QEvent.Type.MouseButtonPress, corner)
    send(window.view, QEvent.Type.MouseMove, corner - 40)
    let_go(window, corner - 40)
    assert window.view.camera.azimuth != camera.azimuth
    assert len(window.session.history.past) == 1


@pytest.mark.gui
def test_the_pointer_on_a_handle_is_told_what_it_does(placed):
    window = placed
    select(window, "plate")
    for grip, words in ((X, "along x"), (IN_XY, "in plane xy"), (ABOUT_Z, "about z")):
        send_hover(window, grip_spot(window, grip))
        assert window.view.hand.shown.words == words
    send_hover(window, (3.0, window.view.height() / 2))
    assert window.view.hand.shown.words == ""
    window.session.set_manner(replace(Manner(), along="own"))
    send_hover(window, grip_spot(window, X))
    assert window.view.hand.shown.words == "along its x"


def send_hover(window, spot):
    none = Qt.MouseButton.NoButton
    QApplication.sendEvent(window.view, QMouseEvent(QEvent.Type.MouseMove, QPointF(*spot), QPointF(*spot), none, none, NO))


@pytest.mark.gui
def test_handles_can_be_put_away_and_the_lines_own_frame_stays(placed):
    window = placed
    select(window, "bar")
    action = next(each for each in window.findChildren(QAction) if each.text() == "Handles for placing")
    assert action.isChecked()
    action.trigger()
    assert not window.placing.bar.isVisible()
    send_hover(window, grip_spot(window, X))
    assert window.view.hand.shown.lit is None
    np.testing.assert_array_equal(window.view.hand.shown.handles.frame.shift, position(window, "bar"))
    action.trigger()
    assert window.placing.bar.isVisible()


@pytest.mark.gui
def test_undo_in_the_middle_of_a_drag_drops_it(placed, qtbot):
    window = placed
    select(window, "plate")
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    to = carried_spot(window, X, (0.1, 0.0, 0.0))
    drag(window, X, to)
    window.session.undo()
    assert not window.view.hand.holds
    let_go(window, to)
    assert position(window, "plate").tolist() == [0, 0, 0]
    assert not window.session.history.past
