"""The Checks page: what needs a look first, then what was checked and is sound."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QHeaderView, QTreeWidget, QTreeWidgetItem, QVBoxLayout, QWidget

from app.window.style import GRID, Words, colours, icon

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Finding

KEY = Qt.ItemDataRole.UserRole


class ChecksPage(QWidget):
    """Every finding as a line; a click selects the part it is about."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.head = Words()
        self.list = QTreeWidget()
        self.list.setAccessibleName("Checks")
        self.list.setHeaderLabels(["", "Part", "What was found"])
        self.list.setRootIsDecorated(False)
        self.list.setWordWrap(True)
        self.list.setUniformRowHeights(False)
        header = self.list.header()
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(1, QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(2, QHeaderView.ResizeMode.Stretch)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, GRID)
        layout.addWidget(self.head)
        layout.addWidget(self.list, 1)
        self.list.itemClicked.connect(self._go)
        self.list.itemActivated.connect(self._go)
        session.changed.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the findings on the assembly as it is now."""
        findings = self._session.findings
        failed = [finding for finding in findings if not finding.check.ok]
        sound = [finding for finding in findings if finding.check.ok]
        self.list.clear()
        for finding in failed:
            self.list.addTopLevelItem(_item(finding, "look", "failed", colours().failed))
        for finding in sound:
            self.list.addTopLevelItem(_item(finding, "sound", "sound", colours().sound))
        if not findings:
            self.head.setText("Nothing to check yet: add a part, and its mass, inertia and mesh are checked here.")
        elif failed:
            self.head.setText(f"{counted(len(failed))} a look; {len(sound)} are sound. A click goes to the part.")
        else:
            self.head.setText(f"All {len(sound)} checks are sound.")

    def _go(self, item: QTreeWidgetItem) -> None:
        key = str(item.data(0, KEY))
        if key:
            self._session.select(frozenset({key}))


def counted(failed: int) -> str:
    """Return "1 check needs" or "3 checks need"."""
    return f"{failed} check needs" if failed == 1 else f"{failed} checks need"


def _item(finding: Finding, word: str, drawing: str, colour: str) -> QTreeWidgetItem:
    item = QTreeWidgetItem([word, finding.name, finding.check.text])
    item.setIcon(0, icon(drawing))
    item.setForeground(0, QColor(colour))
    item.setData(0, KEY, finding.key)
    item.setToolTip(2, finding.check.text)
    for column in range(3):
        item.setTextAlignment(column, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop)
    return item
