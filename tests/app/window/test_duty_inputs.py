"""The duty and the motor's limits in the window: typed cell by cell, pasted, repeated, refused in place, undone."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit
from test_drive_inputs import DUTY, LIMITS, add, cells, choice, opened, undo_name
from window_driver import choose, clipboard, enter, field, pasted

from app.window.pages.torque.inputs_duty_table import ANGLE, TIME, TO
from core.drive import ByLimits, ByTime, Law, Move, Repeat, Rest
from core.drive.fields import typed_at
from core.drive.limit_points import points_at
from core.machine import LONG_DUTY
from core.quantity import UNITS

if TYPE_CHECKING:
    from pytestqt.qtbot import QtBot

    from app.window.main import MainWindow
    from app.window.pages.torque.inputs_duty import DutyPanel
    from app.window.pages.torque.inputs_points import PointsBox
    from app.window.pages.torque.keyed_table import KeyedTable

pytestmark = pytest.mark.gui
TURN = math.radians


def steps(window: MainWindow) -> tuple[object, ...]:
    return window.session.drive.duty.steps


def paste(table: KeyedTable, text: str) -> None:
    """Put a text on the clipboard and press Ctrl+V in a table."""
    QGuiApplication.clipboard().setText(text)
    table.setFocus()
    QTest.keyClick(table, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)


def pasted_duty(window: MainWindow, text: str) -> DutyPanel:
    panel = opened(window, DUTY)
    paste(panel.table, text)
    return panel


def type_in(table: KeyedTable, row: int, column: int, text: str) -> None:
    """Go to a cell, type a text over it and press Return."""
    table.setFocus()
    table.setCurrentIndex(table.model().index(row, column))
    QTest.keyClick(table, Qt.Key.Key_F2)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit), editor
    editor.selectAll()
    QTest.keyClicks(editor, text)
    QTest.keyClick(editor, Qt.Key.Key_Return)
    QApplication.processEvents()


def test_an_empty_duty_says_what_to_do_and_its_button_adds_a_move(filled: MainWindow) -> None:
    panel = opened(filled, DUTY)
    assert panel.advice_words.isVisible()
    assert panel.advice_words.text().startswith("No duty yet: add a move")
    QTest.mouseClick(panel.advice_button, Qt.MouseButton.LeftButton)
    assert steps(filled) == (Move(math.pi / 2, ByTime(1.0)),)
    assert not panel.advice_words.isVisible()
    focused = QApplication.focusWidget()
    assert isinstance(focused, QLineEdit)
    QTest.keyClicks(focused, "1/4 rev + 30 deg")
    QTest.keyClick(focused, Qt.Key.Key_Return)
    assert steps(filled)[0].angle == pytest.approx(TURN(120), rel=1e-15)
    assert typed_at(filled.session.drive, "duty.steps.0.angle") == "1/4 rev + 30 deg"
    assert undo_name(filled) == "Angle of step 1: 1/4 rev + 30 deg"


def test_a_block_of_rows_is_one_edit_and_one_to_undo(filled: MainWindow) -> None:
    rows = [(90, 0.5), (0, 0.25), (-45, 0.3)] * 8
    panel = pasted_duty(filled, "angle\ttime\n" + "\n".join(f"{angle}\t{time}" for angle, time in rows))
    assert len(steps(filled)) == 24
    assert steps(filled)[:3] == (Move(TURN(90), ByTime(0.5)), Rest(0.25), Move(TURN(-45), ByTime(0.3)))
    assert undo_name(filled) == "Paste 24 steps"
    assert cells(panel)[24][:5] == ["24  move", "−45", "405", "360", "0.3"]
    filled.undo()
    assert steps(filled) == ()
    assert panel.advice_words.isVisible()


def test_a_block_goes_behind_the_current_step_also_in_a_repeat(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n-90\t1")
    panel.table.select(["duty.steps.0"])
    paste(panel.table, "\t0,5")
    assert steps(filled) == (Move(TURN(90), ByTime(1.0)), Rest(0.5), Move(TURN(-90), ByTime(1.0)))
    panel.table.select(["duty.steps.0", "duty.steps.1"])
    panel.repeat()
    panel.table.select(["duty.steps.0.steps.1"])
    paste(panel.table, "45;2")
    assert steps(filled)[0].steps == (Move(TURN(90), ByTime(1.0)), Rest(0.5), Move(TURN(45), ByTime(2.0)))


def test_a_block_that_is_no_duty_changes_nothing_and_says_where(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n45\tsoon")
    assert steps(filled) == ()
    assert panel.wrong.isVisible()
    assert "row 2, time" in panel.wrong.text()
    assert not panel.marks.isVisible()
    paste(panel.table, "90\t1.500")
    assert panel.marks.isVisible()
    QTest.mouseClick(panel.marks.buttons["."], Qt.MouseButton.LeftButton)
    assert steps(filled) == (Move(TURN(90), ByTime(1.5)),)
    assert not panel.marks.isVisible()
    assert not panel.wrong.isVisible()


def test_angle_end_and_time_are_typed_in_their_cells_and_return_goes_down(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n0\t1\n90\t1")
    type_in(panel.table, 1, ANGLE, "30+15")
    assert steps(filled)[0].angle == pytest.approx(TURN(45), rel=1e-15)
    assert typed_at(filled.session.drive, "duty.steps.0.angle") == "30+15"
    assert panel.table.currentIndex().row() == 2
    type_in(panel.table, 3, TO, "180")
    assert steps(filled)[2].angle == pytest.approx(TURN(135), rel=1e-15)
    assert undo_name(filled) == "End of step 3: 180"
    type_in(panel.table, 2, TIME, "250 ms")
    assert steps(filled)[1] == Rest(0.25)
    type_in(panel.table, 0, TO, "10")
    assert filled.session.drive.duty.start == pytest.approx(TURN(10), rel=1e-15)
    assert [row[3] for row in cells(panel)] == ["10", "55", "55", "190"]
    filled.undo()
    filled.undo()
    assert cells(panel)[2][4] == "1"


def test_what_a_cell_cannot_be_is_refused_below_the_table(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n-90\t1")
    before = filled.session.drive
    for column, text, sentence in (
        (ANGLE, "0", "a move needs an angle that is not 0"), (TIME, "0", "a move needs a time of more than 0"),
        (TO, "0", "the move begins where it is to end"), (ANGLE, "2 kg", "Angle of step 1"), (TIME, "soon", "Time of"),
    ):
        type_in(panel.table, 1, column, text)
        assert filled.session.drive == before
        assert sentence in panel.wrong.text()
        assert panel.table.currentIndex().row() == 1
        assert cells(panel)[1][1:5] == ["90", "0", "90", "1"]
    panel.table.select(["duty.steps.1"])
    assert not panel.wrong.isVisible()


def test_the_end_of_a_move_is_typed_among_its_fields(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n-90\t1")
    panel.table.select(["duty.steps.1"])
    end = field(panel.editor, "to")
    assert end.text() == "0"
    enter(end, "270")
    assert steps(filled)[1].angle == pytest.approx(TURN(180), rel=1e-15)
    assert field(panel.editor, "angle").text() == "180"
    enter(end, "90")
    assert "the move begins where it is to end" in end.parentWidget().wrong.text()
    assert end.text() == "90"


def test_a_move_is_given_by_limits_of_the_same_motion_and_back(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t2")
    choose(choice(panel.editor, "given by"), "limits")
    limits = steps(filled)[0].timing
    assert isinstance(limits, ByLimits)
    assert limits.speed == pytest.approx(TURN(90) / (2 * 2 / 3), rel=1e-12)
    assert field(panel.editor, "deceleration").placeholderText() == "as acceleration"
    enter(field(panel.editor, "speed"), "10")
    assert steps(filled)[0].timing.speed == pytest.approx(math.pi / 3, rel=1e-15)
    enter(field(panel.editor, "deceleration"), "9 rad/s^2")
    choose(choice(panel.editor, "law"), "S-curve")
    assert steps(filled)[0].law == Law.S_CURVE
    enter(field(panel.editor, "jerk"), "0")
    assert "limit of jerk has to be more than 0" in field(panel.editor, "jerk").parentWidget().wrong.text()
    choose(choice(panel.editor, "law"), "harmonic")
    assert steps(filled)[0].timing.jerk is None
    enter(field(panel.editor, "acceleration"), "")
    assert steps(filled)[0].timing == ByLimits(UNITS["rpm"].to_si(10.0))
    enter(field(panel.editor, "speed"), "")
    assert "a move by limits needs one at least" in field(panel.editor, "speed").parentWidget().wrong.text()
    choose(choice(panel.editor, "given by"), "its time")
    assert isinstance(steps(filled)[0].timing, ByTime)
    while steps(filled)[0].timing != ByTime(2.0):
        filled.undo()
    assert field(panel.editor, "time").text() == "2"


def test_ramps_and_smoothing_are_fields_of_the_laws_that_have_them(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t2")
    enter(field(panel.editor, "ramp up"), "1/4")
    enter(field(panel.editor, "ramp down"), "80 %")
    assert "the two ramps take longer" in field(panel.editor, "ramp down").parentWidget().wrong.text()
    choose(choice(panel.editor, "law"), "S-curve")
    enter(field(panel.editor, "smoothing"), "1")
    move = steps(filled)[0]
    assert (move.ramp_up, move.ramp_down, move.smoothing) == (0.25, 1 / 3, 1.0)
    choose(choice(panel.editor, "law"), "cycloidal")
    assert not [line for line in panel.editor.widget().findChildren(QLineEdit) if "ramp" in line.accessibleName()]


def test_a_time_typed_for_a_move_by_limits_makes_it_one_by_time(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t2")
    choose(choice(panel.editor, "given by"), "limits")
    type_in(panel.table, 1, TIME, "0.75")
    assert steps(filled)[0].timing == ByTime(0.75)


def test_selected_steps_are_put_into_a_repeat_and_the_repeat_is_dissolved(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n0\t0.5\n45\t1")
    type_in(panel.table, 2, TIME, "1/2")
    panel.table.select(["duty.steps.0", "duty.steps.1"])
    QTest.mouseClick(panel.repeat_button, Qt.MouseButton.LeftButton)
    assert undo_name(filled) == "Repeat steps 1 to 2"
    assert steps(filled)[0] == Repeat((Move(TURN(90), ByTime(1.0)), Rest(0.5)), 2)
    enter(field(panel.editor, "times"), "3")
    assert cells(panel)[1] == ["1  repeat × 3", "270", "0", "270", "4.5", ""]
    assert cells(panel)[3][0] == "1.2  rest"
    assert typed_at(filled.session.drive, "duty.steps.0.steps.1.time") == "1/2"
    enter(field(panel.editor, "times"), "2.5")
    assert "whole number" in field(panel.editor, "times").parentWidget().wrong.text()
    panel.table.select(["duty.steps.0"])
    assert panel.repeat_button.text() == "Dissolve"
    QTest.mouseClick(panel.repeat_button, Qt.MouseButton.LeftButton)
    assert len(steps(filled)) == 3
    assert typed_at(filled.session.drive, "duty.steps.1.time") == "1/2"


def test_a_block_of_steps_moves_by_keys_and_is_doubled_and_deleted(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "10\t1\n20\t1\n30\t1\n40\t1")
    type_in(panel.table, 3, ANGLE, "15+15")
    panel.table.select(["duty.steps.2", "duty.steps.3"])
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier)
    assert [round(math.degrees(step.angle)) for step in steps(filled)] == [10, 30, 40, 20]
    assert typed_at(filled.session.drive, "duty.steps.1.angle") == "15+15"
    assert undo_name(filled) == "Move 2 rows"
    panel.table.select(["duty.steps.1"])
    QTest.keyClick(panel.table, Qt.Key.Key_D, Qt.KeyboardModifier.ControlModifier)
    assert typed_at(filled.session.drive, "duty.steps.2.angle") == "15+15"
    panel.table.select(["duty.steps.0", "duty.steps.3", "duty.steps.4"])
    QTest.keyClick(panel.table, Qt.Key.Key_Delete)
    assert [round(math.degrees(step.angle)) for step in steps(filled)] == [30, 30]
    for _ in range(3):
        filled.undo()
    assert [round(math.degrees(step.angle)) for step in steps(filled)] == [10, 20, 30, 40]


def test_selected_steps_are_copied_as_angle_and_time(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n0\t0.25\n-45\t2")
    panel.table.setFocus()
    panel.table.select(["duty.steps.0", "duty.steps.1", "duty.steps.2"])
    QTest.keyClick(panel.table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert pasted() == [[90.0, 1.0], [0.0, 0.25], [-45.0, 2.0]]
    text = clipboard()
    panel.table.select(["duty.steps.2"])
    paste(panel.table, text)
    assert steps(filled)[3:] == steps(filled)[:3]


def test_a_move_is_added_like_the_one_above_and_a_rest_behind_it(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "45\t3")
    choose(choice(panel.editor, "law"), "cycloidal")
    add(panel, "Rest")
    add(panel, "Move")
    assert steps(filled)[1:] == (Rest(1.0), Move(TURN(45), ByTime(3.0), Law.CYCLOIDAL))


# The motor's limits


def limit_box(window: MainWindow) -> PointsBox:
    opened(window, LIMITS)
    return window.torque.inputs.limits.peak


def test_points_of_a_limit_are_typed_and_go_where_their_speed_puts_them(filled: MainWindow) -> None:
    box = limit_box(filled)
    assert box.advice.isVisible()
    for speed, torque in (("3000", "2"), ("0", "6"), ("1500 rpm", "12/2")):
        enter(box.speed.line, speed, None)
        enter(box.torque.line, torque)
    rpm = math.pi / 30
    assert points_at(filled.session.drive, "peak") == (
        (0.0, 6.0), (pytest.approx(1500 * rpm, rel=1e-15), 6.0), (pytest.approx(3000 * rpm, rel=1e-15), 2.0)
    )
    assert typed_at(filled.session.drive, "limits.peak.points.1.1") == "12/2"
    assert undo_name(filled) == "Add a point to peak torque"
    assert QApplication.focusWidget() is box.speed.line
    enter(box.speed.line, "1500", None)
    enter(box.torque.line, "5")
    assert "there is a point of this speed" in box.wrong.text()
    type_in(box.table, 2, 0, "1000")
    assert "the speeds rising" in box.wrong.text()
    type_in(box.table, 2, 0, "50 rev/s + 10 rpm")
    assert points_at(filled.session.drive, "peak")[2][0] == pytest.approx(3010 * rpm, rel=1e-15)


def test_points_are_pasted_in_the_place_of_all_and_deleted_to_none(filled: MainWindow) -> None:
    box = limit_box(filled)
    QGuiApplication.clipboard().setText("rpm\tN·m\n0\t4,5\n3000\t4,5\n6000\t1,5\n")
    QTest.mouseClick(box.paste_button, Qt.MouseButton.LeftButton)
    assert [torque for _, torque in points_at(filled.session.drive, "peak")] == [4.5, 4.5, 1.5]
    assert undo_name(filled) == "Paste 3 points of peak torque"
    paste(box.table, "3000\t1\n0\t2\n")
    assert "the speeds rising" in box.wrong.text()
    assert len(points_at(filled.session.drive, "peak")) == 3
    box.table.selectAll()
    QTest.keyClick(box.table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert [row[1] for row in pasted()] == [4.5, 4.5, 1.5]
    QTest.keyClick(box.table, Qt.Key.Key_Delete)
    assert filled.session.drive.limits.peak is None
    assert box.advice.isVisible()
    filled.undo()
    assert box.model.rowCount() == 3


def test_a_long_duty_is_worked_out_beside_the_window(filled: MainWindow, qtbot: QtBot) -> None:
    panel = pasted_duty(filled, "\n".join(f"{(-1) ** at * 90}\t0.5" for at in range(LONG_DUTY + 2)))
    assert len(steps(filled)) == LONG_DUTY + 2
    machine = filled.session.machine
    assert machine.at_once is not machine
    assert any("being worked out" in finding.check.text for finding in filled.session.findings)
    filled.torque.show_view(1)
    assert "being worked out" in filled.torque.result.told.text()
    filled.pages.setCurrentWidget(filled.sheet)
    assert filled.sheet.told.text().startswith("The duty is long")
    filled.pages.setCurrentWidget(filled.torque)
    filled.torque.show_view(0)
    type_in(panel.table, 1, ANGLE, "90.5")
    assert filled.session.machine is not machine
    qtbot.waitUntil(lambda: filled.session.machine.at_once is filled.session.machine, timeout=20_000)
    qtbot.waitUntil(lambda: not any("being worked" in one.check.text for one in filled.session.findings), timeout=5_000)
    filled.torque.show_view(1)
    assert filled.torque.result.numbers.isVisible()
    filled.pages.setCurrentWidget(filled.sheet)
    assert not filled.sheet.told.text().startswith("The duty is long")
    assert machine.at_once is not machine, "what was left behind is not worked out"


def test_what_is_typed_or_refused_stays_when_the_document_is_judged_anew(filled: MainWindow) -> None:
    panel = pasted_duty(filled, "90\t1\n45\tsoon")
    filled.session.look_again()
    assert "row 2, time" in panel.wrong.text()
    paste(panel.table, "90\t1\n45\t2")
    panel.table.setCurrentIndex(panel.table.model().index(1, ANGLE))
    QTest.keyClick(panel.table, Qt.Key.Key_F2)
    editor = QApplication.focusWidget()
    editor.selectAll()
    QTest.keyClicks(editor, "3")
    filled.session.look_again()
    QApplication.processEvents()
    QTest.keyClicks(editor, "0")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    QApplication.processEvents()
    assert steps(filled)[0].angle == pytest.approx(TURN(30), rel=1e-15)


def test_a_refusal_that_makes_the_fields_scroll_is_shown_whole(filled: MainWindow, qtbot: QtBot) -> None:
    filled.resize(1280, 720)
    panel = pasted_duty(filled, "90\t2")
    choose(choice(panel.editor, "law"), "S-curve")
    choose(choice(panel.editor, "given by"), "limits")
    QTest.qWait(50)
    enter(field(panel.editor, "speed"), "-5")
    QTest.qWait(50)
    wrong = field(panel.editor, "speed").parentWidget().wrong
    assert "read −5 rpm" in wrong.text() or "read -5 rpm" in wrong.text()
    qtbot.waitUntil(lambda: wrong.height() >= wrong.heightForWidth(wrong.width()), timeout=2000)
