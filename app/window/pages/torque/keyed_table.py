"""What the tables of the drive's inputs share: plain rows, cells that are typed in, keys for what is done with rows."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent
from PySide6.QtWidgets import QAbstractItemDelegate, QAbstractItemView, QTableView, QWidget

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtCore import QAbstractTableModel

ROW_HEIGHT = 24


class KeyedTable(QTableView):
    """Rows to choose from; Delete takes out, Ctrl+V and Ctrl+C paste and copy, Return edits a cell or opens the row.

    Signals:
        removed: the selected rows are to be taken out.
        pasted: a block of text from the clipboard.
        copying: the selected rows are wanted on the clipboard.
        opened: the fields of the current row are wanted.
    """

    removed = Signal()
    pasted = Signal(str)
    copying = Signal()
    opened = Signal()

    def __init__(self, label: str, model: QAbstractTableModel) -> None:
        super().__init__()
        self.setAccessibleName(label)
        self.setModel(model)
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.setTabKeyNavigation(False)
        self.verticalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(ROW_HEIGHT)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        header = self.horizontalHeader()
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        header.setHighlightSections(False)
        header.setObjectName("rows")
        self._staying = False
        self.taken: dict[tuple[Qt.Key, Qt.KeyboardModifier], Callable[[], None]] = {
            (Qt.Key.Key_Delete, Qt.KeyboardModifier.NoModifier): self.removed.emit,
            (Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier): self._paste,
            (Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier): self.copying.emit,
        }

    def type_in_cells(self) -> None:
        """Let cells be edited by typing, a double click, Return or F2; Return in one goes on below."""
        self.setEditTriggers(QAbstractItemView.EditTrigger.AnyKeyPressed | QAbstractItemView.EditTrigger.DoubleClicked)
        self.itemDelegate().closeEditor.connect(self._go_down)

    def stay(self) -> None:
        """Stay at the cell whose text is being refused, so that it can be mended."""
        self._staying = True

    def _paste(self) -> None:
        self.pasted.emit(QGuiApplication.clipboard().text())

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Do what the keys of the table say; Return and F2 edit the cell or open the row."""
        pressed = _pressed(event)
        if self.state() == QAbstractItemView.State.EditingState:
            # A cell that is being edited is finished by its editor; the key is used up here all the same.
            event.accept()
        elif pressed in self.taken:
            self.taken[pressed]()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_F2):
            self._open()
        else:
            super().keyPressEvent(event)

    def _open(self) -> None:
        index = self.currentIndex()
        typed_in = bool(self.editTriggers()) and bool(self.model().flags(index) & Qt.ItemFlag.ItemIsEditable)
        if index.isValid() and typed_in:
            self.edit(index)
        else:
            self.opened.emit()

    def _go_down(self, _editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """Go to the next row when a cell was finished with Return, and was not refused."""
        if hint == QAbstractItemDelegate.EndEditHint.SubmitModelCache and not self._staying:
            row = min(self.currentIndex().row() + 1, self.model().rowCount() - 1)
            self.setCurrentIndex(self.model().index(row, self.currentIndex().column()))
        self._staying = False

    def event(self, event: QEvent) -> bool:
        """Keep the keys that the table takes from the commands of the window while the keyboard is here."""
        override = event.type() == QEvent.Type.ShortcutOverride
        if override and isinstance(event, QKeyEvent) and _pressed(event) in self.taken:
            event.accept()
            return True
        return super().event(event)


def _pressed(event: QKeyEvent) -> tuple[Qt.Key, Qt.KeyboardModifier]:
    return Qt.Key(event.key()), event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
