"""The ledger as it stands in the window: the tree of lines, the foot with the totals, copying and the keyboard."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QByteArray, QEvent, QItemSelectionModel, QModelIndex, QObject, QPoint, Qt, Signal
from PySide6.QtGui import QGuiApplication, QKeyEvent, QMouseEvent
from PySide6.QtWidgets import (
    QAbstractItemDelegate,
    QAbstractItemView,
    QHBoxLayout,
    QHeaderView,
    QMenu,
    QTreeView,
    QVBoxLayout,
    QWidget,
)

from app.window.ledger.columns import COLUMNS, INDEX
from app.window.ledger.delegate import ROW_HEIGHT, LedgerDelegate
from app.window.ledger.model import COPY_ROLE, FootModel, LedgerModel
from core.handover import tsv_of_block

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from app.window.session import Session
    from core.assembly import Assembly
    from core.handover.table import Cell

# All columns that are shown at first fit into a window 1280 wide, with a scroll bar beside them.
WIDTHS = {"name": 200, "count": 48, "material": 180, "turns": 130, "mass": 90, "x": 76, "y": 76, "z": 80, "own": 104,
          "transfer": 104, "inertia": 120, "gd2": 110, "wr2": 110, "gyration": 104, "share": 160}


class LedgerTree(QTreeView):
    """Lines and cells; cells are selected so that any block of them can be copied."""

    hovered = Signal(str)

    def __init__(self, session: Session, parent: QWidget) -> None:
        super().__init__(parent)
        self._session = session
        self._closed: set[str] = set()
        self.lines = LedgerModel(session)
        self.setModel(self.lines)
        self.setItemDelegate(LedgerDelegate(session, self.lines, self))
        self.setAccessibleName("Ledger")
        self.setUniformRowHeights(True)
        self.setAllColumnsShowFocus(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectItems)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        self.setDragDropMode(QAbstractItemView.DragDropMode.DragDrop)
        self.setDefaultDropAction(Qt.DropAction.MoveAction)
        self.setMouseTracking(True)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        self.expandAll()
        self.lines.modelReset.connect(self._restore)
        self.lines.reworded.connect(self.viewport().update)
        self.collapsed.connect(lambda index: self._closed.add(self.lines.line(index).key))
        self.expanded.connect(lambda index: self._closed.discard(self.lines.line(index).key))
        self.entered.connect(lambda index: self.hovered.emit(self.lines.line(index).key))
        self.selectionModel().selectionChanged.connect(self._tell_selection)
        session.selection_changed.connect(self._show_selection)

    def _restore(self) -> None:
        closed = set(self._closed)  # expandAll tells that every group opens
        self.expandAll()
        for key in closed:
            index = self.lines.index_of(key)
            if index.isValid():
                self.setExpanded(index, False)
        self._show_selection()

    def _tell_selection(self) -> None:
        self._session.select(frozenset(self.lines.line(index).key for index in self.selectedIndexes()))
        self.viewport().update()

    def _show_selection(self) -> None:
        """Select the session's lines; cells stay as they are where they already say so."""
        if self._session.selected != frozenset(self.lines.line(index).key for index in self.selectedIndexes()):
            model = self.selectionModel()
            model.blockSignals(True)
            model.clearSelection()
            for key in self._session.selected:
                index = self.lines.index_of(key)
                model.select(index, QItemSelectionModel.SelectionFlag.Select)
                model.setCurrentIndex(index, QItemSelectionModel.SelectionFlag.NoUpdate)
                self.scrollTo(index)
            model.blockSignals(False)
        self.viewport().update()

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Drag lines by their names only; in the other columns dragging selects a block of cells."""
        self.setDragEnabled(self.indexAt(event.position().toPoint()).column() == INDEX["name"])
        super().mousePressEvent(event)

    def leaveEvent(self, event: object) -> None:
        """Tell that the pointer is over no line any more."""
        self.hovered.emit("")
        super().leaveEvent(event)  # type: ignore[arg-type]  # handed on as it came

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Leave Delete and the shortcuts to the window; Return edits like F2."""
        if event.key() in {Qt.Key.Key_Delete, Qt.Key.Key_Backspace}:
            event.ignore()
            return
        editing = self.state() == QAbstractItemView.State.EditingState
        if event.key() in {Qt.Key.Key_Return, Qt.Key.Key_Enter} and not editing:
            if self.currentIndex().flags() & Qt.ItemFlag.ItemIsEditable:
                self.edit(self.currentIndex())
            return
        super().keyPressEvent(event)

    def closeEditor(self, editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        """Go on with the next input on Tab, with the one before on Shift and Tab."""
        hints = QAbstractItemDelegate.EndEditHint
        steps = {hints.EditNextItem: 1, hints.EditPreviousItem: -1}
        super().closeEditor(editor, hints.NoHint if hint in steps else hint)
        if hint in steps:
            inputs = [index for index in self.cells() if index.flags() & Qt.ItemFlag.ItemIsEditable]
            here = [(at.internalId(), at.column()) for at in inputs]
            current = (self.currentIndex().internalId(), self.currentIndex().column())
            place = here.index(current) + steps[hint] if current in here else -1
            if 0 <= place < len(inputs):
                self.setCurrentIndex(inputs[place])
                self.edit(inputs[place])

    def cells(self) -> Iterator[QModelIndex]:
        """Yield the cells in the order in which they are read."""
        header = self.header()
        columns = sorted((at for at in range(len(COLUMNS)) if not header.isSectionHidden(at)), key=header.visualIndex)
        for line in _rows(self, QModelIndex()):
            yield from (line.siblingAtColumn(at) for at in columns)

    def edit_name(self, key: str) -> None:
        """Start editing a line's name."""
        index = self.lines.index_of(key)
        if index.isValid():
            self.setCurrentIndex(index)
            self.edit(index)

    def block(self) -> list[list[Cell]]:
        """Return the selected cells as rows to copy, in the order shown; cells between them are empty."""
        header = self.header()
        shown = sorted(
            (at for at in range(len(COLUMNS)) if not header.isSectionHidden(at)), key=header.visualIndex
        )
        chosen = {(index.internalId(), index.column()): index for index in self.selectedIndexes()}
        columns = [at for at in shown if any(column == at for _, column in chosen)]
        rows = [row for row in _rows(self, QModelIndex()) if any(key[0] == row.internalId() for key in chosen)]
        cells: dict[tuple[int, int], Cell] = {place: index.data(COPY_ROLE) for place, index in chosen.items()}
        return [[cells.get((row.internalId(), at), "") for at in columns] for row in rows]

    def places_from(self, start: QModelIndex) -> tuple[list[QModelIndex], list[int]]:
        """Return the lines from a cell on downwards, and the columns from it on to the right, as they are shown."""
        header = self.header()
        lines = list(_rows(self, QModelIndex()))
        first = [line.internalId() for line in lines].index(start.internalId())
        columns = sorted((at for at in range(len(COLUMNS)) if not header.isSectionHidden(at)), key=header.visualIndex)
        return lines[first:], columns[columns.index(start.column()) :]

    def headings(self, chosen: QTreeView) -> list[Cell]:
        """Return the headings of the columns in which a tree's cells are selected, with their units."""
        columns = sorted({index.column() for index in chosen.selectedIndexes()}, key=self.header().visualIndex)
        across, shown = Qt.Orientation.Horizontal, Qt.ItemDataRole.DisplayRole
        texts = (str(self.lines.headerData(at, across, shown)) for at in columns)
        return [_heading(*text.partition("\n")[::2]) for text in texts]


def _heading(name: str, unit: str) -> str:
    return f"{name} ({unit})" if unit else name


def _rows(tree: LedgerTree, parent: QModelIndex) -> Iterable[QModelIndex]:
    for row in range(tree.lines.rowCount(parent)):
        index = tree.lines.index(row, 0, parent)
        yield index
        if tree.isExpanded(index):
            yield from _rows(tree, index)


class LedgerPane(QWidget):
    """The ledger with its foot; the columns of both move together."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.tree = LedgerTree(session, self)
        self.foot = QTreeView(self)
        self.foot.setModel(FootModel(session))
        self.foot.setItemDelegate(LedgerDelegate(session, self.tree.lines, self.foot))
        self.foot.setAccessibleName("Totals of the ledger")
        self.foot.setRootIsDecorated(False)
        self.foot.setHeaderHidden(True)
        self.foot.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.foot.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectItems)
        self.foot.setFixedHeight(ROW_HEIGHT + 6)
        self.foot.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.foot.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.foot.setObjectName("foot")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.tree, 1)
        self._under = QHBoxLayout()
        self._under.addWidget(self.foot)
        layout.addLayout(self._under)
        self.columns = self._columns_menu()
        self._tie_columns()
        self._tell_columns()
        self._turns_told = False
        session.changed.connect(self._tell_turns)
        self.tree.verticalScrollBar().installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Keep the foot as wide as the cells above it, beside a scroll bar that comes and goes."""
        if event.type() in {QEvent.Type.Show, QEvent.Type.Hide, QEvent.Type.Resize}:
            bar = self.tree.verticalScrollBar()
            self._under.setContentsMargins(0, 0, bar.width() if bar.isVisible() else 0, 0)
        return super().eventFilter(watched, event)

    def _tie_columns(self) -> None:
        header, below = self.tree.header(), self.foot.header()
        header.setAccessibleName("Columns of the ledger")
        header.setSectionsMovable(True)
        header.setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        header.setStretchLastSection(True)
        below.setStretchLastSection(True)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignVCenter)
        header.sectionResized.connect(lambda at, _old, new: below.resizeSection(at, new))
        header.sectionMoved.connect(lambda _at, old, new: below.moveSection(old, new))
        self.tree.horizontalScrollBar().valueChanged.connect(self.foot.horizontalScrollBar().setValue)
        for column in COLUMNS:
            header.resizeSection(INDEX[column.key], WIDTHS[column.key])
            self.show_column(INDEX[column.key], column.at_first)
        header.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        header.customContextMenuRequested.connect(self._offer_columns)

    def _offer_columns(self, at: QPoint) -> None:
        self.columns.popup(self.tree.header().mapToGlobal(at))

    def _columns_menu(self) -> QMenu:
        """Return the menu in which columns are shown and hidden."""
        menu = QMenu("Columns", self)
        for at in range(1, len(COLUMNS)):
            action = menu.addAction("")
            action.setCheckable(True)
            action.triggered.connect(lambda wanted, at=at: self.show_column(at, wanted))
        menu.aboutToShow.connect(self._tell_columns)
        return menu

    def _tell_columns(self) -> None:
        for at, action in enumerate(self.columns.actions(), 1):
            action.setText(COLUMNS[at].heading.format(axis=self._session.assembly.drive))
            action.setChecked(not self.tree.isColumnHidden(at))

    def _tell_turns(self) -> None:
        """Show the column "Turns with" once a line turns with something else than the load, and no longer than that."""
        told = bool(self._session.machine.turning_elsewhere)
        if told != self._turns_told:
            self._turns_told = told
            self.show_column(INDEX["turns"], told)

    def show_column(self, at: int, wanted: bool) -> None:
        """Show or hide a column of the ledger and of its foot."""
        self.tree.setColumnHidden(at, not wanted)
        self.foot.setColumnHidden(at, not wanted)

    def save_columns(self) -> QByteArray:
        """Return widths, order and choice of the columns, to be kept."""
        return self.tree.header().saveState()

    def restore_columns(self, state: QByteArray) -> None:
        """Give the columns the widths, order and choice that were kept."""
        self.tree.header().restoreState(state)
        self.foot.header().restoreState(state)
        self.show_column(INDEX["turns"], self._turns_told)

    def copy_block(self) -> str:
        """Put the selected cells on the clipboard, tab-separated; return that text, "" where none are selected."""
        return self._to_clipboard(self._cells())

    def copy_block_with_headings(self) -> str:
        """Put the selected cells on the clipboard under their columns' headings; return that text."""
        rows = self._cells()
        return self._to_clipboard([self.tree.headings(self._copied_from()), *rows] if rows else rows)

    def paste(self) -> None:
        """Put the clipboard's cells into the inputs from the current cell on, all of them or none."""
        start = self.tree.currentIndex()
        rows = [line.split("\t") for line in QGuiApplication.clipboard().text().rstrip("\r\n").splitlines()]
        if not start.isValid() or not rows:
            self._session.refused.emit("There is nothing to paste, or no cell to paste into. Choose the first cell.")
            return
        lines, columns = self.tree.places_from(start)
        count, widest = sum(map(len, rows)), max(map(len, rows))

        def change(assembly: Assembly) -> Assembly:
            for texts, line in zip(rows, lines, strict=False):
                for text, at in zip(texts, columns, strict=False):
                    assembly = self.tree.lines.change(line.siblingAtColumn(at), text)(assembly)
            return assembly

        if len(rows) > len(lines) or widest > len(columns):
            self._session.refused.emit(
                f"The clipboard holds {len(rows)} × {widest} cells, and only {len(lines)} × {len(columns)} are left "
                "from the current cell on. Choose a cell further up or to the left."
            )
        else:
            self._session.edit(f"Paste {count} cell{'s' if count > 1 else ''}", change)

    def _cells(self) -> list[list[Cell]]:
        if self._copied_from() is self.foot:
            chosen = sorted(self.foot.selectedIndexes(), key=lambda at: self.foot.header().visualIndex(at.column()))
            return [[index.data(COPY_ROLE) for index in chosen]]
        return self.tree.block()

    def _copied_from(self) -> QTreeView:
        return self.foot if self.foot.hasFocus() and self.foot.selectedIndexes() else self.tree

    def _to_clipboard(self, rows: list[list[Cell]]) -> str:
        text = tsv_of_block(rows, self._session.decimal_mark) if rows else ""
        if len(rows) == 1:
            # One row goes into a field of a form as well as into a spreadsheet.
            text = text.rstrip("\n")
        if text:
            QGuiApplication.clipboard().setText(text)
        return text
