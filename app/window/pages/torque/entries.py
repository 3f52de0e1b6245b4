"""The entries of the drive's lists as one table: chosen, put in order, taken out and doubled by keys."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import (
    QAbstractTableModel,
    QItemSelectionModel,
    QModelIndex,
    QPersistentModelIndex,
    Qt,
    Signal,
)
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QAbstractItemView, QHeaderView

from app.window.pages.torque.keyed_table import KeyedTable
from app.window.style import colours

if TYPE_CHECKING:
    from PySide6.QtCore import QObject
    from PySide6.QtGui import QMouseEvent

Index = QModelIndex | QPersistentModelIndex


@dataclass(frozen=True)
class Entry:
    """One row.

    Attributes:
        root: path of the entry in the settings.
        holder: path of the list that it is in; "" for what is always there.
        name: what it is called.
        item: the entry itself.
        cells: what the row says.
        depth: how far it is set in.
    """

    root: str
    holder: str
    name: str
    item: object
    cells: tuple[str, ...] = ()
    depth: int = 0

    @property
    def index(self) -> int:
        """Its place in its list."""
        return int(self.root.rpartition(".")[2]) if self.holder else 0


class EntriesModel(QAbstractTableModel):
    """Entries as rows of text."""

    def __init__(self, headings: tuple[str, ...], parent: QObject) -> None:
        super().__init__(parent)
        self.headings = headings
        self.entries: list[Entry] = []

    def show(self, entries: list[Entry]) -> None:
        """Show other entries; the rows stay in place where only what they say changed."""
        same = len(entries) == len(self.entries)
        if not same:
            self.beginResetModel()
        self.entries = entries
        if same and entries:
            self.dataChanged.emit(self.index(0, 0), self.index(len(entries) - 1, len(self.headings) - 1))
        elif not same:
            self.endResetModel()

    def row_of(self, root: str) -> int:
        """Return the row of the entry at a path; -1 where none is."""
        return next((row for row, entry in enumerate(self.entries) if entry.root == root), -1)

    def text(self, entry: Entry, column: int) -> str:
        """Return what a cell says."""
        return entry.cells[column]

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return how many entries there are."""
        return 0 if parent.isValid() else len(self.entries)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return how many things are said of each."""
        return 0 if parent.isValid() else len(self.headings)

    def headerData(self, section: int, way: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a column's heading."""
        if way == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return self.headings[section]
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's text, or how it is set."""
        entry = self.entries[index.row()]
        text = self.text(entry, index.column())
        if role == Qt.ItemDataRole.DisplayRole:
            return "    " * entry.depth + text if index.column() == 0 else text
        if role == Qt.ItemDataRole.ToolTipRole:
            return text
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{entry.name}, {self.headings[index.column()]}: {text}".replace("\n", " ")
        if role == Qt.ItemDataRole.ForegroundRole and index.column():
            return QColor(colours().quiet)
        return None


class EntriesTable(KeyedTable):
    """Rows to choose from; Alt with the arrow keys moves them, Ctrl+D doubles one.

    Signals:
        chosen: another row is the current one.
        moved: the selected rows are wanted so many places further down.
        doubled: the current row is to be there twice.
    """

    chosen = Signal()
    moved = Signal(int)
    doubled = Signal()

    def __init__(self, label: str, model: EntriesModel) -> None:
        super().__init__(label, model)
        self.entries = model
        self.selectionModel().currentRowChanged.connect(lambda *_: self.chosen.emit())
        self.selectionModel().selectionChanged.connect(lambda *_: self.chosen.emit())
        self.taken |= {
            (Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier): lambda: self.moved.emit(-1),
            (Qt.Key.Key_Down, Qt.KeyboardModifier.AltModifier): lambda: self.moved.emit(1),
            (Qt.Key.Key_D, Qt.KeyboardModifier.ControlModifier): self.doubled.emit,
        }

    def stretch(self, column: int) -> None:
        """Give a column the room that the others leave."""
        header = self.horizontalHeader()
        header.setStretchLastSection(column == self.entries.columnCount() - 1)
        header.setSectionResizeMode(column, QHeaderView.ResizeMode.Stretch)

    @property
    def current(self) -> Entry | None:
        """The current entry."""
        row = self.currentIndex().row()
        return self.entries.entries[row] if 0 <= row < len(self.entries.entries) else None

    @property
    def selected(self) -> list[Entry]:
        """The selected entries, in order."""
        rows = sorted({index.row() for index in self.selectionModel().selectedRows()})
        return [self.entries.entries[row] for row in rows]

    def select(self, roots: list[str]) -> None:
        """Select the entries at these paths; the last one is current."""
        model = self.selectionModel()
        flags = QItemSelectionModel.SelectionFlag
        rows = [row for row in map(self.entries.row_of, roots) if row >= 0]
        if not rows:
            return
        column = max(self.currentIndex().column(), 0)
        model.setCurrentIndex(self.entries.index(rows[-1], column), flags.ClearAndSelect | flags.Rows)
        for row in rows[:-1]:
            model.select(self.entries.index(row, column), flags.Select | flags.Rows)
        self.scrollTo(self.entries.index(rows[-1], column))

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Open the row, where no cell is typed in there."""
        super().mouseDoubleClickEvent(event)
        if self.state() != QAbstractItemView.State.EditingState and self.currentIndex().isValid():
            self.opened.emit()
