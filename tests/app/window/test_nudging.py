"""Nudging lines by keys, and the bar that holds the steps."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from placing_driver import CONTROL, SHIFT, position, select
from PySide6.QtCore import Qt
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QApplication, QPushButton
from scipy.spatial.transform import Rotation
from window_driver import enter, field

from app.window.manner import Manner
from app.window.style import Words
from core.assembly.placing import standing_of

pytestmark = pytest.mark.qt_log_ignore("^This plugin does not support")


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
