"""Overlaps in the window: looked for once the document rests, listed among the checks, lit up, marked as meant."""

from __future__ import annotations

import threading
from dataclasses import replace

import pytest
from PySide6.QtTest import QTest
from window_driver import solid

from app.window import overlap_watch
from core.assembly import Assembly, Cut
from core.assembly.assembly import MeantOverlap
from core.errors import Cancelled
from core.machine import Machine
from core.material import Weighed
from core.placement import Pose
from core.shapes import Cylinder

pytestmark = pytest.mark.gui


def pressed() -> Assembly:
    """Return a bush in a plate that is 20 mm thick, 10 mm deep, and a box aside."""
    plate = solid("plate", "cylinder", diameter=400, length=20)
    bush = solid("bush", "box", (0, 0, 0.01), length_x=40, length_y=40, length_z=50)
    return Assembly("press fit", (plate, bush, solid("aside", "box", (0.5, 0, 0), length_x=40, length_y=40, length_z=50)))


@pytest.fixture
def soon(monkeypatch):
    """Let the document rest for a moment only."""
    monkeypatch.setattr(overlap_watch, "REST_MS", 10)


@pytest.fixture
def searched(soon, window, qtbot):  # noqa: ARG001  (it is made before the window)
    window.session.take(Machine(pressed()), None)
    qtbot.waitUntil(lambda: window.session.overlaps is not None)
    return window


def overlaps(window):
    return [finding for finding in window.session.findings if finding.check.name == "overlap"]


def choose_overlap(window):
    tree = window.checks.list
    for at in range(tree.topLevelItemCount()):
        item = tree.topLevelItem(at)
        item.setExpanded(True)
        for one in [item, *(item.child(row) for row in range(item.childCount()))]:
            if "penetrates it" in one.text(2):
                tree.setCurrentItem(one)
                return one
    pytest.fail("no overlap in the list")


def test_an_overlap_is_found_after_a_change_and_counted_among_the_checks(searched, qtbot):
    found = overlaps(searched)
    assert [(one.key, one.also, one.check.ok) for one in found] == [("plate", "bush", False), ("", "", True)]
    assert found[0].check.text.startswith("plate: bush penetrates it, 1.6e+04 mm³; counted twice: 0.1256 kg")
    assert "Checks  1" in searched.pages.tabText(searched.pages.indexOf(searched.checks))
    bush = searched.session.assembly.node("bush")

    up = replace(bush, pose=Pose((0, 0, 0.02)))
    searched.session.edit("Move bush", lambda before: before.replaced(up))
    assert searched.session.overlaps is None
    assert overlaps(searched) == []
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    assert [one.check.ok for one in overlaps(searched)] == [True]


def test_the_common_volume_is_lit_up_until_the_document_changes(searched, qtbot):
    assert searched.checks.overlap.isHidden()
    choose_overlap(searched)
    assert not searched.checks.overlap.isHidden()
    with qtbot.waitSignal(searched.session.found) as told:
        searched.checks.overlap.show_it.click()
    points = told.args[0].reshape(-1, 3)
    assert points.min(axis=0) == pytest.approx([-0.02, -0.02, 0.01], abs=1e-9)
    assert points.max(axis=0) == pytest.approx([0.02, 0.02, 0.02], abs=1e-9)
    with qtbot.waitSignal(searched.session.found) as told:
        searched.session.edit("Delete", lambda before: before.removed(("aside",)))
    assert len(told.args[0]) == 0


def test_a_press_fit_is_marked_as_meant_and_the_mark_can_be_undone(searched, qtbot):
    choose_overlap(searched)
    marks = searched.checks.overlap.marks.actions()
    assert [mark.text() for mark in marks] == ["Meant, and carried by plate", "Meant, and carried by bush", "Meant"]
    marks[0].trigger()
    assert searched.session.assembly.meant_overlap("bush", "plate").carried_by == "plate"
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    assert all(one.check.ok for one in overlaps(searched))
    choose_overlap(searched)
    marks = searched.checks.overlap.marks.actions()
    assert marks[-1].text() == "Not meant any more"
    assert searched.session.history.undo_name == "Mark the overlap of plate and bush as meant"
    searched.undo()
    assert searched.session.assembly.meant == ()


def count_once(window, words):
    row = window.checks.overlap
    (action,) = [one for one in row.carriers.actions() if one.text() == words]
    action.trigger()


def test_one_click_cuts_the_carrier_out_of_the_other_and_one_undo_puts_it_back(searched, qtbot):
    before = searched.session.assembly.total.mass
    searched.session.edit("Mark", lambda assembly: assembly.with_meant(MeantOverlap("plate", "bush", "bush")))
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    marked = searched.session.assembly
    choose_overlap(searched)
    assert [one.text() for one in searched.checks.overlap.carriers.actions()] == [
        "Take bush, which carries it, out of plate", "Take plate out of bush",
    ]
    count_once(searched, "Take bush, which carries it, out of plate")
    qtbot.waitUntil(lambda: searched.session.assembly is not marked)
    assert searched.session.history.undo_name == "Count it once: take bush out of plate"
    density = searched.session.assembly.node("plate").driver.mass_of(1.0)
    assert before - searched.session.assembly.total.mass == pytest.approx(density * 0.04 * 0.04 * 0.01, rel=1e-9)
    assert [cut.name for cut in searched.session.assembly.node("plate").cuts] == ["room of bush"]
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    assert searched.session.overlaps.found == ()
    searched.undo()
    assert searched.session.assembly is marked


def test_what_cannot_be_counted_once_is_refused_below_the_buttons(searched, qtbot):
    hollow = Cut("bore", "bore", Cylinder(0.01, 0.05))
    searched.session.edit("Bore", lambda assembly: assembly.inserted_cut(hollow, "bush"))
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    before, row = searched.session.assembly, searched.checks.overlap
    choose_overlap(searched)
    assert row.told.isHidden()
    count_once(searched, "Take bush out of plate")
    assert not row.once.isEnabled()
    qtbot.waitUntil(row.once.isEnabled)
    assert not row.told.isHidden()
    assert row.told.text().startswith("bush, bore: it has a cut of its own where the two meet")
    assert searched.session.assembly is before


def test_a_weighed_part_is_said_to_keep_its_mass(searched, qtbot):
    plate = replace(searched.session.assembly.node("plate"), driver=Weighed(6.0))
    searched.session.edit("Weigh", lambda assembly: assembly.replaced(plate))
    qtbot.waitUntil(lambda: searched.session.overlaps is not None)
    choose_overlap(searched)
    assert searched.checks.overlap.told.text() == "The weighed mass of plate stays: it is that of the finished part."


def test_a_search_that_is_overtaken_by_a_change_is_stopped(soon, window, qtbot, monkeypatch):  # noqa: ARG001
    stopped = threading.Event()

    def endless(_assembly, progress):
        progress.begin(2)
        while not stopped.wait(0.01):
            try:
                progress.advance(0)
            except Cancelled:
                stopped.set()
                raise

    monkeypatch.setattr(overlap_watch, "overlaps_of", endless)
    window.session.take(Machine(pressed()), None)
    QTest.qWait(100)
    monkeypatch.undo()
    window.session.edit("Delete", lambda before: before.removed(("aside",)))
    qtbot.waitUntil(stopped.is_set)
    qtbot.waitUntil(lambda: window.session.overlaps is not None, timeout=4000)
