"""What the dialogs share: one margin, fields above, a refusal in place, two buttons; never blocking the program."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLayout, QSizePolicy, QSpacerItem, QVBoxLayout, QWidget

from app.window.style import GRID, Words


def show_over(dialog: QDialog) -> None:
    """Show a dialog over its window, without holding up the program; it goes when it is closed."""
    dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
    dialog.open()


class FormDialog(QDialog):
    """A dialog with a column of widgets, a line for what is refused, and buttons to take it or leave it."""

    def __init__(self, title: str, take: str, width: int, parent: QWidget | None) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel)
        self.take_button = buttons.button(QDialogButtonBox.StandardButton.Ok)
        self.leave_button = buttons.button(QDialogButtonBox.StandardButton.Cancel)
        self.take_button.setText(take)
        buttons.accepted.connect(self.take)
        buttons.rejected.connect(self.reject)
        self._layout = QVBoxLayout(self)
        self._layout.setContentsMargins(2 * GRID, 2 * GRID, 2 * GRID, 2 * GRID)
        self._layout.setSpacing(GRID)
        # Grows with what is said in place, so that no field is squeezed for it.
        self._layout.setSizeConstraint(QLayout.SizeConstraint.SetMinimumSize)
        self._layout.addWidget(self.wrong)
        self._layout.addWidget(buttons)
        # Return takes or does nothing; it never leaves the dialog.
        self.take_button.setDefault(True)
        self.leave_button.setAutoDefault(False)
        self._layout.addSpacerItem(QSpacerItem(width, 0, QSizePolicy.Policy.Minimum, QSizePolicy.Policy.Fixed))

    def stack(self, *widgets: QWidget) -> None:
        """Put widgets above the line for refusals, one below the other."""
        for widget in widgets:
            self._layout.insertWidget(self._layout.count() - 3, widget)

    def refuse(self, sentence: str) -> None:
        """Say why it cannot be taken; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))

    def take(self) -> None:
        """Take what was entered, and close; or refuse it in place."""
        raise NotImplementedError
