"""The Sheet page: the values to hand over, each with a way to copy it as a number."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QAbstractTableModel, QEvent, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QColor, QFont, QGuiApplication, QKeyEvent
from PySide6.QtWidgets import QAbstractItemView, QHBoxLayout, QHeaderView, QPushButton, QTableView, QVBoxLayout, QWidget

from app.window.fields import ChoiceField
from app.window.numbers import copied, preview, shown
from app.window.pages.variant_totals import VariantTotals
from app.window.style import GRID, Words, colours, icon
from core.handover import Entry, Sheet, SheetChoice, sheet_of_assembly, tsv_of_sheet
from core.handover.lines import FOR_THE_DRIVE
from core.quantity import UNITS

if TYPE_CHECKING:
    from app.window.session import Session

Index = QModelIndex | QPersistentModelIndex
SYMBOL, LABEL, VALUE, UNIT, COPY = range(5)
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
SHOWN_DIGITS = 5


class SheetModel(QAbstractTableModel):
    """Sections and their entries as rows."""

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self.rows: list[Entry | str] = []

    def show(self, sheet: Sheet) -> None:
        """Show another sheet; the rows stay in place where only their values changed."""
        rows: list[Entry | str] = []
        for heading, entries in sheet.sections:
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
        return (symbol, short_label(entry), value, entry.unit.symbol, copy)[column]

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


def short_label(entry: Entry) -> str:
    """Return the label without what the heading above says already, and what only the tool tip has room for."""
    if entry.section.startswith("Tensor"):
        return entry.label.split(" about ")[0]
    if entry.section == FOR_THE_DRIVE:
        return entry.label.split(": ")[0].split(" of the whole, from ")[0]
    return entry.label


class SheetTable(QTableView):
    """The values; Return or a click on "copy" copies one."""

    copy_wanted = Signal(int)

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAccessibleName("Values to hand over")
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
            self.copy_wanted.emit(index.row())

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Return copies the current value."""
        if event.key() in {Qt.Key.Key_Return, Qt.Key.Key_Enter} and self.currentIndex().isValid():
            self.copy_wanted.emit(self.currentIndex().row())
            return
        super().keyPressEvent(event)


class SheetPage(QWidget):
    """The sheet of everything, or of the selected line."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("page")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self._session = session
        self.of = ChoiceField("Of", OF)
        self.about = ChoiceField("About", ABOUT)
        self.along = ChoiceField("Along", ALONG)
        self.products = ChoiceField("Products of inertia", PRODUCTS)
        self.table = SheetTable(self)
        self.model = SheetModel(session, self)
        self.table.setModel(self.model)
        self.copy_all = QPushButton(icon("copy"), "Copy sheet")
        self.copy_all.setToolTip("Copies name, value and unit of every line, tab-separated, for a spreadsheet.")
        self.copy_all.clicked.connect(self.copy_sheet)
        self.variants = VariantTotals(session)
        self.told = Words("", "quiet")
        self.told.setWordWrap(True)
        self.told.setAlignment(Qt.AlignmentFlag.AlignTop)
        self._lay_out()
        self.table.copy_wanted.connect(self.copy_row)
        self.variants.itemSelectionChanged.connect(self._leave_sheet)
        self.table.selectionModel().selectionChanged.connect(lambda *_: self._leave_variants())
        for field in (self.of, self.about, self.along, self.products):
            field.chosen.connect(lambda _value: self.refresh())
        for signal in (session.changed, session.selection_changed, session.shown_differently):
            signal.connect(self.refresh)
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
        choice = SheetChoice(
            about=self.about.currentData(), along=self.along.currentData(), products=self.products.currentData()
        )
        key = self._key() if self.of.currentData() == "selected" else None
        return sheet_of_assembly(self._session.assembly, choice, self._session.units, key)

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

    def refresh(self) -> None:
        """Show the values as they are now."""
        empty = not self._session.assembly.members
        for widget in (self.table, self.of, self.about, self.along, self.products, self.copy_all):
            widget.setVisible(not empty)
        sheet = self.sheet
        self.variants.refresh()
        self.model.show(sheet)
        header = self.table.horizontalHeader()
        self.table.clearSpans()
        for at, row in enumerate(self.model.rows):
            if isinstance(row, str):
                self.table.setSpan(at, 0, 1, COPY + 1)
        for column in (VALUE, UNIT, COPY):
            header.setSectionResizeMode(column, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(SYMBOL, QHeaderView.ResizeMode.Fixed)
        header.resizeSection(SYMBOL, 56)
        header.setSectionResizeMode(LABEL, QHeaderView.ResizeMode.Stretch)
        of_line = self.of.currentData() == "selected"
        astray = of_line and not self._key()
        hint = "Select one line to see its values; these are of the whole assembly. " if astray else ""
        words = " ".join([f"{hint}{sheet.title}: {sheet.basis}.", *sheet.notes, *sheet.cautions])
        self.told.setText(NOTHING if empty else words)

    def copy_row(self, row: int) -> None:
        """Put one value on the clipboard: full precision, no unit."""
        entry = self.model.rows[row]
        if isinstance(entry, str) or entry.si is None:
            return
        text = copied(self._session, entry.si, entry.unit)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied {text} ({entry.symbol} in {entry.unit.symbol or UNITS[''].kind})")

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
        rows = sorted({index.row() for index in self.table.selectedIndexes()})
        values = [entry for entry in (self.model.rows[row] for row in rows) if isinstance(entry, Entry)]
        if not values:
            self.copy_sheet()
            return
        lines = [copied(self._session, entry.si, entry.unit) if entry.si is not None else "" for entry in values]
        text = "\n".join(lines)
        QGuiApplication.clipboard().setText(text)
        self._session.said.emit(f"Copied {len(lines)} value{'s' if len(lines) > 1 else ''}: {preview(text)}")

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange:
            self.copy_all.setIcon(icon("copy"))
