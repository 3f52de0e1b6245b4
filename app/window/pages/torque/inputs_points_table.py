"""Points of a limit as cells, typed in place."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QAbstractTableModel, QModelIndex, Qt, Signal
from PySide6.QtWidgets import QAbstractItemView, QHeaderView

from app.window.pages.torque.keyed_table import KeyedTable
from core.drive.fields import typed_at
from core.drive.limit_points import path_of_points
from core.quantity import Kind, compact

if TYPE_CHECKING:
    from PySide6.QtCore import QObject

    from app.window.pages.torque.entries import Index
    from app.window.session import Session
    from core.drive.limit_points import Limit, Point

COLUMNS = (("Speed", Kind.SPEED), ("Torque", Kind.TORQUE))
DIGITS = 7


class PointsModel(QAbstractTableModel):
    """Speed and torque of each point.

    Signals:
        typed: row, column and the text that was typed there.
    """

    typed = Signal(int, int, str)

    def __init__(self, session: Session, limit: Limit, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self._limit = limit
        self.points: tuple[Point, ...] = ()

    def show(self, points: tuple[Point, ...]) -> None:
        """Show other points; the cells stay in place where their number is the same."""
        if len(points) != len(self.points):
            self.beginResetModel()
            self.points = points
            self.endResetModel()
            return
        self.points = points
        if points:
            self.dataChanged.emit(self.index(0, 0), self.index(len(points) - 1, 1))
        self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, 1)

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return how many points there are."""
        return 0 if parent.isValid() else len(self.points)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return two: speed and torque."""
        return 0 if parent.isValid() else len(COLUMNS)

    def headerData(self, section: int, way: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a column's heading with its unit, or a point's number."""
        if role == Qt.ItemDataRole.DisplayRole:
            if way == Qt.Orientation.Vertical:
                return str(section + 1)
            name, kind = COLUMNS[section]
            return f"{name} {self._session.units[kind].symbol}"
        if role == Qt.ItemDataRole.TextAlignmentRole and way == Qt.Orientation.Horizontal:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's number, or its text as it was typed to be edited."""
        name, kind = COLUMNS[index.column()]
        value = self._session.units[kind].from_si(self.points[index.row()][index.column()])
        shown = compact(value, DIGITS, decimal_mark=self._session.decimal_mark)
        if role == Qt.ItemDataRole.DisplayRole:
            return shown
        if role == Qt.ItemDataRole.EditRole:
            path = f"{path_of_points(self._limit)}.{index.row()}.{index.column()}"
            return typed_at(self._session.drive, path) or shown
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{name} of point {index.row() + 1}: {shown}"
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        return None

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        """Tell what was typed into a cell, if it says something else."""
        text = str(value).strip()
        if role != Qt.ItemDataRole.EditRole or text == self.data(index, role):
            return False
        self.typed.emit(index.row(), index.column(), text)
        return True

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Return that every cell is typed in."""
        return super().flags(index) | Qt.ItemFlag.ItemIsEditable


class PointsTable(KeyedTable):
    """Cells to type in; Return goes down, Delete takes a point out."""

    def __init__(self, label: str, model: PointsModel) -> None:
        super().__init__(label, model)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectItems)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        self.type_in_cells()
