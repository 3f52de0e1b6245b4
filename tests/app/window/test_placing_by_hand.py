"""Dragging handles in the view and nudging by keys: steps, Escape, one edit each, in groups, rings and cuts."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QAction, QMouseEvent
from PySide6.QtWidgets import QApplication, QPushButton
from scipy.spatial.transform import Rotation
from window_driver import enter, field, solid

from app.window.main import MainWindow
from app.window.manner import Manner
from app.window.style import Words
from app.window.view.dragging import Amount
from app.window.view.handles import Grip, paths_of
from app.window.view.opengl import VIEW_VARIABLE, prepare_opengl
from app.window.view.soft_view import SoftView
from core.assembly import Assembly, Cut, Group
from core.assembly.placing import standing_of, standing_rows
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import with_seat
from core.machine import Machine
from core.placement import Pose, Ring
from core.pointing import met_on_plane, nearest_on_axis
from core.shapes import SHAPES

NO, SHIFT, CONTROL = (
    Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.ControlModifier
)
pytestmark = pytest.mark.qt_log_ignore("^This plugin does not support")
CANVASES = [pytest.param("software", marks=pytest.mark.gui), pytest.param("opengl", marks=pytest.mark.opengl)]
X, Z = Grip("along", 0), Grip("along", 2)
ABOUT_Z, IN_XY = Grip("about", 2), Grip("in", 2)


def machine() -> Machine:
    """Return a plate, a bar in a turned group, pins in a ring in it, and a bored block."""
    plate = solid("plate", "cylinder", diameter=400, length=20)
    bar = solid("bar", "cylinder", (0.05, 0.02, 0.03), diameter=40, length=100)
    pins = replace(solid("pins", "cylinder", (0.1, 0, 0), diameter=10, length=50), copies=Ring(5, start=0.4))
    group = Group("group", "group", (bar, pins), Pose((0, 0, 0.1), (0.5, 0, 0.4)))
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.02, "length": 0.4}), Pose((0, 0, -0.1)))
    block = replace(solid("block", "box", (-0.2, -0.1, 0.1), length_x=100, length_y=100, length_z=100), cuts=(bore,))
    return Machine(Assembly("d", (plate, group, block)))


@pytest.fixture
def make_window(qtbot, request, monkeypatch):
    def make(canvas: str) -> MainWindow:
        request.getfixturevalue("dressed")
        monkeypatch.setenv(VIEW_VARIABLE, canvas)
        prepare_opengl()
        made = MainWindow()
        assert isinstance(made.view.canvas, SoftView) == (canvas == "software")
        qtbot.addWidget(made, before_close_func=lambda window: setattr(window, "_given_up", True))
        made.show()
        made.activateWindow()
        qtbot.waitExposed(made)
        made.session.take(machine(), None)
        made.session.set_manner(Manner())
        QApplication.processEvents()
        return made

    return make


@pytest.fixture(params=CANVASES)
def either(request, make_window):
    return make_window(request.param)


@pytest.fixture
def placed(make_window):
    return make_window("software")


def select(window, *keys):
    window.session.select(frozenset(keys))
    QApplication.processEvents()


def send(view, kind, spot, modifiers=NO):
    left, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
    button = none if kind == QEvent.Type.MouseMove else left
    buttons = none if kind == QEvent.Type.MouseButtonRelease else left
    QApplication.sendEvent(view, QMouseEvent(kind, QPointF(*spot), QPointF(*spot), button, buttons, modifiers))


def grip_spot(window, grip) -> np.ndarray:
    """Return a place on a handle, px: the end of a line, the middle of an arc or a square."""
    path = paths_of(window.view.hand.shown.handles, window.view.camera, window.view.frame_size)[grip]
    return {"along": path[-1], "about": path[len(path) // 2], "in": path[:4].mean(axis=0)}[grip.kind]


def carried_spot(window, grip, values) -> np.ndarray:
    """Return where the place on a handle that is taken is on the screen after a move by values, m or rad."""
    view, handles = window.view, window.view.hand.shown.handles
    start, direction = view.camera.ray(tuple(grip_spot(window, grip)), view.frame_size)
    normal = handles.directions[grip.axis]
    if grip.kind == "along":
        taken = handles.middle + nearest_on_axis(start, direction, handles.middle, normal) * normal
    else:
        taken = met_on_plane(start, direction, handles.middle, normal)
    motion = Amount(grip.kind == "about", values).motion(handles)
    return view.camera.project(motion.apply(taken), view.frame_size)[:2]


def press(window, grip, modifiers=NO):
    spot = grip_spot(window, grip)
    send(window.view, QEvent.Type.MouseMove, spot)
    send(window.view, QEvent.Type.MouseButtonPress, spot, modifiers)
    assert window.view.hand.holds
    return spot


def drag(window, grip, to, modifiers=NO, *, steps=5):
    start = press(window, grip, modifiers)
    for share in np.linspace(0, 1, steps + 1)[1:]:
        send(window.view, QEvent.Type.MouseMove, start + share * (to - start), modifiers)
    QApplication.processEvents()


def let_go(window, spot):
    send(window.view, QEvent.Type.MouseButtonRelease, spot)


def position(window, key):
    return standing_of(window.session.assembly, key).shift


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
def test_nudges_one_after_the_other_are_one_step_of_undo(placed, qtbot):
    window = placed
    select(window, "plate")
    window.view.look("front")
    for key in (Qt.Key.Key_Right, Qt.Key.Key_Right, Qt.Key.Key_Right, Qt.Key.Key_Up, Qt.Key.Key_PageUp):
        qtbot.keyClick(window.view, key, CONTROL)
    np.testing.assert_allclose(position(window, "plate"), [0.003, 0.001, 0.001], rtol=0, atol=1e-16)
    assert [name for name, _ in window.session.history.past] == ["Move plate x +3 mm, y +1 mm, z +1 mm"]
    window.session.undo()
    assert position(window, "plate").tolist() == [0, 0, 0]
    window.session.redo()
    qtbot.keyClick(window.view, Qt.Key.Key_Left, CONTROL)
    assert len(window.session.history.past) == 2


@pytest.mark.gui
def test_nudges_of_other_lines_or_after_other_edits_are_steps_of_their_own(placed, qtbot):
    window = placed
    select(window, "plate")
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    select(window, "bar")
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    select(window, "plate")
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL | SHIFT)
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL | SHIFT)
    qtbot.keyClick(window.view, Qt.Key.Key_Up, CONTROL | SHIFT)
    assert [name for name, _ in window.session.history.past] == [
        "Move plate x +1 mm", "Move bar x +1 mm", "Move plate x +1 mm", "Turn plate about z +10°",
        "Turn plate about x −5°",
    ]


@pytest.mark.gui
def test_keys_turn_as_the_picture_shows_it(placed, qtbot):
    window = placed
    select(window, "block")
    window.view.look("front")
    for _ in range(9):
        qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL | SHIFT)
    standing = standing_of(window.session.assembly, "block")
    np.testing.assert_allclose(standing.turn, Rotation.from_euler("z", 45, degrees=True).as_matrix(), atol=1e-15)
    # From the front, what was in front has gone to the right.
    assert (standing.turn @ [0, -1, 0])[0] > 0.7


@pytest.mark.gui
def test_nothing_selected_or_a_step_of_nothing_is_said(placed, qtbot):
    window, told = placed, []
    window.session.said.connect(told.append)
    select(window)
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    select(window, "plate")
    window.session.set_manner(replace(Manner(), length_step=0.0))
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    assert told == ["Nothing is selected that could be moved", "Nothing moves: the step is 0"]
    assert not window.session.history.past


@pytest.mark.gui
def test_steps_are_typed_with_units_in_the_bar_and_kept(placed, qtbot):
    window = placed
    assert not window.placing.bar.isVisible()
    select(window, "plate")
    assert window.placing.bar.isVisible()
    enter(field(window.placing.bar, "step of length"), "1/8 in")
    enter(field(window.placing.bar, "step of angle"), "-5")
    assert window.settings.manner.length_step == pytest.approx(0.003175, rel=1e-15)
    assert window.session.manner.angle_step == Manner().angle_step
    enter(field(window.placing.bar, "step of angle"), "7.5")
    assert window.settings.manner.angle_step == pytest.approx(np.radians(7.5), rel=1e-15)
    window.view.look("front")
    qtbot.keyClick(window.view, Qt.Key.Key_Right, CONTROL)
    assert position(window, "plate")[0] == pytest.approx(0.003175, rel=1e-15)
    for words in ("Along the line's own axes", "At its centre of mass"):
        menu_entry(window, words).trigger()
    assert (window.settings.manner.along, window.settings.manner.pivot) == ("own", "centre")
    checked = [action.text() for action in window.placing.bar.findChildren(QAction) if action.isChecked()]
    assert checked == ["Along the line's own axes", "At its centre of mass"]


def menu_entry(window, words):
    return next(action for action in window.placing.bar.findChildren(QAction) if action.text() == words)


@pytest.mark.gui
def test_keys_typed_in_the_bar_do_not_turn_the_view(placed, qtbot):
    window = placed
    select(window, "plate")
    line = field(window.placing.bar, "step of length")
    line.setFocus()
    camera = window.view.camera
    for key in (Qt.Key.Key_Up, Qt.Key.Key_F, Qt.Key.Key_1, Qt.Key.Key_Down):
        qtbot.keyClick(line, key)
    assert window.view.camera is camera


@pytest.mark.gui
def test_tab_goes_from_the_view_through_the_bar(placed, qtbot):
    window = placed
    select(window, "plate")
    bar = window.placing.bar
    window.view.setFocus()
    reached = []
    for _ in range(3):
        qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        reached.append(QApplication.focusWidget())
    button = bar.findChild(QPushButton)
    assert reached == [field(bar, "step of length"), field(bar, "step of angle"), button]


@pytest.mark.gui
def test_a_step_that_means_nothing_is_refused_below_the_fields_without_widening_the_bar(placed):
    window = placed
    select(window, "plate")
    bar = window.placing.bar
    width = bar.width()
    enter(field(bar, "step of length"), "12 kg")
    QApplication.processEvents()
    assert bar.isVisible()
    assert bar.width() == width
    assert any("measures a mass" in words.text() for words in bar.findChildren(Words) if words.isVisible())
    assert window.session.manner.length_step == Manner().length_step


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
