"""What can be done about an overlap that is chosen among the checks: light it up, mark it as meant, count it once."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtWidgets import QHBoxLayout, QMenu, QPushButton, QVBoxLayout, QWidget

from app.window.style import GRID, Words
from app.window.tasks import Task
from core.assembly import Part
from core.assembly.assembly import MeantOverlap
from core.assembly.carrying import counted_once
from core.material import Weighed

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Assembly
    from core.assembly.overlaps import Overlap
    from core.progress import Progress


class OverlapRow(QWidget):
    """Three buttons, hidden unless an overlap is chosen, and below them what has to be said about the last of them."""

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
        self.once = QPushButton("Count it once")
        self.once.setAccessibleName("Count the overlap once")
        self.once.setToolTip("Cuts the shape of the part that carries the common volume out of the other one.")
        self.carriers = QMenu("Count it once", self)
        self.once.setMenu(self.carriers)
        self.told = Words(role="quiet")
        self.told.setAccessibleName("About counting it once")
        self.told.setWordWrap(True)
        buttons = QHBoxLayout()
        buttons.setSpacing(GRID)
        for button in (self.show_it, self.meant, self.once):
            buttons.addWidget(button)
        buttons.addStretch(1)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        layout.addLayout(buttons)
        layout.addWidget(self.told)
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
        self._offer_carriers(one)

    def _offer_carriers(self, one: Overlap) -> None:
        """Offer to take each of the two out of the other, the one that is said to carry the common volume first."""
        self.carriers.clear()
        names = dict(zip(one.keys, one.names, strict=True))
        marked = "" if one.meant is None else one.meant.carried_by
        pairs = [one.keys, one.keys[::-1]] if one.keys[0] != one.keys[1] else []
        for carrier, other in sorted(pairs, key=lambda pair: pair[0] != marked):
            said = ", which carries it," if carrier == marked else ""
            words = f"Take {names[carrier]}{said} out of {names[other]}"
            self.carriers.addAction(words, lambda carrier=carrier, other=other: self._count_once(carrier, other))  # type: ignore[misc]  # bound now
        self.once.setVisible(bool(pairs))
        nodes = [self._session.assembly.node(key) for key in names]
        weighed = [node.name for node in nodes if isinstance(node, Part) and isinstance(node.driver, Weighed)]
        stays = f"The weighed mass of {' and of '.join(weighed)} stays: it is that of the finished part."
        self._tell(stays if pairs and weighed else "", "quiet")

    def _tell(self, sentence: str, role: str) -> None:
        self.told.set_role(role)
        self.told.setText(sentence)
        self.told.setVisible(bool(sentence))

    def _count_once(self, carrier: str, other: str) -> None:
        """Look off the window's thread where the two meet, and make the edit unless another one came before it."""
        before = self._session.assembly
        name = f"Count it once: take {before.node(carrier).name} out of {before.node(other).name}"

        def worked_out(_progress: Progress) -> Assembly:
            after = counted_once(before, carrier, other)
            _ = after.total  # the cuts are made here
            return after

        def done(after: Assembly) -> None:
            self.once.setEnabled(True)
            if self._session.assembly is before:
                refused(self._session.attempt(name, lambda _assembly: after, select=other))
            else:
                self._session.refused.emit(f"{name}: the document changed meanwhile, and nothing was cut. Do it again.")

        def refused(sentence: str) -> None:
            self.once.setEnabled(True)
            if self._session.assembly is before:
                self._tell(sentence, "failed")

        self.once.setEnabled(False)
        Task(self, worked_out, done, refused)

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
