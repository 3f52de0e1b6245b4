"""Which length unit the numbers of a drawing are in: the file does not say it reliably, so it is asked."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QVBoxLayout, QWidget

from app.window.fields import ChoiceField
from app.window.style import GRID, Words


class UnitDialog(QDialog):
    """Asks for the unit, with nothing chosen before the user has chosen it."""

    unit_chosen = Signal(str)

    def __init__(self, name: str, units: tuple[str, ...], parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle("Unit of the drawing")
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        words = Words(f"In which unit are the numbers of {name}?")
        words.setWordWrap(True)
        self.unit = ChoiceField("Unit of the drawing", [("choose one", ""), *((unit, unit) for unit in units)])
        self.buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel)
        self._ok = self.buttons.button(QDialogButtonBox.StandardButton.Ok)
        self._ok.setText("Import")
        self._ok.setEnabled(False)
        self.unit.currentIndexChanged.connect(lambda at: self._ok.setEnabled(at > 0))
        self.buttons.accepted.connect(self._finish)
        self.buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, 2 * GRID, 2 * GRID, GRID)
        for widget in (words, self.unit, self.buttons):
            layout.addWidget(widget)

    def _finish(self) -> None:
        unit = str(self.unit.currentData())
        self.accept()
        self.unit_chosen.emit(unit)
