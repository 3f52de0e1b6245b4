"""A table of values under headings, each with its symbol, label and unit, and a way to copy it as a number."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QColor, QFont, QGuiApplication, QKeyEvent
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView

from app.window.numbers import copied, preview, shown
from app.window.style import colours
from core.handover import Entry
from core.quantity import UNITS

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session

Index = QModelIndex | QPersistentModelIndex
Sections: TypeAlias = tuple[tuple[str, tuple[Entry, ...]], ...]
SYMBOL, LABEL, VALUE, UNIT, COPY = range(5)
SHOWN_DIGITS = 5
SYMBOL_WIDTH = 56


class ValuesModel(QAbstractTableModel):
    """Sections and their entries as rows."""

    def __init__(self, session: Session, parent: QObject, short: Callable[[Entry], str]) -> None:
        super().__init__(parent)
        self._session = session
        self._short = short
        self.rows: list[Entry | str] = []

    def show(self, sections: Sections) -> None:
        """Show other values; the rows stay in place where only what they say changed."""
        rows: list[Entry | str] = []
        for heading, entries in sections:
            rows += [heading, *entries]
        same = [_name(row) for row in rows] == [_name(row) for row in self.rows]
        if not same:
            self.beginResetModel()
        self.rows = rows
        if same:
            self.dataChanged.emit(self.index(0, 0), self.index(len(rows) - 1, COPY))
        else:
            self.endResetModel()

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return headings and values."""
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return symbol, label, value, unit, copy."""
        return 0 if parent.isValid() else 5

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's text, font, colour or tool tip."""
        row = self.rows[index.row()]
        if isinstance(row, str):
            return self._heading_data(row, index.column(), role)
        if role in {Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole, Qt.ItemDataRole.AccessibleTextRole}:
            return self._text(row, index.column(), role)
        return _look(index.column(), role)

    def _text(self, entry: Entry, column: int, role: int) -> str:
        value = shown(self._session, entry.si, entry.unit, SHOWN_DIGITS)
        if role == Qt.ItemDataRole.ToolTipRole:
            return f"{entry.label}\n{entry.reason or entry.basis}".strip()
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{entry.label} {value} {entry.unit.symbol}"
        copy = "copy" if entry.si is not None else ""
        symbol = entry.symbol.removesuffix("_c").replace("_", " ")
        return (symbol, self._short(entry), value, entry.unit.symbol, copy)[column]

    @staticmethod
    def _heading_data(text: str, column: int, role: int) -> object:
        if column != SYMBOL:
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return text
        if role == Qt.ItemDataRole.ForegroundRole:
            return QColor(colours().quiet)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom)
        return None

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Return that values can be selected and headings cannot."""
        if isinstance(self.rows[index.row()], str):
            return Qt.ItemFlag.ItemIsEnabled
        return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable


def _look(column: int, role: int) -> object:
    """Return alignment, colour or font of a value's cells."""
    if role == Qt.ItemDataRole.TextAlignmentRole:
        side = Qt.AlignmentFlag.AlignRight if column in {VALUE, COPY} else Qt.AlignmentFlag.AlignLeft
        return int(side | Qt.AlignmentFlag.AlignVCenter)
    if role == Qt.ItemDataRole.ForegroundRole:
        c = colours()
        return QColor({SYMBOL: c.quiet, UNIT: c.quiet, COPY: c.blue}.get(column, c.text))
    if role == Qt.ItemDataRole.FontRole:
        font = QFont()
        font.setItalic(column == SYMBOL)
        font.setBold(column == VALUE)
        return font
    return None


def _name(row: Entry | str) -> str:
    return row if isinstance(row, str) else row.label


class ValuesTable(QTableView):
    """The values under their headings; Return or a click on "copy" copies one.

    Args:
        session: whose numbers and units.
        label: what a screen reader calls the table.
        short: the label of a value in its row; the whole label stands in the tool tip.
    """

    def __init__(self, session: Session, label: str, short: Callable[[Entry], str] = lambda entry: entry.label) -> None:
        super().__init__()
        self._session = session
        self.values = ValuesModel(session, self, short)
        self.setModel(self.values)
        self.setAccessibleName(label)
        self.setShowGrid(False)
        self.verticalHeader().hide()
        self.horizontalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(24)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        self.clicked.connect(self._clicked)

    def _clicked(self, index: QModelIndex) -> None:
        if index.column() == COPY:
            self.copy_row(index.row())

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Return copies the current value."""
        if event.key() in {Qt.Key.Key_Return, Qt.Key.Key_Enter} and self.currentIndex().isValid():
            self.copy_row(self.currentIndex().row())
            return
        super().keyPressEvent(event)

    def show_sections(self, sections: Sections) -> None:
        """Show the values of these sections."""
        self.values.show(sections)
        self.clearSpans()
        for at, row in enumerate(self.values.rows):
            if isinstance(row, str):
                self.setSpan(at, 0, 1, COPY + 1)
        header = self.horizontalHeader()
        for column in (VALUE, UNIT, COPY):
            header.setSectionResizeMode(column, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(SYMBOL, QHeaderView.ResizeMode.Fixed)
        header.resizeSection(SYMBOL, SYMBOL_WIDTH)
        header.setSectionResizeMode(LABEL, QHeaderView.ResizeMode.Stretch)

    def copy_row(self, row: int) -> None:
        """Put one value on the clipboard: full precision, no unit."""
        entry = self.values.rows[row]
        if isinstance(entry, str) or entry.si is None:
            return
        text = copied(self._session, entry.si, entry.unit)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied {text} ({entry.symbol} in {entry.unit.symbol or UNITS[''].kind})")

    def copy_selection(self) -> bool:
        """Put the selected values on the clipboard, one below the other; return whether any are."""
        rows = sorted({index.row() for index in self.selectedIndexes()})
        values = [entry for entry in (self.values.rows[row] for row in rows) if isinstance(entry, Entry)]
        if not values:
            return False
        lines = [copied(self._session, entry.si, entry.unit) if entry.si is not None else "" for entry in values]
        text = "\n".join(lines)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied {len(lines)} value{'s' if len(lines) > 1 else ''}: {preview(text)}")
        return True
