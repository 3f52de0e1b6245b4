"""The window, shown and dressed, empty or with a dial in it."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")
from core.machine import Machine

if TYPE_CHECKING:
    from collections.abc import Callable

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


@pytest.fixture
def make_window(
    qtbot: QtBot, request: pytest.FixtureRequest, monkeypatch: pytest.MonkeyPatch
) -> Callable[[str], MainWindow]:
    """Show a window with lines to place, drawn as one says: "software" or "opengl"."""
    from placing_driver import placing_window

    request.getfixturevalue("dressed")
    return lambda canvas: placing_window(qtbot, monkeypatch, canvas)


@pytest.fixture(
    params=[pytest.param("software", marks=pytest.mark.gui), pytest.param("opengl", marks=pytest.mark.opengl)]
)
def either(request: pytest.FixtureRequest, make_window: Callable[[str], MainWindow]) -> MainWindow:
    """Show a window with lines to place in both ways."""
    return make_window(request.param)


@pytest.fixture
def placed(make_window: Callable[[str], MainWindow]) -> MainWindow:
    """Show a window with lines to place."""
    return make_window("software")


def _give_up(window: MainWindow) -> None:
    window._given_up = True


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    """Let the platform without a screen say what it cannot do; every other warning of Qt still fails."""
    for item in items:
        if "window" in getattr(item, "fixturenames", ()):
            item.add_marker(pytest.mark.qt_log_ignore("^This plugin does not support"))
