"""The window, shown and dressed, empty or with a dial in it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")
from core.machine import Machine

if TYPE_CHECKING:
    from PySide6.QtWidgets import QApplication
    from pytestqt.qtbot import QtBot

    from app.window.main import MainWindow


@pytest.fixture(scope="session")
def dressed(qapp: QApplication) -> QApplication:
    """Give the application its look once."""
    from app.window.style import dress

    dress(qapp)
    return qapp


@pytest.fixture
def window(qtbot: QtBot, request: pytest.FixtureRequest) -> MainWindow:
    """Show an empty window; afterwards it is closed without a question."""
    from app.window.main import MainWindow

    request.getfixturevalue("dressed")
    made = MainWindow()
    qtbot.addWidget(made, before_close_func=_give_up)
    made.show()
    made.activateWindow()
    qtbot.waitExposed(made)
    return made


@pytest.fixture
def filled(window: MainWindow) -> MainWindow:
    """Show a window with the dial in it, saved as far as it knows."""
    from window_driver import dial

    window.session.take(Machine(dial()), None)
    return window


def _give_up(window: MainWindow) -> None:
    window._given_up = True


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Let the platform without a screen say what it cannot do; every other warning of Qt still fails."""
    for item in items:
        if "window" in getattr(item, "fixturenames", ()):
            item.add_marker(pytest.mark.qt_log_ignore("^This plugin does not support"))
