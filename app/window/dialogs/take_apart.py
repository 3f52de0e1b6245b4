"""Asks which copy of the selected part becomes a part of its own."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QInputDialog, QWidget

from core.assembly.copies import taken_apart

if TYPE_CHECKING:
    from app.window.session import Session


class TakeApartDialog(QInputDialog):
    """One number: the copy, counted from 1 in the order of its pattern."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        part = session.selected_part
        self._key = "" if part is None else part.key
        count = 1 if part is None else part.copies.count
        name = "the selected part" if part is None else part.name
        self.setWindowTitle("Take one copy apart")
        self.setInputMode(QInputDialog.InputMode.IntInput)
        self.setLabelText(f"Copy of {name} that becomes a part of its own, 1 to {count}:")
        self.setIntRange(1, count)
        self.setIntValue(count)
        self.setOkButtonText("Take apart")
        self.accepted.connect(self._take)

    def _take(self) -> None:
        key, index = self._key, self.intValue() - 1
        if not key:
            self._session.refused.emit("Select one part with several copies first.")
            return
        name = self._session.assembly.node(key).name
        self._session.edit(f"Take copy {index + 1} of {name} apart", lambda before: taken_apart(before, key, index))
