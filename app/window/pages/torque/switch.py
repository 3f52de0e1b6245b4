"""A row of buttons of which one is down: it chooses what is shown below."""

from __future__ import annotations

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QButtonGroup, QHBoxLayout, QToolButton, QWidget

from app.window.style import GRID


class Switch(QWidget):
    """Chooses one of a few things by its words, with the mouse, Tab and the arrow keys.

    Signals:
        chosen: the place of the one that a user chose, counted from 0.
    """

    chosen = Signal(int)

    def __init__(self, label: str, words: tuple[str, ...]) -> None:
        super().__init__()
        self.setAccessibleName(label)
        self._group = QButtonGroup(self)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(GRID // 2)
        self.buttons: list[QToolButton] = []
        for at, text in enumerate(words):
            button = QToolButton()
            button.setObjectName("switch")
            button.setText(text)
            button.setAccessibleName(f"{label}: {text}")
            button.setCheckable(True)
            self._group.addButton(button, at)
            row.addWidget(button)
            self.buttons.append(button)
        self.buttons[0].setChecked(True)
        self._group.idToggled.connect(self._toggled)

    @property
    def current(self) -> int:
        """The place of the one that is chosen."""
        return self._group.checkedId()

    def choose(self, at: int) -> None:
        """Choose the one at a place, as a click does."""
        self.buttons[at].setChecked(True)

    def _toggled(self, at: int, down: bool) -> None:
        if down:
            self.chosen.emit(at)
