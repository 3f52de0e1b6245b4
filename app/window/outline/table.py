"""The points of an outline as a table: typed cell by cell, pasted from a spreadsheet, copied back."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSize, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemDelegate,
    QAbstractItemView,
    QHeaderView,
    QTableWidget,
    QTableWidgetItem,
    QWidget,
)

from app.window.outline.canvas import HEIGHT
from app.window.outline.draft import Loops, Place, name_of_point, places
from core.quantity import compact

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.quantity import Unit

RADII = ("rounding", "arc")
TIPS = (
    "", "",
    "Radius that rounds the corner at this point; 0 leaves it sharp.",
    (
        "Radius of the arc to the next point: positive where it turns left on its way, negative where it turns right;\n"
        "0 is a straight edge."
    ),
)
DIGITS = 10
_COLUMN, _ROW = 76, 24


class OutlineTable(QTableWidget):
    """Shows loops of points, holes below the outer line.

    Signals:
        typed: place, column (0 to 3) and the text that was typed.
        chosen: the place of the current row.
        pasted: a block of text from the clipboard.
        inserted, removed: a place behind which to put a point; one to take out.
        copying: what is shown is wanted on the clipboard.
    """

    typed = Signal(object, int, str)
    chosen = Signal(object)
    pasted = Signal(str)
    inserted = Signal(object)
    removed = Signal(object)
    copying = Signal()

    def __init__(self, axes: tuple[str, str]) -> None:
        super().__init__(0, len(axes) + len(RADII))
        self._axes = axes
        self._places: list[Place] = []
        self._filling = False
        self.setAccessibleName("Points of the outline")
        self.setFixedHeight(HEIGHT)
        self.setMinimumWidth(4 * _COLUMN + 72)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.AnyKeyPressed | QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
        )
        self.setTabKeyNavigation(False)
        self.verticalHeader().setDefaultSectionSize(_ROW)
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.itemChanged.connect(self._tell_typed)
        self.currentCellChanged.connect(self._tell_chosen)
        self.itemDelegate().closeEditor.connect(self._go_down)

    def sizeHint(self) -> QSize:
        """Return room for four columns and some rows."""
        return QSize(4 * _COLUMN + 72, HEIGHT)

    def show_loops(
        self, loops: Loops, unit: Unit, decimal_mark: str, typed: Callable[[Place, int], str] = lambda _at, _column: ""
    ) -> None:
        """Show these loops in a length unit; the current cell stays where it is. typed: what says a number by names."""
        self._filling = True
        self._places = places(loops)
        self.setHorizontalHeaderLabels([f"{name}\n{unit.symbol}" for name in (*self._axes, *RADII)])
        self.setRowCount(len(self._places))
        for row, (loop, point) in enumerate(self._places):
            label = f"{point + 1}" if not loop else f"hole {loop}: {point + 1}"
            self.setVerticalHeaderItem(row, QTableWidgetItem(label))
            for column, value in enumerate(loops[loop][point]):
                text = compact(unit.from_si(value), DIGITS, decimal_mark=decimal_mark)
                item = self.item(row, column)
                if item is None:
                    item = QTableWidgetItem()
                    item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
                    self.setItem(row, column, item)
                item.setText(text)
                said = typed((loop, point), column)
                item.setToolTip(f"= {said}" if said else TIPS[column])
                means = f" = {said}" if said else ""
                item.setData(Qt.ItemDataRole.AccessibleTextRole, f"{name_of_point((loop, point))}: {text}{means}")
        self._filling = False

    @property
    def current(self) -> Place | None:
        """The place of the current row."""
        row = self.currentRow()
        return self._places[row] if 0 <= row < len(self._places) else None

    def choose(self, place: Place) -> None:
        """Make the row of a place the current one."""
        if place in self._places and place != self.current:
            self._filling = True
            self.setCurrentCell(self._places.index(place), max(self.currentColumn(), 0))
            self._filling = False

    def _tell_typed(self, item: QTableWidgetItem) -> None:
        if not self._filling and item.row() < len(self._places):
            self.typed.emit(self._places[item.row()], item.column(), item.text())

    def _tell_chosen(self) -> None:
        if not self._filling and self.current is not None:
            self.chosen.emit(self.current)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Paste, copy, insert and delete; Return edits the cell, or goes down from one that was edited."""
        place = self.current
        if event.matches(QKeySequence.StandardKey.Paste):
            self.pasted.emit(QGuiApplication.clipboard().text())
        elif event.matches(QKeySequence.StandardKey.Copy):
            self.copying.emit()
        elif event.key() == Qt.Key.Key_Insert and place is not None:
            self.inserted.emit(place)
        elif event.key() == Qt.Key.Key_Delete and place is not None:
            self.removed.emit(place)
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            # A cell that is being edited is finished by its editor; the key is used up here all the same.
            if self.state() != QAbstractItemView.State.EditingState:
                self.editItem(self.currentItem())
        else:
            super().keyPressEvent(event)

    def _go_down(self, _editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """Go to the next row when a cell was finished with Return."""
        if hint == QAbstractItemDelegate.EndEditHint.SubmitModelCache:
            self.setCurrentCell(min(self.currentRow() + 1, self.rowCount() - 1), self.currentColumn())

    def event(self, event: QEvent) -> bool:
        """Keep the keys that the table takes from the commands of the window while the keyboard is here."""
        if event.type() == QEvent.Type.ShortcutOverride and isinstance(event, QKeyEvent):
            taken = (QKeySequence.StandardKey.Paste, QKeySequence.StandardKey.Copy, QKeySequence.StandardKey.Delete)
            if any(event.matches(keys) for keys in taken):
                event.accept()
                return True
        return super().event(event)
