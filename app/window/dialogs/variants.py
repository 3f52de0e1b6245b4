"""The list of the document's variants: add, rename and delete them, each as one step to undo."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QListWidget,
    QListWidgetItem,
    QPushButton,
    QVBoxLayout,
)

from app.window.fields import TextField
from app.window.style import GRID, Words
from core.assembly.variants import with_variant_added, with_variant_renamed, without_variant

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtWidgets import QWidget

    from app.window.session import Session
    from core.assembly import Assembly

HELP = (
    "A line can be in some variants only, such as payload empty and payload full: choose them on its Part page. The "
    "variant chosen at the top of the window is the one whose values count everywhere."
)


class VariantsDialog(QDialog):
    """Stays beside the window; each change is an edit of the document, or is refused in place."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.setWindowTitle("Variants")
        self.name = TextField("New variant", "payload full")
        self.add = QPushButton("Add")
        self.delete = QPushButton("Delete")
        self.list = QListWidget()
        self.list.setAccessibleName("Variants")
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        self._lay_out()
        self.add.clicked.connect(self.add_variant)
        self.delete.clicked.connect(self.delete_variant)
        self.list.itemChanged.connect(self._renamed)
        session.changed.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        words = Words(HELP, "quiet")
        words.setWordWrap(True)
        new = QHBoxLayout()
        new.setSpacing(GRID)
        new.addWidget(self.name, 1)
        new.addWidget(self.add)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.addButton(self.delete, QDialogButtonBox.ButtonRole.ActionRole)
        buttons.rejected.connect(self.reject)
        self.add.setDefault(True)
        for button in (buttons.button(QDialogButtonBox.StandardButton.Close), self.delete):
            button.setAutoDefault(False)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, 2 * GRID, 2 * GRID, 2 * GRID)
        layout.setSpacing(GRID)
        layout.addWidget(words)
        layout.addLayout(new)
        layout.addWidget(self.list, 1)
        layout.addWidget(self.wrong)
        layout.addWidget(buttons)
        self.resize(480, 320)

    def refresh(self) -> None:
        """Show the variants as they are now."""
        variants, row = self._session.assembly.variants, self.list.currentRow()
        self.list.blockSignals(True)
        self.list.clear()
        for name in variants:
            item = QListWidgetItem(name)
            item.setFlags(item.flags() | Qt.ItemFlag.ItemIsEditable)
            self.list.addItem(item)
        self.list.blockSignals(False)
        self.list.setCurrentRow(min(row, len(variants) - 1))
        self.delete.setEnabled(bool(variants))

    def add_variant(self) -> None:
        """Add the variant that was typed, or say why it cannot be one."""
        name = self.name.text().strip()
        if self._attempt(f"Add variant {name}", lambda assembly: with_variant_added(assembly, name)):
            self.name.set_value("")
            self.name.clear()
            self.list.setCurrentRow(self.list.count() - 1)

    def delete_variant(self) -> None:
        """Delete the current variant, or say which lines are in it only."""
        item = self.list.currentItem()
        if item is not None:
            name = item.text()
            self._attempt(f"Delete variant {name}", lambda assembly: without_variant(assembly, name))

    def _renamed(self, item: QListWidgetItem) -> None:
        old, new = self._session.assembly.variants[self.list.row(item)], item.text().strip()
        if old != new:
            self._attempt(f"Rename variant {old} to {new}", lambda before: with_variant_renamed(before, old, new))
        # A refused name, or one with blanks around it, is shown as it was.
        self.refresh()

    def _attempt(self, words: str, change: Callable[[Assembly], Assembly]) -> bool:
        refusal = self._session.attempt(words, change)
        self.wrong.setText(refusal)
        self.wrong.setVisible(bool(refusal))
        return not refusal
