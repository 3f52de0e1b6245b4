"""A linked file read again: what it would change, in numbers, to be taken or not."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QGridLayout, QProgressBar, QWidget

from app.window.dialogs.form import FormDialog
from app.window.numbers import shown
from app.window.style import GRID, Words
from app.window.tasks import Task
from core.assembly import Group
from core.assembly.link_change import link_changes
from core.assembly.linked_groups import with_link_read
from core.document import note_links, read_linked
from core.errors import MasswrightError
from core.quantity import NO_VALUE, UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Sequence

    from app.window.session import Session
    from core.assembly import Assembly, Line
    from core.assembly.link_change import LinkChange
    from core.assembly.linked_groups import LinkedDocument

DIGITS, FEW_DIGITS = 6, 3
MOST_NAMED = 6


class ReadAgainDialog(FormDialog):
    """Reads the file in a worker, shows each linked group before and after, and takes it in one edit."""

    def __init__(self, session: Session, keys: Sequence[str], path: str, parent: QWidget | None = None) -> None:
        super().__init__("Read a linked group again", "Take it", 520, parent)
        self._session, self._keys, self._path = session, tuple(keys), path
        self._document: LinkedDocument | None = None
        self.said = Words(f"Reading {Path(path).name} …")
        self.said.setWordWrap(True)
        self.bar = QProgressBar()
        self.bar.setRange(0, 0)
        self.bar.setAccessibleName("Reading the linked file")
        self.table = ChangeTable(session)
        self.lines = Words("", "quiet")
        self.lines.setWordWrap(True)
        self.stack(self.said, self.bar, self.table, self.lines)
        self.take_button.setEnabled(False)
        self.leave_button.setText("Leave it")
        own = session.path
        self._task = Task(self, lambda _progress: read_linked(path, own), self._show, self._cannot)
        self.finished.connect(self._task.leave)

    def take(self) -> None:
        """Take what the file holds now, as one edit."""
        document = self._document
        if document is None:
            return

        def change(assembly: Assembly) -> Assembly:
            for key in self._keys:
                assembly = with_link_read(assembly, key, document)
            return assembly

        names = ", ".join(self._session.assembly.node(key).name for key in self._keys)
        refusal = self._session.attempt(f"Read {names} again", change)
        self.refuse(refusal)
        if not refusal:
            self.accept()

    def _show(self, document: LinkedDocument) -> None:
        self.bar.hide()
        assembly = self._session.assembly
        groups = [node for node in map(assembly.node, self._keys) if isinstance(node, Group)]
        try:
            changes = link_changes(assembly, self._keys, document)
        except MasswrightError as error:
            self._cannot(str(error))
            return
        self._document = document
        if note_links(assembly, {document.link.path: document.link.sha256}):
            self._session.look_again()
        same = all(group.link is not None and group.link.sha256 == document.link.sha256 for group in groups)
        what = "holds what was read from it" if same else "holds something else than was read before"
        self.said.setText(f"{document.link.file_name} {what}.")
        self.said.setToolTip(document.link.path)
        self.table.show_changes(changes)
        self.lines.setText(_lines_told(changes))
        self.take_button.setEnabled(any(group.link != document.link for group in groups))
        self.adjustSize()

    def _cannot(self, sentence: str) -> None:
        self.bar.hide()
        self.said.setText(f"{Path(self._path).name} cannot be taken; the last values stay.")
        self.refuse(sentence)


class ChangeTable(QWidget):
    """Mass, centre and J of each linked group: as read before, in the file now, and the difference."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self._session = session
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(3 * GRID)
        self._grid.setVerticalSpacing(GRID // 2)
        self._grid.setColumnStretch(0, 1)

    def show_changes(self, changes: Sequence[LinkChange]) -> None:
        """Show the changes, a block of lines for each group."""
        for change in changes:
            self._add((change.before.name, "as read", "in the file", "difference"), "quiet")
            for row in self._rows(change.before, change.after):
                self._add(row, "text")

    def _rows(self, before: Line, after: Line) -> list[tuple[str, str, str, str]]:
        axis = self._session.assembly.drive
        rows = [self._row("mass", Kind.MASS, before.mass, after.mass, share=True)]
        for at, letter in enumerate("xyz"):
            then, now = (None if line.centre is None else float(line.centre[at]) for line in (before, after))
            rows.append(self._row(f"centre of mass {letter}", Kind.LENGTH, then, now, share=False))
        rows.append(self._row(f"J about {axis}", Kind.INERTIA, before.inertia, after.inertia, share=True))
        return rows

    def _row(
        self, name: str, kind: Kind, before: float | None, after: float | None, *, share: bool
    ) -> tuple[str, str, str, str]:
        unit, percent = self._session.units[kind], UNITS["%"]
        then, now = (shown(self._session, value, unit, DIGITS) for value in (before, after))
        difference = NO_VALUE
        if before is not None and after is not None:
            difference = f"{shown(self._session, after - before, unit, FEW_DIGITS)} {unit.symbol}"
            if share and before:
                difference += f" ({shown(self._session, after / before - 1, percent, FEW_DIGITS)} %)"
        return f"{name}, {unit.symbol}", then, now, difference

    def _add(self, texts: tuple[str, ...], role: str) -> None:
        row = self._grid.rowCount()
        for column, text in enumerate(texts):
            cell = Words(text, role)
            cell.setMinimumSize(cell.sizeHint())
            side = Qt.AlignmentFlag.AlignRight if column else Qt.AlignmentFlag.AlignLeft
            self._grid.addWidget(cell, row, column, side)


def _lines_told(changes: Sequence[LinkChange]) -> str:
    """Return which lines come and go; whatever was marked on those that go, goes with them."""
    told = ["Values of all copies; the centre from the document's origin."]
    for names, words in ((changes[0].come, "New lines"), (changes[0].gone, "Lines that are gone")):
        if names:
            more = f" and {len(names) - MOST_NAMED} more" if len(names) > MOST_NAMED else ""
            told.append(f"{words}: {', '.join(names[:MOST_NAMED])}{more}.")
    return " ".join(told)
