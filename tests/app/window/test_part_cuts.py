"""Taking shapes out of parts in the window: the Part page lists, makes and edits cuts."""

from __future__ import annotations

import math

import pytest
from PySide6.QtWidgets import QPushButton
from window_driver import dial, enter

from app.window.fields import QuantityField
from app.window.pages.part_cuts import CutsSection
from core.machine import Machine

pytestmark = pytest.mark.gui
ALUMINIUM_OR_STEEL = 7850.0


@pytest.fixture
def plate(window):
    """Show the dial with its plate selected, and return the section of its cuts."""
    window.session.take(Machine(dial()), None)
    window.session.select(frozenset({"plate"}))
    window.pages.setCurrentWidget(window.part)
    return lambda: next(section for section in window.part._sections if isinstance(section, CutsSection))


def field(window, label):
    return next(each for each in window.part.findChildren(QuantityField) if each.line.accessibleName() == label)


def test_a_bore_is_taken_out_made_to_measure_and_undone_step_by_step(window, plate):
    before = window.session.ledger.total.mass
    plate().take_out("cylinder")
    assert window.session.history.undo_name == "Cut a cylinder out of plate"
    assert len(window.session.selected) == 1
    enter(field(window, "diameter").line, "60 mm")
    assert window.session.history.undo_name == "diameter of bore: 60 mm"
    bore = ALUMINIUM_OR_STEEL * math.pi / 4 * 0.06**2 * 0.02
    assert window.session.ledger.total.mass == pytest.approx(before - bore, rel=1e-12)
    window.undo()
    window.undo()
    assert window.session.ledger.total.mass == pytest.approx(before, rel=1e-15)


def test_a_ring_of_holes_is_one_cut(window, plate):
    plate().take_out("cylinder")
    cut = window.session.assembly.node("plate").cuts[0]
    enter(field(window, "position x").line, "150")
    enter(field(window, "quantity").line, "1")
    window.part._sections[-1]._pattern.setCurrentIndex(1)
    window.part._sections[-1]._pattern.activated.emit(1)
    enter(field(window, "quantity").line, "8")
    line = next(line for line in window.session.ledger.lines if line.key == cut.key)
    one = ALUMINIUM_OR_STEEL * float(cut.shape.moments().mass)
    assert line.mass == pytest.approx(-8 * one, rel=1e-12)


def test_a_cut_that_takes_everything_is_refused_in_place_and_the_old_one_stays(window, plate):
    plate().take_out("cylinder")
    before = window.session.assembly
    diameter = field(window, "diameter")
    enter(diameter.line, "1000")
    assert window.session.assembly is before
    assert "nothing" in diameter.wrong.text()


def test_the_page_of_a_cut_leads_back_to_its_part_and_the_parts_page_to_its_cuts(window, plate):
    plate().take_out("box")
    key = next(iter(window.session.selected))
    next(each for each in window.part.findChildren(QPushButton) if each.text() == "Back to the part").click()
    assert window.session.selected == frozenset({"plate"})
    buttons = window.part.findChildren(QPushButton)
    next(each for each in buttons if each.accessibleName() == "Edit the cut pocket").click()
    assert window.session.selected == frozenset({key})
