"""The table of the document's axes: add, rename, edit and delete them, and choose which one is driven."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHeaderView, QPushButton, QTableWidgetItem, QWidget

from app.window.dialogs.axis import AxisDialog
from app.window.dialogs.beside import BesideDialog, BesideTable
from app.window.numbers import shown
from core.assembly.axes import driven_about, with_axis_renamed
from core.drive.axis import about_axis, turning_about, without_idle_axis
from core.handover.lines import axis_words
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import DriveAxis

NAME, RUNS, INERTIA, RADIUS, DRIVE = range(5)
HELP = (
    "J and k are those of the whole about each axis. The drive axis is the one that the ledger and the sheet speak of; "
    "what turns about another one is said on its Part page."
)


class AxesDialog(BesideDialog):
    """A row for each axis; a name is edited in place, the rest in a dialog of its own."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(session, "Axes", parent)
        self.add.setText("Add axis…")
        self.edit = QPushButton("Edit…")
        self.drive = QPushButton("Make it the drive axis")
        self.table = BesideTable(self, "Axes", ("",) * 5)
        modes = QHeaderView.ResizeMode
        for column in range(self.table.columnCount()):
            mode = modes.Stretch if column == RUNS else modes.ResizeToContents
            self.table.horizontalHeader().setSectionResizeMode(column, mode)
        self.lay_out(HELP, ((QWidget(), 1), (self.add, 0)), self.table, (960, 320), (self.edit, self.drive))
        self.edit.clicked.connect(self.edit_current)
        self.drive.clicked.connect(self.drive_current)
        self.table.itemChanged.connect(self._renamed)
        self.table.itemSelectionChanged.connect(self._allow)
        for signal in (session.changed, session.shown_differently):
            signal.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the axes as they are now."""
        axes, row = self._session.assembly.axes, self.table.currentRow()
        units = self._session.units
        self.table.blockSignals(True)
        self.table.setHorizontalHeaderLabels([
            "Name", "Runs", f"J\n{units[Kind.INERTIA].symbol}", f"k\n{units[Kind.LENGTH].symbol}", "Turns about it",
        ])
        self.table.setRowCount(len(axes))
        for at, axis in enumerate(axes):
            self._show_row(at, axis)
        self.table.blockSignals(False)
        self.table.setCurrentCell(max(min(row, len(axes) - 1), 0), max(self.table.currentColumn(), 0))
        self._allow()

    def _show_row(self, at: int, axis: DriveAxis) -> None:
        session = self._session
        assembly, units = session.assembly, session.units
        known = float(assembly.total.mass) > 0
        about = about_axis(assembly.total, axis)
        driven = axis.name == assembly.drive
        turning = ", ".join(turning_about(assembly, session.drive.turning, axis.name))
        words = (
            axis.name, _runs(session, axis), shown(session, about.inertia if known else None, units[Kind.INERTIA]),
            shown(session, about.radius_of_gyration if known else None, units[Kind.LENGTH]),
            " · ".join(said for said in ("drive axis" if driven else "", turning) if said),
        )
        for column, text in enumerate(words):
            item = QTableWidgetItem(text)
            item.setToolTip(text if column in {RUNS, DRIVE} else "")
            font = item.font()
            font.setBold(driven)
            item.setFont(font)
            if column != NAME:
                item.setFlags(item.flags() & ~Qt.ItemFlag.ItemIsEditable)
            if column in {INERTIA, RADIUS}:
                item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
            self.table.setItem(at, column, item)

    def add_one(self) -> None:
        """Ask for one more axis."""
        self._ask(None)

    def edit_current(self) -> None:
        """Edit the current axis."""
        self._ask(self._current())

    def _ask(self, axis: DriveAxis | None) -> None:
        self.refuse("")
        dialog = AxisDialog(self._session, axis, self)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.open()

    def drive_current(self) -> None:
        """Make the current axis the drive axis."""
        name = self._current().name
        self.attempt(f"Drive axis {name}", lambda before: driven_about(before, name))

    def delete_current(self) -> None:
        """Delete the current axis, or say why it has to stay."""
        name, turning = self._current().name, self._session.drive.turning
        self.attempt(f"Delete axis {name}", lambda before: without_idle_axis(before, turning, name))

    def _current(self) -> DriveAxis:
        return self._session.assembly.axes[self.table.currentRow()]

    def _renamed(self, item: QTableWidgetItem) -> None:
        """Take a name that was edited; one that is refused shows the old one again."""
        old, new = self._session.assembly.axes[item.row()].name, item.text().strip()
        if old != new:
            self.attempt(f"Rename axis {old} to {new}", lambda before: with_axis_renamed(before, old, new))
        self.refresh()

    def _allow(self) -> None:
        self.drive.setEnabled(self._current().name != self._session.assembly.drive)


def _runs(session: Session, axis: DriveAxis) -> str:
    """Return how an axis is given, in words."""
    where = axis_words(axis.point, axis.direction, session.units[Kind.LENGTH])
    if axis.part:
        return f"own axis of {session.assembly.name_of_line(axis.part)}, {where}"
    return where if axis.second is None else f"two points, {where}"
