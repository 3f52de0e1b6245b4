"""The table of the document's named dimensions: add, change, rename and delete them, each as one step to undo."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHeaderView, QTableWidgetItem, QWidget

from app.window.dialogs.beside import BesideDialog, BesideTable
from app.window.fields import TextField
from core.assembly.names import NameEntry
from core.assembly.naming import entries_of, uses_of, with_entry, with_name_changed, without_name
from core.errors import EditRefused
from core.quantity import compact

if TYPE_CHECKING:
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


class NamesDialog(BesideDialog):
    """Every cell that is left changed is an edit of the document, or is refused in place."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(session, "Named dimensions", parent)
        self.name = TextField("New name", "plate_d")
        self.text = TextField("What it is", "400 mm")
        self.note = TextField("Note on the new name", "note")
        self.table = BesideTable(self, "Named dimensions", HEADINGS)
        for column in range(len(HEADINGS)):
            modes = QHeaderView.ResizeMode
            mode = modes.Stretch if column in {TEXT, NOTE} else modes.ResizeToContents
            self.table.horizontalHeader().setSectionResizeMode(column, mode)
        self.lay_out(
            HELP, ((self.name, 2), (self.text, 3), (self.note, 3), (self.add, 0)), self.table, (720, 420)
        )
        self.table.itemChanged.connect(self._changed)
        self.table.itemSelectionChanged.connect(self._allow)
        for signal in (session.changed, session.shown_differently):
            signal.connect(self.refresh)
        self.refresh()

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

    def add_one(self) -> None:
        """Add the name that was typed, or say why it cannot be one."""
        entry = NameEntry(self.name.text().strip(), self.text.text().strip(), self.note.text().strip())

        def change(assembly: Assembly) -> Assembly:
            if any(one.name == entry.name for one in assembly.names):
                raise EditRefused(
                    "there is a named dimension of this name", read=entry.name, remedy="Change it in the table"
                )
            return with_entry(assembly, entry)

        if self.attempt(f"Add {entry.name} = {entry.text}", change):
            for field in (self.name, self.text, self.note):
                field.set_value("")
                field.clear()
            self.table.setCurrentCell(self.table.rowCount() - 1, TEXT)
            self.name.setFocus(Qt.FocusReason.OtherFocusReason)

    def delete_current(self) -> None:
        """Delete the current name, or say which lines use it."""
        row = self.table.currentRow()
        if row >= 0:
            name = self._session.assembly.names[row].name
            self.attempt(f"Delete the named dimension {name}", lambda assembly: without_name(assembly, name))

    def _changed(self, item: QTableWidgetItem) -> None:
        """Take a cell that was edited as an edit of the document; one that is refused shows its old text again."""
        entry = entries_of(self._session.assembly)[item.row()]
        text = item.text().strip()
        if item.column() == NAME:
            taken = text == entry.name or self.attempt(
                f"Rename {entry.name} to {text}", lambda assembly: with_name_changed(assembly, entry.name, text)
            )
        else:
            new = NameEntry(entry.name, text if item.column() == TEXT else entry.text,
                            text if item.column() == NOTE else entry.note)
            words = f"{entry.name} = {text}" if item.column() == TEXT else f"Note on {entry.name}"
            taken = new == entry or self.attempt(words, lambda assembly: with_entry(assembly, new))
        if not taken:
            self.refresh()

    def _allow(self) -> None:
        self.delete.setEnabled(self.table.currentRow() >= 0)
