"""The ledger as Qt's tree model: it shows the session's lines and turns what is typed or dropped into edits."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import (
    QAbstractItemModel,
    QAbstractTableModel,
    QMimeData,
    QModelIndex,
    QPersistentModelIndex,
    Qt,
    Signal,
)

from app.window.ledger import edits
from app.window.ledger.columns import COLUMNS, INDEX
from app.window.numbers import copied, shown
from core.assembly import Assembly, Group, Line
from core.assembly.linked_groups import held_by, read_only_here
from core.errors import EditRefused
from core.quantity import UNITS, Kind
from core.quantity.formatting import SMALLEST_PLAIN

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from app.window.session import Session
    from core.quantity import Unit

Index = QModelIndex | QPersistentModelIndex
MIME = "application/x-masswright-lines"
COPY_ROLE = Qt.ItemDataRole.UserRole + 1
LINE_ROLE = Qt.ItemDataRole.UserRole + 2
EDITABLE = frozenset({INDEX["name"], INDEX["count"], INDEX["material"], INDEX["mass"]})


class LedgerModel(QAbstractItemModel):
    """Lines as a tree; row order is the document's, or by share where that was asked for.

    Signals:
        reworded: every text is another one. Qt's own signal would have the view ask about all lines, not only about
            those in sight.
    """

    reworded = Signal()

    def __init__(self, session: Session) -> None:
        super().__init__(session)
        self.session = session
        self.by_share = False
        self._lines: tuple[Line, ...] = ()
        self._children: list[list[int]] = [[]]
        self._place: list[tuple[int, int]] = []
        self._tails: dict[int, int] = {}
        self.refresh()
        session.changed.connect(self.refresh)
        session.shown_differently.connect(self.refresh_texts)

    def refresh(self) -> None:
        """Show the session's ledger; rows are kept where only their values changed."""
        lines = self.session.ledger.lines
        if [(a.key, a.depth) for a in lines] == [(b.key, b.depth) for b in self._lines]:
            self._lines = lines
            if self.by_share:
                self._rearrange()
            self.refresh_texts()
            return
        self._tails.clear()
        self.beginResetModel()
        self._lines = lines
        self._arrange()
        self.endResetModel()

    def refresh_texts(self) -> None:
        """Tell the views that every text is another one."""
        self._tails.clear()
        self.reworded.emit()
        self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(COLUMNS) - 1)

    def sort_by_share(self, wanted: bool) -> None:
        """Order the lines of each group by their share of the total, the largest first, or as the document has them."""
        self.by_share = wanted
        self._rearrange()

    def _rearrange(self) -> None:
        """Order the rows anew; what is selected, open or being edited stays with its line."""
        self.layoutAboutToBeChanged.emit()
        before = self.persistentIndexList()
        self._arrange()
        after = [self._index(index.internalId() - 1, index.column()) for index in before]
        self.changePersistentIndexList(before, after)
        self.layoutChanged.emit()

    def _arrange(self) -> None:
        """Find every line's children and place; list 0 of the children is the outermost level."""
        self._children = [[] for _ in range(len(self._lines) + 1)]
        above: list[int] = []
        for at, line in enumerate(self._lines):
            del above[line.depth :]
            self._children[above[-1] + 1 if above else 0].append(at)
            above.append(at)
        if self.by_share:
            for rows in self._children:
                rows.sort(key=lambda at: -(self._lines[at].inertia or 0.0))
        self._place = [(0, 0)] * len(self._lines)
        for parent, rows in enumerate(self._children):
            for row, at in enumerate(rows):
                self._place[at] = (parent, row)

    def _index(self, at: int, column: int) -> QModelIndex:
        return self.createIndex(self._place[at][1], column, at + 1)

    def index_of(self, key: str, column: int = 0) -> QModelIndex:
        """Return where a line is shown; an invalid index where it is not."""
        for at, line in enumerate(self._lines):
            if line.key == key:
                return self._index(at, column)
        return QModelIndex()

    def line(self, index: Index) -> Line:
        """Return the line of a valid index."""
        return self._lines[index.internalId() - 1]

    def longest_tail(self, column: int) -> int:
        """Return how many characters stand behind the decimal mark in the longest number of a column."""
        if column not in self._tails:
            lines = _with_longest_tails(self.session, (*self._lines, self.session.ledger.total), column)
            texts = (cell_text(self.session, line, column, Qt.ItemDataRole.DisplayRole) for line in lines)
            self._tails[column] = max((len(text.partition(self.session.decimal_mark)[2]) for text in texts), default=0)
        return self._tails[column]

    def index(self, row: int, column: int, parent: Index = QModelIndex()) -> QModelIndex:
        """Return the index of a child."""
        rows = self._children[parent.internalId() if parent.isValid() else 0]
        if 0 <= row < len(rows) and 0 <= column < len(COLUMNS):
            return self.createIndex(row, column, rows[row] + 1)
        return QModelIndex()

    def parent(self, index: Index = QModelIndex()) -> QModelIndex:  # type: ignore[override]  # two overloads in Qt
        """Return the index of the group that holds a line."""
        if not index.isValid():
            return QModelIndex()
        above = self._place[index.internalId() - 1][0]
        return self._index(above - 1, 0) if above else QModelIndex()

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return how many lines a group holds."""
        if parent.column() > 0:
            return 0
        return len(self._children[parent.internalId() if parent.isValid() else 0])

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return the number of columns."""
        return len(COLUMNS)

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Return what may be done with a cell: inputs are edited, parts and groups dragged, groups take them."""
        if not index.isValid():
            return Qt.ItemFlag.ItemIsDropEnabled
        flags = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        line = self.line(index)
        if line.kind != "cut":
            flags |= Qt.ItemFlag.ItemIsDragEnabled
        if line.kind == "group":
            flags |= Qt.ItemFlag.ItemIsDropEnabled
        if self.is_input(line, index.column()):
            flags |= Qt.ItemFlag.ItemIsEditable
        return flags

    @staticmethod
    def is_input(line: Line, column: int) -> bool:
        """Tell whether a cell is typed rather than computed, or another document's."""
        if line.read_only:
            return False
        if column in {INDEX["name"], INDEX["count"]}:
            return line.kind != "total"
        if line.kind != "part" or line.basis == "data sheet":
            return False
        return column == INDEX["material"] or (column == INDEX["mass"] and line.basis == "weighed" and line.times == 1)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = 0) -> object:
        """Return a column's heading, with its unit on a second line."""
        if orientation != Qt.Orientation.Horizontal:
            return None
        column = COLUMNS[section]
        if role == Qt.ItemDataRole.DisplayRole:
            return f"{column.heading.format(axis=self.session.assembly.drive)}\n{self._unit_text(section)}".rstrip("\n")
        if role == Qt.ItemDataRole.ToolTipRole:
            return column.tip
        if role == Qt.ItemDataRole.TextAlignmentRole:
            left = column.kind is None or column.key == "share"
            side = Qt.AlignmentFlag.AlignLeft if left and column.key != "count" else Qt.AlignmentFlag.AlignRight
            return int(side | Qt.AlignmentFlag.AlignVCenter)
        return None

    def _unit_text(self, section: int) -> str:
        if COLUMNS[section].kind in {None, Kind.NUMBER}:
            return ""
        # The heading of a flywheel effect says already which one it is.
        return _unit(self.session, section).symbol.removesuffix(f" {COLUMNS[section].heading}")

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a cell's text, the text to edit or to copy, its line, or its tool tip."""
        if not index.isValid():
            return None
        line, column = self.line(index), index.column()
        if role == LINE_ROLE:
            return line
        if role == COPY_ROLE:
            return cell_to_copy(self.session, line, column)
        if role in {Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.EditRole}:
            return cell_text(self.session, line, column, role)
        return self._said(line, column, role)

    def _said(self, line: Line, column: int, role: int) -> str | None:
        """Return what is said about a cell: its tool tip, or what a screen reader says."""
        if role == Qt.ItemDataRole.ToolTipRole:
            name = f"{line.name}\nOnly read here: it belongs to a linked document" if line.read_only else line.name
            tips = {INDEX["name"]: name, INDEX["material"]: f"{line.material}\nValues: {line.basis}".strip()}
            return tips.get(column)
        if role == Qt.ItemDataRole.AccessibleTextRole:
            text = cell_text(self.session, line, column, Qt.ItemDataRole.DisplayRole)
            heading = COLUMNS[column].heading.format(axis=self.session.assembly.drive)
            return f"{heading} {text} {self._unit_text(column)}".strip()
        return None

    def setData(self, index: Index, value: object, role: int = Qt.ItemDataRole.EditRole) -> bool:
        """Turn what was typed into an edit; return whether it was taken."""
        if role != Qt.ItemDataRole.EditRole or not index.isValid():
            return False
        refusal = self.attempt(index, str(value))
        if refusal:
            self.session.refused.emit(refusal)
        return not refusal

    def attempt(self, index: Index, text: str) -> str:
        """Try the edit that a text in a cell asks for; return "" or the sentence that refuses it."""
        if text == self.data(index, Qt.ItemDataRole.EditRole):
            return ""
        words = {"name": "Rename", "count": "Quantity of", "material": "Material of", "mass": "Mass of"}
        name = f"{words[COLUMNS[index.column()].key]} {self.line(index).name}: {text.strip()}"
        return self.session.attempt(name, self.change(index, text))

    def change(self, index: Index, text: str) -> Callable[[Assembly], Assembly]:
        """Return the edit that a text in a cell asks for.

        Raises:
            EditRefused: the cell is computed, or belongs to a linked document.

        """
        line, column = self.line(index), COLUMNS[index.column()]
        held = held_by(self.session.assembly, line.key) if line.read_only else None
        if held is not None and held.link is not None:
            raise read_only_here(held.link, line.name)
        if not self.is_input(line, index.column()):
            heading = column.heading.format(axis=self.session.assembly.drive)
            raise EditRefused(
                f"{heading} is computed here", where=line.name, read=f'"{text}"',
                remedy="Type or paste into the cells with a box, or into the name",
            )
        units = self.session.units
        made = {
            "name": edits.renamed(line.key, text),
            "count": edits.counted(line.key, text),
            "material": edits.made_of(line.key, text, units, self.session.own.materials),
            "mass": edits.weighing(line.key, text, units),
        }
        return made[column.key]

    def supportedDropActions(self) -> Qt.DropAction:
        """Return that lines are moved, not copied."""
        return Qt.DropAction.MoveAction

    def mimeTypes(self) -> list[str]:
        """Return the one form in which lines are dragged."""
        return [MIME]

    def mimeData(self, indexes: Sequence[Index]) -> QMimeData:
        """Return the keys of the dragged lines."""
        keys = dict.fromkeys(self.line(index).key for index in sorted(indexes, key=lambda index: index.internalId()))
        data = QMimeData()
        data.setData(MIME, "\n".join(keys).encode())
        return data

    def dropMimeData(
        self, data: QMimeData, action: Qt.DropAction, row: int, column: int, parent: Index
    ) -> bool:
        """Move the dropped lines into a group, or between two lines."""
        if not data.hasFormat(MIME):
            return False
        keys = bytes(data.data(MIME).data()).decode().split("\n")
        group = self.line(parent).key if parent.isValid() else None
        # Between two lines means something only where they stand in the document's order.
        place = None if row < 0 or self.by_share else row
        words = self.session.assembly.name_of_line(keys[0]) if len(keys) == 1 else f"{len(keys)} lines"
        self.session.edit(f"Move {words}", lambda assembly: moved_lines(assembly, keys, group, place))
        # The edit has already moved them; Qt is not to remove the rows it dragged.
        return False


class FootModel(QAbstractTableModel):
    """The one row of totals under the ledger."""

    def __init__(self, session: Session) -> None:
        super().__init__(session)
        self.session = session
        for signal in (session.changed, session.shown_differently):
            signal.connect(lambda: self.dataChanged.emit(self.index(0, 0), self.index(0, len(COLUMNS) - 1)))

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return the one row."""
        return 0 if parent.isValid() else 1

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        """Return the columns of the ledger."""
        return 0 if parent.isValid() else len(COLUMNS)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a total as shown or as copied."""
        total = self.session.ledger.total
        if role == LINE_ROLE:
            return total
        if role == Qt.ItemDataRole.ToolTipRole:
            told = f"{total.material}\nValues: {total.basis}".strip()
            return told if index.column() == INDEX["material"] and total.basis else COLUMNS[index.column()].tip
        words = {INDEX["name"]: "TOTAL", INDEX["count"]: ""}
        if role == COPY_ROLE:
            return words.get(index.column(), cell_to_copy(self.session, total, index.column()))
        if role == Qt.ItemDataRole.DisplayRole:
            return words.get(index.column(), cell_text(self.session, total, index.column(), role))
        return None


def moved_lines(assembly: Assembly, keys: list[str], group: str | None, row: int | None) -> Assembly:
    """Return the assembly with lines put into a group (None: outermost) before a row (None: at the end)."""
    holder = None if group is None else assembly.node(group)
    siblings = holder.members if isinstance(holder, Group) else assembly.members
    before = next((node.key for node in siblings[row:] if node.key not in keys), None) if row is not None else None
    for key in keys:
        if any(above.key in keys for above in assembly.groups_above(key)):
            continue
        left = assembly.removed((key,))
        rest = left.node(group) if group is not None and group in left else None
        members = rest.members if isinstance(rest, Group) else left.members
        at = None if before is None else [node.key for node in members].index(before)
        assembly = assembly.moved(key, group, at)
    return assembly


def _with_longest_tails(session: Session, lines: tuple[Line, ...], column: int) -> list[Line]:
    """Return the few lines among which is the number of a column with the most characters behind its decimal mark.

    With so many significant digits that is the smallest that is written without an exponent, or the one of the
    longest exponent: the smallest or the largest of all.
    """
    found = [COLUMNS[column].shown_of(session, line) for line in lines]
    sizes = np.abs(np.array([value if isinstance(value, float) else 0.0 for value in found]))
    plain = SMALLEST_PLAIN * _unit(session, column).factor
    above, below = np.where(sizes >= plain, sizes, np.inf), np.where(sizes < plain, sizes, 0.0)
    smallest = np.where(sizes > 0, sizes, np.inf)
    return [lines[int(at)] for at in (above.argmin(), below.argmax(), smallest.argmin(), sizes.argmax())]


def cell_to_copy(session: Session, line: Line, column: int) -> float | int | str:
    """Return what a cell holds for a spreadsheet: a number in the unit shown, or a text; "" where there is none."""
    value = COLUMNS[column].shown_of(session, line)
    if value is None or isinstance(value, (str, int)):
        return "" if value is None else value
    return float(_unit(session, column).from_si(value))


def _unit(session: Session, column: int) -> Unit:
    kind, unit = COLUMNS[column].kind, COLUMNS[column].unit
    if unit is not None:
        return unit(session.units)
    return UNITS["%"] if kind in {None, Kind.NUMBER} else session.units[Kind(str(kind))]


def cell_text(session: Session, line: Line, column: int, role: int) -> str:
    """Return a cell's text: as shown, or as edited (full precision)."""
    spec = COLUMNS[column]
    value = spec.shown_of(session, line)
    if value is None:
        return "–" if role == Qt.ItemDataRole.DisplayRole else ""
    if isinstance(value, str):
        return value
    if isinstance(value, int):
        return str(value)
    unit = _unit(session, column)
    if role != Qt.ItemDataRole.DisplayRole:
        return copied(session, value, unit)
    return shown(session, value, unit, spec.digits) + (" %" if unit.symbol == "%" else "")
