"""The sentences below a table: as high as they need, but never so high that the table has no room."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QScrollArea, QWidget

from app.window.style import Words

if TYPE_CHECKING:
    from PySide6.QtGui import QResizeEvent

MOST_LINES = 5


class Foot(QScrollArea):
    """Quiet sentences; what goes beyond a few lines is scrolled to, by mouse or arrow keys."""

    def __init__(self, label: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.words = Words("", "quiet")
        self.words.setWordWrap(True)
        self.words.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.setWidget(self.words)
        self.words.setAutoFillBackground(False)
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.setAccessibleName(label)

    def text(self) -> str:
        """Return the sentences shown."""
        return self.words.text()

    def say(self, text: str) -> None:
        """Show these sentences from their beginning."""
        if text != self.words.text():
            self.words.setText(text)
            self.verticalScrollBar().setValue(0)
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Follow the width."""
        super().resizeEvent(event)
        self._fit()

    def _fit(self) -> None:
        needed = self.words.heightForWidth(self.viewport().width())
        self.setFixedHeight(min(needed, MOST_LINES * self.words.fontMetrics().lineSpacing()))
