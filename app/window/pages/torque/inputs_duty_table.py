"""The duty as a table: angle, end and time of each step are typed in their cells."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QFont

from app.window.pages.torque.entries import EntriesModel, Entry, Index
from core.drive import Duty, Move, Repeat, Rest
from core.drive.fields import typed_at
from core.drive.motion import ByTime
from core.drive.steps import StepRow, path_of
from core.quantity import NO_VALUE, Kind, compact

if TYPE_CHECKING:
    from PySide6.QtCore import QObject

    from app.window.session import Session

STEP, ANGLE, FROM, TO, TIME, LAW = range(6)
DIGITS, TIME_DIGITS = 6, 5
KINDS = {ANGLE: Kind.ANGLE, FROM: Kind.ANGLE, TO: Kind.ANGLE, TIME: Kind.TIME}


class DutyModel(EntriesModel):
    """Steps as rows, their texts made when they are seen: a duty may be long.

    Signals:
        typed: row, column and the text that was typed there.
    """

    typed = Signal(int, int, str)

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(("Step", "Angle", "From", "To", "Time", "Law"), parent)
        self._session = session

    def headerData(self, section: int, way: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a column's heading with its unit."""
        if way == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole and section in KINDS:
            return f"{self.headings[section]} {self._session.units[KINDS[section]].symbol}"
        if way == Qt.Orientation.Horizontal and role == Qt.ItemDataRole.TextAlignmentRole and section in KINDS:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        return super().headerData(section, way, role)

    def text(self, entry: Entry, column: int) -> str:
        """Return what a cell says."""
        row = entry.item
        if isinstance(row, StepRow):
            return self._words(row, column)
        start = self._figure(row.start, Kind.ANGLE) if isinstance(row, Duty) else ""
        return {STEP: "start", TO: start}.get(column, "")

    def _words(self, row: StepRow, column: int) -> str:
        if column == STEP:
            return f"{'.'.join(str(at + 1) for at in row.place)}  {_kind_of(row)}"
        if column == LAW:
            return _law_of(row)
        if column == ANGLE:
            return NO_VALUE if isinstance(row.step, Rest) else self._figure(row.end - row.start, Kind.ANGLE)
        if column == TIME:
            return self._figure(row.time, Kind.TIME, TIME_DIGITS)
        return self._figure(row.start if column == FROM else row.end, Kind.ANGLE)

    def _figure(self, value: float, kind: Kind, digits: int = DIGITS) -> str:
        return compact(self._session.units[kind].from_si(value), digits, decimal_mark=self._session.decimal_mark)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's text, how it is set, or what is there to be edited."""
        entry, column = self.entries[index.row()], index.column()
        if role == Qt.ItemDataRole.EditRole:
            return self._to_edit(entry, column)
        if role == Qt.ItemDataRole.TextAlignmentRole and column in KINDS:
            return int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        if role == Qt.ItemDataRole.ForegroundRole and takes_typing(entry, column):
            return None
        if role == Qt.ItemDataRole.FontRole and isinstance(entry.item, StepRow) and column == STEP:
            font = QFont()
            font.setBold(isinstance(entry.item.step, Repeat))
            return font
        return super().data(index, role)

    def _to_edit(self, entry: Entry, column: int) -> str:
        """Return a cell's text to be edited: as it was typed, where that is kept and means its value still."""
        row = entry.item
        if isinstance(row, StepRow) and column in (ANGLE, TIME) and not isinstance(row.step, Repeat):
            timed = isinstance(row.step, Move) and column == TIME
            inner = "timing.time" if timed else "angle" if column == ANGLE else "time"
            typed = typed_at(self._session.drive, f"{path_of(row.place)}.{inner}")
            if typed:
                return typed
        return self.text(entry, column)

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        """Tell what was typed into a cell, if it says something else."""
        entry = self.entries[index.row()]
        if role != Qt.ItemDataRole.EditRole or str(value).strip() == self._to_edit(entry, index.column()):
            return False
        self.typed.emit(index.row(), index.column(), str(value).strip())
        return True

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Return which cells are typed in."""
        flags = super().flags(index)
        entry = self.entries[index.row()]
        return flags | Qt.ItemFlag.ItemIsEditable if takes_typing(entry, index.column()) else flags


def takes_typing(entry: Entry, column: int) -> bool:
    """Tell whether a cell is typed in: what a step turns by, where it ends, its time; where the duty starts."""
    if isinstance(entry.item, Duty):
        return column == TO
    step = entry.item.step if isinstance(entry.item, StepRow) else None
    if isinstance(step, Move):
        return column in (ANGLE, TO, TIME)
    return isinstance(step, Rest) and column == TIME


def _kind_of(row: StepRow) -> str:
    if isinstance(row.step, Repeat):
        return f"repeat × {row.step.times}"
    return "move" if isinstance(row.step, Move) else "rest"


def _law_of(row: StepRow) -> str:
    if not isinstance(row.step, Move):
        return ""
    return str(row.step.law) if isinstance(row.step.timing, ByTime) else f"{row.step.law}, by limits"
