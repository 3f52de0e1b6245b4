"""The result on the Torque page: numbers and curves are those of the answer, in the units shown, and can be copied."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import TYPE_CHECKING

import drives
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtCore import QEvent, QItemSelectionModel, QPointF, Qt
from PySide6.QtGui import QGuiApplication, QMouseEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

from app.window.pages.torque.result_graphs import CHOICES, OVER_ANGLE, OVER_SPEED, OVER_TIME, OVER_TURN, graph_of
from app.window.pages.torque.result_tables import Number
from app.window.pages.torque.result_view import CURVES, NUMBERS
from app.window.plots.graph import MOST_POINTS, thinned, within
from core.drive import ByTime, DriveSettings, Duty, Move, Repeat, Rest, StopCase, Train
from core.machine import BEING_WORKED_OUT, Machine
from core.quantity import DEFAULT_UNITS, UNIT_SETS, significant

if TYPE_CHECKING:
    from app.window.main import MainWindow
    from app.window.pages.torque.result_numbers import CellsView
    from app.window.pages.torque.result_view import ResultView

MACHINE = drives.flap_machine()


def result_of(window: MainWindow, machine: Machine = MACHINE) -> ResultView:
    """Show the result of a machine."""
    window.session.take(machine, None)
    window.pages.setCurrentWidget(window.torque)
    window.torque.show_view(1)
    return window.torque.result


def table_of(result: ResultView, key: str) -> CellsView:
    return result.numbers.blocks[key].view


def texts(view: CellsView) -> list[list[str]]:
    model = view.model()
    return [
        [str(model.index(row, column).data()) for column in range(model.columnCount())] for row in range(model.rowCount())
    ]


def row_of(view: CellsView, words: str) -> list[str]:
    return next(row for row in texts(view) if row[0].strip().startswith(words))


def clipboard() -> str:
    return QGuiApplication.clipboard().text()


def choose(result: ResultView, what: str, shaft: str = "motor") -> None:
    result.switch.choose(CURVES)
    for field, value in ((result.what, what), (result.shaft, shaft)):
        field.set_value(value)
        field.chosen.emit(value)


def test_the_duty_stands_at_the_load_and_at_the_motor_side_by_side_in_the_units_shown(window):
    view = table_of(result_of(window), "What the duty asks")
    answer = MACHINE.drive_answer
    headings = [view.model().headerData(at, Qt.Orientation.Horizontal) for at in range(4)]
    assert headings == ["Quantity", "At the load shaft", "At the motor shaft", "Unit"]
    load, motor = answer.load.peak.torque, answer.motor.peak.torque
    assert [abs(float(text.replace("−", "-"))) for text in row_of(view, "Peak torque")[1:3]] == pytest.approx(
        [abs(load), abs(motor)], rel=1e-4
    )
    assert row_of(view, "Peak torque")[3] == "N·m"
    rpm = float(row_of(view, "Highest speed")[2])
    assert rpm == pytest.approx(answer.motor.peak_speed * 30 / math.pi, rel=1e-4)
    window.session.show_in(UNIT_SETS["in lb lb·in²"])
    assert row_of(view, "Peak torque")[3] == "lbf·in"
    window.session.mark_decimals_with(",")
    assert "," in row_of(view, "RMS torque")[1]


def test_one_shaft_has_one_column(window):
    settings = replace(MACHINE.drive, train=Train(MACHINE.drive.train.motor))
    settings = DriveSettings(train=settings.train, duty=MACHINE.drive.duty)
    view = table_of(result_of(window, Machine(MACHINE.assembly, settings)), "What the duty asks")
    assert view.model().columnCount() == 3


def test_the_stages_are_seen_from_any_shaft_and_their_shares_are_the_whole(window):
    result = result_of(window)
    field = result.numbers.seen_from
    assert [field.itemData(at) for at in range(field.count())] == ["motor", "coupling", "brake", "gearbox", "load"]
    for shaft in ("motor", "gearbox", "load"):
        field.set_value(shaft)
        field.chosen.emit(shaft)
        table = table_of(result, "Inertia stage by stage").cells.table
        found = MACHINE.drive_answer.reflected_at(shaft)
        numbers = [[cell.si for cell in row if isinstance(cell, Number)] for row in table.rows]
        assert numbers[-1] == [found.inertia]
        assert math.fsum(row[-1] for row in numbers[:-1]) == pytest.approx(1.0, rel=1e-14)
        assert [row[-2] for row in numbers[:-1]] == [row.reflected for row in found.rows]
        assert shaft in table.title


def test_the_rests_say_which_way_gravity_moves_the_load_with_and_without_brakes(window):
    view = table_of(result_of(window), "At rest")
    rows = texts(view)
    assert [row[0] for row in rows] == ["start", "rest", "worst angle"]
    answer = MACHINE.drive_answer
    for row, rest in zip(rows, (*answer.standstills, answer.worst), strict=True):
        assert row[-2:] == [rest.drift, rest.drift_braked]
        assert float(row[2].replace("−", "-")) == pytest.approx(rest.holding, rel=1e-4)


def test_a_limit_that_is_not_kept_says_so_in_words(window):
    result = result_of(window)
    assert "not kept" in row_of(table_of(result, "Limits of the motor"), "continuous")
    assert "your limit there is" in result.checks.text()


def test_the_cautions_stand_on_the_page_always(window):
    result = result_of(window)
    for view in (NUMBERS, CURVES):
        result.switch.choose(view)
        assert result.cautions.isVisible()
        assert result.cautions.text() == " ".join(MACHINE.drive_answer.cautions)


def test_selected_cells_are_copied_in_full_as_tab_separated_text(window):
    result = result_of(window)
    view = table_of(result, "What the duty asks")
    view.setFocus()
    model, flag = view.selectionModel(), QItemSelectionModel.SelectionFlag.Select
    for row in (0, 1):
        for column in (0, 1, 2):
            model.select(view.model().index(row, column), flag)
    window.copy()
    answer = MACHINE.drive_answer
    first, second = (line.split("\t") for line in clipboard().rstrip("\n").split("\n"))
    assert first[0] == "Peak torque, the largest of either sign"
    assert [float(text) for text in first[1:]] == [answer.load.peak.torque, answer.motor.peak.torque]
    assert [float(text) for text in second[1:]] == [answer.load.peak.time, answer.motor.peak.time]


def test_all_tables_are_copied_with_titles_and_headings(window):
    result = result_of(window)
    QTest.mouseClick(result.copy, Qt.MouseButton.LeftButton)
    lines = clipboard().split("\n")
    for title in ("Inertia", "What the duty asks", "At rest, and with the drive off", "Gravity", "Stops"):
        assert title in lines
    assert "Where\tAngle of the load °\tHolding torque, load shaft N·m" in clipboard()


def test_without_a_duty_there_are_inertia_gravity_and_standstill_and_what_to_add_is_said(window):
    settings = replace(MACHINE.drive, duty=Duty())
    result = result_of(window, Machine(MACHINE.assembly, settings))
    assert "Add moves and rests" in result.told.text()
    shown = {key for key, block in result.numbers.blocks.items() if block.isVisible()}
    assert shown == {"Inertia", "Inertia stage by stage", "At rest", "Gravity", "Stops"}
    result.switch.choose(CURVES)
    assert result.plot.graph.title.startswith("Torque that holds the load at rest over a full turn")


def test_a_drive_that_cannot_be_worked_out_shows_its_sentence_and_no_numbers(window):
    result = result_of(window)
    settings = DriveSettings(gravity=(0.0, 0.0, 0.0), stops=(StopCase(5.0, torque=0.0),))
    window.session.take(Machine(MACHINE.assembly, settings), None)
    assert result.trouble.isVisible()
    assert "nothing stops the load" in result.trouble.text()
    assert not result.numbers.isVisible()
    assert not result.cautions.isVisible()
    window.session.take(MACHINE, None)
    assert result.numbers.isVisible()
    assert not result.trouble.isVisible()


def test_an_edit_is_on_the_page_at_once(window):
    result = result_of(window)
    before = row_of(table_of(result, "What the duty asks"), "RMS torque")
    window.session.edit_drive("Less friction", lambda drive: replace(drive, frictions=()))
    after = row_of(table_of(result, "What the duty asks"), "RMS torque")
    assert before != after
    window.session.undo()
    assert row_of(table_of(result, "What the duty asks"), "RMS torque") == before


@pytest.mark.parametrize("what", [value for _, value in CHOICES])
def test_every_curve_draws_the_points_of_the_answer_in_the_units_shown(window, what):
    result = result_of(window)
    choose(result, what)
    graph = result.plot.graph
    expected = graph_of(MACHINE.drive_answer, MACHINE.drive.limits, DEFAULT_UNITS, what, "motor")
    assert graph.title == expected.title
    drawn = [line.getOriginalDataset() for line in result.plot.canvas._lines if line.getOriginalDataset()[0] is not None]
    assert len(drawn) == len(expected.traces)
    for (x, y), trace in zip(drawn, expected.traces, strict=True):
        np.testing.assert_allclose(x, trace.x / expected.x[1].factor, rtol=1e-15)
        np.testing.assert_allclose(y, trace.y / expected.y[1].factor, rtol=1e-15)
    for trace in expected.traces:
        assert trace.name in result.plot.legend.accessibleDescription()
    looks = [trace.look for trace in expected.traces]
    assert len(set(looks)) == len(looks)


@pytest.mark.parametrize("shaft", ["load", "motor"])
def test_the_torque_is_drawn_term_by_term_with_both_sides_of_every_jump(window, shaft):
    result = result_of(window)
    choose(result, OVER_TIME, shaft)
    graph, curves = result.plot.graph, MACHINE.drive_answer.curves(shaft)
    names = [trace.name for trace in graph.traces]
    assert names == ["sum", "acceleration", "gravity", "applied loads", "friction", "losses", "RMS of the sum"]
    np.testing.assert_array_equal(graph.traces[0].y, curves.torque)
    np.testing.assert_array_equal(sum(trace.y for trace in graph.traces[1:6]), curves.terms.sum(axis=0))
    jumps = (np.diff(graph.traces[0].x) == 0) & (np.abs(np.diff(graph.traces[0].y)) > 0.1)
    assert jumps.sum() >= 6
    assert (graph.spots[0].x, graph.spots[0].y) == (
        getattr(MACHINE.drive_answer, shaft).peak.time, getattr(MACHINE.drive_answer, shaft).peak.torque
    )


def test_over_speed_the_limits_are_drawn_for_driving_and_braking_with_peak_and_rms_marked(window):
    result = result_of(window)
    choose(result, OVER_SPEED)
    graph, motor = result.plot.graph, MACHINE.drive_answer.motor
    assert [trace.name for trace in graph.traces] == ["points of the duty", "your peak limit", "your continuous limit"]
    assert np.nanmax(graph.traces[1].y) == 3.0
    assert np.nanmin(graph.traces[1].y) == -3.0
    places = {spot.name: (spot.x, abs(spot.y)) for spot in graph.spots}
    assert places["peak torque"] == (abs(motor.peak.speed), abs(motor.peak.torque))
    assert places["RMS torque at the mean speed"] == (motor.mean_speed, motor.rms)


def test_over_a_turn_rests_and_the_angle_at_which_it_hangs_are_marked(window):
    result = result_of(window)
    choose(result, OVER_TURN)
    answer = MACHINE.drive_answer
    spots = result.plot.graph.spots
    assert [spot.x for spot in spots if spot.name.startswith("rest")] == [one.angle for one in answer.standstills]
    assert [spot.x for spot in spots if spot.name.startswith("angle")] == [answer.gravity[0].hangs_at]


def test_the_arrow_keys_read_the_curve_off_point_by_point(window):
    result = result_of(window)
    choose(result, OVER_TIME)
    canvas, curves = result.plot.canvas, MACHINE.drive_answer.curves("motor")
    canvas.setFocus(Qt.FocusReason.TabFocusReason)
    for key in (Qt.Key.Key_Home, *[Qt.Key.Key_Right] * 4, Qt.Key.Key_Left):
        QTest.keyClick(canvas, key)
    said = result.plot.readout.text().replace("\N{NO-BREAK SPACE}", " ")
    assert said.startswith(f"time {significant(curves.time[3], 4)} s")
    assert f"sum {significant(curves.torque[3], 4)} N·m" in said
    QTest.keyClick(canvas, Qt.Key.Key_End)
    assert significant(curves.time[-1], 4) in result.plot.readout.text()


def test_the_pointer_reads_the_point_nearest_to_it(window, qtbot):
    result = result_of(window)
    choose(result, OVER_ANGLE)
    canvas = result.plot.canvas
    qtbot.waitUntil(lambda: canvas.box.width() > 100)
    canvas.grab()
    graph, box = result.plot.graph, canvas.box
    aim = 40
    scene = box.mapViewToScene(QPointF(graph.across[aim] / graph.x[1].factor, graph.height[aim] / graph.y[1].factor))
    place = QPointF(canvas.mapFromScene(scene))
    none = Qt.MouseButton.NoButton
    moved = QMouseEvent(
        QEvent.Type.MouseMove, place, canvas.viewport().mapToGlobal(place), none, none, Qt.KeyboardModifier.NoModifier
    )
    QApplication.sendEvent(canvas.viewport(), moved)
    angle = float(result.plot.readout.text().split("angle\N{NO-BREAK SPACE}")[1].split("\N{NO-BREAK SPACE}")[0])
    assert angle == pytest.approx(math.degrees(graph.across[aim]), abs=0.5)


def test_a_curve_is_copied_with_all_its_columns_at_full_precision(window):
    result = result_of(window)
    choose(result, OVER_TIME)
    window._place = result
    window.copy()
    rows = [line.split("\t") for line in clipboard().rstrip("\n").split("\n")]
    assert rows[0] == [
        "time s", "angle °", "sum N·m", "acceleration N·m", "gravity N·m", "applied loads N·m", "friction N·m", "losses N·m"
    ]
    curves = MACHINE.drive_answer.curves("motor")
    table = np.array(rows[1:], dtype=float)
    np.testing.assert_array_equal(table[:, 2], curves.torque)
    np.testing.assert_array_equal(table[:, 3:].T, curves.terms)
    np.testing.assert_allclose(table[:, 1], np.degrees(curves.angle), rtol=1e-14)


def test_the_plot_follows_a_change_of_theme(window, monkeypatch):
    from app.window import style

    result = result_of(window)
    choose(result, OVER_TIME)
    canvas = result.plot.canvas
    light = canvas.backgroundBrush().color().name()
    monkeypatch.setattr(style, "is_dark", lambda: True)
    canvas.dress()
    assert (light, canvas.backgroundBrush().color().name()) == (style.LIGHT.ground, style.DARK.ground)


@given(st.integers(1, 400), st.integers(10, 60), st.integers(0, 10**6))
def test_a_thinned_line_keeps_its_ends_its_highest_and_its_lowest_point(count, most, seed):
    y, x = np.random.default_rng(seed).standard_normal(count), np.arange(count, dtype=float)
    xs, ys = thinned(x, y, most)
    assert len(xs) <= max(most, min(count, most + 4))
    assert (ys.min(), ys.max()) == (y.min(), y.max())
    assert (xs[0], xs[-1]) == (x[0], x[-1])
    np.testing.assert_array_equal(ys, y[xs.astype(int)])
    assert (np.diff(xs) >= 0).all()


def test_a_long_duty_is_worked_out_beside_the_window_and_then_shown(window, qtbot):
    result = result_of(window)
    moves = (Move(0.1, ByTime(0.5)), Rest(0.1), Move(-0.1, ByTime(0.5)))
    long = Duty((Repeat(moves, 100),))
    assert window.session.edit_drive("Long duty", lambda drive: replace(drive, duty=long))
    assert result.told.text() == BEING_WORKED_OUT
    assert not result.numbers.isVisible()
    window.pages.setCurrentWidget(window.sheet)
    assert BEING_WORKED_OUT in window.sheet.told.text()
    qtbot.waitUntil(lambda: BEING_WORKED_OUT not in window.sheet.told.text(), timeout=20_000)
    window.pages.setCurrentWidget(window.torque)
    qtbot.waitUntil(result.numbers.isVisible, timeout=20_000)
    assert row_of(table_of(result, "What the duty asks"), "Time of one cycle")[1] == "110.00"
    choose(result, OVER_TIME)
    assert len(result.plot.graph.across) > MOST_POINTS
    drawn = result.plot.canvas._lines[0].getOriginalDataset()[0]
    assert len(drawn) <= MOST_POINTS + 4
    window.session.undo()
    result.switch.choose(NUMBERS)
    assert row_of(table_of(result, "What the duty asks"), "Time of one cycle")[1] == "4.2487"


def test_zooming_into_a_long_curve_shows_its_own_points(window, qtbot):
    result = result_of(window)
    long = Duty((Repeat((Move(0.1, ByTime(0.5)), Rest(0.1), Move(-0.1, ByTime(0.5))), 100),))
    window.session.edit_drive("Long duty", lambda drive: replace(drive, duty=long))
    qtbot.waitUntil(lambda: window.session.machine.at_once is window.session.machine, timeout=20_000)
    qtbot.waitUntil(result.numbers.isVisible)
    choose(result, OVER_TIME)
    canvas, trace = result.plot.canvas, result.plot.graph.traces[0]
    canvas.box.setXRange(10.0, 12.0, padding=0)

    def all_there() -> bool:
        x, y = canvas._lines[0].getOriginalDataset()
        inside, wanted = (x >= 10.0) & (x <= 12.0), (trace.x >= 10.0) & (trace.x <= 12.0)
        return inside.sum() == wanted.sum() and bool((y[inside] == trace.y[wanted]).all())

    qtbot.waitUntil(all_there)


@given(st.integers(2, 60), st.floats(-1, 2), st.floats(0, 1), st.integers(0, 10**6))
def test_the_points_within_a_range_are_those_in_it_and_one_beyond_each_end(count, low, width, seed):
    x = np.sort(np.random.default_rng(seed).random(count))
    kept = x[within(x, low, low + width)]
    inside = x[(x >= low) & (x <= low + width)]
    assert set(inside) <= set(kept)
    assert len(kept) <= len(inside) + 2
    backwards = x[::-1].copy()
    assert len(backwards[within(backwards, low, low + width)]) == count
