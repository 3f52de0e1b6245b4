"""Seats in the window: chosen from lists or pointed at in the view, edited, refused in place, removed, undone."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import QPointF, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QPushButton
from window_driver import choose, enter, field, solid, text_of, write_stl

from app.window.pages.part_seat import SeatSection
from core.assembly import Assembly, Group, MeshBody, Part
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import with_seat
from core.machine import Machine
from core.material import NotSet
from core.mesh import MeshAsset
from core.placement import Pose
from core.shapes import Cylinder

if TYPE_CHECKING:
    from app.window.main import MainWindow


def assembly():
    plate = solid("plate", "cylinder", diameter=400, length=20)
    hub = solid("hub", "tube", (0.3, 0.1, 0.1), outer_diameter=120, bore=40, length=60)
    return Assembly("t", (plate, hub, solid("block", "box", (-0.3, 0.2, 0), length_x=80, length_y=60, length_z=40)))


ON_PLATE = Seat(Anchor("hub", "face −z"), Anchor("plate", "face +z"))


@pytest.fixture
def parted(window: MainWindow) -> MainWindow:
    window.session.take(Machine(assembly()), None)
    select(window, "hub")
    return window


def select(window, key):
    window.session.select(frozenset({key}))
    window.pages.setCurrentWidget(window.part)
    QApplication.processEvents()


def seat_section(window) -> SeatSection:
    return next(section for section in window.part._sections if isinstance(section, SeatSection))


def button(window, words) -> QPushButton:
    return next(each for each in window.part.findChildren(QPushButton) if each.text() == words and not each.isHidden())


def pick_entry(combo, words):
    """Open a list, and choose an entry of it by its words."""
    combo._fill()
    choose(combo, words)


def seat_from_lists(window, own, line, place):
    section = seat_section(window)
    pick_entry(section.own, own)
    pick_entry(section.line, line)
    if place:
        pick_entry(section.place, place)


def node(window, key="hub"):
    return window.session.assembly.node(key)


def spot_of(window, point):
    x, y, _ = window.view.camera.project(np.asarray(point), window.view.frame_size)
    return QPointF(x, y).toPoint()


def click(window, point):
    QTest.mouseClick(window.view, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, spot_of(window, point))


def test_a_line_is_seated_from_lists_in_one_step_and_undone_in_one(parted):
    assert not seat_section(parted).act.isEnabled()
    seat_from_lists(parted, "face −z", "plate", "face +z")
    assert node(parted).seat is None
    button(parted, "Seat it").click()
    assert node(parted).seat == ON_PLATE
    assert node(parted).pose == Pose((0, 0, pytest.approx(0.02)))
    assert parted.session.history.undo_name == "Seat hub on face +z of plate"
    assert seat_section(parted)._says.text() == "Seated on face +z of plate; it follows."
    parted.undo()
    assert node(parted) == assembly().node("hub")
    assert button(parted, "Seat it")


def test_the_lists_name_all_lines_but_the_line_itself_and_all_axes(parted):
    section = seat_section(parted)
    section.line._fill()
    assert [section.line.itemText(at) for at in range(section.line.count())] == ["the axis Spindle", "plate", "block"]
    section.own._fill()
    assert {section.own.itemText(at) for at in range(section.own.count())} == {
        "face +z", "face −z", "rim +z", "rim −z", "axis z", "axis x", "axis y", "origin", "centre of mass",
    }


def test_a_list_is_searched_by_typing(parted):
    section = seat_section(parted)
    section.own.setFocus()
    section.own.setEditText("")
    QTest.keyClicks(section.own, "rim")
    assert section.own.completer().completionCount() == 2
    section.own.completer().popup().hide()
    section.own.setEditText("rim −z")
    section.own.lineEdit().editingFinished.emit()
    assert section.own.currentData() == Anchor("hub", "rim −z")
    section.own.setEditText("nothing like it")
    section.own.lineEdit().editingFinished.emit()
    assert section.own.currentText() == "rim −z"


def test_a_line_is_seated_on_an_axis_of_the_document(parted):
    seat_from_lists(parted, "axis z", "the axis Spindle", "")
    assert seat_section(parted).place.isHidden()
    button(parted, "Seat it").click()
    assert node(parted).pose == Pose((0, 0, pytest.approx(0.1)))
    assert node(parted).seat.target == Anchor("", "Spindle")


@pytest.fixture
def seated_hub(parted: MainWindow) -> MainWindow:
    parted.session.take(Machine(with_seat(assembly(), "hub", ON_PLATE)), None)
    select(parted, "hub")
    return parted


def test_offset_aside_and_turn_take_units_and_keep_what_was_typed(seated_hub):
    enter(field(seated_hub.part, "seat offset"), "1/8 in")
    enter(field(seated_hub.part, "seat aside u"), "30")
    enter(field(seated_hub.part, "seat turn"), "45")
    hub = node(seated_hub)
    assert hub.pose.position == pytest.approx((0.03, 0, 0.02 + 0.003175), rel=1e-14, abs=1e-15)
    assert hub.pose.turns == pytest.approx((0, 0, np.pi / 4), abs=1e-15)
    assert dict(hub.typed) == {"seat.offset": "1/8 in"}
    assert field(seated_hub.part, "seat offset").text() == "1/8 in"
    assert seated_hub.session.history.undo_name == "Seat turn of hub: 45"


def test_the_seated_line_follows_a_dimension_at_once(seated_hub):
    select(seated_hub, "plate")
    enter(field(seated_hub.part, "length"), "35")
    assert node(seated_hub).pose == Pose((0, 0, pytest.approx(0.035)))
    assert text_of(seated_hub, "hub", "z") == "65.00"
    seated_hub.undo()
    assert node(seated_hub).pose == Pose((0, 0, pytest.approx(0.02)))


def test_facing_the_same_way_turns_it_over(seated_hub):
    facing = seat_section(seated_hub)._facing
    choose(facing, "the same way, as faces that are flush")
    assert node(seated_hub).seat.facing == "along"
    assert node(seated_hub).pose.placement.turn[:, 2] == pytest.approx([0, 0, -1], abs=1e-15)


def test_another_place_moves_a_seated_line_at_once(seated_hub):
    pick_entry(seat_section(seated_hub).place, "face −z")
    assert node(seated_hub).seat.target == Anchor("plate", "face −z")
    assert node(seated_hub).pose.placement.apply((0, 0, 0.06)) == pytest.approx([0, 0, -0.06], abs=1e-15)


def test_another_line_waits_for_its_place(seated_hub):
    section = seat_section(seated_hub)
    pick_entry(section.line, "block")
    assert node(seated_hub).seat == ON_PLATE
    assert section.place.currentData() is None
    pick_entry(section.place, "face +z")
    assert node(seated_hub).seat.target == Anchor("block", "face +z")


def test_removing_the_seat_leaves_the_line_where_it_is(seated_hub):
    pose = node(seated_hub).pose
    button(seated_hub, "Remove the seat").click()
    assert node(seated_hub).seat is None
    assert node(seated_hub).pose is pose
    assert seated_hub.session.history.undo_name == "Remove the seat of hub"


def test_a_loop_is_refused_in_place_with_the_chain(seated_hub):
    select(seated_hub, "plate")
    seat_from_lists(seated_hub, "face −z", "hub", "face +z")
    before = seated_hub.session.assembly
    button(seated_hub, "Seat it").click()
    assert seated_hub.session.assembly is before
    section = seat_section(seated_hub)
    assert not section.wrong.isHidden()
    assert "plate → hub → plate" in section.wrong.text()


def test_the_position_of_a_seated_line_is_refused_in_place(seated_hub):
    line = field(seated_hub.part, "position x")
    enter(line, "50")
    assert node(seated_hub).pose == Pose((0, 0, pytest.approx(0.02)))
    assert line.text() == "50"
    assert any("a seated line stands where its seat says" in said.text() for said in words_of(seated_hub))


def words_of(window):
    from app.window.style import Words

    return [each for each in window.part.findChildren(Words) if each.isVisible()]


def test_two_clicks_in_the_view_seat_a_line(parted):
    button(parted, "Pick in the view").click()
    pointing = parted.seat_pointing
    assert pointing.is_on
    assert parted.placing.bar.isHidden()
    assert pointing.hint.text() == "Click a face, edge or axis of hub, or Escape"
    click(parted, (0.1, -0.1, 0.02))
    assert pointing._moving is None, "the plate is not the line to be seated"
    click(parted, (0.34, 0.1, 0.16))
    assert pointing._moving == Anchor("hub", "face +z")
    pointing.hover(QPointF(spot_of(parted, (0.1, -0.1, 0.02))))
    assert pointing.hint.text() == "hub by its face +z: click the place to seat it on, or Escape:  face +z of plate"
    assert len(parted.view._picture.found)
    click(parted, (0.1, -0.1, 0.02))
    assert not pointing.is_on
    assert not len(parted.view._picture.found)
    assert node(parted).seat == Seat(Anchor("hub", "face +z"), Anchor("plate", "face +z"))
    assert parted.session.selected == {"hub"}
    parted.undo()
    assert node(parted) == assembly().node("hub")


def test_escape_leaves_the_pointing_and_clicks_select_again(parted):
    button(parted, "Pick in the view").click()
    QTest.keyClick(parted.view, Qt.Key.Key_Escape)
    assert not parted.seat_pointing.is_on
    assert parted.seat_pointing.hint.isHidden()
    click(parted, (0.1, -0.1, 0.02))
    assert parted.session.selected == {"plate"}


def test_a_drag_turns_the_view_while_a_line_is_pointed_at(parted):
    button(parted, "Pick in the view").click()
    before = parted.view.camera.azimuth
    start = spot_of(parted, (0.34, 0.1, 0.16))
    QTest.mousePress(parted.view, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, start)
    for step in (10, 20, 30):
        QTest.mouseMove(parted.view, start + QPointF(step, 0).toPoint())
    QTest.mouseRelease(parted.view, Qt.MouseButton.LeftButton, Qt.KeyboardModifier.NoModifier, start + QPointF(30, 0).toPoint())
    assert parted.seat_pointing._moving is None
    assert parted.seat_pointing.is_on
    assert parted.view.camera.azimuth != before


def test_another_selection_and_another_document_end_the_pointing(parted):
    for end in (lambda: select(parted, "block"), parted.session.start_new):
        select(parted, "hub")
        parted.session.seat_wanted.emit("hub")
        assert parted.seat_pointing.is_on
        end()
        assert not parted.seat_pointing.is_on


def test_the_faces_of_a_large_mesh_are_found_in_the_background(parted, qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr("core.assembly.seats.datums.FOUND_AT_ONCE", 100)
    path = write_stl(tmp_path / "bar.stl", Cylinder(60.0, 200.0).facets(40).triangles)
    mesh = Part("mesh", "bar", MeshBody(MeshAsset.read(path), 1e-3), NotSet())
    parted.session.take(Machine(assembly().inserted(mesh)), None)
    select(parted, "mesh")
    section = seat_section(parted)
    section.own._fill()
    assert section.own.count() == 0
    assert section._looking.text() == "Looking for the faces of bar; open the list again in a moment."
    qtbot.waitUntil(lambda: section._task is None)
    assert section._looking.isHidden()
    pick_entry(section.own, "face −z")
    pick_entry(section.line, "plate")
    pick_entry(section.place, "face +z")
    button(parted, "Seat it").click()
    assert node(parted, "mesh").pose == Pose((0, 0, pytest.approx(0.02)))


def test_the_wheel_changes_no_list_that_has_not_the_focus(parted):
    section = seat_section(parted)
    assert section.own.focusPolicy() == Qt.FocusPolicy.StrongFocus
    assert {each.accessibleName() for each in (section.own, section.line, section.place)} == {
        "Seated by its place", "Seated on the line", "Seated on the place",
    }


def test_the_faces_of_a_large_mesh_are_looked_for_when_it_is_pointed_at(parted, qtbot, tmp_path, monkeypatch):
    monkeypatch.setattr("core.assembly.seats.datums.FOUND_AT_ONCE", 100)
    path = write_stl(tmp_path / "bar.stl", Cylinder(60.0, 200.0).facets(60).triangles)
    mesh = Part("mesh", "bar", MeshBody(MeshAsset.read(path), 1e-3), NotSet(), Pose((0.1, 0.25, 0.0)))
    parted.session.take(Machine(assembly().inserted(mesh)), None)
    select(parted, "mesh")
    parted.session.seat_wanted.emit("mesh")
    pointing, top = parted.seat_pointing, spot_of(parted, (0.105, 0.245, 0.2))
    pointing.hover(QPointF(top))
    assert pointing.hint.text().endswith("looking for the faces of bar …")
    qtbot.waitUntil(lambda: pointing._task is None)
    pointing.hover(QPointF(top))
    assert pointing.hint.text().endswith("face +z of bar")
    pointing.leave()


def test_a_group_is_seated_by_a_part_in_it_that_is_clicked(parted):
    arm = Group("arm", "arm", (assembly().node("hub"),))
    parted.session.take(Machine(assembly().removed(("hub",)).inserted(arm)), None)
    select(parted, "arm")
    section = seat_section(parted)
    section.own._fill()
    assert section.own.findText("hub: face +z") >= 0
    button(parted, "Pick in the view").click()
    click(parted, (0.34, 0.1, 0.16))
    click(parted, (0.1, -0.1, 0.02))
    assert node(parted, "arm").seat == Seat(Anchor("hub", "face +z"), Anchor("plate", "face +z"))
    assert node(parted, "hub").pose == assembly().node("hub").pose
    assert seat_section(parted).own.currentText() == "hub: face +z"
