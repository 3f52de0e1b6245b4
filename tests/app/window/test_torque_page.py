"""The Torque page: its two views."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

if TYPE_CHECKING:
    from app.window.main import MainWindow

pytestmark = pytest.mark.gui


def test_the_torque_page_shows_its_inputs_first_and_the_result_on_a_click(window: MainWindow) -> None:
    window.pages.setCurrentWidget(window.torque)
    assert window.torque.inputs.isVisible()
    QTest.mouseClick(window.torque.switch.buttons[1], Qt.MouseButton.LeftButton)
    assert window.torque.result.isVisible()
    assert not window.torque.inputs.isVisible()


def test_the_arrow_keys_change_the_view(window: MainWindow) -> None:
    window.pages.setCurrentWidget(window.torque)
    window.torque.switch.buttons[0].setFocus()
    QTest.keyClick(window.torque.switch.buttons[0], Qt.Key.Key_Right)
    assert window.torque.result.isVisible()
