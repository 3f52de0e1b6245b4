"""The view "Train and duty" of the Torque page: everything that is entered about the drive, in some parts."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QStackedWidget, QVBoxLayout, QWidget

from app.window.pages.torque.inputs_duty import DutyPanel
from app.window.pages.torque.inputs_limits import LimitsPanel
from app.window.pages.torque.inputs_loads import LoadsPanel
from app.window.pages.torque.inputs_stops import StopsPanel
from app.window.pages.torque.inputs_train import TrainPanel
from app.window.pages.torque.switch import Switch
from app.window.style import GRID

if TYPE_CHECKING:
    from app.window.pages.torque.entries_panel import EntriesPanel
    from app.window.session import Session


class InputsView(QWidget):
    """One part of the inputs at a time; `parts` chooses which."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.train = TrainPanel(session)
        self.duty = DutyPanel(session)
        self.loads = LoadsPanel(session)
        self.limits = LimitsPanel(session)
        self.stops = StopsPanel(session)
        panels: dict[str, EntriesPanel | LimitsPanel] = {
            "Train": self.train, "Duty": self.duty, "Loads": self.loads, "Motor limits": self.limits,
            "Stops": self.stops,
        }
        self.parts = Switch("Inputs", tuple(panels))
        self._stack = QStackedWidget()
        for panel in panels.values():
            self._stack.addWidget(panel)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, GRID, GRID)
        layout.addWidget(self._stack)
        self._panels = tuple(panels.values())
        self.parts.chosen.connect(self._stack.setCurrentIndex)

    def copy_selection(self) -> None:
        """Copy what is selected in the part that is seen."""
        self._panels[self.parts.current].copy_selection()
