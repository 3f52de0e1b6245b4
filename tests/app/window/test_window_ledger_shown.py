"""The ledger as it is shown: units, decimal mark, columns, foot, long ledgers, the status line."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QApplication
from window_driver import (
    cell,
    choose,
    dial,
    solid,
    text_of,
    type_cell,
)

from app.window.ledger.columns import COLUMNS, INDEX
from app.window.style import Words
from core.assembly import Assembly
from core.machine import Machine

pytestmark = pytest.mark.gui
MOVE = Qt.DropAction.MoveAction


def node(window, key):
    return window.session.assembly.node(key)


def is_editing(window):
    return window.ledger.tree.state() == window.ledger.tree.State.EditingState


def words_below_the_cell(window):
    return [label.text() for label in window.ledger.tree.viewport().findChildren(Words) if label.isVisible()]


# --- showing ----------------------------------------------------------------------------------------------------


def test_units_change_every_figure_and_heading_and_no_value(filled):
    before = filled.session.assembly
    kilograms = float(text_of(filled, "plate", "mass"))
    choose(filled.actions_.units, "in lb lb·in²")
    lines = filled.ledger.tree.lines
    assert lines.headerData(INDEX["mass"], Qt.Orientation.Horizontal) == "Mass\nlb"
    assert lines.headerData(INDEX["inertia"], Qt.Orientation.Horizontal) == "J about Spindle\nlb·in²"
    assert float(text_of(filled, "plate", "mass")) == pytest.approx(kilograms / 0.45359237, rel=1e-3)
    assert "lb·in²" in filled.totals.text()
    assert filled.session.assembly is before
    assert not filled.actions_.undo.isEnabled()
    from app.window.settings import Settings

    assert Settings().units.name == "in lb lb·in²"


def test_the_decimal_mark_changes_what_is_shown_and_is_remembered(filled):
    filled.actions_.marks[","].trigger()
    assert text_of(filled, "ring", "mass") == "1,200"
    assert "," in filled.totals.text()
    from app.window.settings import Settings

    assert Settings().decimal_mark == ","
    filled.actions_.marks["."].trigger()
    assert text_of(filled, "ring", "mass") == "1.200"


def test_columns_are_chosen_moved_and_remembered_with_their_foot(filled):
    menu = filled.ledger.columns
    menu.aboutToShow.emit()
    assert [action.text() for action in menu.actions()] == [
        column.heading.format(axis="Spindle") for column in COLUMNS[1:]
    ]
    assert [action.isChecked() for action in menu.actions()] == [column.at_first for column in COLUMNS[1:]]
    menu.actions()[INDEX["x"] - 1].trigger()
    filled.ledger.tree.header().moveSection(filled.ledger.tree.header().visualIndex(INDEX["share"]), 1)
    filled.ledger.tree.header().resizeSection(INDEX["name"], 333)
    state = filled.ledger.save_columns()
    menu.actions()[INDEX["x"] - 1].trigger()
    assert not filled.ledger.tree.isColumnHidden(INDEX["x"])
    filled.ledger.restore_columns(state)
    menu.aboutToShow.emit()
    assert not menu.actions()[INDEX["x"] - 1].isChecked()
    for tree in (filled.ledger.tree, filled.ledger.foot):
        assert tree.isColumnHidden(INDEX["x"])
        assert tree.header().visualIndex(INDEX["share"]) == 1
        assert tree.header().sectionSize(INDEX["name"]) == 333


def test_every_figure_of_the_foot_stands_below_its_column_beside_a_scroll_bar(window, qtbot):
    window.session.take(Machine(Assembly("long", tuple(solid(f"pin {at}", "cylinder", diameter=9, length=9) for at in range(300)))), None)
    window.resize(1280, 720)
    qtbot.waitUntil(window.ledger.tree.verticalScrollBar().isVisible)
    QApplication.processEvents()
    tree, foot = window.ledger.tree, window.ledger.foot
    for at in range(len(COLUMNS)):
        assert tree.columnViewportPosition(at) == foot.columnViewportPosition(at)
        assert tree.columnWidth(at) == foot.columnWidth(at)
    assert not tree.horizontalScrollBar().isVisible()
    last = tree.mapToGlobal(QPoint(tree.columnViewportPosition(10) + tree.columnWidth(10), 0)).x()
    assert last <= window.mapToGlobal(QPoint(1280, 0)).x()


def test_three_hundred_lines_are_edited_at_once(window):
    window.session.take(Machine(Assembly("long", tuple(solid(f"pin {at}", "cylinder", diameter=9, length=9) for at in range(300)))), None)
    type_cell(window, "pin 250", "count", "3")
    assert window.session.ledger.total.mass == pytest.approx(302 * 7850 * math.pi * 0.0045**2 * 0.009, rel=1e-12)


def test_very_long_names_are_cut_off_and_read_whole_in_the_tool_tip(filled):
    long = "a name " * 60
    filled.session.edit("long", lambda before: before.replaced(replace(before.node("hub"), name=long.strip())))
    assert cell(filled, "hub", "name").data(Qt.ItemDataRole.ToolTipRole) == long.strip()
    assert filled.minimumSizeHint().width() <= 1280


def test_a_part_without_mass_is_no_row_of_dashes_in_the_status_line(window):
    window.add_shape("cylinder")
    assert window.totals.text().startswith("No mass is known yet")


def test_the_status_line_says_mass_inertia_and_checks_and_what_to_do_when_empty(window):
    assert "add a shape" in window.totals.text()
    window.session.take(Machine(dial()), None)
    total = window.session.ledger.total
    said = window.totals.text().split("   ·   ")
    assert float(said[0].split()[0]) == pytest.approx(total.mass, rel=1e-3)
    assert said[1].startswith("J about Spindle ")
    assert float(said[1].split()[3]) == pytest.approx(total.inertia, rel=1e-3)
    failed = sum(not finding.check.ok for finding in window.session.findings)
    assert failed > 0
    assert said[2].startswith(f"{failed} check")
    assert window.pages.tabText(window.pages.indexOf(window.checks)) == f"Checks  {failed}"
