"""Adding meshes: each file is read off the window's thread, and its unit is chosen by seeing size and mass in each."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QCheckBox,
    QHeaderView,
    QProgressBar,
    QTableWidget,
    QTableWidgetItem,
    QWidget,
)

from app.window.dialogs.form import FormDialog
from app.window.fields import Form, TextField
from app.window.ledger.edits import driver_of
from app.window.numbers import shown
from app.window.pages.part_mesh import MESH_UNITS, SOUND
from app.window.style import Words
from app.window.tasks import Task
from core.assembly import MeshBody, Part
from core.errors import MasswrightError
from core.material import NotSet
from core.mesh import MeshAsset
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Sequence

    from app.window.session import Session

HEADINGS = ("If the file is in", "it measures", "and one weighs")


class AddMeshDialog(FormDialog):
    """Goes through the files one by one; every one becomes a line, or is left out with the reason."""

    def __init__(self, session: Session, paths: Sequence[Path], parent: QWidget | None = None) -> None:
        super().__init__("Add mesh", "Add part", 680, parent)
        self._session = session
        self._left = list(paths)
        self._asset: MeshAsset | None = None
        self._skips = False
        self._alike = False
        self._task: Task[MeshAsset] | None = None
        self.file = Words()
        self.verdict = Words("", "quiet")
        self.verdict.setWordWrap(True)
        self.bar = QProgressBar()
        self.bar.setAccessibleName("Reading the mesh")
        self.bar.setRange(0, 100)
        self.table = _unit_table(self)
        self.material = TextField("Material", "a material, a density (7850 kg/m³) or a weighed mass (1.2 kg)")
        self.all_alike = QCheckBox()
        self._lay_out()
        self.table.itemSelectionChanged.connect(self._allow)
        self.material.textChanged.connect(lambda _text: self._show_table())
        self._next()

    def _lay_out(self) -> None:
        form = Form()
        form.add("made of", self.material, "A material's name, a density, or the mass one piece was weighed at.")
        unit = Words("A mesh file does not say its length unit. Choose the line whose size is right.", "quiet")
        self.stack(self.file, self.bar, self.verdict, form, unit, self.table, self.all_alike)

    def _next(self) -> None:
        """Read the next file, or close after the last one."""
        self._asset, self._skips = None, False
        if not self._left:
            self.accept()
            return
        path = self._left[0]
        self.file.setText(f"Reading {path.name} …")
        self.verdict.setText("")
        self.refuse("")
        self.bar.setValue(0)
        self.bar.show()
        if not self._alike:
            # A unit is never taken over from the file before without being asked for.
            self.table.clearSelection()
        self._allow()
        self.all_alike.setVisible(len(self._left) > 1)
        others = len(self._left) - 1
        which = "other file" if others == 1 else f"other {others} files"
        self.all_alike.setText(f"Add the {which} with the same unit and material")
        self._show_table()
        self._task = Task(
            self, lambda progress: MeshAsset.read(path, progress), self._read, self._unreadable,
            lambda fraction: self.bar.setValue(round(100 * fraction)),
        )

    def _read(self, asset: MeshAsset) -> None:
        self._asset = asset
        self.bar.hide()
        survey = asset.survey
        self.file.setText(f"{asset.name}: {survey.triangles} facets, {survey.format}")
        estimate = "" if survey.basis == "computed" else f" Its values are {survey.basis}."
        self.verdict.setText(" ".join([f"Verdict: {survey.verdict}.{estimate}", *survey.notes]))
        self.verdict.set_role("text" if survey.verdict in SOUND else "failed")
        self._show_table()
        self._allow()
        if self._alike:
            self.take()

    def _unreadable(self, sentence: str) -> None:
        self.bar.hide()
        name = self._left[0].name
        self.file.setText(f"{name} was not added.")
        self.refuse(sentence)
        self._skips = True
        self.take_button.setText("Next file" if len(self._left) > 1 else "Close")
        self.take_button.setEnabled(True)

    def _factor(self) -> float | None:
        rows = self.table.selectionModel().selectedRows()
        return UNITS[MESH_UNITS[rows[0].row()]].factor if rows else None

    def _allow(self) -> None:
        self.take_button.setText("Add part")
        self.take_button.setEnabled(self._asset is not None and self._factor() is not None)

    def _show_table(self) -> None:
        """Show the size in every unit, and the mass that follows from it."""
        for row, symbol in enumerate(MESH_UNITS):
            self.table.setItem(row, 0, _cell(symbol))
            self.table.setItem(row, 1, _cell(self._size(UNITS[symbol].factor)))
            self.table.setItem(row, 2, _cell(self._weight(UNITS[symbol].factor)))

    def _size(self, factor: float) -> str:
        if self._asset is None:
            return ""
        unit = self._session.units[Kind.LENGTH]
        low, high = self._asset.survey.bounds * factor
        sides = " × ".join(shown(self._session, float(extent), unit) for extent in np.subtract(high, low))
        return f"{sides} {unit.symbol}"

    def _weight(self, factor: float) -> str:
        if self._asset is None or self._asset.survey.solid is None:
            return ""
        try:
            driver = driver_of(self.material.text(), self._session.units, "made of")
        except MasswrightError:
            return ""
        volume = float(self._asset.survey.solid.mass) * factor**3
        mass = None if not hasattr(driver, "mass_of") else driver.mass_of(volume)
        unit = self._session.units[Kind.MASS]
        return "material not set" if mass is None else f"{shown(self._session, mass, unit)} {unit.symbol}"

    def take(self) -> None:
        """Add the file as a line, and go on with the next one; a file that could not be read is passed over."""
        if self._skips:
            self._left.pop(0)
            self._next()
            return
        factor = self._factor()
        if self._asset is None or factor is None:
            return
        try:
            text = self.material.text()
            driver = driver_of(text, self._session.units, "made of") if text.strip() else NotSet()
        except MasswrightError as error:
            self.refuse(str(error))
            return
        assembly = self._session.assembly
        key = assembly.fresh_key()
        part = Part(key, assembly.fresh_name(Path(self._asset.name).stem), MeshBody(self._asset, factor), driver)
        refusal = self._session.attempt(f"Add {part.name}", lambda before: before.inserted(part), select=key)
        if refusal:
            self.refuse(refusal)
            return
        self._alike = self.all_alike.isChecked()
        self._left.pop(0)
        self._next()

    def done(self, result: int) -> None:
        """Stop reading when the dialog closes."""
        if self._task is not None:
            self._task.cancel()
        super().done(result)


def _unit_table(parent: QWidget) -> QTableWidget:
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


def _cell(text: str) -> QTableWidgetItem:
    return QTableWidgetItem(text)
