"""The drive on the Sheet page: its values in sections of their own, copied as numbers, its cautions below."""

from __future__ import annotations

from dataclasses import replace

import pytest
from drives import flap, flap_machine, settings
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from window_driver import pasted

from app.window.pages.values import COPY, LABEL
from core.drive import BalanceSettings, DriveSettings, StopCase
from core.handover import Entry
from core.machine import Machine

pytestmark = pytest.mark.gui


@pytest.fixture
def driven(window):
    """Show a window with the flap and all that is entered about its drive, its Sheet page in front."""
    window.session.take(flap_machine().with_drive(replace(settings(), balance=BalanceSettings(speed=3.0))), None)
    window.pages.setCurrentWidget(window.sheet)
    return window


def row_of(window, section, symbol):
    rows = window.sheet.table.values.rows
    return next(
        at for at, row in enumerate(rows) if isinstance(row, Entry) and (row.section, row.symbol) == (section, symbol)
    )


def test_a_document_without_a_drive_shows_no_section_of_one(window):
    window.session.take(Machine(flap()), None)
    headings = [row for row in window.sheet.table.values.rows if isinstance(row, str)]
    assert not [heading for heading in headings if heading.startswith(("Drive", "Balance"))]


@pytest.mark.parametrize(("section", "symbol", "found"), [
    ("Drive: inertia", "J_mot", lambda drive, _: drive.reflected_motor.inertia),
    ("Drive: duty at the motor shaft", "T_peak", lambda drive, _: drive.motor.peak.torque),
    ("Drive: duty at the load shaft", "T_rms", lambda drive, _: drive.load.rms),
    ("Drive: duty at the motor shaft", "P_brake", lambda drive, _: drive.motor.peak_braking.power),
    ("Balance: unbalance", "U", lambda _, balance: balance.found.amount * 1e6),
])
def test_a_value_of_the_drive_is_copied_as_the_number_it_is(driven, section, symbol, found):
    table, machine = driven.sheet.table, driven.session.machine
    at = row_of(driven, section, symbol)
    table.scrollTo(table.model().index(at, COPY))
    place = table.visualRect(table.model().index(at, COPY)).center()
    QTest.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, pos=place)
    expected = found(machine.drive_answer, machine.balance_answer)
    assert float(QGuiApplication.clipboard().text()) == pytest.approx(expected, rel=1e-14)


def test_the_copied_sheet_names_the_shaft_of_every_torque_and_where_it_came_from(driven):
    driven.sheet.copy_sheet()
    rows = {row[0]: row[1:] for row in pasted()}
    value, unit, basis = rows["RMS torque at the motor shaft over the whole duty, rests counted"]
    assert value == pytest.approx(driven.session.machine.drive_answer.motor.rms, rel=1e-14)
    assert unit == "N·m"
    assert basis == "parts: computed; the duty, the train and what acts on it as entered"


def test_below_a_heading_that_names_the_shaft_the_label_does_not_name_it_again(driven):
    model = driven.sheet.table.model()
    at = row_of(driven, "Drive: duty at the motor shaft", "T_rms")
    assert model.index(at, LABEL).data() == "RMS torque over the whole duty, rests counted"
    assert "at the motor shaft" in model.index(at, LABEL).data(Qt.ItemDataRole.ToolTipRole)


def test_the_cautions_of_the_drive_stand_below_in_a_few_lines_that_scroll(driven):
    told = driven.sheet.told
    assert "Gravity can move this load when the drive is off" in told.text()
    driven.resize(1000, 640)
    QTest.qWait(20)
    assert told.height() <= 5 * told.words.fontMetrics().lineSpacing()
    assert told.verticalScrollBar().maximum() > 0
    assert told.accessibleName() == "What to know about the values"


def test_a_drive_that_cannot_be_worked_out_is_a_line_with_the_reason(driven):
    # Along the hinge gravity has no torque, and nothing else is there to stop the flap.
    drive = DriveSettings(gravity=(0.0, -9.81, 0.0), stops=(StopCase(1.0, 0.0),))
    driven.session.take(Machine(flap(), drive), None)
    at = row_of(driven, "Drive: inertia", "J_mot")
    tip = driven.sheet.table.model().index(at, LABEL).data(Qt.ItemDataRole.ToolTipRole)
    assert "nothing stops the load" in tip
