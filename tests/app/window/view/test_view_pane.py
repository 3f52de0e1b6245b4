"""The pane with both canvases: pixels, picking there and back, keys, mouse, and errors that surface."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QColor, QImage, QPalette, QWheelEvent
from PySide6.QtWidgets import QApplication

from app.window.view.opengl import VIEW_VARIABLE, opengl_works, prepare_opengl
from app.window.view.palette import DARK, LIGHT
from app.window.view.pane import ViewPane
from app.window.view.scene import Line
from app.window.view.soft_view import SoftView
from core.assembly import Assembly, DriveAxis

SIZE = (480, 360)
VIEWS = ["front", "back", "left", "right", "top", "bottom", "iso"]
CANVASES = [pytest.param("software", marks=pytest.mark.gui), pytest.param("opengl", marks=pytest.mark.opengl)]


def light_palette() -> QPalette:
    return QPalette(QColor(239, 239, 239))


@pytest.fixture(params=CANVASES)
def pane(request, qtbot, monkeypatch):
    monkeypatch.setenv(VIEW_VARIABLE, request.param)
    prepare_opengl()
    made = ViewPane()
    assert isinstance(made.canvas, SoftView) == (request.param == "software")
    made.setPalette(light_palette())
    made.resize(*SIZE)
    qtbot.addWidget(made)
    made.show()
    qtbot.waitExposed(made)
    return made


def shot(pane: ViewPane, qtbot, *, marks: bool = False) -> np.ndarray:
    """Return the picture (height, width, 3); without the marks unless they are asked for."""
    pane._overlay.setVisible(marks)
    qtbot.wait(20)
    image = pane.grab().toImage().convertToFormat(QImage.Format.Format_RGB888)
    data = np.frombuffer(image.constBits(), dtype=np.uint8).reshape(image.height(), image.bytesPerLine())
    return data[:, : 3 * image.width()].reshape(image.height(), image.width(), 3).copy()


def off_ground(picture: np.ndarray, ground=LIGHT.ground) -> np.ndarray:
    return (np.abs(picture.astype(int) - ground) > 8).any(axis=-1)


def bluish(picture: np.ndarray) -> np.ndarray:
    red, _, blue = np.moveaxis(picture.astype(int), -1, 0)
    return blue > red + 50


def test_an_empty_assembly_is_plain_ground_and_the_document_axes(pane, qtbot):
    pane.show_assembly(Assembly())
    assert not off_ground(shot(pane, qtbot)).any()
    marked = off_ground(shot(pane, qtbot, marks=True))
    assert marked[-90:, :100].any()
    assert not marked[:-90, 100:].any()


def test_arrows_are_drawn_over_everything_until_they_are_taken_away(pane, qtbot, dial):
    def arrow_pixels() -> int:
        return int((np.abs(shot(pane, qtbot, marks=True).astype(int) - LIGHT.vector) < 12).all(axis=-1).sum())

    pane.show_assembly(dial)
    assert arrow_pixels() == 0
    pane.show_vectors((Line("static 26 g·mm", np.zeros(3), np.array([0.15, 0.1, 0.0])),))
    assert arrow_pixels() > 60
    pane.show_vectors(())
    assert arrow_pixels() == 0


def test_an_assembly_is_there_and_what_is_selected_turns_blue(pane, qtbot, dial):
    pane.show_assembly(dial)
    plain = shot(pane, qtbot)
    assert 0.15 < off_ground(plain).mean() < 0.8
    assert not bluish(plain).any()
    pane.show_assembly(dial, frozenset({"fixture"}))
    assert bluish(shot(pane, qtbot)).sum() > 1500


def test_what_is_selected_has_thicker_edges(pane, qtbot, dial):
    pane.show_assembly(dial, frozenset({"plate"}))
    chosen = shot(pane, qtbot).astype(int)
    edge = (np.abs(chosen - LIGHT.selected_edge) < 25).all(axis=-1).sum()
    pane.show_assembly(dial)
    plain = (np.abs(shot(pane, qtbot).astype(int) - LIGHT.edge) < 25).all(axis=-1).sum()
    # The plate alone, drawn thick, against all parts drawn thin.
    assert edge > plain


def test_the_part_under_the_pointer_lights_up(pane, qtbot, dial):
    pane.show_assembly(dial)
    plain = shot(pane, qtbot)
    pane.show_assembly(dial, frozenset(), "fixture")
    assert (shot(pane, qtbot) != plain).any(axis=-1).sum() > 1500


def test_every_axis_is_drawn_the_drive_axis_with_the_wider_line(pane, qtbot, dial):
    def inked(assembly: Assembly) -> np.ndarray:
        pane.show_assembly(assembly)
        pane.look("front")
        red, green, blue = np.moveaxis(shot(pane, qtbot, marks=True).astype(int), -1, 0)
        # The purple of axes, which nothing else has, by how much of it there is.
        return np.where((red - green > 30) & (blue - green > 15), red - green, 0)

    aside = DriveAxis("Tilt", (0.1, 0.0, 0.0))
    alone = inked(dial)
    both = inked(replace(dial, axes=(*dial.axes, aside)))
    other = inked(replace(dial, axes=(*dial.axes, aside), drive="Tilt"))
    assert both.sum() > 1.3 * alone.sum()
    # The same line of the picture, drawn as another axis and as the drive axis.
    column = int(both[60:].sum(axis=0)[SIZE[0] // 2 + 20 :].argmax()) + SIZE[0] // 2 + 20
    line = slice(column - 2, column + 3)
    assert other[60:, line].sum() > 1.15 * both[60:, line].sum() > 5000


@pytest.mark.parametrize("view", VIEWS)
def test_everything_is_inside_the_frame_from_every_side(pane, qtbot, dial, view):
    pane.show_assembly(dial)
    for parallel in (False, True):
        pane.set_parallel(parallel)
        pane.look(view)
        seen = off_ground(shot(pane, qtbot))
        assert seen.any()
        border = np.ones(seen.shape, dtype=bool)
        border[15:-15, 15:-15] = False
        assert not (seen & border).any()


def test_a_fitted_picture_stays_fitted_when_the_pane_grows_until_the_camera_is_moved(pane, qtbot, dial):
    pane.show_assembly(dial)
    shot(pane, qtbot)
    pane.resize(300, 500)
    seen = off_ground(shot(pane, qtbot))
    assert seen[:, 15:-15].any()
    assert not seen[:, :15].any()
    assert not seen[:, -15:].any()
    qtbot.keyClick(pane, Qt.Key.Key_Plus)
    camera = pane.camera
    pane.resize(*SIZE)
    shot(pane, qtbot)
    assert pane.camera is camera


@pytest.mark.parametrize("at", [(0.0, 0.0, 0.0), (2000.0, -700.0, 300.0)])
def test_a_click_on_a_part_gives_its_key(pane, qtbot, make_dial, at):
    pane.show_assembly(make_dial(at))
    shot(pane, qtbot)
    fixture = next(bodies for bodies in pane.scene.bodies if bodies.key == "fixture")
    for shift in fixture.shift:
        spot = pane.camera.project(shift + np.array([0, 0, 0.045]), pane.frame_size)
        with qtbot.waitSignal(pane.picked, timeout=1000) as caught:
            qtbot.mouseClick(pane, Qt.MouseButton.LeftButton, pos=QPoint(round(spot[0]), round(spot[1])))
        assert caught.args == ["fixture", False]


def test_the_pixel_that_is_picked_shows_the_part(pane, qtbot, make_dial):
    """Camera, canvas and picking agree: what turns blue when it is selected is where its key is found."""
    assembly = make_dial((30.0, 20.0, -10.0), (0.2, 0.4, 0.0))
    pane.show_assembly(assembly, frozenset({"fixture"}))
    blue = bluish(shot(pane, qtbot))
    rng = np.random.default_rng(5)
    wrong = 0
    for x, y in rng.integers([0, 0], SIZE, (300, 2)):
        wrong += (pane.key_at(QPointF(x + 0.5, y + 0.5)) == "fixture") != blue[y, x]
    # Outlines are a little wider than what they outline.
    assert wrong <= 6


def test_a_click_on_empty_ground_gives_no_key_and_ctrl_extends(pane, qtbot, dial):
    pane.show_assembly(dial)
    shot(pane, qtbot)
    with qtbot.waitSignal(pane.picked, timeout=1000) as caught:
        qtbot.mouseClick(
            pane, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.ControlModifier, QPoint(3, SIZE[1] // 3)
        )
    assert caught.args == ["", True]


def test_the_keys_fit_turn_and_zoom(pane, qtbot, dial):
    pane.show_assembly(dial)
    pane.setFocus()
    for key, name in zip("1234567", VIEWS, strict=True):
        qtbot.keyClick(pane, key)
        expected = pane.camera.looking(name)
        assert (pane.camera.azimuth, pane.camera.elevation) == (expected.azimuth, expected.elevation)
    fitted = pane.camera.distance
    qtbot.keyClick(pane, Qt.Key.Key_Plus)
    assert pane.camera.distance == pytest.approx(fitted / 1.2)
    qtbot.keyClick(pane, Qt.Key.Key_Minus)
    assert pane.camera.distance == pytest.approx(fitted)
    before = pane.camera
    qtbot.keyClick(pane, Qt.Key.Key_Left)
    assert pane.camera.azimuth != before.azimuth
    assert pane.camera.distance == before.distance
    qtbot.keyClick(pane, Qt.Key.Key_Minus)
    qtbot.keyClick(pane, Qt.Key.Key_F)
    assert pane.camera.distance == pytest.approx(fitted, rel=0.1)


def test_dragging_turns_and_with_shift_moves_and_picks_nothing(pane, dial):
    pane.show_assembly(dial)
    keys = []
    pane.picked.connect(lambda key, _more: keys.append(key))
    before = pane.camera
    drag(pane, Qt.KeyboardModifier.NoModifier)
    turned = pane.camera
    assert turned.azimuth != before.azimuth
    np.testing.assert_array_equal(turned.target, before.target)
    drag(pane, Qt.KeyboardModifier.ShiftModifier)
    assert pane.camera.azimuth == turned.azimuth
    moved = pane.camera.project(turned.target, pane.frame_size)[:2] - np.array(SIZE) / 2
    np.testing.assert_allclose(moved, [60, 20], atol=1e-6)
    assert keys == []


def drag(pane, modifier):
    from PySide6.QtCore import QEvent
    from PySide6.QtGui import QMouseEvent

    left, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
    kinds = [
        (QEvent.Type.MouseButtonPress, (200, 150), left, left),
        (QEvent.Type.MouseMove, (230, 160), none, left),
        (QEvent.Type.MouseMove, (260, 170), none, left),
        (QEvent.Type.MouseButtonRelease, (260, 170), left, none),
    ]
    for kind, spot, button, buttons in kinds:
        QApplication.sendEvent(pane, QMouseEvent(kind, QPointF(*spot), QPointF(*spot), button, buttons, modifier))


def test_the_wheel_zooms_to_the_pointer(pane, qtbot, dial):
    pane.show_assembly(dial)
    shot(pane, qtbot)
    spot = QPointF(120, 90)
    start, direction = pane.camera.ray((120, 90), pane.frame_size)
    kept = start + pane.camera.distance / -(direction @ pane.camera.axes[2]) * direction
    event = QWheelEvent(
        spot, spot, QPoint(), QPoint(0, 240), Qt.MouseButton.NoButton, Qt.KeyboardModifier.NoModifier,
        Qt.ScrollPhase.NoScrollPhase, False,
    )
    before = pane.camera.distance
    QApplication.sendEvent(pane, event)
    assert pane.camera.distance == pytest.approx(before / 1.44)
    np.testing.assert_allclose(pane.camera.project(kept, pane.frame_size)[:2], [120, 90], atol=1e-6)


def test_moving_the_pointer_tells_what_it_is_on_once(pane, qtbot, dial, monkeypatch):
    pane.show_assembly(dial)
    shot(pane, qtbot)
    pane.look("top")
    monkeypatch.setattr(pane, "underMouse", lambda: True)
    told = []
    pane.hovered.connect(told.append)
    spot = pane.camera.project([0.05, 0.1, 0.02], pane.frame_size)
    for step in (0, 1):
        pane._last = QPointF(spot[0] + step, spot[1])
        pane._tell_hovered()
    pane._last = QPointF(2, 2)
    pane._tell_hovered()
    assert told == ["plate", ""]


def test_a_preview_is_a_ghost_and_goes_again(pane, qtbot, dial, make_solid):
    pane.show_assembly(dial)
    before = shot(pane, qtbot)
    camera = pane.camera
    pane.set_preview(make_solid("new", "box", 1000.0, (0, 0, 0.03), length_x=0.12, length_y=0.12, length_z=0.04))
    ghostly = shot(pane, qtbot)
    assert (ghostly != before).any(axis=-1).sum() > 1000
    assert pane.camera is camera
    pane.set_preview(None)
    np.testing.assert_array_equal(shot(pane, qtbot), before)


def test_see_through_lets_the_shaft_show(pane, qtbot, dial):
    pane.show_assembly(dial)
    pane.look("top")
    solid = shot(pane, qtbot).astype(int)
    pane.set_see_through(True)
    clear = shot(pane, qtbot).astype(int)
    ground = np.array(LIGHT.ground)
    assert np.abs(clear - ground).mean() < 0.8 * np.abs(solid - ground).mean()


def test_the_ground_follows_the_theme(pane, qtbot, dial):
    pane.show_assembly(dial)
    pane.setPalette(QPalette(QColor(40, 44, 48)))
    picture = shot(pane, qtbot)
    np.testing.assert_allclose(picture[2, 2], DARK.ground, atol=1)
    assert off_ground(picture, DARK.ground).mean() > 0.15


def test_the_same_assembly_shown_again_keeps_its_scene_and_camera(pane, qtbot, dial):
    pane.show_assembly(dial)
    shot(pane, qtbot)
    scene, camera = pane.scene, pane.camera
    pane.show_assembly(dial, frozenset({"hub"}), "bolt")
    assert pane.scene is scene
    assert pane.camera is camera


def test_the_pane_can_be_named_and_focused(pane, qtbot, dial):
    pane.show_assembly(dial)
    without = shot(pane, qtbot, marks=True)
    pane.activateWindow()
    pane.setFocus()
    qtbot.waitUntil(pane.hasFocus, timeout=2000)
    focused = shot(pane, qtbot, marks=True)
    np.testing.assert_allclose(focused[1, 100:200].mean(axis=0), LIGHT.principal, atol=12)
    assert (without[1, 100:200] == LIGHT.ground).all()
    assert pane.accessibleName() == "View of the assembly"
    assert "wheel zooms" in pane.toolTip()


def test_a_smaller_drawing_while_the_camera_moves_shows_the_same_outline(pane, qtbot, make_solid):
    ball = make_solid("ball", "sphere", 1000.0, diameter=0.2)
    object.__setattr__(ball.body, "surface", ball.body.shape.facets(steps=560))  # 150,000 triangles
    pane.show_assembly(Assembly("ball", (ball,)))
    rest = off_ground(shot(pane, qtbot))
    pane._redraw(moving=True)
    pane._rest.stop()
    moving = off_ground(shot(pane, qtbot))
    assert (rest != moving).mean() < 0.02
    assert rest.mean() > 0.1


def test_two_panes_can_be_open_and_one_can_move_to_another_window(pane, qtbot, dial):
    from PySide6.QtWidgets import QHBoxLayout, QWidget

    second = ViewPane()
    second.setPalette(light_palette())
    frame = QWidget()
    frame.resize(*SIZE)
    row = QHBoxLayout(frame)
    qtbot.addWidget(frame)
    second.resize(*SIZE)
    second.show_assembly(dial)
    second.show()
    qtbot.waitExposed(second)
    assert off_ground(shot(second, qtbot)).mean() > 0.15
    row.addWidget(second)
    frame.show()
    qtbot.waitExposed(frame)
    qtbot.wait(50)
    assert off_ground(shot(second, qtbot)).mean() > 0.15
    pane.show_assembly(dial)
    assert off_ground(shot(pane, qtbot)).mean() > 0.15


@pytest.mark.gui
def test_the_software_view_says_so(qtbot, monkeypatch):
    monkeypatch.setenv(VIEW_VARIABLE, "software")
    assert not opengl_works()
    pane = ViewPane()
    qtbot.addWidget(pane)
    assert pane._overlay.note == "Drawn in software: no OpenGL here"


@pytest.mark.opengl
def test_the_opengl_view_has_nothing_to_say(qtbot):
    assert opengl_works()
    pane = ViewPane()
    qtbot.addWidget(pane)
    assert pane._overlay.note == ""


@pytest.mark.opengl
def test_an_error_while_drawing_surfaces(qtbot, dial, monkeypatch):
    prepare_opengl()
    pane = ViewPane()
    pane.resize(*SIZE)
    qtbot.addWidget(pane)
    pane.show_assembly(dial)
    pane.show()
    qtbot.waitExposed(pane)
    qtbot.wait(30)

    def broken():
        raise RuntimeError("the item is broken")

    monkeypatch.setattr(pane.canvas._items[0], "paint", broken)
    with qtbot.captureExceptions() as caught:
        pane.canvas.update()
        qtbot.wait(50)
        monkeypatch.undo()
        pane.canvas.update()
        qtbot.wait(30)
    assert "the item is broken" in str(caught[0][1])


@pytest.mark.opengl
def test_both_canvases_draw_the_same_picture(qtbot, dial, monkeypatch):
    pictures = []
    for kind in ("software", "opengl"):
        monkeypatch.setenv(VIEW_VARIABLE, kind)
        pane = ViewPane()
        pane.setPalette(light_palette())
        pane.resize(*SIZE)
        qtbot.addWidget(pane)
        pane.show_assembly(dial, frozenset({"hub"}))
        pane.show()
        qtbot.waitExposed(pane)
        pictures.append(shot(pane, qtbot).astype(int))
    apart = np.abs(pictures[0] - pictures[1]).max(axis=-1)
    # Faces agree to a shade; lines are smoothed differently.
    assert np.median(apart) <= 2
    assert (apart > 60).mean() < 0.03


@pytest.mark.gui
def test_a_moving_camera_comes_to_rest(qtbot, dial, monkeypatch):
    monkeypatch.setenv(VIEW_VARIABLE, "software")
    pane = ViewPane()
    qtbot.addWidget(pane)
    pane.show_assembly(dial)
    pane._picture = replace(pane._picture, moving=True)
    pane._redraw(moving=True)
    qtbot.waitUntil(lambda: not pane._picture.moving, timeout=2000)
