"""The inputs of the drive in the window: train, loads, stops; typed, refused in place, put in order, undone."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QWidget
from window_driver import choose, clipboard, enter, field, trigger

from app.window.fields import ChoiceField
from core.assembly.names import NameEntry
from core.assembly.naming import with_entry
from core.drive import Coupling, Gear, LeadScrew, Motor, RackOrDrum, StopCase
from core.drive.fields import typed_at, with_number
from core.drive.items import with_item
from core.quantity import UNITS

if TYPE_CHECKING:
    from app.window.main import MainWindow
    from app.window.pages.torque.entries_panel import EntriesPanel

pytestmark = pytest.mark.gui
TRAIN, DUTY, LOADS, LIMITS, STOPS = range(5)


def opened(window: MainWindow, part: int) -> EntriesPanel:
    """Show a part of the inputs, and return its panel."""
    window.pages.setCurrentWidget(window.torque)
    inputs = window.torque.inputs
    inputs.parts.choose(part)
    return (inputs.train, inputs.duty, inputs.loads, inputs.limits, inputs.stops)[part]


def add(panel: EntriesPanel, words: str) -> None:
    """Choose an entry of the menu Add."""
    action = next(action for action in panel.add.menu().actions() if action.text() == words)
    action.trigger()
    QApplication.processEvents()


def cells(panel: EntriesPanel) -> list[list[str]]:
    model = panel.table.model()
    return [
        [str(model.index(row, column).data()).strip() for column in range(model.columnCount())]
        for row in range(model.rowCount())
    ]


def choice(page: QWidget, name: str) -> ChoiceField:
    return next(box for box in page.findChildren(ChoiceField) if box.accessibleName() == name)


def undo_name(window: MainWindow) -> str:
    return window.session.history.undo_name


def names_of_stages(window: MainWindow) -> list[str]:
    return [stage.name for stage in window.session.drive.train.stages]


def test_a_train_without_a_stage_says_what_to_do_and_its_button_does_it(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    assert panel.advice_words.isVisible()
    assert "No stage yet" in panel.advice_words.text()
    QTest.mouseClick(panel.advice_button, Qt.MouseButton.LeftButton)
    assert names_of_stages(filled) == ["gearbox"]
    assert not panel.advice_words.isVisible()
    focused = QApplication.focusWidget()
    assert isinstance(focused, QLineEdit)
    assert focused.accessibleName() == "ratio"
    QTest.keyClicks(focused, "3*4")
    QTest.keyClick(focused, Qt.Key.Key_Return)
    assert filled.session.drive.train.ratio == 12.0
    assert typed_at(filled.session.drive, "train.stages.0.ratio") == "3*4"
    assert undo_name(filled) == "Ratio of gearbox: 3*4"


def test_a_ratio_of_nothing_is_refused_in_place_and_undo_shows_the_old_one(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    ratio = field(panel.editor, "ratio")
    enter(ratio, "12")
    enter(ratio, "0")
    assert filled.session.drive.train.ratio == 12.0
    wrong = ratio.parentWidget().wrong
    assert wrong.isVisible()
    assert "a ratio of 0 turns nothing" in wrong.text()
    assert ratio.text() == "0"
    enter(field(panel.editor, "efficiency"), "96 %")
    assert filled.session.drive.train.stages[0].efficiency == 0.96
    enter(field(panel.editor, "efficiency"), "1.2")
    assert "an efficiency lies above 0" in field(panel.editor, "efficiency").parentWidget().wrong.text()
    filled.torque.setFocus()
    filled.undo()
    filled.undo()
    assert field(panel.editor, "ratio").text() == "1"


def test_an_open_number_is_emptied_again(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    braking = field(panel.editor, "efficiency in braking")
    assert (braking.text(), braking.placeholderText()) == ("", "as in driving")
    enter(braking, "0,5")
    assert filled.session.drive.train.stages[0].braking_efficiency == 0.5
    enter(braking, "")
    assert filled.session.drive.train.stages[0].braking_efficiency is None
    assert undo_name(filled) == "Efficiency in braking of gearbox: none"
    filled.undo()
    assert braking.text() == "0.5"


def test_a_named_dimension_goes_into_a_number_of_the_drive(filled: MainWindow) -> None:
    filled.session.edit("Name", lambda before: with_entry(before, NameEntry("i_total", "12")))
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    enter(field(panel.editor, "ratio"), "i_total/2")
    assert filled.session.drive.train.ratio == 6.0
    filled.session.edit("Name", lambda before: with_entry(before, NameEntry("i_total", "20")))
    assert filled.session.drive.train.ratio == 10.0
    assert field(panel.editor, "ratio").text() == "i_total/2"


def test_stages_are_put_in_order_by_keys_and_what_was_typed_goes_along(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    for words in ("Coupling", "Belt or chain", "Gearbox"):
        add(panel, words)
    enter(field(panel.editor, "ratio"), "36/3")
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier)
    assert names_of_stages(filled) == ["coupling", "gearbox", "belt"]
    assert undo_name(filled) == "Move gearbox"
    assert typed_at(filled.session.drive, "train.stages.1.ratio") == "36/3"
    assert field(panel.editor, "ratio").text() == "36/3"
    assert [row[2] for row in cells(panel)[1:4]] == ["motor → coupling", "coupling → gearbox", "gearbox → load"]
    QTest.mouseClick(panel.up_button, Qt.MouseButton.LeftButton)
    assert names_of_stages(filled) == ["gearbox", "coupling", "belt"]
    QTest.mouseClick(panel.up_button, Qt.MouseButton.LeftButton)
    assert names_of_stages(filled) == ["gearbox", "coupling", "belt"]
    filled.undo()
    filled.undo()
    assert names_of_stages(filled) == ["coupling", "belt", "gearbox"]


def test_a_stage_is_doubled_renamed_and_deleted(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_D, Qt.KeyboardModifier.ControlModifier)
    assert names_of_stages(filled) == ["gearbox", "gearbox 2"]
    enter(field(panel.editor, "Name"), "gearbox")
    assert names_of_stages(filled) == ["gearbox", "gearbox 2"]
    assert "each stage needs a name of its own" in panel.wrong.text()
    assert panel.wrong.isVisible()
    enter(field(panel.editor, "Name"), "worm")
    assert names_of_stages(filled) == ["gearbox", "worm"]
    assert not panel.wrong.isVisible()
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_Delete)
    assert names_of_stages(filled) == ["gearbox"]
    assert filled.session.assembly.members, "the key deleted nothing else"


def test_what_hangs_on_a_stage_says_so_and_falls_to_the_load_with_it(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    for words in ("Coupling", "Gearbox"):
        add(panel, words)
    add(panel, "Inertia on a shaft")
    enter(field(panel.editor, "inertia"), "20 kg*cm^2")
    choose(choice(panel.editor, "shaft"), "behind coupling")
    hub = filled.session.drive.train.inertias[0]
    assert (hub.shaft, hub.inertia) == ("coupling", pytest.approx(0.002, rel=1e-15))
    assert undo_name(filled) == "Shaft of hub: behind coupling"
    panel.table.select(["train.stages.0"])
    panel.remove()
    assert filled.session.drive.train.inertias[0].shaft == "load"


def test_moved_masses_have_the_fields_of_their_kind(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Mass on a screw")
    enter(field(panel.editor, "lead"), "5")
    enter(field(panel.editor, "slope"), "90")
    screw = filled.session.drive.train.linear[0]
    assert screw == LeadScrew("slide", 0.005, 1.0, math.pi / 2)
    enter(field(panel.editor, "slope"), "91")
    assert "between −90° and 90°" in field(panel.editor, "slope").parentWidget().wrong.text()
    add(panel, "Mass on a rack or drum")
    enter(field(panel.editor, "radius"), "40")
    assert filled.session.drive.train.linear[1] == RackOrDrum("carriage", 0.04, 1.0)


def test_the_motor_has_an_inertia_a_limit_and_a_rotor_in_the_ledger(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    panel.table.select(["train.motor"])
    enter(field(panel.editor, "rotor inertia"), "21 kg*cm^2")
    enter(field(panel.editor, "limit load : motor"), "10")
    box = choice(panel.editor, "rotor's line")
    choose(box, next(box.itemText(at) for at in range(box.count()) if box.itemData(at) == "rotor"))
    motor = filled.session.drive.train.motor
    assert motor == Motor(0.0021, 10.0, "rotor")
    assert undo_name(filled) == "Rotor of the motor: rotor"
    enter(field(panel.editor, "rotor inertia"), "-1")
    assert "cannot be less than 0" in field(panel.editor, "rotor inertia").parentWidget().wrong.text()


def test_the_lines_that_turn_are_listed_with_their_shaft(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    filled.session.select(frozenset({"ring"}))
    add(panel, "Line of the ledger that turns")
    choose(choice(panel.editor, "turns with"), "motor")
    assert [(entry.key, entry.shaft) for entry in filled.session.drive.turning] == [("", "load"), ("ring", "motor")]
    choose(choice(panel.editor, "line"), "whole document")
    assert filled.session.drive.turning[1].key == "ring"
    assert "a line turns with one shaft only" in panel.wrong.text()
    assert choice(panel.editor, "line").currentData() == "ring"


# Loads


def test_a_force_is_typed_by_its_components_and_its_range(filled: MainWindow) -> None:
    panel = opened(filled, LOADS)
    assert "Only weight acts" in panel.advice_words.text()
    add(panel, "Force")
    for letter, text in zip("xyz", ("30", "40 N", "0"), strict=True):
        enter(field(panel.editor, f"force {letter}"), text)
    enter(field(panel.editor, "acts at x"), "150")
    choose(choice(panel.editor, "its direction"), "turns with the part")
    choose(choice(panel.editor, "acts"), "between two angles")
    enter(field(panel.editor, "to"), "120")
    force = filled.session.drive.forces[0]
    assert (force.force, force.point, force.direction_in) == ((30.0, 40.0, 0.0), (0.15, 0.0, 0.0), "part")
    assert (force.start, force.end) == (0.0, pytest.approx(2 * math.pi / 3, rel=1e-15))
    assert cells(panel)[1][1] == "force 50 N, 0 ° to 120 °"
    enter(field(panel.editor, "from"), "200")
    assert "ends after it starts" in field(panel.editor, "from").parentWidget().wrong.text()
    choose(choice(panel.editor, "acts"), "always")
    assert filled.session.drive.forces[0].start is None
    filled.undo()
    assert field(panel.editor, "to").text() == "120"


def test_torque_and_friction_have_their_own_fields(filled: MainWindow) -> None:
    panel = opened(filled, LOADS)
    add(panel, "Torque")
    enter(field(panel.editor, "torque"), "-2")
    box = next(b for b in panel.editor.findChildren(ChoiceField) if b.findText("against the motion") >= 0)
    choose(box, "against the motion")
    assert filled.session.drive.torques[0].sense == "fixed"
    assert "torque against the motion cannot be less than 0" in panel.wrong.text()
    enter(field(panel.editor, "torque"), "2")
    choose(box, "against the motion")
    assert filled.session.drive.torques[0].sense == "against motion"
    add(panel, "Friction")
    for name, text in (("constant", "0.2"), ("viscous", "0.01"), ("coefficient", "0.003"), ("radius", "25")):
        enter(field(panel.editor, name), text)
    friction = filled.session.drive.frictions[0]
    assert (friction.constant, friction.viscous, friction.coefficient) == (0.2, 0.01, 0.003)
    assert (friction.radius, friction.load) == (0.025, None)
    enter(field(panel.editor, "load"), "1 kN")
    assert filled.session.drive.frictions[0].load == 1000.0


def test_gravity_is_chosen_by_direction_sized_and_typed_as_a_vector(filled: MainWindow) -> None:
    panel = opened(filled, LOADS)
    panel.table.select([""])
    choose(choice(panel.editor, "down is"), "−y")
    assert filled.session.drive.gravity == (0.0, -9.80665, 0.0)
    assert undo_name(filled) == "Down is −y"
    enter(field(panel.editor, "gravity"), "1.625")
    assert filled.session.drive.gravity == (0.0, -1.625, 0.0)
    enter(field(panel.editor, "as a vector x"), "1")
    assert filled.session.drive.gravity == (1.0, -1.625, 0.0)
    assert choice(panel.editor, "down is").currentText() == "another way"
    enter(field(panel.editor, "gravity"), "-3")
    assert "cannot be less than 0" in field(panel.editor, "gravity").parentWidget().wrong.text()
    filled.torque.setFocus()
    filled.undo()
    filled.undo()
    assert field(panel.editor, "gravity").text() == "9.80665"


# Stops


def test_a_stop_is_added_that_comes_about_and_one_that_does_not_is_refused(filled: MainWindow) -> None:
    panel = opened(filled, STOPS)
    assert "No stop yet" in panel.advice_words.text()
    QTest.mouseClick(panel.advice_button, Qt.MouseButton.LeftButton)
    assert len(filled.session.drive.stops) == 1
    enter(field(panel.editor, "speed"), "120")
    enter(field(panel.editor, "braking torque"), "5")
    assert filled.session.drive.stops == (StopCase(UNITS["rpm"].to_si(120.0), 5.0),)
    enter(field(panel.editor, "speed"), "0")
    assert "what stands still needs no stopping" in field(panel.editor, "speed").parentWidget().wrong.text()
    enter(field(panel.editor, "braking torque"), "")
    assert filled.session.drive.stops[0].torque == 5.0
    assert "nothing stops the load" in field(panel.editor, "braking torque").parentWidget().wrong.text()


# Sight


def test_inputs_follow_the_units_and_the_decimal_mark(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Mass on a screw")
    enter(field(panel.editor, "lead"), "12.7")
    filled._choose_units("in lb lb·in²")
    filled.choose_mark(",")
    assert field(panel.editor, "lead").text() == "0,5"
    assert cells(panel)[1][1] == "2,2046 lb, lead 0,5 in"
    filled.choose_mark(".")
    filled._choose_units("mm kg kg·m²")


def test_what_changes_out_of_sight_is_there_when_it_is_seen(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    filled.pages.setCurrentWidget(filled.sheet)
    filled.session.edit_drive("Add", lambda before: with_item(before, "train.stages", Gear("gearbox", 5.0)))
    filled.session.edit_drive("Ratio", lambda before: with_number(before, "train.stages.0.ratio", 6.0))
    filled.session.edit_drive("Add", lambda before: with_item(before, "train.stages", Coupling("claw"), 0))
    assert len(cells(panel)) == 2
    filled.pages.setCurrentWidget(filled.torque)
    assert [row[0] for row in cells(panel)] == ["motor", "claw", "gearbox", "whole document"]


def test_every_control_of_the_inputs_has_a_name(filled: MainWindow) -> None:
    for part in range(5):
        panel = opened(filled, part)
        if part != LIMITS:
            for action in list(panel.add.menu().actions()):
                if not action.isSeparator():
                    action.trigger()
                    for widget in panel.editor.findChildren(QLineEdit):
                        assert widget.accessibleName(), (part, action.text())
                    for box in panel.editor.findChildren(ChoiceField):
                        assert box.accessibleName(), (part, action.text())


def test_rows_are_copied_by_key_and_by_the_menu(filled: MainWindow) -> None:
    panel = opened(filled, TRAIN)
    add(panel, "Gearbox")
    panel.table.setFocus()
    QTest.keyClick(panel.table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    assert clipboard() == "gearbox\tgear 1 : 1, 100 %\tmotor → load\n"
    panel.table.select(["train.motor"])
    trigger(filled, "Edit", "Copy")
    assert clipboard() == "motor\tinertia not given\tmotor\n"
