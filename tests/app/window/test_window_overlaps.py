"""Overlaps in the window: looked for once the document rests, listed among the checks, lit up, marked as meant."""

from __future__ import annotations

import threading
from dataclasses import replace

import pytest
from PySide6.QtTest import QTest
from window_driver import solid

from app.window import overlap_watch
from core.assembly import Assembly
from core.errors import Cancelled
from core.machine import Machine
from core.placement import Pose

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
