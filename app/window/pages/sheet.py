"""The Sheet page: the values to hand over, each with a way to copy it as a number."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt
from PySide6.QtGui import QGuiApplication, QShowEvent
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QVBoxLayout, QWidget

from app.window.fields import ChoiceField
from app.window.numbers import preview
from app.window.pages.foot import Foot
from app.window.pages.values import ValuesTable
from app.window.pages.variant_totals import VariantTotals
from app.window.style import GRID, icon
from core.handover import Entry, Sheet, SheetChoice, tsv_of_sheet
from core.handover.drive_lines import BY_ROW, CYCLE, REFLECTED
from core.handover.lines import FOR_THE_DRIVE
from core.handover.machine_sheet import sheet_of_machine
from core.machine import BEING_WORKED_OUT

if TYPE_CHECKING:
    from app.window.session import Session
    from core.machine import Machine

ABOUT: list[tuple[str, object]] = [("centre of mass", "centre"), ("document's origin", "origin")]
ALONG: list[tuple[str, object]] = [("document's axes", "document"), ("principal axes", "principal")]
PRODUCTS: list[tuple[str, object]] = [
    ("tensor elements, −∫xy dm", "tensor"),
    ("product integrals, +∫xy dm", "integral"),
]
NOTHING = (
    "Nothing to hand over yet. Add a shape, a mesh or a known part and say what it weighs; "
    "mass, centre and inertia of the whole then stand here, each with a way to copy it."
)
TIPS = {
    "Of": "Whose values these are.",
    "About": "The point that the tensor is about.",
    "Along": "The axes that the tensor is resolved along.",
    "Products of inertia": "Which of the two signs in use the products of inertia have.",
}
OF: list[tuple[str, object]] = [("whole assembly", "whole"), ("selected line", "selected")]


def short_label(entry: Entry) -> str:
    """Return the label without what the heading above says already, and what only the tool tip has room for."""
    if entry.section.startswith("Tensor"):
        return entry.label.split(" about ")[0]
    if entry.section == FOR_THE_DRIVE:
        return entry.label.split(": ")[0].split(" of the whole, from ")[0]
    if entry.section.startswith(CYCLE):
        return entry.label.replace(entry.section.removeprefix(CYCLE), "")
    if entry.section in {REFLECTED, BY_ROW}:
        return entry.label.split(", of everything")[0].split(": its inertia")[0]
    return entry.label


class SheetPage(QWidget):
    """The sheet of everything, or of the selected line."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("page")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self._session = session
        self._stale = False
        self.of = ChoiceField("Of", OF)
        self.about = ChoiceField("About", ABOUT)
        self.along = ChoiceField("Along", ALONG)
        self.products = ChoiceField("Products of inertia", PRODUCTS)
        self.table = ValuesTable(session, "Values to hand over", short_label)
        self.copy_all = QPushButton(icon("copy"), "Copy sheet")
        self.copy_all.setToolTip("Copies name, value and unit of every line, tab-separated, for a spreadsheet.")
        self.copy_all.clicked.connect(self.copy_sheet)
        self.variants = VariantTotals(session)
        self.told = Foot("What to know about the values")
        self._lay_out()
        self.variants.itemSelectionChanged.connect(self._leave_sheet)
        self.table.selectionModel().selectionChanged.connect(lambda *_: self._leave_variants())
        for field in (self.of, self.about, self.along, self.products):
            field.chosen.connect(lambda _value: self.refresh())
        for signal in (session.settled, session.selection_changed, session.shown_differently):
            signal.connect(self._outdated)
        self.refresh()

    def _lay_out(self) -> None:
        choices = QHBoxLayout()
        choices.setSpacing(GRID)
        for field in (self.of, self.about, self.along, self.products):
            field.setToolTip(TIPS[field.accessibleName()])
            choices.addWidget(field)
        choices.addStretch(1)
        choices.addWidget(self.copy_all)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        layout.setSpacing(GRID)
        layout.addLayout(choices)
        layout.addWidget(self.table, 1)
        layout.addWidget(self.variants)
        layout.addWidget(self.told)

    @property
    def sheet(self) -> Sheet:
        """The sheet as it is chosen now."""
        return self._sheet_of(self._session.machine)

    def _sheet_of(self, machine: Machine) -> Sheet:
        choice = SheetChoice(
            about=self.about.currentData(), along=self.along.currentData(), products=self.products.currentData()
        )
        key = self._key() if self.of.currentData() == "selected" else None
        return sheet_of_machine(machine, choice, self._session.units, key)

    def _leave_sheet(self) -> None:
        """Select in one of the two tables only, so that it is clear what is copied."""
        if self.variants.selectedItems():
            self.table.clearSelection()

    def _leave_variants(self) -> None:
        if self.table.selectionModel().hasSelection():
            self.variants.clearSelection()

    def _key(self) -> str | None:
        """Return the key of the selected line, when exactly one is; of a cut that of its part."""
        if len(self._session.selected) != 1:
            return None
        return self._session.assembly.node_of_line(next(iter(self._session.selected))).key

    def _outdated(self) -> None:
        """Show the values as they are now, or once somebody looks."""
        self._stale = True
        if self.isVisible():
            self.refresh()

    def showEvent(self, event: QShowEvent) -> None:
        """Show what has changed while nobody looked."""
        super().showEvent(event)
        if self._stale:
            self.refresh()

    def refresh(self) -> None:
        """Show the values as they are now."""
        self._stale = False
        empty = not self._session.assembly.members
        for widget in (self.table, self.of, self.about, self.along, self.products, self.copy_all):
            widget.setVisible(not empty)
        machine = self._session.machine.at_once
        sheet = self._sheet_of(machine)
        self.variants.refresh()
        self.table.show_sections(sheet.sections)
        of_line = self.of.currentData() == "selected"
        astray = of_line and not self._key()
        hint = "Select one line to see its values; these are of the whole assembly. " if astray else ""
        waiting = [] if machine is self._session.machine else [BEING_WORKED_OUT]
        words = " ".join([*waiting, f"{hint}{sheet.title}: {sheet.basis}.", *sheet.cautions, *sheet.notes])
        self.told.say(NOTHING if empty else words)

    def copy_sheet(self) -> None:
        """Put the whole sheet on the clipboard, tab-separated: name, value, unit."""
        if self._session.assembly.members:
            text = tsv_of_sheet(self.sheet, self._session.decimal_mark)
            QGuiApplication.clipboard().setText(text)
            self._session.said.emit(f"Copied the sheet: {preview(text)}")
        else:
            self._session.said.emit("Nothing to copy: the ledger is empty")

    def copy_selection(self) -> None:
        """Put the selected values on the clipboard, one below the other; nothing selected: the sheet."""
        if self.variants.selectedItems():
            self.variants.copy_table()
            return
        if not self.table.copy_selection():
            self.copy_sheet()

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self.copy_all.setIcon(icon("copy"))
