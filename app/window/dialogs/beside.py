"""What the lists beside the window share: help, a row to add with, the list, what is refused, Delete and Close."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QPushButton,
    QTableWidget,
    QVBoxLayout,
    QWidget,
)

from app.window.style import GRID, Words

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from PySide6.QtGui import QKeyEvent

    from app.window.session import Session
    from core.assembly import Assembly


class BesideDialog(QDialog):
    """Stays beside the window; each change is an edit of the document, or is refused in place."""

    def __init__(self, session: Session, title: str, parent: QWidget | None) -> None:
        super().__init__(parent)
        self._session = session
        self.setWindowTitle(title)
        self.add = QPushButton("Add")
        self.delete = QPushButton("Delete")
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        self.add.clicked.connect(self.add_one)
        self.delete.clicked.connect(self.delete_current)

    def lay_out(
        self, words: str, row: Sequence[tuple[QWidget, int]], listed: QWidget, size: tuple[int, int],
        buttons: Sequence[QPushButton] = (),
    ) -> None:
        """Put all in its place.

        Args:
            words: of help.
            row: to add with, each widget with its share of the room.
            listed: what there is.
            size: width and height at first.
            buttons: for the current one, beside Delete.
        """
        told = Words(words, "quiet")
        told.setWordWrap(True)
        new = QHBoxLayout()
        new.setSpacing(GRID)
        for widget, room in row:
            new.addWidget(widget, room)
        box = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        for button in (*buttons, self.delete):
            box.addButton(button, QDialogButtonBox.ButtonRole.ActionRole)
            button.setAutoDefault(False)
        box.rejected.connect(self.reject)
        box.button(QDialogButtonBox.StandardButton.Close).setAutoDefault(False)
        self.add.setDefault(True)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, 2 * GRID, 2 * GRID, 2 * GRID)
        layout.setSpacing(GRID)
        layout.addWidget(told)
        layout.addLayout(new)
        layout.addWidget(listed, 1)
        layout.addWidget(self.wrong)
        layout.addWidget(box)
        self.resize(*size)

    def add_one(self) -> None:
        """Add what was typed, or say why it cannot be."""
        raise NotImplementedError

    def delete_current(self) -> None:
        """Delete the current one, or say why it has to stay."""
        raise NotImplementedError

    def refuse(self, sentence: str) -> None:
        """Say why it is not taken; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))

    def attempt(self, words: str, change: Callable[[Assembly], Assembly]) -> bool:
        """Try an edit; say in place why it is refused, and return whether it was taken."""
        refusal = self._session.attempt(words, change)
        self.refuse(refusal)
        return not refusal


class BesideTable(QTableWidget):
    """The list as a table: a row for each one; Delete deletes the current one."""

    def __init__(self, dialog: BesideDialog, name: str, headings: Sequence[str]) -> None:
        super().__init__(0, len(headings))
        self._dialog = dialog
        self.setObjectName("beside")
        self.setAccessibleName(name)
        self.setHorizontalHeaderLabels(list(headings))
        self.verticalHeader().hide()
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Delete deletes the current one; everything else is as in any table."""
        if event.key() == Qt.Key.Key_Delete:
            self._dialog.delete_current()
            return
        super().keyPressEvent(event)
