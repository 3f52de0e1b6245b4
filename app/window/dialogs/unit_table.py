"""Choosing a mesh's length unit: size and mass in each, side by side, or found from one thing that is known."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableWidget, QTableWidgetItem, QVBoxLayout, QWidget

from app.window.fields import Form, QuantityField
from app.window.numbers import shown
from app.window.pages.part_mesh import MESH_UNITS
from app.window.style import GRID, Words
from core.errors import MasswrightError
from core.mesh.unit_guess import unit_of_known_length, unit_of_known_volume
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QKeyEvent

    from app.window.session import Session
    from core.assembly import Driver
    from core.mesh import MeshAsset

HEADINGS = ("If the file is in", "it measures", "and weighs")
NO_SIDE = "No side of it is that long in any of the units."
NO_MASS = "It weighs that in none of the units; look at the material."
FACTORS = tuple(UNITS[symbol].factor for symbol in MESH_UNITS)


class UnitTable(QWidget):
    """A table of units, one of which is chosen by hand, or by a known dimension or mass typed above it.

    Signals:
        chosen: another unit is chosen, or none.
    """

    chosen = Signal()

    def __init__(self, session: Session, driver: Callable[[], Driver]) -> None:
        super().__init__()
        self._session = session
        self._driver = driver
        self._bodies: tuple[MeshAsset, ...] = ()
        self.words = Words("", "quiet")
        self.words.setWordWrap(True)
        self.length = _KnownField(session, "a known dimension", Kind.LENGTH)
        self.mass = _KnownField(session, "a known mass", Kind.MASS)
        self.table = _table(self)
        form = Form()
        form.add("a known dimension", self.length, "Any side of the box around it: picks the unit in which it fits.")
        form.add("or a known mass", self.mass, "With the material set above: picks the unit in which it fits.")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        for widget in (self.words, self.table, form):
            layout.addWidget(widget)
        self.table.itemSelectionChanged.connect(self.chosen)
        self.length.entered.connect(lambda value, _text: self._by_length(value))
        self.mass.entered.connect(lambda value, _text: self._by_mass(value))
        self.refresh()

    @property
    def factor(self) -> float | None:
        """Metres per unit of the file; None while no unit is chosen."""
        rows = self.table.selectionModel().selectedRows()
        return FACTORS[rows[0].row()] if rows else None

    def clear(self) -> None:
        """Choose no unit."""
        self.table.clearSelection()

    def show_bodies(self, bodies: tuple[MeshAsset, ...]) -> None:
        """Show the sizes of a file's bodies together; a unit that the file names is chosen."""
        self._bodies = bodies
        named = {body.metres_per_unit for body in bodies} - {None}
        if len(named) == 1 and (factor := named.pop()) in FACTORS:
            self.table.selectRow(FACTORS.index(factor))
            self.words.setText(f"The file says that its lengths are in {MESH_UNITS[FACTORS.index(factor)]}.")
        else:
            self.words.setText("The file does not say its length unit. Choose the line whose size is right.")
        self.refresh()

    def refresh(self) -> None:
        """Show size and mass in every unit."""
        for row, (symbol, factor) in enumerate(zip(MESH_UNITS, FACTORS, strict=True)):
            self.table.setItem(row, 0, QTableWidgetItem(symbol))
            self.table.setItem(row, 1, QTableWidgetItem(self._size(factor)))
            self.table.setItem(row, 2, QTableWidgetItem(self._weight(factor)))

    def _sides(self) -> tuple[float, ...]:
        low = np.min([body.survey.bounds[0] for body in self._bodies], axis=0)
        high = np.max([body.survey.bounds[1] for body in self._bodies], axis=0)
        return tuple(float(side) for side in high - low)

    def _volumes(self) -> list[float]:
        return [float(body.survey.solid.mass) for body in self._bodies if body.survey.solid is not None]

    def _size(self, factor: float) -> str:
        if not self._bodies:
            return ""
        unit = self._session.units[Kind.LENGTH]
        sides = " × ".join(shown(self._session, side * factor, unit) for side in self._sides())
        return f"{sides} {unit.symbol}"

    def _weight(self, factor: float) -> str:
        masses = self._masses(factor)
        if masses is None:
            return ""
        unit = self._session.units[Kind.MASS]
        return f"{shown(self._session, sum(masses), unit)} {unit.symbol}" if masses else "material not set"

    def _masses(self, factor: float) -> list[float] | None:
        """Return the mass of each body in a unit; none where the material is not set, None where it cannot be read."""
        try:
            driver = self._driver()
        except MasswrightError:
            return None
        volumes = self._volumes()
        if not volumes or not hasattr(driver, "mass_of"):
            return None
        masses = [driver.mass_of(volume * factor**3) for volume in volumes]
        return [mass for mass in masses if mass is not None]

    def _by_length(self, length: float) -> None:
        if self._bodies:
            self._pick(self.length, unit_of_known_length(self._sides(), length, FACTORS), NO_SIDE)

    def _by_mass(self, mass: float) -> None:
        masses = self._masses(1.0)
        if not masses:
            self.mass.turn_down("Set a material or a density above; a mass alone does not tell the unit.")
            return
        self._pick(self.mass, unit_of_known_volume(sum(masses), mass, FACTORS), NO_MASS)

    def _pick(self, field: QuantityField, found: int | None, none_fits: str) -> None:
        if found is None:
            field.turn_down(none_fits)
        else:
            self.table.selectRow(found)


class _KnownField(QuantityField):
    """A value that picks a unit: Return enters it, and does not take the dialog as well."""

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Keep Return from the dialog's own button."""
        if event.key() in {Qt.Key.Key_Return, Qt.Key.Key_Enter}:
            event.accept()
            return
        super().keyPressEvent(event)


def _table(parent: QWidget) -> QTableWidget:
    table = QTableWidget(len(MESH_UNITS), len(HEADINGS), parent)
    table.setAccessibleName("Length unit of the mesh")
    table.setHorizontalHeaderLabels(list(HEADINGS))
    table.verticalHeader().hide()
    table.setShowGrid(False)
    table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
    table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
    table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
    table.setTabKeyNavigation(False)
    header = table.horizontalHeader()
    header.setAccessibleName("Columns of the units")
    header.setHighlightSections(False)
    header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
    header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
    header.setStretchLastSection(True)
    table.setFixedHeight(header.sizeHint().height() + len(MESH_UNITS) * table.rowHeight(0) + 8)
    return table
