"""The view "Train and duty" of the Torque page: everything that is entered about the drive."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QVBoxLayout, QWidget

from app.window.style import GRID, Words

if TYPE_CHECKING:
    from app.window.session import Session

NOTHING = "No duty yet."


class InputsView(QWidget):
    """The inputs of the drive."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.session = session
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        words = Words(NOTHING, "quiet")
        words.setWordWrap(True)
        layout.addWidget(words)
        layout.addStretch(1)
