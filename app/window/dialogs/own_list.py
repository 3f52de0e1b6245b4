"""The user's own list beside the window: its materials, known parts and groups, each to add, bring in and write out."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QHeaderView,
    QMessageBox,
    QPushButton,
    QTableWidget,
    QTableWidgetItem,
    QTabWidget,
    QVBoxLayout,
    QWidget,
)

from app.window.dialogs.choosing import DOCUMENT, DOCUMENTS, ask_file, ask_new_file, with_ending
from app.window.dialogs.form import show_over
from app.window.fields import QuantityField, TextField
from app.window.numbers import shown
from app.window.style import GRID, Words
from core.assembly import KnownAxial, KnownTensor
from core.document.own_list import KNOWN_PARTS, OWN_MATERIALS, OwnPart
from core.document.own_list.entries import OWN_GROUP
from core.errors import FileRefused
from core.material import Material
from core.quantity import Kind

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from app.window.own_commands import OwnListCommands
    from app.window.session import Session
    from core.document.own_list import ListKind

LISTS, LIST_ENDING = "Lists (*.toml)", ".toml"
HELP = (
    "What you use again and again. Materials stand beside the table wherever one is chosen; a document keeps the "
    "density itself. Nothing in the list is replaced: a name that is taken is refused, an import gives another one."
)


class OwnListDialog(QDialog):
    """Three pages; each edit is written at once, or refused in place."""

    def __init__(self, session: Session, commands: OwnListCommands, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Own list")
        self.materials = MaterialsPage(session)
        self.known_parts = KnownPartsPage(session)
        self.groups = GroupsPage(session, commands)
        self.tabs = QTabWidget()
        self.tabs.tabBar().setAccessibleName("Kinds of entries")
        for page, words in (
            (self.materials, "Materials"), (self.known_parts, "Known parts"), (self.groups, "Groups"),
        ):
            self.tabs.addTab(page, words)
        folder = Words(f"The files are in {session.own.folder}", "quiet")
        folder.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        folder.setWordWrap(True)
        told = Words(HELP, "quiet")
        told.setWordWrap(True)
        box = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        box.rejected.connect(self.reject)
        box.button(QDialogButtonBox.StandardButton.Close).setAutoDefault(False)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, 2 * GRID, 2 * GRID, 2 * GRID)
        layout.setSpacing(GRID)
        for widget, room in ((told, 0), (self.tabs, 1), (folder, 0), (box, 0)):
            layout.addWidget(widget, room)
        self.resize(820, 480)


class ListPage(QWidget):
    """A table of entries, what was refused, and the buttons that every page has."""

    def __init__(self, session: Session, name: str, headings: Sequence[str], new: QWidget | None = None) -> None:
        super().__init__()
        self.session = session
        self.table = QTableWidget(0, len(headings))
        self.table.setAccessibleName(name)
        self.table.setObjectName("beside")
        self.table.setHorizontalHeaderLabels(list(headings))
        self.table.verticalHeader().hide()
        self.table.setShowGrid(False)
        self.table.setTabKeyNavigation(False)
        self.table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.table.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.table.horizontalHeader().setStretchLastSection(True)
        self.table.horizontalHeader().setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
        self.wrong = Words("", "failed")
        self.wrong.setWordWrap(True)
        self.wrong.hide()
        self._buttons = QHBoxLayout()
        self._buttons.setSpacing(GRID)
        self._buttons.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setSpacing(GRID)
        if new is not None:
            layout.addWidget(new)
        layout.addWidget(self.table, 1)
        layout.addWidget(self.wrong)
        layout.addLayout(self._buttons)
        self.bring_in = self.button("Import…", self.ask_import)
        self.write_out = self.button("Export…", self.ask_export)
        self.remove = self.button("Remove…", self.ask_remove)
        session.own.changed.connect(self.refresh)
        session.shown_differently.connect(self.refresh)

    def button(self, words: str, call: Callable[[], object]) -> QPushButton:
        """Add a button behind the others."""
        button = QPushButton(words)
        button.setAutoDefault(False)
        button.clicked.connect(lambda _checked=False: call())
        self._buttons.addWidget(button)
        return button

    def rows(self) -> list[tuple[str, ...]]:
        """Return the cells of each entry."""
        raise NotImplementedError

    def refresh(self) -> None:
        """Show the list as it is now."""
        rows, current = self.rows(), self.table.currentRow()
        self.table.setRowCount(len(rows))
        for at, cells in enumerate(rows):
            for column, text in enumerate(cells):
                item = QTableWidgetItem(text)
                item.setToolTip(text)
                self.table.setItem(at, column, item)
        self.table.setCurrentCell(min(max(current, 0), len(rows) - 1), 0)
        for button in (self.write_out, self.remove):
            button.setEnabled(bool(rows))

    def refuse(self, sentence: str) -> None:
        """Say why something was not done; "" says nothing."""
        self.wrong.setText(sentence)
        self.wrong.setVisible(bool(sentence))

    def chosen(self) -> list[int]:
        """Return the selected rows; all where none is."""
        rows = sorted({index.row() for index in self.table.selectedIndexes()})
        return rows or list(range(self.table.rowCount()))

    def ask_remove(self) -> None:
        """Ask whether the current entry is to go; it cannot be undone."""
        row = self.table.currentRow()
        if row < 0:
            return
        name = self.rows()[row][0]
        words = f"Take {name} out of your list? This cannot be undone. Documents that use it stay as they are."
        box = QMessageBox(QMessageBox.Icon.NoIcon, "Own list", words, parent=self)
        box.setTextFormat(Qt.TextFormat.PlainText)
        gone = box.addButton("Remove", QMessageBox.ButtonRole.DestructiveRole)
        box.setEscapeButton(box.addButton("Cancel", QMessageBox.ButtonRole.RejectRole))
        box.finished.connect(lambda _result: self.refuse(self.drop(row)) if box.clickedButton() is gone else None)
        show_over(box)

    def ask_import(self) -> None:
        """Ask for a file, and add what it holds."""
        raise NotImplementedError

    def ask_export(self) -> None:
        """Ask for a new file, and write what is selected into it."""
        raise NotImplementedError

    def drop(self, row: int) -> str:
        """Take an entry out of the list; return "" or the sentence that refuses it."""
        raise NotImplementedError


class EntriesPage(ListPage):
    """A page of one of the list's text files."""

    kind: ListKind[Any]

    def entries(self) -> Sequence[Any]:
        """Return the entries of the file."""
        raise NotImplementedError

    def ask_import(self) -> None:
        """Ask for a list file, and add its entries."""
        ask_file(self, f"Import {self.kind.words}s", self.session.folder, LISTS, self.import_file)

    def import_file(self, path: Path) -> None:
        """Add the entries of a list file."""
        self.refuse(self.session.own.take_in(self.kind, path))

    def ask_export(self) -> None:
        """Ask for a new file, and write the selected entries into it."""
        suggested = (self.session.folder or Path.home()) / f"my {self.kind.words}s{LIST_ENDING}"
        ask_new_file(self, f"Export {self.kind.words}s", suggested, LISTS, self.export_to)

    def export_to(self, chosen: Path) -> None:
        """Write the selected entries into a new file."""
        entries = self.entries()
        wanted = [entries[row] for row in self.chosen()]
        self.refuse(_refusal(lambda: self.session.own.write_out(self.kind, wanted, with_ending(chosen, LIST_ENDING))))

    def drop(self, row: int) -> str:
        """Take an entry out of the list."""
        return self.session.own.drop(self.kind, self.entries()[row].name)


class MaterialsPage(EntriesPage):
    """Materials with density, spread and source, and a row to add one with."""

    kind = OWN_MATERIALS

    def __init__(self, session: Session) -> None:
        self.name = TextField("Name of the new material", "name")
        self.density = QuantityField(session, "density of the new material", Kind.DENSITY)
        self.spread = QuantityField(session, "plus or minus", Kind.DENSITY)
        self.spread.set_value(0.0)
        self.source = TextField("Source of the density", "source")
        add = QPushButton("Add")
        add.setDefault(True)
        add.clicked.connect(lambda _checked=False: self.add_one())
        new = QWidget()
        row = QHBoxLayout(new)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(GRID)
        for widget, room in (
            (self.name, 2), (self.density, 0), (Words("±", "quiet"), 0), (self.spread, 0), (self.source, 2), (add, 0),
        ):
            row.addWidget(widget, room)
        super().__init__(session, "Own materials", ("Name", "Density", "From", "To", "Source", "Found as"), new)
        self.add = add
        self.refresh()

    def entries(self) -> Sequence[Material]:
        """Return the materials."""
        return self.session.own.materials

    def rows(self) -> list[tuple[str, ...]]:
        """Return name, density, its bounds and source of each."""
        unit = self.session.units[Kind.DENSITY]
        return [
            (
                one.name,
                *(f"{shown(self.session, value, unit)} {unit.symbol}" for value in (one.density, one.low, one.high)),
                one.source, ", ".join(one.also),
            )
            for one in self.entries()
        ]

    def add_one(self) -> None:
        """Add the material that was typed, or say why it cannot be."""
        density, spread = self.density.read(), self.spread.read()
        if density is None or spread is None:
            return
        low, high = density.value - abs(spread.value), density.value + abs(spread.value)
        made = Material(self.name.text().strip(), density.value, low, high, self.source.text().strip(), OWN_GROUP)
        refusal = self.session.own.keep(OWN_MATERIALS, made)
        self.refuse(refusal)
        if not refusal:
            self.name.set_value("")
            self.name.clear()
            self.name.setFocus(Qt.FocusReason.OtherFocusReason)


class KnownPartsPage(EntriesPage):
    """Known parts with mass and source; one is kept from the document, or when it is added to one."""

    kind = KNOWN_PARTS

    def __init__(self, session: Session) -> None:
        super().__init__(session, "Own known parts", ("Name", "Mass", "Inertia given as", "Source"))
        self.keep = self.button("Keep selected part", self.keep_selected)
        self.refresh()

    def entries(self) -> Sequence[OwnPart]:
        """Return the known parts."""
        return self.session.own.known_parts

    def rows(self) -> list[tuple[str, ...]]:
        """Return name, mass, kind of inertia and source of each."""
        unit = self.session.units[Kind.MASS]
        return [
            (
                one.name, f"{shown(self.session, one.body.mass, unit)} {unit.symbol}",
                f"tensor about the {one.body.about}" if isinstance(one.body, KnownTensor) else "J about its axis",
                one.body.source,
            )
            for one in self.entries()
        ]

    def keep_selected(self) -> None:
        """Keep the known part that is selected in the ledger."""
        part = self.session.selected_part
        if part is None or not isinstance(part.body, KnownTensor | KnownAxial):
            self.refuse("Select one known part in the ledger first.")
            return
        self.refuse(self.session.own.keep(KNOWN_PARTS, OwnPart(part.name, part.body)))


class GroupsPage(ListPage):
    """Groups, each a document: kept from the ledger, placed as a copy or linked."""

    def __init__(self, session: Session, commands: OwnListCommands) -> None:
        super().__init__(session, "Own groups", ("Name", "File"))
        self._commands = commands
        self.keep = self.button("Keep selected group", lambda: self.refuse(commands.keep_group()))
        self.copy = self.button("Place a copy", lambda: self._place(commands.place_copy))
        self.link = self.button("Place linked", lambda: self._place(commands.place_linked))
        self.refresh()

    def rows(self) -> list[tuple[str, ...]]:
        """Return name and file of each group."""
        return [(path.stem, path.name) for path in self.session.own.groups]

    def _place(self, place: Callable[[int], None]) -> None:
        row = self.table.currentRow()
        if row < 0:
            self.refuse("There is no group in your list yet.")
        else:
            place(row)

    def ask_import(self) -> None:
        """Ask for a document, and keep a copy of it."""
        ask_file(self, "Import a group", self.session.folder, DOCUMENTS, self.import_file)

    def import_file(self, path: Path) -> None:
        """Keep a copy of a document."""
        self.refuse("")
        self.session.own.take_in_group(path, self.refuse)

    def ask_export(self) -> None:
        """Ask for a new file, and write a copy of the current group to it."""
        row = self.table.currentRow()
        if row >= 0:
            suggested = (self.session.folder or Path.home()) / self.session.own.groups[row].name
            ask_new_file(self, "Export a group", suggested, DOCUMENTS, lambda chosen: self.export_to(row, chosen))

    def export_to(self, row: int, chosen: Path) -> None:
        """Write a copy of a group to a new file."""

        def write() -> str:
            self.session.own.write_out_group(self.session.own.groups[row], with_ending(chosen, DOCUMENT), self.refuse)
            return ""

        self.refuse(_refusal(write))

    def drop(self, row: int) -> str:
        """Delete the document of a group."""
        return self.session.own.drop_group(self.session.own.groups[row])


def _refusal(write: Callable[[], str]) -> str:
    """Return what refuses to write to a chosen file; "" where nothing does."""
    try:
        return write()
    except FileRefused as error:
        return str(error)
