"""Placing lines on the Part page: axis and angle, the document's frame, and a part's own axis on the drive axis."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtWidgets import QComboBox, QLabel, QPushButton
from scipy.spatial.transform import Rotation
from window_driver import choose, enter, field, solid, trigger

from app.window.manner import Manner
from app.window.settings import Settings
from app.window.style import Words
from core.assembly import Assembly, Cut, DriveAxis, Group
from core.assembly.fields import typed_for
from core.assembly.placing import standing_of
from core.machine import Machine
from core.placement import Pose
from core.shapes import SHAPES

pytestmark = pytest.mark.gui


def nested() -> Assembly:
    """Return a bar in a group in a group, both turned, and a drive axis that is tilted and away from the origin."""
    bar = solid("bar", "cylinder", (0.1, 0.2, 0.3), diameter=40, length=100)
    inner = Group("inner", "inner", (bar,), Pose((0, 0.5, 0), (0.5, 0, 0.4)))
    outer = Group("outer", "outer", (inner,), Pose((1, 2, 3), (0.1, -0.7, 2.0)))
    loose = solid("loose", "box", (0.5, 0, 0), length_x=100, length_y=200, length_z=300)
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.02, "length": 0.4}), Pose((0.05, 0.1, -0.05)))
    return Assembly("nested", (outer, replace(loose, cuts=(bore,))), (DriveAxis("Spindle", (0.3, 0.2, 0.1), (1, 2, 2)),))


@pytest.fixture
def page(window):
    window.session.take(Machine(nested()), None)
    window.pages.setCurrentWidget(window.part)

    def show(key):
        window.session.select(frozenset({key}))
        return window.part

    return show


def combo(page, name) -> QComboBox:
    return next(box for box in page.findChildren(QComboBox) if box.accessibleName() == name)


def button(page, words) -> QPushButton:
    return next(each for each in page.findChildren(QPushButton) if each.text() == words)


def shown(page, name) -> float:
    return float(field(page, name).text().replace("−", "-"))


def test_axis_and_angle_make_the_turn_that_they_name(window, page):
    part = page("bar")
    choose(combo(part, "How the turn is given"), "about one axis")
    assert [shown(part, f"axis {letter}") for letter in "xyz"] == [0, 0, 1]
    enter(field(part, "axis x"), "1")
    enter(field(part, "axis y"), "-2")
    # Without an angle nothing is turned yet, and the axis stays as it was typed.
    assert not window.session.history.past
    assert [shown(part, f"axis {letter}") for letter in "xyz"] == [1, -2, 1]
    enter(field(part, "angle about the axis"), "360/8")
    turned = window.session.assembly.node("bar").pose.placement.turn
    expected = Rotation.from_rotvec(np.pi / 4 * np.array([1, -2, 1]) / np.sqrt(6)).as_matrix()
    np.testing.assert_allclose(turned, expected, rtol=0, atol=1e-14)
    assert field(part, "angle about the axis").text() == "360/8"
    assert [shown(part, f"axis {letter}") for letter in "xyz"] == [1, -2, 1]
    assert window.session.history.undo_name == "Angle of bar: 360/8"
    window.session.undo()
    assert window.session.assembly.node("bar").pose == Pose((0.1, 0.2, 0.3))
    assert shown(part, "angle about the axis") == 0


@pytest.mark.parametrize(("angle", "axis", "turned"), [
    ("180", (0, 1, 0), 180), ("270", (0, 0, 1), 270), ("-90", (0, 1, 0), -90), ("3.14159265358979 rad", (1, 1, 0), 180)
])
def test_an_angle_is_shown_as_it_was_typed_and_otherwise_read_from_the_turn(window, page, angle, axis, turned):
    part = page("bar")
    choose(combo(part, "How the turn is given"), "about one axis")
    for letter, value in zip("xyz", (1, 1, 1), strict=True):
        enter(field(part, f"axis {letter}"), str(value))
    for letter, value in zip("xyz", axis, strict=True):
        enter(field(part, f"axis {letter}"), str(value))
    enter(field(part, "angle about the axis"), angle)
    expected = Rotation.from_rotvec(np.radians(turned) * np.array(axis) / np.linalg.norm(axis)).as_matrix()
    np.testing.assert_allclose(window.session.assembly.node("bar").pose.placement.turn, expected, rtol=0, atol=2e-14)
    assert field(part, "angle about the axis").text().replace("−", "-") == angle
    page("loose")
    part = page("bar")
    again = np.array([shown(part, f"axis {letter}") for letter in "xyz"])
    found = Rotation.from_rotvec(np.radians(shown(part, "angle about the axis")) * again).as_matrix()
    np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9)


def test_an_axis_without_a_direction_is_refused_in_place(window, page):
    part = page("bar")
    choose(combo(part, "How the turn is given"), "about one axis")
    line = field(part, "axis z")
    enter(line, "0")
    assert any("a direction needs a length" in each.text() for each in part.findChildren(Words) if each.isVisible())
    assert line.text() == "0"
    assert not window.session.history.past


def test_both_ways_say_the_same_turn(page):
    part = page("loose")
    enter(field(part, "turn about x"), "90")
    enter(field(part, "turn about z"), "90")
    choose(combo(part, "How the turn is given"), "about one axis")
    # Turns about x and then z by 90° are a third of a turn about the space diagonal.
    found = [shown(part, f"axis {letter}") for letter in "xyz"]
    np.testing.assert_allclose(np.abs(found), 1 / np.sqrt(3), rtol=1e-9)
    assert shown(part, "angle about the axis") == pytest.approx(120, rel=1e-9)
    assert not field(part, "turn about x").isVisible()


def test_numbers_in_the_documents_frame_are_shown_and_taken(window, page):
    part = page("bar")
    stands = standing_of(window.session.assembly, "bar")
    choose(combo(part, "Frame of the placement"), "the document")
    found = [shown(part, f"position {letter}") / 1000 for letter in "xyz"]
    np.testing.assert_allclose(found, stands.shift, rtol=1e-9)
    enter(field(part, "position y"), "2 m")
    after = standing_of(window.session.assembly, "bar")
    np.testing.assert_allclose(after.shift, [stands.shift[0], 2, stands.shift[2]], rtol=0, atol=1e-12)
    np.testing.assert_allclose(after.turn, stands.turn, rtol=0, atol=1e-12)
    assert window.session.history.undo_name == "Position y of bar in the document: 2 m"
    enter(field(part, "turn about x"), "0")
    enter(field(part, "turn about y"), "0")
    enter(field(part, "turn about z"), "30")
    after = standing_of(window.session.assembly, "bar")
    np.testing.assert_allclose(after.turn, Rotation.from_euler("z", 30, degrees=True).as_matrix(), rtol=0, atol=1e-12)
    np.testing.assert_allclose(after.shift, [stands.shift[0], 2, stands.shift[2]], rtol=0, atol=1e-12)


def test_what_was_typed_in_the_groups_frame_is_kept_through_a_look_at_the_documents(window, page):
    part = page("bar")
    enter(field(part, "position x"), "3 in + 2 mm")
    choose(combo(part, "Frame of the placement"), "the document")
    assert "in" not in field(part, "position x").text()
    choose(combo(part, "Frame of the placement"), "its group")
    assert field(part, "position x").text() == "3 in + 2 mm"
    assert typed_for(window.session.assembly.node("bar"), "position.0") == "3 in + 2 mm"


def test_an_outermost_line_offers_no_other_frame_and_a_cut_that_of_its_part(page):
    assert not combo(page("loose"), "Frame of the placement").isVisible()
    assert combo(page("bar"), "Frame of the placement").isVisible()
    part = page("bore")
    assert combo(part, "Frame of the placement").itemText(0) == "its part"
    choose(combo(part, "Frame of the placement"), "the document")
    assert shown(part, "position x") == pytest.approx(550, rel=1e-12)


@pytest.mark.parametrize("key", ["bar", "inner", "loose"])
def test_one_click_lays_a_parts_own_axis_on_a_tilted_axis_away_from_the_origin(window, page, key):
    part = page(key)
    before = window.session.assembly
    button(part, "Lay its axis on the drive axis").click()
    after = window.session.assembly
    point, unit = np.array([0.3, 0.2, 0.1]), np.array([1, 2, 2]) / 3
    body = after.node("bar" if key != "loose" else "loose")
    row = [each.key for each in after.table.parts].index(body.key)
    centre = after.table.moments.centre[row] - point
    if key == "loose":
        # Its own axis is told from the body before its cuts.
        centre = standing_of(after, key).apply(body.body.solid.centre) - point
    np.testing.assert_allclose(centre - (centre @ unit) * unit, 0, atol=1e-12)
    assert len(window.session.history.past) == 1
    name = {"bar": "its axis z", "inner": "its principal axis", "loose": "its principal axis"}[key]
    assert window.session.history.undo_name.startswith(f"Lay {key} on Spindle by {name}")
    window.session.undo()
    assert window.session.assembly is before


def test_the_menu_lays_all_selected_lines_and_says_what_lies_there_already(window, page):
    page("bar")
    window.session.select(frozenset({"bar", "inner", "loose"}))
    trigger(window, "Part", "Lay own axis on the drive axis")
    assert window.session.history.undo_name == "Lay 2 lines on Spindle"
    told = []
    window.session.said.connect(told.append)
    trigger(window, "Part", "Lay own axis on the drive axis")
    assert told == ["2 lines lie on Spindle already"]
    window.session.select(frozenset())
    trigger(window, "Part", "Lay own axis on the drive axis")
    assert told[-1] == "Nothing is selected that could be laid on the drive axis"
    assert len(window.session.history.past) == 1


def test_what_has_no_axis_is_refused_in_words(window):
    window.session.take(Machine(Assembly("d", (Group("g", "empty group"),))), None)
    window.session.select(frozenset({"g"}))
    trigger(window, "Part", "Lay own axis on the drive axis")
    assert any("empty group: it has no axis of its own" in each.text() for each in window.notice.findChildren(QLabel))
    assert not window.session.history.past


def test_the_manner_is_kept_for_the_next_session(window, page):
    part = page("bar")
    choose(combo(part, "How the turn is given"), "about one axis")
    choose(combo(part, "Frame of the placement"), "the document")
    assert Settings().manner == Manner(numbers_in="document", turn_given="axis")
    window.session.set_manner(Manner())
    assert Settings().manner == Manner()


@pytest.mark.parametrize(("name", "value"), [("along", "sideways"), ("length_step", -1.0), ("angle_step", float("nan"))])
def test_a_manner_that_cannot_be_is_as_if_never_set(window, name, value):
    window.settings._store.setValue(f"placing/{name}", value)
    assert Settings().manner == Manner()
    window.settings._store.remove(f"placing/{name}")
