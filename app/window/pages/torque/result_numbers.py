"""The tables of the result, one below the other, each with its basis; selected cells can be copied."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt, QTimer, Signal
from PySide6.QtGui import QColor, QFont, QGuiApplication, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHBoxLayout,
    QScrollArea,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from app.window.fields import ChoiceField
from app.window.numbers import preview, shown
from app.window.pages.torque.result_tables import Cell, Number, Table, Tables
from app.window.style import GRID, Words, colours
from core.drive import MOTOR
from core.handover import tsv_of_block
from core.quantity import fixed

if TYPE_CHECKING:
    from app.window.session import Session

Index = QModelIndex | QPersistentModelIndex
ROW_HEIGHT, DIGITS, FIT_REST_MS = 22, 5, 100
STAGES = "Inertia stage by stage"


class CellsModel(QAbstractTableModel):
    """The cells of one table."""

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self.table = Table("", "", (), ())

    def show(self, table: Table) -> bool:
        """Show another table; return whether it has other rows or columns, not only other values."""
        same = (table.headings, _first(table)) == (self.table.headings, _first(self.table))
        if not same:
            self.beginResetModel()
        self.table = table
        if not same:
            self.endResetModel()
        elif table.rows:
            self.dataChanged.emit(self.index(0, 0), self.index(len(table.rows) - 1, len(table.headings) - 1))
        return not same

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return the rows."""
        return 0 if parent.isValid() else len(self.table.rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return the columns."""
        return 0 if parent.isValid() else len(self.table.headings)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a heading."""
        if orientation == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return self.table.headings[section]
        if orientation == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.TextAlignmentRole:
            return int(self._side(section) | Qt.AlignmentFlag.AlignBottom)
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's text, font, colour, side or tool tip."""
        cell = self.table.rows[index.row()][index.column()]
        if role == Qt.ItemDataRole.DisplayRole:
            return self.text(cell)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return int(self._side(index.column()) | Qt.AlignmentFlag.AlignVCenter)
        if role == Qt.ItemDataRole.ForegroundRole:
            return QColor(self._colour(cell, index.column()))
        if role == Qt.ItemDataRole.ToolTipRole:
            return self._tip(index.row(), index.column())
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return self._tip(index.row(), index.column()).partition("\n")[0]
        return None

    def text(self, cell: Cell) -> str:
        """Return what a cell says."""
        if isinstance(cell, str):
            return cell
        if cell.si is None or cell.decimals is None:
            return shown(self._session, cell.si, cell.unit, DIGITS)
        return fixed(cell.unit.from_si(cell.si), cell.decimals, decimal_mark=self._session.decimal_mark)

    def _side(self, column: int) -> Qt.AlignmentFlag:
        numbers = any(isinstance(row[column], Number) for row in self.table.rows)
        return Qt.AlignmentFlag.AlignRight if numbers else Qt.AlignmentFlag.AlignLeft

    def _colour(self, cell: Cell, column: int) -> str:
        c = colours()
        if cell in {"not kept", "does not hold"}:
            return c.failed
        return c.quiet if self.table.headings[column] == "Unit" else c.text

    def _tip(self, row: int, column: int) -> str:
        cells, heading = self.table.rows[row], self.table.headings[column].replace("\n", " ")
        cell, first = cells[column], str(cells[0]).strip() if isinstance(cells[0], str) else self.text(cells[0])
        unit = cell.unit.symbol if isinstance(cell, Number) and cell.unit.symbol not in heading else ""
        said = f"{first}, {heading}: {self.text(cell).strip()} {unit}".rstrip()
        return f"{said}\n{self.table.basis}"

    def block(self, cells: list[tuple[int, int]]) -> list[list[str | float | None]]:
        """Return these cells (row, column) as rows for a spreadsheet: numbers in full, in the units shown."""
        rows: dict[int, list[str | float | None]] = {}
        for row, column in sorted(cells):
            cell = self.table.rows[row][column]
            rows.setdefault(row, []).append(cell.strip() if isinstance(cell, str) else _value(cell))
        return list(rows.values())


def _first(table: Table) -> list[object]:
    return [row[0] if isinstance(row[0], str) else None for row in table.rows]


def _value(cell: Number) -> float | None:
    return None if cell.si is None else cell.unit.from_si(cell.si)


class CellsView(QTableView):
    """One table as high as its rows; any block of its cells can be selected."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.cells = CellsModel(session, self)
        self.setModel(self.cells)
        self.setObjectName("cells")
        self._height = 0
        self._rest = QTimer(self, singleShot=True, interval=FIT_REST_MS)
        self._rest.timeout.connect(self._fit_columns)
        self.setShowGrid(False)
        self.verticalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(ROW_HEIGHT)
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAsNeeded)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)

    def show_table(self, table: Table) -> None:
        """Show other values."""
        self.setAccessibleName(table.title)
        if not self.cells.show(table):
            # Measuring every cell takes longer than showing it: the columns follow once the values rest.
            self._rest.start()
        else:
            header = self.horizontalHeader()
            self.resizeColumnsToContents()
            rows = len(table.rows) * ROW_HEIGHT
            self._height = header.sizeHint().height() + rows + 2 * self.frameWidth()
            self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Leave room for a scroll bar where the columns need one."""
        super().resizeEvent(event)
        self._fit()

    def _fit_columns(self) -> None:
        self.resizeColumnsToContents()
        self._fit()

    def _fit(self) -> None:
        wide = self.horizontalHeader().length() > self.viewport().width()
        bar = self.horizontalScrollBar().sizeHint().height() if wide else 0
        if self._height + bar != self.height():
            self.setFixedHeight(self._height + bar)

    def wheelEvent(self, event: object) -> None:
        """Leave the wheel to the page."""
        event.ignore()  # type: ignore[attr-defined]  # a QWheelEvent


class TableBlock(QWidget):
    """A table under its title, with its basis."""

    def __init__(self, session: Session, control: QWidget | None = None) -> None:
        super().__init__()
        self.title, self.basis = Words(), Words("", "quiet")
        self.title.setFont(_bold(self.title.font()))
        self.view = CellsView(session)
        head = QHBoxLayout()
        head.addWidget(self.title)
        head.addStretch(1)
        if control is not None:
            head.addWidget(control)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, GRID)
        column.setSpacing(2)
        column.addLayout(head)
        column.addWidget(self.basis)
        column.addWidget(self.view)

    def show_table(self, table: Table) -> None:
        """Show other values."""
        self.title.setText(table.title)
        self.basis.setText(table.basis)
        self.view.show_table(table)


def _bold(font: QFont) -> QFont:
    font.setBold(True)
    return font


class ResultNumbers(QScrollArea):
    """All tables."""

    said = Signal(str)

    def __init__(self, session: Session) -> None:
        super().__init__()
        self._session = session
        self.setWidgetResizable(True)
        self.setFrameShape(QScrollArea.Shape.NoFrame)
        self.seen_from = ChoiceField("Inertia seen from shaft", [("motor", MOTOR)])
        self.seen_from.setToolTip("The shaft that the inertia of everything is reflected to.")
        self.seen_from.chosen.connect(lambda _value: self.refresh())
        self.blocks: dict[str, TableBlock] = {}
        inner = QWidget()
        inner.setObjectName("page")
        inner.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self._column = QVBoxLayout(inner)
        self._column.setContentsMargins(0, 0, GRID, 0)
        self._column.setSpacing(GRID)
        self._column.addStretch(1)
        self.setWidget(inner)
        self._last: CellsView | None = None
        # It holds the field, which is not to stand about by itself until there is something to show.
        self._block(STAGES).hide()

    def refresh(self) -> None:
        """Show the values of the answer as it is now; the machine has one."""
        machine = self._session.machine
        self._offer_shafts(machine.drive.train.shafts)
        tables = Tables(machine, self._session.units, self.seen_from.currentData()).all()
        keys = [_key(table) for table in tables]
        for key, block in self.blocks.items():
            block.setVisible(key in keys)
        for key, table in zip(keys, tables, strict=True):
            self._block(key).show_table(table)

    def _offer_shafts(self, shafts: tuple[str, ...]) -> None:
        names = [*shafts[:-1], "load"] if len(shafts) > 1 else [MOTOR]
        if names == [self.seen_from.itemData(at) for at in range(self.seen_from.count())]:
            return
        chosen = self.seen_from.currentData()
        self.seen_from.blockSignals(True)
        self.seen_from.clear()
        for name in names:
            self.seen_from.addItem(f"{name} shaft", name)
        self.seen_from.setCurrentIndex(max(names.index(chosen) if chosen in names else 0, 0))
        self.seen_from.blockSignals(False)

    def _block(self, key: str) -> TableBlock:
        if key not in self.blocks:
            block = TableBlock(self._session, self.seen_from if key == STAGES else None)
            self.blocks[key] = block
            # In the order in which tables come, not in that in which they were first needed.
            place = sum(_ORDER.index(other) < _ORDER.index(key) for other in self.blocks)
            self._column.insertWidget(place, block)
            block.show()
            block.view.selectionModel().selectionChanged.connect(lambda *_, view=block.view: self._chose(view))
        return self.blocks[key]

    def _chose(self, view: CellsView) -> None:
        """Leave the other tables' cells, so that it is clear what is copied."""
        if not view.selectionModel().hasSelection():
            return
        self._last = view
        for block in self.blocks.values():
            if block.view is not view:
                block.view.clearSelection()

    def copy_selection(self) -> bool:
        """Put the selected cells on the clipboard, tab-separated, numbers in full; return whether any are."""
        if self._last is None or not self._last.selectionModel().hasSelection():
            return False
        cells = [(index.row(), index.column()) for index in self._last.selectedIndexes()]
        text = tsv_of_block(self._last.cells.block(cells), self._session.decimal_mark)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied the selected cells: {preview(text)}")
        return True

    def copy_all(self) -> None:
        """Put every table on the clipboard, each under its title and headings."""
        rows: list[list[str | float | None]] = []
        for block in (self.blocks[key] for key in _ORDER if key in self.blocks):
            table = block.view.cells.table
            if block.isHidden():
                continue
            every = [(row, column) for row in range(len(table.rows)) for column in range(len(table.headings))]
            rows += [[table.title], [table.basis], [one.replace("\n", " ") for one in table.headings]]
            rows += [*block.view.cells.block(every), []]
        text = tsv_of_block(rows, self._session.decimal_mark)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied all tables: {preview(text)}")


_ORDER = (
    "Inertia", STAGES, "What the duty asks", "Limits of the motor", "At rest", "Gravity", "Stops",
)


def _key(table: Table) -> str:
    return table.title.partition(",")[0]
