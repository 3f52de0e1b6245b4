"""The Checks page: what needs a look first, then what was checked and is sound."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QModelIndex, QPersistentModelIndex, QRect, QSize, Qt
from PySide6.QtGui import QColor, QGuiApplication
from PySide6.QtWidgets import (
    QHeaderView,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTreeWidget,
    QTreeWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.window.pages.overlap_row import OverlapRow
from app.window.style import GRID, Words, colours, icon
from app.window.tasks import Task
from core.assembly import Finding, findings_of

if TYPE_CHECKING:
    from app.window.session import Session

KEY = Qt.ItemDataRole.UserRole
WORD, PART, TEXT = range(3)
# Nobody reads more lines than this; of an assembly of more parts than that, sound checks are made in a worker.
MOST_LISTED, FEW_PARTS = 500, 200


class WrappedText(QStyledItemDelegate):
    """Gives a sentence as many lines as it needs in the width of its column."""

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """Return the height of the sentence in the column as it is now."""
        size = super().sizeHint(option, index)
        tree = self.parent()
        if index.column() == TEXT and isinstance(tree, QTreeWidget):
            width = tree.header().sectionSize(TEXT) - 2 * GRID
            flags = int(Qt.TextFlag.TextWordWrap)
            text = str(index.data(Qt.ItemDataRole.DisplayRole) or "")
            size.setHeight(option.fontMetrics.boundingRect(QRect(0, 0, width, 10_000), flags, text).height())
        return QSize(size.width(), size.height() + GRID)


class ChecksPage(QWidget):
    """Every finding as a line, the sound ones folded away; a click selects the part it is about."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("page")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        self._session = session
        self._unfolded = False
        self._fold: QTreeWidgetItem | None = None
        self.head = Words()
        self.list = QTreeWidget()
        self.list.setAccessibleName("Checks")
        self.list.setHeaderLabels(["", "Part", "What was found"])
        self.list.setWordWrap(True)
        self.list.setIndentation(2 * GRID)
        self.list.setItemDelegate(WrappedText(self.list))
        header = self.list.header()
        header.setAccessibleName("Columns of the checks")
        header.setSectionResizeMode(WORD, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(PART, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(TEXT, QHeaderView.ResizeMode.Stretch)
        header.sectionResized.connect(lambda *_sizes: self.list.scheduleDelayedItemsLayout())
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        layout.addWidget(self.head)
        layout.addWidget(self.list, 1)
        self.overlap = OverlapRow(session, self)
        layout.addWidget(self.overlap)
        self.list.currentItemChanged.connect(lambda item, _before: self._offer(item))
        self.list.itemClicked.connect(self._go)
        self.list.itemActivated.connect(self._go)
        self.list.itemExpanded.connect(self._list_sound)
        self.list.itemExpanded.connect(lambda _item: self._keep_fold(unfolded=True))
        self.list.itemCollapsed.connect(lambda _item: self._keep_fold(unfolded=False))
        session.settled.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the findings on the assembly as it is now."""
        session = self._session
        failed = [finding for finding in session.findings if not finding.check.ok]
        self.list.clear()
        self._offer(None)
        self.list.addTopLevelItems([_item(finding, "look", "failed") for finding in failed[:MOST_LISTED]])
        if len(failed) > MOST_LISTED:
            self.list.addTopLevelItem(_left_over(len(failed)))
        if not session.assembly.members:
            self.head.setText("Nothing to check yet: add a part, and its mass, inertia and mesh are checked here.")
            return
        self._fold = QTreeWidgetItem(["sound", "", "What was checked and found right."])
        self._fold.setIcon(WORD, icon("sound", "sound"))
        self._fold.setChildIndicatorPolicy(QTreeWidgetItem.ChildIndicatorPolicy.ShowIndicator)
        self.list.addTopLevelItem(self._fold)
        if failed:
            self.head.setText(f"{counted(len(failed))} a look. A click goes to the part.")
        else:
            self.head.setText("All checks are sound.")
        self._fold.setExpanded(self._unfolded)

    def _list_sound(self, fold: QTreeWidgetItem) -> None:
        """List the sound checks of the assembly as it is, which for thousands of parts are worked out in a worker."""
        assembly, look = self._session.assembly, self._session.findings
        if fold is not self._fold or fold.childCount():
            return

        def done(every: tuple[Finding, ...]) -> None:
            if fold is not self._fold or assembly is not self._session.assembly:
                return
            told = [finding for finding in look if finding.check.ok and finding not in every]
            sound = [finding for finding in (*every, *told) if finding.check.ok]
            fold.setText(WORD, f"{len(sound)} sound")
            fold.addChildren([_item(finding, "sound", "sound") for finding in sound[:MOST_LISTED]])
            if len(sound) > MOST_LISTED:
                fold.addChild(_left_over(len(sound)))

        if len(assembly.table.parts) <= FEW_PARTS:
            done(findings_of(assembly))
        else:
            Task(self, lambda _progress: findings_of(assembly), done, self._session.refused.emit)

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "head"):
            self.refresh()

    def copy_current(self) -> str:
        """Put the current finding on the clipboard, and return it."""
        item = self.list.currentItem()
        text = "\t".join(item.text(column) for column in (WORD, PART, TEXT)) if item else ""
        if text:
            QGuiApplication.clipboard().setText(text)
        return text

    def _keep_fold(self, *, unfolded: bool) -> None:
        self._unfolded = unfolded

    def _offer(self, item: QTreeWidgetItem | None) -> None:
        """Offer what can be done about an overlap, while one is chosen."""
        keys = ("", "") if item is None else tuple(str(item.data(column, KEY) or "") for column in (WORD, PART))
        self.overlap.show_pair(keys[0], keys[1])

    def _go(self, item: QTreeWidgetItem) -> None:
        key = str(item.data(WORD, KEY) or "")
        if key:
            self._session.select(frozenset({key}))


def counted(failed: int) -> str:
    """Return "1 check needs" or "3 checks need"."""
    return f"{failed} check needs" if failed == 1 else f"{failed} checks need"


def _left_over(count: int) -> QTreeWidgetItem:
    """Return the line that says how many more there are than are listed."""
    return QTreeWidgetItem(["", "", f"… and {count - MOST_LISTED} more; the first {MOST_LISTED} are listed."])


def _item(finding: Finding, word: str, role: str) -> QTreeWidgetItem:
    text = finding.check.text.removeprefix(f"{finding.name}: ")
    item = QTreeWidgetItem([word, finding.name, text[:1].upper() + text[1:]])
    item.setIcon(WORD, icon(role, role))
    item.setForeground(WORD, QColor(getattr(colours(), role)))
    item.setData(WORD, KEY, finding.key)
    item.setData(PART, KEY, finding.also)
    for column in range(3):
        item.setTextAlignment(column, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
    return item
