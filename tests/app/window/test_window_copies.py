"""One copy of a ring is taken apart from the Part menu, in one undo step."""

from __future__ import annotations

import pytest

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtWidgets import QApplication
from window_driver import choose, dialog, enter, field, names, trigger

from app.window.fields import ChoiceField

pytestmark = pytest.mark.gui


def test_a_copy_of_a_ring_becomes_a_part_of_its_own_and_undo_puts_it_back(filled):
    mass = float(filled.session.assembly.total.mass)
    filled.session.select(frozenset({"pins"}))
    trigger(filled, "Part", "Take one copy apart…")
    box = dialog(filled)
    assert box.labelText() == "Copy of pins that becomes a part of its own, 1 to 6:"
    box.setIntValue(2)
    box.accept()
    assert names(filled)[:5] == ["top", ".plate", ".hub", ".pins", ".pins 2"]
    assert filled.session.assembly.node("pins").copies.count == 5
    assert float(filled.session.assembly.total.mass) == pytest.approx(mass, rel=1e-12)
    assert filled.session.history.undo_name == "Take copy 2 of pins apart"
    filled.undo()
    assert names(filled)[:5] == ["top", ".plate", ".hub", ".pins", "below"]


def test_without_a_part_selected_it_says_what_to_do(filled, qtbot):
    filled.session.select(frozenset({"top"}))
    trigger(filled, "Part", "Take one copy apart…")
    with qtbot.waitSignal(filled.session.refused) as told:
        dialog(filled).accept()
    assert told.args == ["Select one part with several copies first."]


def test_the_page_stays_where_it_was_scrolled_to_when_other_fields_are_called_for(filled):
    filled.session.select(frozenset({"hub"}))
    page = filled.part
    filled.pages.setCurrentWidget(page)
    QApplication.processEvents()
    pattern = next(box for box in page.findChildren(ChoiceField) if box.accessibleName() == "How it repeats")
    page.ensureWidgetVisible(pattern)
    scrolled = page.verticalScrollBar().value()
    assert scrolled > 0
    choose(pattern, "row")
    QApplication.processEvents()
    assert page.verticalScrollBar().value() == scrolled
    filled.session.select(frozenset({"plate"}))
    QApplication.processEvents()
    assert page.verticalScrollBar().value() == 0


def test_an_edit_of_a_pattern_is_named_as_other_edits_are(filled):
    filled.session.select(frozenset({"pins"}))
    filled.pages.setCurrentWidget(filled.part)
    enter(field(filled.part, "first copy at"), "15")
    assert filled.session.history.undo_name == "First copy at of pins: 15"
    enter(field(filled.part, "axis through z"), "2")
    assert filled.session.history.undo_name == "Axis through of pins: 2"
