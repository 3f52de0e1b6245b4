"""The list of the document's variants: add, rename and delete them, each as one step to undo."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QListWidget, QListWidgetItem

from app.window.dialogs.beside import BesideDialog
from app.window.fields import TextField
from core.assembly.variants import with_variant_added, with_variant_renamed, without_variant

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.window.session import Session

HELP = (
    "A line can be in some variants only, such as payload empty and payload full: choose them on its Part page. The "
    "variant chosen at the top of the window is the one whose values count everywhere."
)


class VariantsDialog(BesideDialog):
    """Each change is an edit of the document, or is refused in place."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(session, "Variants", parent)
        self.name = TextField("New variant", "payload full")
        self.list = QListWidget()
        self.list.setAccessibleName("Variants")
        self.lay_out(HELP, ((self.name, 1), (self.add, 0)), self.list, (480, 320))
        self.list.itemChanged.connect(self._renamed)
        session.changed.connect(self.refresh)
        self.refresh()

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

    def add_one(self) -> None:
        """Add the variant that was typed, or say why it cannot be one."""
        name = self.name.text().strip()
        if self.attempt(f"Add variant {name}", lambda assembly: with_variant_added(assembly, name)):
            self.name.set_value("")
            self.name.clear()
            self.list.setCurrentRow(self.list.count() - 1)

    def delete_current(self) -> None:
        """Delete the current variant, or say which lines are in it only."""
        item = self.list.currentItem()
        if item is not None:
            name = item.text()
            self.attempt(f"Delete variant {name}", lambda assembly: without_variant(assembly, name))

    def _renamed(self, item: QListWidgetItem) -> None:
        old, new = self._session.assembly.variants[self.list.row(item)], item.text().strip()
        if old != new:
            self.attempt(f"Rename variant {old} to {new}", lambda before: with_variant_renamed(before, old, new))
        # A refused name, or one with blanks around it, is shown as it was.
        self.refresh()
