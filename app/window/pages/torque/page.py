"""The Torque page: two views, what is entered about the drive and what that asks of it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from app.window.pages.torque.inputs_view import InputsView
from app.window.pages.torque.result_view import ResultView
from app.window.pages.torque.switch import Switch
from app.window.style import GRID

if TYPE_CHECKING:
    from app.window.session import Session

INPUTS, RESULT = range(2)


class TorquePage(QWidget):
    """Shows one of the two views; the one that is not seen works nothing out."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("page")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self.setAccessibleName("Torque page")
        self.inputs = InputsView(session)
        self.result = ResultView(session)
        self.switch = Switch("View", ("Train and duty", "Result"))
        self._views = QStackedWidget()
        self._views.addWidget(self.inputs)
        self._views.addWidget(self.result)
        head = QHBoxLayout()
        head.setContentsMargins(2 * GRID, GRID, 2 * GRID, 0)
        head.addWidget(self.switch)
        head.addStretch(1)
        head.addWidget(self.inputs.parts)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addLayout(head)
        layout.addWidget(self._views, 1)
        self.switch.chosen.connect(self._show)

    def show_view(self, at: int) -> None:
        """Show the inputs or the result."""
        self.switch.choose(at)

    def _show(self, at: int) -> None:
        self._views.setCurrentIndex(at)
        self.inputs.parts.setVisible(at == INPUTS)
