"""What is copied lands in a spreadsheet's cells as numbers; the sheet's choices; the checks page."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from window_driver import (
    choose,
    choose_cells,
    clipboard,
    keys,
    pasted,
    trigger,
)

from app.window.pages.values import COPY, LABEL, VALUE
from core.assembly import findings_of
from core.handover import Entry
from core.quantity import UNITS

pytestmark = pytest.mark.gui
same = partial(pytest.approx, rel=1e-14)  # two sums of the same terms
CTRL = Qt.KeyboardModifier.ControlModifier


def copy(window, extra=Qt.KeyboardModifier.NoModifier):
    QTest.keyClick(window.ledger.tree, Qt.Key.Key_C, CTRL | extra)


def line(window, key):
    return next(line for line in window.session.ledger.lines if line.key == key)


@pytest.fixture
def offset(filled):
    """Move the hub to negative, long coordinates, so that signs and digits show."""
    hub = filled.session.assembly.node("hub")
    moved = replace(hub, pose=replace(hub.pose, position=(-0.1234567891234, 1 / 3, -2.5e-7)))
    filled.session.edit("move", lambda before: before.replaced(moved))
    return filled


def test_one_cell_is_copied_as_a_bare_number_at_full_precision(offset):
    choose_cells(offset, ("hub", "x"))
    copy(offset)
    assert "\t" not in clipboard()
    assert float(clipboard()) == pytest.approx(line(offset, "hub").centre[0] * 1000, rel=1e-15)
    assert clipboard().startswith("-")
    assert offset.told.text() == f"Copied the selected cells: {clipboard().strip()}"


def test_a_block_is_rows_of_tab_separated_cells_in_the_order_shown(offset):
    columns = ("name", "count", "mass", "x", "inertia")
    choose_cells(offset, *[(key, column) for key in ("pins", "hub") for column in columns])
    copy(offset)
    rows = pasted()
    assert [row[0] for row in rows] == ["hub", "pins"]
    for row, key in zip(rows, ("hub", "pins"), strict=True):
        shown = line(offset, key)
        assert row[1:] == [shown.count, shown.mass, pytest.approx(shown.centre[0] * 1000, rel=1e-15, abs=1e-300), shown.inertia]


def test_cells_between_chosen_ones_are_left_empty_so_that_the_block_stays_a_block(filled):
    choose_cells(filled, ("plate", "mass"), ("hub", "inertia"))
    copy(filled)
    rows = pasted()
    assert rows == [[line(filled, "plate").mass, ""], ["", line(filled, "hub").inertia]]


def test_headings_are_copied_with_their_units(filled):
    choose_cells(filled, ("plate", "name"), ("plate", "mass"), ("plate", "inertia"))
    copy(filled, Qt.KeyboardModifier.ShiftModifier)
    assert pasted()[0] == ["Part", "Mass (kg)", "J about Spindle (kg·m²)"]
    assert pasted()[1] == ["plate", line(filled, "plate").mass, line(filled, "plate").inertia]


def test_the_totals_are_copied_from_the_foot(filled):
    filled.ledger.foot.setFocus()
    filled.ledger.foot.selectAll()
    filled.copy_with_headings()
    row = dict(zip(*pasted(), strict=True))
    assert row["Part"] == "TOTAL"
    assert row["Mass (kg)"] == filled.session.ledger.total.mass


@pytest.mark.parametrize("units", ["mm kg kg·m²", "in lb lb·in²", "SI"])
@pytest.mark.parametrize("mark", [".", ","])
def test_a_spreadsheet_reads_every_figure_in_any_unit_and_with_either_mark(offset, mark, units):
    if units != "mm kg kg·m²":
        choose(offset.actions_.units, units)
    offset.actions_.marks[mark].trigger()
    columns = ("mass", "x", "y", "z", "own", "transfer", "inertia", "share")
    choose_cells(offset, *[(key, column) for key in keys(offset) for column in columns])
    offset.copy()
    figures = [cell for row in pasted(mark) for cell in row]
    assert len(figures) == len(keys(offset)) * len(columns)
    assert figures[-len(columns) :] == [""] * len(columns)  # the cover, whose mass is not set
    assert all(isinstance(cell, float) for cell in figures[: -len(columns)])
    assert set(clipboard()) <= set(f"0123456789-E{mark}\t\n")
    masses = [row[0] for row in pasted(mark)]
    unit = offset.session.units["mass"]
    assert masses[1] == pytest.approx(unit.from_si(line(offset, "plate").mass), rel=1e-15)


def test_text_that_looks_like_a_formula_stays_text(filled):
    hub = replace(filled.session.assembly.node("hub"), name="=1+1")
    filled.session.edit("rename", lambda before: before.replaced(hub))
    choose_cells(filled, ("hub", "name"), ("hub", "x"))
    copy(filled)
    assert not clipboard().startswith("=")
    assert "=1+1" in clipboard()


def test_copying_nothing_leaves_the_clipboard_alone_and_says_so(filled):
    QGuiApplication.clipboard().setText("kept")
    filled.ledger.tree.setFocus()
    filled.ledger.tree.clearSelection()
    copy(filled)
    assert clipboard() == "kept"
    assert "Nothing is selected" in filled.told.text()


def test_ctrl_j_copies_the_inertia_about_the_drive_axis(filled):
    QTest.keyClick(filled, Qt.Key.Key_J, CTRL)
    assert float(clipboard()) == filled.session.ledger.total.inertia
    assert filled.told.text() == f"Copied {clipboard()} (J about Spindle in kg·m²)"
    choose(filled.actions_.units, "in lb lb·in²")
    filled.actions_.marks[","].trigger()
    trigger(filled, "Hand-over", "Copy J about the drive axis")
    inertia = UNITS["lb·in²"].from_si(filled.session.ledger.total.inertia)
    assert float(clipboard().replace(",", ".")) == pytest.approx(inertia, rel=1e-15)


def test_ctrl_j_in_an_empty_document_copies_nothing_and_says_so(window):
    QGuiApplication.clipboard().setText("kept")
    window.copy_inertia()
    assert clipboard() == "kept"
    assert "no part has a mass" in window.told.text()


# --- the sheet --------------------------------------------------------------------------------------------------


def rows(window):
    return {row.symbol: at for at, row in enumerate(window.sheet.table.values.rows) if isinstance(row, Entry)}


def entry(window, symbol):
    return window.sheet.table.values.rows[rows(window)[symbol]]


def test_an_empty_sheet_says_what_to_do_next(window):
    assert not window.sheet.table.isVisible()
    assert window.sheet.told.text().startswith("Nothing to hand over yet. Add a shape")
    QGuiApplication.clipboard().setText("kept")
    window.copy_sheet()
    assert clipboard() == "kept"
    window.add_shape("cylinder")
    window.pages.setCurrentWidget(window.sheet)
    assert window.sheet.table.isVisible()


def test_a_click_on_copy_and_return_copy_one_value(filled):
    table = filled.sheet.table
    at = filled.sheet.table.values.index(rows(filled)["J"], COPY)
    table.scrollTo(at)
    QTest.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, pos=table.visualRect(at).center())
    assert float(clipboard()) == same(filled.session.ledger.total.inertia)
    assert filled.told.text() == f"Copied {clipboard()} (J in kg·m²)"
    table.setFocus()
    table.setCurrentIndex(filled.sheet.table.values.index(rows(filled)["m"], VALUE))
    QTest.keyClick(table, Qt.Key.Key_Return)
    assert float(clipboard()) == same(filled.session.ledger.total.mass)


def test_selected_values_are_copied_one_below_the_other(filled):
    table = filled.sheet.table
    table.setFocus()
    for symbol in ("m", "J"):
        table.selectionModel().select(
            filled.sheet.table.values.index(rows(filled)[symbol], 0),
            table.selectionModel().SelectionFlag.Select | table.selectionModel().SelectionFlag.Rows,
        )
    QTest.keyClick(table, Qt.Key.Key_C, CTRL)
    total = filled.session.ledger.total
    assert pasted() == [[same(total.inertia)], [same(total.mass)]]
    assert filled.told.text().startswith("Copied 2 values: ")


def test_the_whole_sheet_is_name_value_unit_in_columns(offset):
    filled = offset
    filled.sheet.copy_all.click()
    table = pasted()
    assert table[1][:3] == ["Name", "Value", "Unit"]
    assert len({len(row) for row in table}) == 1
    value = {row[0]: row[1] for row in table}
    unit = {row[0]: row[2] for row in table}
    moment = "Moment of inertia about the drive axis Spindle"
    assert value[moment] == same(filled.session.ledger.total.inertia)
    assert unit[moment] == "kg·m²"
    assert value["Mass"] == same(filled.session.ledger.total.mass)
    entries = [row for row in filled.sheet.table.values.rows if isinstance(row, Entry)]
    assert all(isinstance(value[row.label], float) for row in entries)
    assert any(value[row.label] < 0 for row in entries)
    assert filled.told.text().startswith("Copied the sheet: ")


def test_the_products_change_sign_and_label_with_the_convention_and_nothing_else_does(offset):
    tensor = {symbol: entry(offset, symbol) for symbol in rows(offset)}
    choose(offset.sheet.products, "product integrals, +∫xy dm")
    integral = {symbol: entry(offset, symbol) for symbol in rows(offset)}
    tensor_products = {name: value for name, value in tensor.items() if name not in integral}
    integral_products = {name: value for name, value in integral.items() if name not in tensor}
    assert len(tensor_products) == len(integral_products) == 3
    for name, product in tensor_products.items():
        other = integral_products[name.replace("I", "P", 1)]
        assert product.si == -other.si != 0
        assert "−∫" in product.label
        assert "+∫" in other.label
    for name in tensor.keys() & integral.keys():
        assert tensor[name].si == integral[name].si


def test_the_tensor_moves_with_its_point_and_turns_with_its_axes(offset):
    total = offset.session.assembly.total
    about_centre = total.inertia_about_centre
    assert entry(offset, "Ixx").si == pytest.approx(about_centre[0, 0], rel=1e-12)
    choose(offset.sheet.about, "document's origin")
    transfer = total.mass * (total.centre[1] ** 2 + total.centre[2] ** 2)
    moved = next(row for row in offset.sheet.table.values.rows if isinstance(row, Entry) and row.symbol.startswith("Ixx"))
    assert moved.si == pytest.approx(about_centre[0, 0] + transfer, rel=1e-12)
    assert "document's origin" in moved.label
    choose(offset.sheet.about, "centre of mass")
    choose(offset.sheet.along, "principal axes")
    diagonal = [row.si for row in offset.sheet.table.values.rows if isinstance(row, Entry) and row.symbol in {"Ixx", "Iyy", "Izz"}]
    moments = [row.si for row in offset.sheet.table.values.rows if isinstance(row, Entry) and row.symbol in {"I1", "I2", "I3"}]
    assert moments == same(list(total.principal.moments))
    assert not diagonal or diagonal == same(moments)


def test_the_sheet_of_the_selected_line_follows_the_selection(filled):
    choose(filled.sheet.of, "selected line")
    assert "Select one line" in filled.sheet.told.text()
    filled.session.select(frozenset({"hub"}))
    assert entry(filled, "m").si == pytest.approx(line(filled, "hub").mass, rel=1e-12)
    filled.session.select(frozenset({"plate"}))
    assert entry(filled, "m").si == pytest.approx(line(filled, "plate").mass, rel=1e-12)


def test_the_sheet_names_the_unit_the_basis_and_the_caution(filled):
    at = rows(filled)["J"]
    assert filled.sheet.table.values.index(at, LABEL).data() == "Moment of inertia about the drive axis Spindle"
    assert filled.sheet.table.values.index(at, 3).data() == "kg·m²"
    assert "cover" in filled.sheet.told.text()
    assert "responsible engineer" in filled.sheet.told.text()


# --- checks -----------------------------------------------------------------------------------------------------


def test_failed_checks_come_first_and_a_click_goes_to_the_part(filled):
    filled.pages.setCurrentWidget(filled.checks)
    tree = filled.checks.list
    words = [tree.topLevelItem(at).text(0) for at in range(tree.topLevelItemCount())]
    assert words[0] == "look"
    assert words[-1].endswith("sound")
    assert tree.topLevelItem(0).text(1) == "cover"
    place = tree.visualItemRect(tree.topLevelItem(0)).center()
    QTest.mouseClick(tree.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert filled.session.selected == {"cover"}
    tree.setFocus()
    QTest.keyClick(tree, Qt.Key.Key_C, CTRL)
    assert clipboard().split("\t")[:2] == ["look", "cover"]


def test_the_sound_checks_stay_folded_or_unfolded_through_an_edit(filled):
    tree = filled.checks.list
    fold = tree.topLevelItem(tree.topLevelItemCount() - 1)
    assert not fold.isExpanded()
    fold.setExpanded(True)
    filled.add_shape("cylinder")
    assert tree.topLevelItem(tree.topLevelItemCount() - 1).isExpanded()


def test_a_document_without_faults_says_so(filled):
    filled.session.edit("delete", lambda before: before.removed(("cover",)))
    assert filled.checks.head.text() == "All checks are sound."
    fold = filled.checks.list.topLevelItem(0)
    fold.setExpanded(True)
    assert fold.text(0) == f"{len(findings_of(filled.session.assembly))} sound"
    assert fold.childCount() == len(findings_of(filled.session.assembly))
    assert filled.pages.tabText(filled.pages.indexOf(filled.checks)) == "Checks"
    assert filled.totals.text().endswith("no check needs a look")
