"""The Balance page: inputs typed and refused, values copied, corrections made in one step, vectors drawn and told."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from window_driver import choose, clipboard, enter, field, pasted, solid, trigger

from app.window.pages.balance.page import INPUTS, PLOT, VALUES
from app.window.pages.balance.polar import PolarMark, PolarPicture, circles_of, is_drawn, reach_of
from app.window.pages.values import COPY
from core.assembly import Assembly
from core.drive import BalanceSettings, CorrectionPlane, DriveSettings
from core.handover import Entry
from core.machine import Machine

if TYPE_CHECKING:
    from pytestqt.qtbot import QtBot

    from app.window.main import MainWindow
    from app.window.pages.balance.page import BalancePage

pytestmark = pytest.mark.gui

RPM = np.pi / 30
TWO = (CorrectionPlane(0.02, 0.15), CorrectionPlane(0.10, 0.15))


def reel() -> Assembly:
    """A drum about the z axis, with a lug on it that throws it out of balance."""
    return Assembly("reel", (
        solid("drum", "cylinder", diameter=400, length=120),
        solid("lug", "box", (0.1, 0.05, 0.12), length_x=30, length_y=40, length_z=25),
    ))


def show(window: MainWindow, balance: BalanceSettings) -> BalancePage:
    window.session.take(Machine(reel(), DriveSettings(balance=balance)), None)
    window.pages.setCurrentWidget(window.balance)
    return window.balance


@pytest.fixture
def page(window: MainWindow) -> BalancePage:
    """Show the page for a rotor of which nothing is entered."""
    return show(window, BalanceSettings())


def wanted(window: MainWindow) -> BalanceSettings:
    return window.session.drive.balance


def click(button) -> None:
    QTest.mouseClick(button, Qt.MouseButton.LeftButton)


def amount(window: MainWindow) -> float:
    """The static unbalance, kg·m."""
    return window.session.machine.balance_answer.found.amount


def value(page: BalancePage, symbol: str) -> Entry:
    return next(row for row in page.values.values.rows if isinstance(row, Entry) and row.symbol == symbol)


# --- inputs ----------------------------------------------------------------------------------------------------------


def test_a_speed_is_typed_with_its_unit_and_kept_as_typed(window, page):
    enter(field(page, "service speed"), "50*60")
    assert wanted(window).speed == pytest.approx(3000 * RPM, rel=1e-15)
    assert dict(window.session.drive.typed)["balance.speed"] == "50*60"
    enter(field(page, "service speed"), "")
    assert wanted(window).speed is None


def test_a_grade_without_a_speed_is_refused_below_the_choice(window, page):
    choose(page.rotor.grade, "G 6.3")
    assert wanted(window).grade is None
    refused = [words.text() for words in page.rotor._refusals if words.isVisible()]
    assert refused == ["balance: a balance grade needs a service speed; read G 6.3 alone. Give the speed that the rotor runs at."]
    assert page.rotor.grade.currentText() == "none"
    enter(field(page, "service speed"), "3000")
    assert not any(words.isVisible() for words in page.rotor._refusals)
    choose(page.rotor.grade, "G 6.3")
    assert wanted(window).grade == 6.3


def test_a_grade_of_ones_own_is_typed(window, page):
    enter(field(page, "service speed"), "3000")
    choose(page.rotor.grade, "own number")
    enter(field(page, "own grade, mm/s"), "4")
    assert wanted(window).grade == 4.0
    assert page.rotor.grade.currentText() == "own number"
    choose(page.rotor.grade, "none")
    assert wanted(window).grade is None


def test_bearings_begin_at_the_ends_and_are_refused_at_one_place(window, page):
    click(page.bearings.give)
    assert wanted(window).bearings == (0.0, 0.145)
    enter(field(page, "bearing 2 at"), "0")
    assert wanted(window).bearings == (0.0, 0.145)
    assert "the two stations are one and the same" in page.bearings.second.wrong.text()
    enter(field(page, "bearing 2 at"), "2 in")
    assert wanted(window).bearings == (0.0, 0.0508)
    click(page.bearings.take)
    assert wanted(window).bearings is None
    assert not page.bearings.first.isVisible()


def test_planes_are_added_moved_and_taken_away(window, page):
    click(page.more.more)
    click(page.more.more)
    assert [plane.station for plane in wanted(window).planes] == [0.0, 0.145]
    assert not page.more.more.isVisible()
    enter(field(page, "plane 2, radius"), "175")
    assert wanted(window).planes[1].radius == 0.175
    enter(field(page, "plane 1, radius"), "-1")
    assert "the radius has to be more than 0" in page.planes[0].radius.wrong.text()
    click(page.planes[0].take)
    assert wanted(window).planes == (CorrectionPlane(0.145, 0.175),)
    assert page.planes[0].radius.line.text() == "175"
    assert not page.planes[1].station.isVisible()


def test_a_named_dimension_in_a_station_follows_its_name(window, page):
    from core.assembly.names import NamedDimension
    from core.quantity import Kind

    named = NamedDimension("end", "100 mm", Kind.LENGTH, 0.1)
    window.session.edit("name", lambda before: replace(before, names=(named,)))
    click(page.more.more)
    enter(field(page, "plane 1, station"), "end/2")
    assert wanted(window).planes[0].station == pytest.approx(0.05, rel=1e-15)
    window.session.edit("name", lambda before: replace(before, names=(replace(named, value=0.08, text="80 mm"),)))
    assert wanted(window).planes[0].station == pytest.approx(0.04, rel=1e-15)
    assert page.planes[0].station.line.text() == "end/2"


# --- what is shown ---------------------------------------------------------------------------------------------------


def test_the_verdict_is_said_in_words_with_a_mark(window):
    page = show(window, BalanceSettings(speed=3000 * RPM, grade=6.3))
    assert page.verdict.text().startswith("Does not keep to G 6.3: it has G ")
    assert page.mark.isVisible()
    choose(page.rotor.grade, "G 4000")
    assert page.verdict.text().startswith("Keeps to G 4000: it has G ")
    choose(page.rotor.grade, "none")
    assert page.verdict.text().startswith("It has G ")
    assert not page.mark.isVisible()


def test_the_values_are_those_of_the_core_in_the_units_shown(window):
    page = show(window, BalanceSettings(speed=3000 * RPM, grade=6.3, bearings=(0.0, 0.2), planes=TWO))
    answer = window.session.machine.balance_answer
    assert value(page, "U").value == pytest.approx(answer.found.amount * 1e6, rel=1e-14)
    assert value(page, "U").unit.symbol == "g·mm"
    assert value(page, "C").unit.symbol == "g·mm²"
    assert value(page, "φ_U").value == pytest.approx(np.degrees(np.arctan2(0.05, 0.1)), rel=1e-12)
    assert value(page, "F_B1").si == pytest.approx(answer.forces.rotating[0], rel=1e-14)
    assert value(page, "G").value == pytest.approx(answer.grade.static, rel=1e-14)
    assert value(page, "U_per_B2").si == answer.allowed_in_bearings[1]
    assert value(page, "U_r").si == 0.0
    assert value(page, "φ_U_r").si is None
    trigger_units = [name for name in ("in lb lb·in²",) if window.actions_.units.findData(name) >= 0]
    choose(window.actions_.units, trigger_units[0])
    assert value(page, "U").unit.symbol == "oz·in"
    assert value(page, "C").unit.symbol == "oz·in²"


def test_where_angles_count_from_is_said_with_the_values(window):
    page = show(window, BalanceSettings())
    assert page.told.text().startswith(
        "Angles count from the zero mark, the document's x as seen along Spindle, right-handed about its direction"
    )


def test_one_value_is_copied_as_a_number_and_all_of_them_with_unit_and_basis(window, page):
    page.show_view(VALUES)
    at = page.values.values.rows.index(value(page, "U"))
    page.values.clicked.emit(page.values.values.index(at, COPY))
    assert float(clipboard()) == pytest.approx(amount(window) * 1e6, rel=1e-14)
    click(page.copy_all)
    rows = pasted()
    assert rows[0] == ["Name", "Value", "Unit", "Where from"]
    assert ["Static unbalance about Spindle, m·e", pytest.approx(amount(window) * 1e6), "g·mm", "computed"] in rows


def test_copy_of_the_menu_takes_the_selected_values_of_the_page(window, page):
    page.show_view(VALUES)
    page.values.setFocus()
    page.values.selectRow(page.values.values.rows.index(value(page, "e")))
    trigger(window, "Edit", "Copy")
    assert float(clipboard()) == pytest.approx(value(page, "e").value, rel=1e-14)


def test_without_a_rotor_the_page_says_so(window):
    window.session.take(Machine(), None)
    window.pages.setCurrentWidget(window.balance)
    assert "there is nothing to balance" in window.balance.verdict.text()
    assert window.balance.values.values.rows == []


def test_an_axis_that_is_not_one_is_said_in_the_place_of_stale_values(window):
    from core.assembly import DriveAxis
    from core.drive import TurnsWith

    page = show(window, BalanceSettings(speed=10.0))
    two = replace(reel(), axes=(DriveAxis(), DriveAxis("Other", (0.1, 0.0, 0.0))))
    drive = DriveSettings((TurnsWith(), TurnsWith("lug", "load", "Other")))
    window.session.take(Machine(two, drive), None)
    assert "so it is no one rotor" in page.verdict.text()
    assert page.values.values.rows == []


# --- corrections -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("form", ["steel discs", "point masses"])
def test_masses_are_added_with_one_click_and_taken_back_in_one_step(window, form):
    page = show(window, BalanceSettings(planes=TWO))
    before = amount(window)
    choose(page.correct.as_, form)
    click(page.correct.add)
    assert [node.name for node in window.session.assembly.members[2:]] == ["balance mass", "balance mass 2"]
    assert amount(window) <= 1e-12 * before
    assert window.session.machine.balance_answer.found.couple_amount <= 1e-12
    assert page.correct.says.text() == "There is nothing to correct."
    click(page.correct.add)
    assert len(window.session.assembly.members) == 4
    assert "there is nothing to correct" in page.correct._refused.text()
    window.undo()
    assert len(window.session.assembly.members) == 2
    assert amount(window) == before


def test_holes_are_drilled_into_the_part_chosen_and_taken_back_in_one_step(window, qtbot: QtBot):
    page = show(window, BalanceSettings(planes=TWO, by="removing"))
    before = amount(window)
    choose(page.correct.part, "drum")
    enter(field(page, "diameter of the holes"), "25")
    click(page.correct.drill)
    assert page.correct.stop.isVisible()
    qtbot.waitUntil(lambda: bool(window.session.assembly.node("drum").cuts))
    assert [cut.name for cut in window.session.assembly.node("drum").cuts] == ["balance hole", "balance hole 2"]
    assert amount(window) <= 1e-11 * before
    assert not page.correct.stop.isVisible()
    window.undo()
    assert window.session.assembly.node("drum").cuts == ()


def test_a_hole_that_cannot_be_is_refused_in_place(window, qtbot: QtBot):
    page = show(window, BalanceSettings(planes=TWO, by="removing"))
    enter(field(page, "diameter of the holes"), "1")
    click(page.correct.drill)
    qtbot.waitUntil(page.correct._refused.isVisible)
    assert "no hole of this diameter takes enough away" in page.correct._refused.text()
    assert window.session.assembly.node("drum").cuts == ()
    enter(field(page, "diameter of the holes"), "0")
    click(page.correct.drill)
    assert "the diameter of the hole has to be more than 0" in page.correct.diameter.wrong.text()


def test_a_refusal_stays_in_sight_until_something_is_edited(window, page):
    choose(page.rotor.grade, "G 6.3")
    window.session.look_again()
    assert page.rotor._refused.isVisible()
    window.session.edit("delete", lambda before: before.removed(("lug",)))
    assert not page.rotor._refused.isVisible()


def test_drilling_that_is_stopped_changes_nothing(window, qtbot: QtBot):
    page = show(window, BalanceSettings(planes=TWO, by="removing"))
    click(page.correct.drill)
    click(page.correct.stop)
    assert page.correct.drill.isEnabled()
    qtbot.wait(100)
    assert window.session.assembly.node("drum").cuts == ()


# --- drawn -----------------------------------------------------------------------------------------------------------


def test_the_arrows_are_in_the_view_only_while_the_page_is_seen_or_kept(window):
    show(window, BalanceSettings(bearings=(0.0, 0.2), planes=TWO))
    arrows = window.view._picture.vectors
    assert [arrow.name.split(" ")[0] for arrow in arrows] == ["static", "bearing", "bearing", "plane", "plane"]
    assert arrows[0].name.endswith("g·mm")
    # From the axis to the heavy side, at the station of the centre of mass.
    centre = window.session.assembly.total.centre
    np.testing.assert_allclose(arrows[0].start, [0.0, 0.0, centre[2]], atol=1e-15)
    run = arrows[0].end - arrows[0].start
    np.testing.assert_allclose(run / np.linalg.norm(run), np.append(centre[:2], 0.0) / np.linalg.norm(centre[:2]), atol=1e-12)
    window.pages.setCurrentWidget(window.sheet)
    assert window.view._picture.vectors == ()
    trigger(window, "View", "Unbalance arrows")
    assert len(window.view._picture.vectors) == 5
    trigger(window, "View", "Unbalance arrows")
    assert window.view._picture.vectors == ()


def test_the_plot_names_its_vectors_circles_and_unit(window, qtbot: QtBot):
    page = show(window, BalanceSettings(speed=3000 * RPM, grade=40.0, bearings=(0.0, 0.2)))
    page.show_view(PLOT)
    qtbot.waitUntil(lambda: bool(page.plot.plot.labels))
    written = page.plot.plot.labels
    assert {"static", "bearing 1", "bearing 2", "circles in g·mm"} <= set(written)
    assert any(text.startswith("permitted, ") for text in written)
    sizes = [size for size in circles_of(reach_of(page.plot.plot.picture)) if f"{size:g}" in written]
    assert len(sizes) >= 3


def test_the_plot_says_the_same_in_words_and_in_the_table_beside(window):
    page = show(window, BalanceSettings(speed=3000 * RPM, grade=0.4))
    page.show_view(PLOT)
    cells = [page.plot.table.item(0, column).text() for column in range(4)]
    assert page.plot.plot.accessibleDescription() == (
        f"static: {cells[1]} g·mm at {cells[2]}°, permitted {cells[3]} g·mm."
    )
    assert float(cells[1]) == pytest.approx(amount(window) * 1e6, rel=1e-3)
    assert float(cells[2]) == pytest.approx(np.degrees(np.arctan2(0.05, 0.1)), rel=1e-3)
    assert page.plot.table.horizontalHeaderItem(1).text() == "unbalance\ng·mm"
    assert "What is permitted for static cannot be drawn" in page.plot.says.text()


def test_a_page_that_is_not_seen_follows_no_edit_until_it_is(window, page):
    window.pages.setCurrentWidget(window.sheet)
    before = value(page, "m").si
    window.session.edit("delete", lambda assembly: assembly.removed(("lug",)))
    assert value(page, "m").si == before
    window.pages.setCurrentWidget(page)
    assert value(page, "m").si < before
    assert page.show_view(INPUTS) is None
    assert page.rotor.speed.isVisible()


@pytest.mark.parametrize(("largest", "radii"), [
    (41.0, (10.0, 20.0, 30.0, 40.0, 50.0)), (0.5, (0.1, 0.2, 0.3, 0.4, 0.5)), (1.0, (0.2, 0.4, 0.6, 0.8, 1.0)),
    (7.0, (2.0, 4.0, 6.0, 8.0)), (0.0, (1.0,)),
])
def test_circles_have_round_radii_and_hold_the_largest_vector(largest, radii):
    assert circles_of(largest) == pytest.approx(radii)


def test_a_permitted_circle_is_drawn_where_it_can_be_told():
    def drawn(permitted: float) -> bool:
        picture = PolarPicture((PolarMark("static", 10.0, 0.0, permitted),))
        return is_drawn(picture, picture.marks[0])

    assert [drawn(each) for each in (0.1, 1.0, 20.0, 30.0)] == [False, True, True, False]
