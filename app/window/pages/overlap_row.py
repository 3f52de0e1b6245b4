"""What can be done about an overlap that is chosen among the checks: light it up, or mark it as meant."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QMenu, QPushButton, QWidget

from app.window.style import GRID
from core.assembly.assembly import MeantOverlap

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Assembly
    from core.assembly.overlaps import Overlap


class OverlapRow(QWidget):
    """Two buttons, hidden unless an overlap is chosen."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._chosen: Overlap | None = None
        self._lit: Assembly | None = None
        self.show_it = QPushButton("Show in the view")
        self.show_it.setAccessibleName("Show the overlap in the view")
        self.show_it.clicked.connect(self._light_up)
        self.meant = QPushButton("Meant")
        self.meant.setAccessibleName("Mark the overlap as meant")
        self.meant.setToolTip("For a press fit or a thread: it stays in the list, and no longer fails.")
        self.marks = QMenu("Meant", self)
        self.meant.setMenu(self.marks)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        layout.addWidget(self.show_it)
        layout.addWidget(self.meant)
        layout.addStretch(1)
        session.changed.connect(self._take_away)
        self.hide()

    def show_pair(self, key: str, also: str) -> None:
        """Offer what can be done about the overlap of the parts with these keys; nothing where there is none."""
        found = () if self._session.overlaps is None or not also else self._session.overlaps.found
        self._chosen = next((one for one in found if one.keys == (key, also)), None)
        self.setVisible(self._chosen is not None)
        if self._chosen is not None:
            self._fill(self._chosen)

    def _fill(self, one: Overlap) -> None:
        self.marks.clear()
        for carrier, name in dict(zip(one.keys, one.names, strict=True)).items() if one.keys[0] != one.keys[1] else ():
            words = f"Meant, and carried by {name}"
            self.marks.addAction(words, lambda carrier=carrier: self._mark(one, carrier))  # type: ignore[misc]  # bound now
        self.marks.addAction("Meant", lambda: self._mark(one, ""))
        if one.meant is not None:
            self.marks.addAction("Not meant any more", lambda: self._unmark(one))

    def _mark(self, one: Overlap, carrier: str) -> None:
        mark = MeantOverlap(*one.keys, carrier)
        self._session.edit(f"Mark the overlap of {_both(one)} as meant", lambda before: before.with_meant(mark))

    def _unmark(self, one: Overlap) -> None:
        self._session.edit(
            f"Mark the overlap of {_both(one)} as not meant", lambda before: before.without_meant(*one.keys)
        )

    def _light_up(self) -> None:
        if self._chosen is not None:
            self._lit = self._session.assembly
            self._session.found.emit(self._chosen.edges)

    def _take_away(self) -> None:
        """Show no overlap of an assembly that is no longer there."""
        if self._lit is not None and self._lit is not self._session.assembly:
            self._lit = None
            self._session.found.emit(np.zeros((0, 2, 3)))


def _both(one: Overlap) -> str:
    return f"the copies of {one.names[0]}" if one.keys[0] == one.keys[1] else " and ".join(one.names)
