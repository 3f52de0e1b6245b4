"""Adding lines and making them to measure, on the Part page and from menus, toolbar and dialogs."""

from __future__ import annotations

import math

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QToolButton
from window_driver import (
    choose,
    dial,
    dialog,
    enter,
    field,
    keys,
    names,
    no_dialog,
    solid,
    text_of,
    trigger,
)

from app.window.ledger.columns import INDEX
from core.assembly import Assembly, DataSheet, KnownAxial, KnownTensor
from core.machine import Machine
from core.material import ByDensity, ByMaterial, NotSet, Weighed, material
from core.placement import Mirrored, Ring, Row
from core.shapes import SHAPES

pytestmark = pytest.mark.gui


def only(window):
    return window.session.assembly.node(keys(window)[-1])


def test_each_shape_of_the_menu_becomes_a_line_that_is_undone_by_its_name(window):
    assert [action.text() for action in window.actions_.shapes.actions()] == [kind.title for kind in SHAPES.values()]
    for action, kind in zip(window.actions_.shapes.actions(), SHAPES.values(), strict=True):
        action.trigger()
        part = only(window)
        assert isinstance(part.body.shape, kind)
        assert isinstance(part.driver, NotSet)
        assert window.session.selected == {part.key}
        assert window.actions_.undo.toolTip() == f"Undo: Add {kind.title}"
        trigger(window, "Edit", "Undo")
        assert names(window) == []
        assert window.actions_.redo.toolTip() == f"Redo: Add {kind.title}"
        trigger(window, "Edit", "Redo")
        assert names(window) == [kind.title]
        trigger(window, "Edit", "Undo")


def test_a_new_shape_waits_with_the_keyboard_in_its_first_dimension(window, qtbot):
    window.add_shape("cylinder")
    qtbot.waitUntil(lambda: QApplication.focusWidget() is field(window.part, "diameter"))
    QTest.keyClicks(QApplication.focusWidget(), "120")
    QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
    assert only(window).body.shape.values()["diameter"] == pytest.approx(0.120, rel=1e-15)
    assert QApplication.focusWidget() is field(window.part, "length")


def test_a_new_line_goes_into_the_selected_group_or_behind_the_selected_line(filled):
    filled.session.select(frozenset({"below"}))
    filled.add_shape("cylinder")
    assert names(filled)[-1] == ".cylinder"
    filled.session.select(frozenset({"hub"}))
    filled.add_shape("cylinder")
    assert names(filled)[:4] == ["top", ".plate", ".hub", ".cylinder 2"]


def dimension(window, name="diameter"):
    return window.session.assembly.node("plate").body.shape.values()[name]


@pytest.fixture
def plate(filled):
    filled.session.select(frozenset({"plate"}))
    filled.pages.setCurrentWidget(filled.part)
    return filled


def test_arithmetic_with_units_is_understood_kept_as_typed_and_shown(plate):
    line = field(plate.part, "diameter")
    enter(line, "3/8 in + 2 mm")
    assert dimension(plate) == pytest.approx(0.011525, rel=1e-15)
    assert field(plate.part, "diameter").text() == "3/8 in + 2 mm"
    assert "= 11.525 mm" in [label.text() for label in line.parentWidget().children() if hasattr(label, "text")]
    assert plate.actions_.undo.toolTip() == "Undo: diameter of plate: 3/8 in + 2 mm"
    plate.session.select(frozenset({"hub"}))
    plate.session.select(frozenset({"plate"}))
    assert field(plate.part, "diameter").text() == "3/8 in + 2 mm"
    plate.undo()
    assert field(plate.part, "diameter").text() == "400"
    assert dimension(plate) == pytest.approx(0.4, rel=1e-15)


def test_what_is_typed_is_understood_before_it_is_finished(plate):
    line = field(plate.part, "diameter")
    enter(line, "2*25.4", end=None)
    said = [label.text() for label in line.parentWidget().children() if hasattr(label, "text")]
    assert "= 50.8 mm" in said
    assert dimension(plate) == pytest.approx(0.4)


@pytest.mark.parametrize("text", ["12 apples", "1.234,5", "12 kg", "", "0", "-3", "1e999", "__import__('os')"])
def test_text_that_is_no_dimension_is_refused_in_place_and_the_old_value_counts(plate, text):
    line = field(plate.part, "diameter")
    before = plate.session.assembly
    enter(line, text)
    owner = line.parentWidget()
    assert owner.wrong.isVisible()
    assert owner.wrong.text().count(".") >= 1
    assert line.text() == text
    assert line.property("wrong") == "true"
    assert plate.session.assembly is before
    assert not plate.notice.isVisible()
    QTest.keyClick(line, Qt.Key.Key_Escape)
    assert line.text() == "400"
    assert not owner.wrong.isVisible()


def test_a_refused_text_is_mended_by_typing_on(plate):
    line = field(plate.part, "diameter")
    enter(line, "-3")
    enter(line, "300")
    assert dimension(plate) == pytest.approx(0.3)
    assert not line.parentWidget().wrong.isVisible()


@pytest.mark.parametrize(("text", "millimetres"), [("1,5", 1.5), ("0.00123", 0.00123), ("1.5", 1.5), ("2,5e1", 25.0)])
def test_point_and_comma_both_mark_the_decimals_whatever_the_locale(plate, text, millimetres):
    from PySide6.QtCore import QLocale

    before = QLocale()
    QLocale.setDefault(QLocale(QLocale.Language.German, QLocale.Country.Germany))
    try:
        enter(field(plate.part, "diameter"), text)
    finally:
        QLocale.setDefault(before)
    assert dimension(plate) == pytest.approx(millimetres / 1000, rel=1e-15)


def test_the_same_value_again_is_no_edit(plate):
    enter(field(plate.part, "diameter"), "400.0")
    assert not plate.actions_.undo.isEnabled()


def test_typed_arithmetic_without_a_unit_does_not_change_its_meaning_with_the_units(plate):
    enter(field(plate.part, "diameter"), "2*25.4")
    assert field(plate.part, "diameter").text() == "2*25.4"
    choose(plate.actions_.units, "in lb lb·in²")
    assert field(plate.part, "diameter").text() == "2"
    assert dimension(plate) == pytest.approx(0.0508, rel=1e-15)


def test_an_edit_that_the_shape_cannot_take_leaves_the_old_value(window):
    window.session.take(Machine(Assembly("one", (solid("tube", "tube", outer_diameter=50, bore=30, length=10),))), None)
    window.session.select(frozenset({"tube"}))
    window.pages.setCurrentWidget(window.part)
    line = field(window.part, "bore")
    enter(line, "60")
    assert line.parentWidget().wrong.isVisible()
    assert window.session.assembly.node("tube").body.shape.values()["bore"] == pytest.approx(0.03)
    QTest.keyClick(line, Qt.Key.Key_Escape)
    assert line.text() == "30"


def test_a_text_still_being_typed_is_saved_with_the_document(plate, tmp_path):
    from core.document import read_document

    plate.session.path = tmp_path / "dial.masswright"
    enter(field(plate.part, "diameter"), "310", end=None)
    trigger(plate, "File", "Save")
    assert read_document(tmp_path / "dial.masswright").assembly.node("plate").body.shape.values()["diameter"] == pytest.approx(0.31)


# --- what says the mass ----------------------------------------------------------------------------------------


@pytest.fixture
def cover(filled):
    filled.session.select(frozenset({"cover"}))
    filled.pages.setCurrentWidget(filled.part)
    return filled


def choice(window, name):
    from PySide6.QtWidgets import QComboBox

    return next(box for box in window.part.findChildren(QComboBox) if box.accessibleName() == name)


@pytest.mark.parametrize(
    ("words", "name", "text", "driver"),
    [
        ("a density", "density", "2700 kg/m3", ByDensity(2700.0)),
        ("a weighed mass", "weighed mass of one", "1,2", Weighed(1.2)),
    ],
)
def test_choosing_what_says_the_mass_waits_for_the_value_and_makes_none_up(cover, words, name, text, driver):
    choose(choice(cover, "What says the mass"), words)
    assert isinstance(cover.session.assembly.node("cover").driver, NotSet)
    assert QApplication.focusWidget() is field(cover.part, name)
    assert field(cover.part, name).text() == ""
    enter(field(cover.part, name), text)
    assert cover.session.assembly.node("cover").driver == driver


def test_a_material_is_typed_or_chosen_and_a_wrong_one_is_refused_in_place(cover):
    choose(choice(cover, "What says the mass"), "a material")
    line = field(cover.part, "Material")
    enter(line, "cheese")
    said = [label.text() for label in cover.part.findChildren(type(cover.totals)) if label.isVisible()]
    assert any('read "cheese"' in words for words in said)
    assert isinstance(cover.session.assembly.node("cover").driver, NotSet)
    enter(line, "EN AW-6082")
    found = material("EN AW-6082")
    assert cover.session.assembly.node("cover").driver == ByMaterial(found.name, found.density)
    assert cover.session.history.undo_name == "Material of cover: EN AW-6082"
    assert field(cover.part, "Material").text() == found.name


def test_changing_what_says_the_mass_keeps_the_mass(plate):
    before = plate.session.assembly.node("plate").single.mass
    choose(choice(plate, "What says the mass"), "a weighed mass")
    assert plate.session.assembly.node("plate").driver.mass == pytest.approx(before, rel=1e-12)
    choose(choice(plate, "What says the mass"), "a density")
    assert plate.session.assembly.node("plate").driver.density == pytest.approx(7850.0, rel=1e-12)
    choose(choice(plate, "What says the mass"), "not set yet")
    assert text_of(plate, "plate", "mass") == "–"


# --- where it stands --------------------------------------------------------------------------------------------


def test_position_and_turn_are_edits_with_their_names(plate):
    enter(field(plate.part, "position x"), "1 in")
    assert plate.session.assembly.node("plate").pose.position == pytest.approx((0.0254, 0, 0))
    assert plate.session.history.undo_name == "Position x of plate: 1 in"
    enter(field(plate.part, "turn about y"), "90")
    assert plate.session.assembly.node("plate").pose.turns[1] == pytest.approx(math.pi / 2)


def test_six_bolts_on_a_pitch_circle_weigh_six_times_one_and_carry_their_transfer_term(window):
    window.session.take(Machine(Assembly("one", (solid("bolt", "cylinder", (0.15, 0, 0), diameter=20, length=30),))), None)
    window.session.select(frozenset({"bolt"}))
    choose(choice(window, "How it repeats"), "ring, on a pitch circle")
    assert isinstance(window.session.assembly.node("bolt").copies, Ring)
    enter(field(window.part, "quantity"), "6")
    mass = 6 * 7850 * math.pi * 0.01**2 * 0.03
    assert window.session.ledger.total.mass == pytest.approx(mass, rel=1e-12)
    assert window.session.ledger.total.inertia == pytest.approx(mass * (0.15**2 + 0.01**2 / 2), rel=1e-12)


@pytest.mark.parametrize(("words", "kind"), [("row", Row), ("mirror image", Mirrored)])
def test_the_page_follows_how_a_line_repeats_and_keeps_the_keyboard(plate, words, kind):
    choice(plate, "How it repeats").setFocus()
    choose(choice(plate, "How it repeats"), words)
    QApplication.processEvents()
    assert isinstance(plate.session.assembly.node("plate").copies, kind)
    assert QApplication.focusWidget() is choice(plate, "How it repeats")
    plate.undo()
    assert choice(plate, "How it repeats").currentText() == "at one place"


def test_a_quantity_that_is_no_whole_number_is_refused_in_place(plate):
    line = field(plate.part, "quantity")
    enter(line, "2.5")
    assert "whole number" in line.parentWidget().wrong.text()
    assert plate.session.assembly.node("plate").copies.count == 1


def test_the_part_page_says_what_to_do_when_no_line_or_several_are_selected(filled):
    filled.pages.setCurrentWidget(filled.part)
    words = filled.part.findChildren(type(filled.totals))
    assert any("Select a line" in label.text() for label in words if label.isVisible())
    filled.session.select(frozenset({"hub", "plate"}))
    words = filled.part.findChildren(type(filled.totals))
    assert any("2 lines are selected" in label.text() for label in words if label.isVisible())


# --- known parts ------------------------------------------------------------------------------------------------


def known(window, about=None):
    trigger(window, "Part", "Add known part…")
    box = dialog(window)
    enter(box.name, "brake", end=None)
    enter(box.source, "sheet 4", end=None)
    enter(box.mass.line, "2,5", end=None)
    if about:
        choose(box.about, about)
    return box


def test_a_known_part_needs_to_say_what_its_inertia_is_about(filled):
    box = known(filled)
    box.take_button.click()
    assert box.wrong.isVisible()
    assert "Choose what the data sheet's inertia is about" in box.wrong.text()
    assert "brake" not in filled.session.assembly
    box.reject()
    assert no_dialog(filled)


def test_a_known_part_with_one_inertia_is_added_as_typed(filled):
    box = known(filled, "one inertia, about the part's own axis")
    enter(box.axial.line, "0.01 kgf*m^2 GD2", end=None)
    QTest.keyClick(box.axial.line, Qt.Key.Key_Return)
    assert no_dialog(filled)
    part = only(filled)
    assert part.body == KnownAxial(2.5, (0, 0, 0), pytest.approx(0.0025, rel=1e-12), 0.0, "sheet 4")
    assert dict(part.typed) == {"known.axial": "0.01 kgf*m^2 GD2"}
    assert part.driver == DataSheet()
    assert filled.session.history.undo_name == "Add brake"


@pytest.mark.parametrize(
    ("words", "about"), [("a tensor about the centre of mass", "centre"), ("a tensor about the part's origin", "origin")]
)
def test_a_known_tensor_keeps_the_point_it_is_about(filled, words, about):
    box = known(filled, words)
    for line, text in zip(box.tensor, ("0.02", "0.03", "0.04", "0.001", "0", "-0.001"), strict=True):
        enter(line.line, text, end=None)
    box.take_button.click()
    body = only(filled).body
    assert body == KnownTensor(2.5, (0, 0, 0), (0.02, 0.03, 0.04, 0.001, 0.0, -0.001), about, "sheet 4")


def test_a_known_part_that_cannot_exist_is_added_with_a_check_or_refused_in_place(filled):
    box = known(filled, "a tensor about the centre of mass")
    for line, text in zip(box.tensor, ("1", "1", "3", "0", "0", "0"), strict=True):
        enter(line.line, text, end=None)
    box.take_button.click()
    refused = not no_dialog(filled)
    failed = [finding for finding in filled.session.findings if finding.name == "brake" and not finding.check.ok]
    assert (refused and box.wrong.isVisible()) or failed
    if refused:
        box.reject()


def test_missing_values_of_a_known_part_are_asked_for_in_place(filled):
    box = known(filled, "one inertia, about the part's own axis")
    enter(box.mass.line, "", end=None)
    box.take_button.click()
    assert box.mass.wrong.isVisible()
    assert box.isVisible()
    box.reject()


# --- the axis ---------------------------------------------------------------------------------------------------


def test_a_new_axis_becomes_the_drive_axis_and_is_undone_by_its_name(filled):
    trigger(filled, "Axis", "New axis…")
    box = dialog(filled)
    enter(box.name, "Tilt", end=None)
    enter(box.direction.fields[0].line, "1", end=None)
    enter(box.direction.fields[2].line, "0", end=None)
    box.take_button.click()
    assert no_dialog(filled)
    assert filled.session.assembly.drive == "Tilt"
    assert filled.actions_.axes.currentText() == "Tilt"
    assert filled.ledger.tree.lines.headerData(INDEX["inertia"], Qt.Orientation.Horizontal).startswith("J about Tilt")
    assert filled.session.history.undo_name == "Add axis Tilt"
    choose(filled.actions_.axes, "Spindle")
    assert filled.session.assembly.drive == "Spindle"
    filled.undo()
    filled.undo()
    assert [axis.name for axis in filled.session.assembly.axes] == ["Spindle"]


def test_an_axis_without_direction_or_name_is_refused_in_place(filled):
    trigger(filled, "Axis", "New axis…")
    box = dialog(filled)
    box.take_button.click()
    assert box.wrong.text() == "The axis needs a name."
    enter(box.name, "Tilt", end=None)
    enter(box.direction.fields[2].line, "0", end=None)
    box.take_button.click()
    assert box.wrong.isVisible()
    assert box.isVisible()
    assert len(filled.session.assembly.axes) == 1
    box.reject()


def test_editing_the_axis_without_a_change_keeps_its_numbers_to_the_last_bit(filled):
    from dataclasses import replace

    from core.assembly import DriveAxis

    slanted = (1 / 3, 2 / 3, 0.7071067811865476)
    filled.session.edit("axis", lambda before: replace(before, axes=(DriveAxis("Spindle", (1 / 7, 0, 0), slanted),)))
    before = filled.session.assembly.drive_axis
    trigger(filled, "Axis", "Edit drive axis…")
    dialog(filled).take_button.click()
    assert filled.session.assembly.drive_axis == before


def test_two_axes_cannot_have_one_name(filled):
    trigger(filled, "Axis", "New axis…")
    box = dialog(filled)
    enter(box.name, "Spindle", end=None)
    box.take_button.click()
    assert box.wrong.isVisible()
    box.reject()


def test_toolbar_buttons_do_what_they_say(filled):
    buttons = {button.text(): button for button in filled.findChildren(QToolButton) if button.text()}
    buttons["Add known part"].click()
    dialog(filled).reject()
    filled.session.select(frozenset({"hub"}))
    buttons["Add group"].click()
    assert ".group" in names(filled)
    buttons["Undo"].click()
    assert names(filled) == [name for name in names(filled) if name != ".group"]
    assert len(keys(filled)) == len([node for group in dial().members for node in (group, *group.members)])
