"""The totals of all variants side by side, below the sheet; a document without variants shows none."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableWidget, QTableWidgetItem

from app.window.numbers import copied, preview, shown
from core.assembly.variants import VariantTotal, totals_by_variant
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.quantity import Unit

MOST_ROWS_SHOWN = 4
ROW_HEIGHT = 24


class VariantTotals(QTableWidget):
    """Mass, centre of mass and J about the drive axis of each variant; copying takes all rows with their headings."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self._session = session
        self.setAccessibleName("Totals of all variants")
        self.verticalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(ROW_HEIGHT)
        self.setShowGrid(False)
        self.setTabKeyNavigation(False)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)

    def refresh(self) -> None:
        """Show the totals as they are now; nothing where there are no variants."""
        assembly = self._session.assembly
        self.setVisible(bool(assembly.variants and assembly.members))
        if not assembly.variants:
            self.setRowCount(0)
            return
        totals = totals_by_variant(assembly)
        headings = self._headings()
        self.setColumnCount(len(headings))
        self.setHorizontalHeaderLabels(headings)
        self.setRowCount(len(totals))
        for row, total in enumerate(totals):
            chosen = total.variant == assembly.variant
            for column, words in enumerate(self._row(total)):
                item = QTableWidgetItem(words)
                font = item.font()
                font.setBold(chosen)
                item.setFont(font)
                side = Qt.AlignmentFlag.AlignRight if column else Qt.AlignmentFlag.AlignLeft
                item.setTextAlignment(side | Qt.AlignmentFlag.AlignVCenter)
                if total.without_mass:
                    item.setToolTip(f"{total.without_mass} of its parts are left out: no mass is set.")
                self.setItem(row, column, item)
        header = self.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Stretch)
        rows = min(len(totals), MOST_ROWS_SHOWN)
        self.setFixedHeight(header.sizeHint().height() + rows * ROW_HEIGHT + 2 * self.frameWidth())

    def copy_table(self) -> None:
        """Put all rows under their headings on the clipboard, tab-separated, numbers at full precision."""
        totals = totals_by_variant(self._session.assembly)
        rows = [self._headings(), *(self._cells(total) for total in totals)]
        text = "\n".join("\t".join(row) for row in rows)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied the totals of all variants: {preview(text)}")

    def _headings(self) -> list[str]:
        units = [self._session.units[kind].symbol for kind in (Kind.MASS, Kind.LENGTH, Kind.INERTIA)]
        centre = [f"{letter} {units[1]}" for letter in "xyz"]
        return ["Variant", f"Mass {units[0]}", *centre, f"J about {self._session.assembly.drive} {units[2]}"]

    def _row(self, total: VariantTotal) -> list[str]:
        return [total.variant, *(shown(self._session, value, unit) for value, unit in self._values(total))]

    def _cells(self, total: VariantTotal) -> list[str]:
        values = self._values(total)
        return [total.variant, *("" if v is None else copied(self._session, v, unit) for v, unit in values)]

    def _values(self, total: VariantTotal) -> list[tuple[float | None, Unit]]:
        """Return mass, centre and J in SI with the units shown; None where no part has a mass."""
        mass, length, inertia = (self._session.units[kind] for kind in (Kind.MASS, Kind.LENGTH, Kind.INERTIA))
        if not float(total.moments.mass):
            return [(None, mass), *[(None, length)] * 3, (None, inertia)]
        centre = [(float(each), length) for each in total.moments.centre]
        return [(float(total.moments.mass), mass), *centre, (total.inertia, inertia)]
