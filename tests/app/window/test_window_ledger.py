"""The ledger: editing its cells, arranging its lines, and selecting the same thing as the view and the pages."""

from __future__ import annotations

import math

import pytest
from PySide6.QtCore import QModelIndex, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication
from window_driver import (
    cell,
    choose_cells,
    dial,
    keys,
    names,
    open_editor,
    put_away,
    text_of,
    trigger,
    type_cell,
)

from app.window.ledger.columns import INDEX
from app.window.style import Words
from core.material import ByDensity, ByMaterial, NotSet, Weighed, material

pytestmark = pytest.mark.gui
MOVE = Qt.DropAction.MoveAction


def node(window, key):
    return window.session.assembly.node(key)


def is_editing(window):
    return window.ledger.tree.state() == window.ledger.tree.State.EditingState


def words_below_the_cell(window):
    return [label.text() for label in window.ledger.tree.viewport().findChildren(Words) if label.isVisible()]


# --- cells ------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("how", [Qt.Key.Key_F2, Qt.Key.Key_Return])
def test_a_line_is_renamed_in_its_cell_by_key(filled, how):
    editor = open_editor(filled, "hub", "name", how)
    assert editor.selectedText() == "hub"
    QTest.keyClicks(editor, "flange")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    assert node(filled, "hub").name == "flange"
    assert text_of(filled, "hub", "name") == "flange"
    assert filled.session.history.undo_name == "Rename hub: flange"
    filled.undo()
    assert text_of(filled, "hub", "name") == "hub"


def test_escape_drops_what_is_typed_in_a_cell(filled):
    before = filled.session.assembly
    type_cell(filled, "hub", "name", "flange", end=Qt.Key.Key_Escape)
    assert not is_editing(filled)
    assert filled.session.assembly is before


def test_a_quantity_counts_mass_and_inertia_times(filled):
    mass, inertia = filled.session.ledger.lines[3].mass, filled.session.ledger.lines[3].inertia
    assert filled.session.ledger.lines[3].key == "pins"
    type_cell(filled, "pins", "count", "12")
    assert node(filled, "pins").copies.count == 12
    assert filled.session.ledger.lines[3].mass == pytest.approx(2 * mass, rel=1e-12)
    assert filled.session.ledger.lines[3].inertia == pytest.approx(2 * inertia, rel=1e-12)
    assert filled.session.history.undo_name == "Quantity of pins: 12"


@pytest.mark.parametrize(
    ("text", "driver"),
    [
        ("2.700 kg/dm3", ByDensity(2700.0)),
        ("1,25 kg", Weighed(1.25)),
        ("300 g", Weighed(0.3)),
        ("S355", ByMaterial(material("S355").name, material("S355").density)),
        ("", NotSet()),
    ],
)
def test_the_material_cell_takes_a_name_a_density_or_a_weighed_mass(filled, text, driver):
    editor = open_editor(filled, "plate", "material")
    QTest.keyClick(editor, Qt.Key.Key_Delete)
    QTest.keyClicks(editor, text)
    put_away(filled, editor)
    QTest.keyClick(editor, Qt.Key.Key_Return)
    found = node(filled, "plate").driver
    assert type(found) is type(driver)
    for name in ("density", "mass", "name"):
        if hasattr(driver, name):
            wanted = getattr(driver, name)
            assert getattr(found, name) == (wanted if name == "name" else pytest.approx(wanted, rel=1e-12))
    assert filled.session.history.undo_name.startswith("Material of plate")


@pytest.mark.parametrize(
    ("column", "text"),
    [("material", "cheese"), ("material", "1.234,5 kg"), ("material", "12 apples"), ("count", "2.5"), ("count", "0"),
     ("count", "-1"), ("name", "   ")],
)
def test_a_bad_cell_is_refused_in_place_with_the_old_value_kept_and_the_text_left_to_mend(filled, column, text):
    before = filled.session.assembly
    editor = type_cell(filled, "plate", column, text)
    assert is_editing(filled)
    assert editor.text() == text
    assert editor.property("wrong") == "true"
    assert len(words_below_the_cell(filled)) == 1
    assert words_below_the_cell(filled)[0].endswith(".")
    assert filled.session.assembly is before
    assert not filled.notice.isVisible()
    QTest.keyClick(editor, Qt.Key.Key_Escape)
    QApplication.processEvents()
    assert words_below_the_cell(filled) == []
    assert not is_editing(filled)


def test_what_is_being_typed_stays_when_the_ledger_is_judged_anew(filled):
    editor = open_editor(filled, "plate", "name")
    QTest.keyClicks(editor, "dis")
    filled.session.look_again()
    QApplication.processEvents()
    QTest.keyClicks(editor, "c")
    assert editor.text() == "disc"


def test_a_bad_cell_left_by_the_mouse_keeps_the_old_value_and_says_why_above(filled):
    before = filled.session.assembly
    editor = open_editor(filled, "plate", "material")
    QTest.keyClicks(editor, "cheese")
    put_away(filled, editor)
    filled.view.setFocus()
    QApplication.processEvents()
    assert filled.session.assembly is before
    assert "cheese" in filled.notice.words.text()
    filled.session.look_again()
    assert filled.notice.isVisible()
    type_cell(filled, "plate", "name", "disc")
    assert not filled.notice.isVisible()


def test_tab_takes_the_cell_and_goes_on_to_the_next_input(filled):
    type_cell(filled, "plate", "count", "2", end=Qt.Key.Key_Tab)
    assert node(filled, "plate").copies.count == 2
    assert filled.ledger.tree.currentIndex().column() == INDEX["material"]


def test_only_a_weighed_mass_is_typed_in_the_mass_column(filled):
    def is_input(key):
        return bool(cell(filled, key, "mass").flags() & Qt.ItemFlag.ItemIsEditable)

    assert [key for key in keys(filled) if is_input(key)] == ["ring"]
    type_cell(filled, "ring", "mass", "1,5")
    assert node(filled, "ring").driver == Weighed(1.5)
    assert filled.session.history.undo_name == "Mass of ring: 1,5"
    type_cell(filled, "ring", "mass", "800 g")
    assert node(filled, "ring").driver.mass == pytest.approx(0.8, rel=1e-15)
    editor = type_cell(filled, "ring", "mass", "12 apples")
    assert is_editing(filled)
    QTest.keyClick(editor, Qt.Key.Key_Escape)
    assert node(filled, "ring").driver.mass == pytest.approx(0.8, rel=1e-15)


@pytest.mark.parametrize("how", [Qt.Key.Key_F2, Qt.Key.Key_Return, Qt.Key.Key_7])
def test_a_computed_cell_takes_no_typing(filled, how):
    choose_cells(filled, ("plate", "inertia"))
    QTest.keyClick(filled.ledger.tree, how)
    assert not is_editing(filled)


def test_sorted_by_share_lines_stand_in_order_and_keep_their_place_in_an_edit(filled):
    switch = next(
        action for action in filled.menuBar().actions()[5].menu().actions() if action.text().startswith("Sort")
    )
    choose_cells(filled, ("hub", "name"))
    switch.trigger()
    top = filled.ledger.tree.lines.index_of("top")
    rows = [filled.ledger.tree.lines.index(row, 0, top).data() for row in range(3)]
    assert rows == ["plate", "pins", "hub"]
    assert filled.session.selected == {"hub"}
    type_cell(filled, "pins", "count", "600")
    rows = [filled.ledger.tree.lines.index(row, 0, top).data() for row in range(3)]
    assert rows == ["pins", "plate", "hub"]
    assert filled.ledger.tree.currentIndex().siblingAtColumn(0).data() == "pins"
    switch.trigger()
    rows = [filled.ledger.tree.lines.index(row, 0, top).data() for row in range(3)]
    assert rows == ["plate", "hub", "pins"]


def test_the_columns_of_a_line_add_up_and_the_foot_is_their_sum(filled):
    plate = next(line for line in filled.session.ledger.lines if line.key == "plate")
    mass = 7850 * math.pi * 0.2**2 * 0.02
    assert float(text_of(filled, "plate", "mass")) == pytest.approx(mass, rel=1e-3)
    assert plate.own_inertia == pytest.approx(mass * 0.2**2 / 2, rel=1e-12)
    foot = filled.ledger.foot.model()
    total = filled.session.ledger.total
    assert foot.index(0, 0).data() == "TOTAL"
    assert float(foot.index(0, INDEX["mass"]).data()) == pytest.approx(total.mass, rel=1e-3)
    assert total.inertia == pytest.approx(total.own_inertia + total.transfer, rel=1e-12)


# --- arranging --------------------------------------------------------------------------------------------------


def test_selected_lines_are_grouped_and_the_group_is_named_at_once(filled):
    filled.session.select(frozenset({"hub", "plate"}))
    trigger(filled, "Part", "Add group")
    assert names(filled)[:5] == ["top", ".group", "..plate", "..hub", ".pins"]
    editor = QApplication.focusWidget()
    QTest.keyClicks(editor, "turning")
    QTest.keyClick(editor, Qt.Key.Key_Return)
    assert names(filled)[1] == ".turning"
    filled.undo()
    filled.undo()
    assert filled.session.history.redo_name == "Add group"
    assert names(filled) == ["top", ".plate", ".hub", ".pins", "below", ".ring", ".rotor", ".cover"]
    filled.redo()
    assert names(filled)[1] == ".group"


def test_lines_of_different_groups_are_not_grouped_and_the_refusal_is_said(filled):
    before = filled.session.assembly
    filled.session.select(frozenset({"hub", "ring"}))
    filled.add_group()
    assert filled.session.assembly is before
    assert filled.notice.isVisible()


def press(window, key, modifier=Qt.KeyboardModifier.AltModifier):
    QTest.keyClick(window.ledger.tree, key, modifier)
    QApplication.processEvents()


def test_lines_move_by_alt_and_arrows_and_back_by_undo(filled):
    choose_cells(filled, ("pins", "name"))
    press(filled, Qt.Key.Key_Up)
    assert names(filled)[:4] == ["top", ".plate", ".pins", ".hub"]
    assert filled.session.history.undo_name == "Move pins"
    assert filled.session.selected == {"pins"}
    press(filled, Qt.Key.Key_Down)
    assert names(filled)[:4] == ["top", ".plate", ".hub", ".pins"]
    press(filled, Qt.Key.Key_Down)
    assert filled.session.history.past == filled.session.history.past[:2]
    press(filled, Qt.Key.Key_Left)
    assert names(filled)[:5] == ["top", ".plate", ".hub", "pins", "below"]
    assert filled.session.history.undo_name == "Move out pins"
    for _ in range(3):
        trigger(filled, "Edit", "Undo")
    assert filled.session.assembly == dial() or names(filled)[:4] == ["top", ".plate", ".hub", ".pins"]


def drop(window, lines, parent, row=-1):
    tree = window.ledger.tree
    data = tree.lines.mimeData([cell(window, key, "name") for key in lines])
    return tree.lines.dropMimeData(data, MOVE, row, 0, parent)


def test_lines_dropped_on_a_group_go_into_it_in_the_order_of_the_ledger(filled):
    total = filled.session.ledger.total.inertia
    drop(filled, ["pins", "plate"], cell(filled, "below", "name"))
    assert names(filled) == ["top", ".hub", "below", ".ring", ".rotor", ".cover", ".plate", ".pins"]
    assert filled.session.history.undo_name == "Move 2 lines"
    assert filled.session.ledger.total.inertia == pytest.approx(total, rel=1e-12)
    filled.undo()
    assert names(filled)[:4] == ["top", ".plate", ".hub", ".pins"]


def test_a_line_dropped_between_two_lines_lands_there(filled):
    drop(filled, ["ring"], cell(filled, "top", "name"), 1)
    assert names(filled)[:5] == ["top", ".plate", ".ring", ".hub", ".pins"]
    drop(filled, ["ring"], QModelIndex(), 0)
    assert names(filled)[:2] == ["ring", "top"]
    assert filled.session.history.undo_name == "Move ring"


def test_a_group_dropped_into_itself_is_refused_and_stays(filled):
    before = filled.session.assembly
    drop(filled, ["top"], cell(filled, "top", "name"))
    assert filled.session.assembly is before
    assert filled.notice.isVisible()


def test_other_things_dropped_on_the_ledger_are_not_taken(filled):
    from PySide6.QtCore import QMimeData

    data = QMimeData()
    data.setText("plate")
    assert not filled.ledger.tree.lines.dropMimeData(data, MOVE, -1, 0, QModelIndex())


def test_delete_takes_the_selected_lines_and_undo_brings_them_back(filled):
    choose_cells(filled, ("plate", "mass"))
    press(filled, Qt.Key.Key_Delete, Qt.KeyboardModifier.NoModifier)
    assert ".plate" not in names(filled)
    assert filled.actions_.undo.toolTip() == "Undo: Delete plate"
    filled.session.select(frozenset({"top", "hub"}))
    trigger(filled, "Edit", "Delete")
    assert names(filled) == ["below", ".ring", ".rotor", ".cover"]
    assert filled.session.history.undo_name == "Delete 2 lines"
    assert filled.session.selected == frozenset()
    filled.undo()
    filled.undo()
    assert names(filled)[:2] == ["top", ".plate"]


def test_delete_in_a_page_does_not_take_a_line_away(filled):
    filled.session.select(frozenset({"plate"}))
    filled.pages.setCurrentWidget(filled.sheet)
    filled.sheet.table.setFocus()
    QTest.keyClick(filled.sheet.table, Qt.Key.Key_Delete)
    assert "plate" in filled.session.assembly


# --- pasting ----------------------------------------------------------------------------------------------------


def test_a_block_of_cells_is_pasted_into_inputs_as_one_edit(filled):
    QGuiApplication.clipboard().setText("disc\t2\t2700 kg/m³\nboss\t1\t1,5 kg\n")
    choose_cells(filled, ("plate", "name"))
    QTest.keyClick(filled.ledger.tree, Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert names(filled)[1:3] == [".disc", ".boss"]
    assert node(filled, "plate").copies.count == 2
    assert node(filled, "plate").driver == ByDensity(2700.0)
    assert node(filled, "hub").driver == Weighed(1.5)
    assert filled.session.history.undo_name == "Paste 6 cells"
    filled.undo()
    assert names(filled)[1:3] == [".plate", ".hub"]


@pytest.mark.parametrize(
    ("start", "text"),
    [
        (("plate", "mass"), "7"),  # computed
        (("plate", "name"), "disc\t2\tcheese"),  # one of the cells is bad
        (("cover", "name"), "a\nb"),  # more rows than there are
        (("plate", "share"), "1\t2"),  # more columns than there are
        (("plate", "name"), ""),
    ],
)
def test_a_block_that_does_not_fit_is_refused_as_a_whole(filled, start, text):
    before = filled.session.assembly
    QGuiApplication.clipboard().setText(text)
    choose_cells(filled, start)
    filled.ledger.paste()
    assert filled.session.assembly is before
    assert filled.notice.isVisible()


# --- selecting --------------------------------------------------------------------------------------------------


def shown_selected(window):
    return {window.ledger.tree.lines.line(index).key for index in window.ledger.tree.selectedIndexes()}


def test_a_click_in_the_ledger_selects_for_the_page_and_the_view(filled):
    tree = filled.ledger.tree
    filled.pages.setCurrentWidget(filled.part)
    place = tree.visualRect(cell(filled, "hub", "mass")).center()
    QTest.mouseClick(tree.viewport(), Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, place)
    assert filled.session.selected == {"hub"}
    assert filled.view._picture.emphasis.selected == {"hub"}
    assert filled.part.findChildren(type(filled.part._sections[0]._name))[0].text() == "hub"
    QTest.mouseClick(
        tree.viewport(), Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier,
        tree.visualRect(cell(filled, "top", "name")).center(),
    )
    assert filled.view._picture.emphasis.selected == {"plate", "hub", "pins"}


def test_a_pick_in_the_view_selects_the_line_and_opens_its_page(filled):
    filled.view.picked.emit("pins", False)
    assert filled.session.selected == {"pins"}
    assert shown_selected(filled) == {"pins"}
    assert filled.pages.currentWidget() is filled.part
    filled.view.picked.emit("hub", True)
    assert shown_selected(filled) == {"pins", "hub"}
    filled.view.picked.emit("pins", True)
    assert shown_selected(filled) == {"hub"}
    filled.view.picked.emit("", False)
    assert shown_selected(filled) == set()


def test_a_pick_inside_a_closed_group_opens_it(filled):
    tree = filled.ledger.tree
    tree.collapse(cell(filled, "top", "name"))
    filled.view.picked.emit("pins", False)
    assert tree.isExpanded(cell(filled, "top", "name"))


def test_a_closed_group_stays_closed_through_an_edit(filled):
    tree = filled.ledger.tree
    tree.collapse(cell(filled, "top", "name"))
    filled.session.select(frozenset({"below"}))
    filled.add_shape("cylinder")
    assert not tree.isExpanded(cell(filled, "top", "name"))
    assert tree.isExpanded(cell(filled, "below", "name"))


def test_the_line_under_the_pointer_lights_up_its_part(filled):
    tree = filled.ledger.tree
    tree.entered.emit(cell(filled, "hub", "mass"))
    assert filled.view._picture.emphasis.hovered == "hub"
    tree.hovered.emit("")
    assert filled.view._picture.emphasis.hovered is None


def test_a_deleted_line_is_selected_no_more_and_undo_of_an_addition_clears_the_page(filled):
    filled.add_shape("cylinder")
    filled.undo()
    assert filled.session.selected == frozenset()
    assert shown_selected(filled) == set()
