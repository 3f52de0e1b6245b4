"""Axes in the window: a table beside it, a dialog for each, the axis of a part, columns and lines in the view."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from window_driver import choose, dialog, enter, no_dialog, text_of, trigger

from app.window.commands import grouped
from app.window.dialogs.axes import DRIVE, INERTIA, NAME, RADIUS, RUNS
from app.window.dialogs.axis import AxisDialog
from app.window.ledger.columns import INDEX
from core.assembly import DriveAxis, Group
from core.assembly.axes import driven_about_part, with_axis_added
from core.assembly.names import NameEntry
from core.assembly.naming import with_entry
from core.drive import Gear, Train, TurnsWith
from core.placement import Pose

if TYPE_CHECKING:
    from app.window.dialogs.axes import AxesDialog
    from app.window.main import MainWindow


def opened(window: MainWindow) -> AxesDialog:
    trigger(window, "Axis", "Axes…")
    return dialog(window)


def shown(axes: AxesDialog, column: int) -> list[str]:
    return [axes.table.item(row, column).text() for row in range(axes.table.rowCount())]


def asked(axes: AxesDialog) -> AxisDialog:
    """Return the dialog of one axis that is open over the table."""
    QApplication.processEvents()
    return next(box for box in axes.findChildren(AxisDialog) if box.isVisible())


def add_tilt(window: MainWindow) -> None:
    tilt = DriveAxis("Tilt", (0.1, 0.0, 0.0), (1.0, 0.0, 0.0))
    assert window.session.edit("tilt", lambda before: with_axis_added(before, tilt))


def test_the_table_shows_every_axis_with_the_inertia_of_the_whole_about_it(filled):
    add_tilt(filled)
    axes = opened(filled)
    total = filled.session.assembly.total
    assert shown(axes, NAME) == ["Spindle", "Tilt"]
    assert shown(axes, RUNS) == ["through (0; 0; 0) mm along (0; 0; 1)", "through (100; 0; 0) mm along (1; 0; 0)"]
    about_tilt = float(total.inertia_about_axis([0.1, 0.0, 0.0], [1.0, 0.0, 0.0]))
    assert float(shown(axes, INERTIA)[1]) == pytest.approx(about_tilt, rel=2e-4)
    assert float(shown(axes, RADIUS)[1]) == pytest.approx(1000 * np.sqrt(about_tilt / float(total.mass)), rel=2e-4)
    assert shown(axes, DRIVE) == ["drive axis · the whole document", ""]
    axes.reject()


def test_an_axis_is_added_renamed_driven_and_deleted_in_one_step_each(filled):
    axes = opened(filled)
    start = filled.session.assembly
    QTest.mouseClick(axes.add, Qt.MouseButton.LeftButton)
    box = asked(axes)
    enter(box.name, "Hinge", end=None)
    choose(box.way, "two points")
    enter(box.point.fields[0].line, "1/4 in", end=None)
    enter(box.second.fields[0].line, "1/4 in + 30 mm", end=None)
    box.drives.setChecked(False)
    box.take_button.click()
    hinge = filled.session.assembly.axis("Hinge")
    assert filled.session.assembly.drive == "Spindle"
    assert (hinge.point, hinge.second) == ((pytest.approx(0.00635), 0.0, 0.0), (pytest.approx(0.03635), 0.0, 0.1))
    assert dict(hinge.typed) == {"axis.point.0": "1/4 in", "axis.second.0": "1/4 in + 30 mm"}
    axes.table.setCurrentCell(1, NAME)
    axes.table.item(1, NAME).setText(" Swivel ")
    assert shown(axes, NAME) == ["Spindle", "Swivel"]
    QTest.mouseClick(axes.drive, Qt.MouseButton.LeftButton)
    assert filled.session.assembly.drive == "Swivel"
    assert not axes.drive.isEnabled()
    axes.table.setCurrentCell(0, NAME)
    QTest.keyClick(axes.table, Qt.Key.Key_Delete)
    assert shown(axes, NAME) == ["Swivel"]
    for name in ("Delete axis Spindle", "Drive axis Swivel", "Rename axis Hinge to Swivel", "Add axis Hinge"):
        assert filled.session.history.undo_name == name
        filled.undo()
    assert filled.session.assembly is start
    axes.reject()


def test_what_cannot_be_done_to_an_axis_is_said_below_the_table(filled):
    axes = opened(filled)
    axes.delete.click()
    assert axes.wrong.text() == "Spindle: a document keeps one axis at least. Edit it, or add another one first."
    add_tilt(filled)
    axes.delete.click()
    assert "the drive axis cannot be deleted" in axes.wrong.text()
    axes.table.item(1, NAME).setText("Spindle")
    assert "another axis has this name" in axes.wrong.text()
    assert shown(axes, NAME) == ["Spindle", "Tilt"]
    turning = (TurnsWith(), TurnsWith("rotor", "motor", "Tilt"))
    geared = Train(stages=(Gear("gear", 4.0),))
    assert filled.session.edit_drive("turns", lambda drive: replace(drive, turning=turning, train=geared))
    assert shown(axes, DRIVE)[1] == "rotor"
    axes.table.setCurrentCell(1, NAME)
    axes.delete.click()
    assert axes.wrong.text() == (
        "Tilt: an axis that something turns about cannot be deleted: rotor. Let that turn about another axis first, "
        "on its Part page."
    )
    axes.table.item(1, NAME).setText("Swivel")
    assert filled.session.drive.turning[1].axis == "Swivel"
    assert axes.wrong.isHidden()
    axes.reject()


@pytest.mark.parametrize(("way", "changes", "sentence"), [
    ("a point and a direction", {("direction", 2): "0"}, "a direction needs a length"),
    ("two points", {("second", 2): "0"}, "an axis needs two points that differ"),
])
def test_an_axis_without_a_direction_is_refused_in_its_dialog(filled, way, changes, sentence):
    trigger(filled, "Axis", "New axis…")
    box = dialog(filled)
    enter(box.name, "Tilt", end=None)
    choose(box.way, way)
    for (field, at), text in changes.items():
        enter(getattr(box, field).fields[at].line, text, end=None)
    box.take_button.click()
    assert sentence in box.wrong.text()
    assert len(filled.session.assembly.axes) == 1
    box.reject()


def test_a_number_of_an_axis_keeps_its_text_and_follows_a_named_dimension(filled):
    filled.session.edit("name", lambda before: with_entry(before, NameEntry("throw", "80 mm")))
    trigger(filled, "Axis", "Edit drive axis…")
    box = dialog(filled)
    enter(box.point.fields[1].line, "throw/2", end=None)
    box.take_button.click()
    assert no_dialog(filled)
    filled.session.edit("name", lambda before: with_entry(before, NameEntry("throw", "100 mm")))
    assert filled.session.assembly.drive_axis.point == (0.0, pytest.approx(0.05), 0.0)
    trigger(filled, "Axis", "Edit drive axis…")
    assert dialog(filled).point.fields[1].line.text() == "throw/2"
    dialog(filled).take_button.click()
    assert dict(filled.session.assembly.drive_axis.typed) == {"axis.point.1": "throw/2"}


def test_the_axis_of_the_selected_part_becomes_the_drive_axis_and_follows_it(filled):
    filled.session.select(frozenset({"pins"}))
    trigger(filled, "Part", "Make its axis the drive axis")
    assert filled.session.assembly.drive == "axis of pins"
    assert filled.session.history.undo_name == "Drive about the axis of pins"
    assert filled.actions_.axes.currentText() == "axis of pins"
    pins = filled.session.assembly.node("pins")
    filled.session.edit("move", lambda before: before.replaced(replace(pins, pose=Pose((0.0, 0.16, 0.0)))))
    assert filled.session.assembly.drive_axis.point == pytest.approx((0.0, 0.16, 0.0), abs=1e-15)
    assert text_of(filled, "hub", "inertia") != text_of(filled, "hub", "own")
    filled.undo()
    assert filled.session.assembly.drive_axis.point == pytest.approx((0.15, 0.0, 0.02), abs=1e-15)
    filled.undo()
    assert filled.session.assembly.drive == "Spindle"


def test_the_axis_of_nothing_and_of_a_group_is_refused_in_a_sentence(filled):
    trigger(filled, "Part", "Make its axis the drive axis")
    assert "Select one line of the ledger" in filled.notice.words.text()
    filled.session.select(frozenset({"top"}))
    trigger(filled, "Part", "Make its axis the drive axis")
    assert "top: an axis follows a part, and this is a group" in filled.notice.words.text()


def test_a_part_is_chosen_for_an_axis_in_its_dialog(filled):
    filled.session.select(frozenset({"hub"}))
    trigger(filled, "Axis", "New axis…")
    box = dialog(filled)
    enter(box.name, "Hub", end=None)
    choose(box.way, "the own axis of a part")
    assert box.part.currentText() == "top / hub"
    assert box.direction.isHidden()
    assert not box.part.isHidden()
    choose(box.part, "top / pins")
    box.take_button.click()
    assert filled.session.assembly.drive_axis.part == "pins"
    # Taken again without a change it stays the very same.
    before = filled.session.assembly
    trigger(filled, "Axis", "Edit drive axis…")
    dialog(filled).take_button.click()
    assert filled.session.assembly == before


def test_grouping_a_part_keeps_its_axis_on_it(filled):
    start = driven_about_part(filled.session.assembly, "hub")
    after = grouped(start, frozenset({"hub"}), "new")
    assert isinstance(after.node("new"), Group)
    assert after.drive_axis == start.drive_axis


def test_columns_of_gyration_and_flywheel_effect_are_hidden_until_they_are_chosen(filled):
    tree, foot = filled.ledger.tree, filled.ledger.foot
    for key in ("gd2", "wr2", "gyration"):
        assert tree.isColumnHidden(INDEX[key])
        assert foot.isColumnHidden(INDEX[key])
        next(action for action in filled.ledger.columns.actions() if action.text() == heading(filled, key)).trigger()
        assert not tree.isColumnHidden(INDEX[key])
    line = next(line for line in filled.session.ledger.lines if line.key == "ring")
    assert float(text_of(filled, "ring", "gd2")) == pytest.approx(4 * line.inertia, rel=1e-3)
    assert float(text_of(filled, "ring", "wr2")) == pytest.approx(line.inertia / (0.45359237 * 0.3048**2), rel=1e-3)
    assert float(text_of(filled, "ring", "gyration")) == pytest.approx(1000 * np.sqrt(line.inertia / 1.2), rel=1e-3)
    across = Qt.Orientation.Horizontal
    assert [tree.lines.headerData(INDEX[key], across) for key in ("gd2", "wr2", "gyration")] == [
        "GD²\nkgf·m²", "WR²\nlb·ft²", "k about Spindle\nmm"
    ]
    assert text_of(filled, "cover", "gyration") == "–"


def heading(window: MainWindow, key: str) -> str:
    return str(window.ledger.tree.lines.headerData(INDEX[key], Qt.Orientation.Horizontal)).partition("\n")[0]


def test_the_other_axes_are_in_the_view_and_what_is_fitted_stays_the_same(filled):
    before = filled.view.scene.fit_points
    add_tilt(filled)
    (tilt,) = filled.view.scene.other_axes
    assert tilt.name == "Tilt"
    assert filled.view.scene.axis.name == "Spindle"
    np.testing.assert_array_equal(filled.view.scene.fit_points, before)
    np.testing.assert_allclose(np.cross(tilt.end - tilt.start, [1, 0, 0]), 0.0, atol=1e-15)
    assert tilt.start[1:] == pytest.approx([0.0, 0.0], abs=1e-15)
