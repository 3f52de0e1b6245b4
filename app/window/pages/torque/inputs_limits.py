"""The part "Motor limits": continuous and peak torque over speed, side by side."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QApplication, QHBoxLayout, QWidget

from app.window.pages.torque.inputs_points import PointsBox
from app.window.style import GRID

if TYPE_CHECKING:
    from PySide6.QtGui import QShowEvent

    from app.window.session import Session
    from core.machine import Machine


class LimitsPanel(QWidget):
    """What the motor gives for ever and for a moment; brought up to date only while it is seen."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.continuous = PointsBox(session, "continuous")
        self.peak = PointsBox(session, "peak")
        self._stale = True
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(2 * GRID)
        for box in (self.continuous, self.peak):
            layout.addWidget(box, 1)
        self._session = session
        self._shown: Machine | None = None
        session.changed.connect(self._follow)
        session.shown_differently.connect(self.refresh)

    def showEvent(self, event: QShowEvent) -> None:
        """Catch up with what changed out of sight."""
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def _follow(self) -> None:
        """Show another document; what is being typed or refused stays when the same one is judged anew."""
        if self._session.machine is not self._shown:
            self.refresh()

    def copy_selection(self) -> None:
        """Copy the points of the limit that the keyboard is in."""
        focused = QApplication.focusWidget()
        box = self.peak if focused is not None and self.peak.isAncestorOf(focused) else self.continuous
        box.copy()

    def refresh(self) -> None:
        """Show the points as they are now."""
        self._stale = not self.isVisible()
        if not self._stale:
            self._shown = self._session.machine
            self.continuous.refresh()
            self.peak.refresh()
