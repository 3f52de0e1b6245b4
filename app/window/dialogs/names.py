"""The table of the document's named dimensions: add, change, rename and delete them, each as one step to undo."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QHeaderView,
    QPushButton,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.window.fields import TextField
from app.window.style import GRID, Words
from core.assembly.names import NameEntry
from core.assembly.naming import entries_of, uses_of, with_entry, with_name_changed, without_name
from core.errors import EditRefused
from core.quantity import compact

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QKeyEvent

    from app.window.session import Session
    from core.assembly import Assembly
    from core.assembly.names import NamedDimension

HEADINGS = ("Name", "Is", "Value", "Used", "Note")
NAME, TEXT, VALUE, USED, NOTE = range(5)
HELP = (
    "Use a name in any number field, with arithmetic: plate_d/2 + 3 mm. Functions: sqrt, sin, cos, tan (of an angle "
    'with its unit), min and max (values separated by ";"), and pi. A change goes to every number typed with the name.'
)
SHOWN_DIGITS = 9
MOST_USES_TOLD = 12


class NamesDialog(QDialog):
    """Stays beside the window; every cell that is left changed is an edit of the document, or is refused in place."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.setWindowTitle("Named dimensions")
        self.name = TextField("New name", "plate_d")
        self.text = TextField("What it is", "400 mm")
        self.note = TextField("Note on the new name", "note")
        self.add = QPushButton("Add")
        self.delete = QPushButton("Delete")
        self.table = NamesTable(self)
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        self._lay_out()
        self.add.clicked.connect(self.add_name)
        self.delete.clicked.connect(self.delete_name)
        self.table.itemChanged.connect(self._changed)
        self.table.itemSelectionChanged.connect(self._allow)
        for signal in (session.changed, session.shown_differently):
            signal.connect(self.refresh)
        self.refresh()

    def _lay_out(self) -> None:
        words = Words(HELP, "quiet")
        words.setWordWrap(True)
        new = QHBoxLayout()
        new.setSpacing(GRID)
        for widget, room in ((self.name, 2), (self.text, 3), (self.note, 3), (self.add, 0)):
            new.addWidget(widget, room)
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
        layout.addWidget(self.table, 1)
        layout.addWidget(self.wrong)
        layout.addWidget(buttons)
        self.resize(720, 420)

    def refresh(self) -> None:
        """Show the names as they are now."""
        names, row = self._session.assembly.names, self.table.currentRow()
        self.table.blockSignals(True)
        self.table.setRowCount(len(names))
        for at, one in enumerate(names):
            self._show_row(at, one)
        self.table.blockSignals(False)
        self.table.setCurrentCell(min(row, len(names) - 1), max(self.table.currentColumn(), 0))
        self._allow()

    def _show_row(self, at: int, one: NamedDimension) -> None:
        unit = self._session.units[one.kind]
        figure = compact(unit.from_si(one.value), SHOWN_DIGITS, decimal_mark=self._session.decimal_mark)
        value = f"{figure} {unit.symbol}".rstrip()
        uses = uses_of(self._session.assembly, one.name)
        told = "\n".join(f"{use.where}: {use.text}" for use in uses[:MOST_USES_TOLD])
        for column, words in enumerate((one.name, one.text, value, str(len(uses)), one.note)):
            item = QTableWidgetItem(words)
            item.setToolTip(told if column == USED else str(one.kind) if column == VALUE else "")
            if column in {VALUE, USED}:
                item.setFlags(item.flags() & ~Qt.ItemFlag.ItemIsEditable)
                item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
            self.table.setItem(at, column, item)

    def refuse(self, sentence: str) -> None:
        """Say why it is not taken; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))

    def add_name(self) -> None:
        """Add the name that was typed, or say why it cannot be one."""
        entry = NameEntry(self.name.text().strip(), self.text.text().strip(), self.note.text().strip())

        def change(assembly: Assembly) -> Assembly:
            if any(one.name == entry.name for one in assembly.names):
                raise EditRefused(
                    "there is a named dimension of this name", read=entry.name, remedy="Change it in the table"
                )
            return with_entry(assembly, entry)

        if self._attempt(f"Add {entry.name} = {entry.text}", change):
            for field in (self.name, self.text, self.note):
                field.set_value("")
                field.clear()
            self.table.setCurrentCell(self.table.rowCount() - 1, TEXT)
            self.name.setFocus(Qt.FocusReason.OtherFocusReason)

    def delete_name(self) -> None:
        """Delete the current name, or say which lines use it."""
        row = self.table.currentRow()
        if row >= 0:
            name = self._session.assembly.names[row].name
            self._attempt(f"Delete the named dimension {name}", lambda assembly: without_name(assembly, name))

    def _attempt(self, words: str, change: Callable[[Assembly], Assembly]) -> bool:
        refusal = self._session.attempt(words, change)
        self.refuse(refusal)
        return not refusal

    def _changed(self, item: QTableWidgetItem) -> None:
        """Take a cell that was edited as an edit of the document; one that is refused shows its old text again."""
        entry = entries_of(self._session.assembly)[item.row()]
        text = item.text().strip()
        if item.column() == NAME:
            taken = text == entry.name or self._attempt(
                f"Rename {entry.name} to {text}", lambda assembly: with_name_changed(assembly, entry.name, text)
            )
        else:
            new = NameEntry(entry.name, text if item.column() == TEXT else entry.text,
                            text if item.column() == NOTE else entry.note)
            words = f"{entry.name} = {text}" if item.column() == TEXT else f"Note on {entry.name}"
            taken = new == entry or self._attempt(words, lambda assembly: with_entry(assembly, new))
        if not taken:
            self.refresh()

    def _allow(self) -> None:
        self.delete.setEnabled(self.table.currentRow() >= 0)


class NamesTable(QTableWidget):
    """A row for each name; Delete deletes the current one."""

    def __init__(self, dialog: NamesDialog) -> None:
        super().__init__(0, len(HEADINGS))
        self._dialog = dialog
        self.setAccessibleName("Named dimensions")
        self.setHorizontalHeaderLabels(HEADINGS)
        self.verticalHeader().hide()
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        header = self.horizontalHeader()
        for column in (NAME, VALUE, USED):
            header.setSectionResizeMode(column, QHeaderView.ResizeMode.ResizeToContents)
        for column in (TEXT, NOTE):
            header.setSectionResizeMode(column, QHeaderView.ResizeMode.Stretch)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Delete deletes the current name; everything else is as in any table."""
        if event.key() == Qt.Key.Key_Delete:
            self._dialog.delete_name()
            return
        super().keyPressEvent(event)
