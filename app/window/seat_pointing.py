"""Seating a line by pointing in the view: first a place of the line, then the place that it is to be set on."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtGui import QKeyEvent

from app.window.style import GRID, Words
from app.window.tasks import Task
from app.window.view.pointing import Pointed, pointed_at
from core.assembly import walk
from core.assembly.seats import moved_to, said_place
from core.assembly.seats.datums import find_places, finding_takes_long

if TYPE_CHECKING:
    from PySide6.QtCore import QPointF

    from app.window.session import Session
    from app.window.view import ViewPane
    from core.assembly.seat import Anchor

_NOTHING = np.zeros((0, 2, 3))


class SeatPointing(QObject):
    """Takes the view's clicks while a line is being seated; says over the view what to click next."""

    def __init__(self, session: Session, view: ViewPane, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self._view = view
        self._key = ""
        self._moving: Anchor | None = None
        self._task: Task[None] | None = None
        self.hint = Words("", "text", view)
        self.hint.setObjectName("hint")
        self.hint.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.hint.hide()
        view.installEventFilter(self)
        session.seat_wanted.connect(self.begin)
        session.changed.connect(self._stay)
        session.selection_changed.connect(self.leave)

    @property
    def is_on(self) -> bool:
        """Whether clicks in the view are taken."""
        return bool(self._key)

    def begin(self, key: str) -> None:
        """Let the next two clicks seat the line with this key."""
        self._key, self._moving = key, None
        self._view.point_with(self)
        self._view.setFocus(Qt.FocusReason.OtherFocusReason)
        self._ask("")

    def leave(self) -> None:
        """Stop taking clicks; nothing is changed."""
        if self.is_on:
            self._key, self._moving = "", None
            self._view.point_with(None)
            self.hint.hide()
            self._session.found.emit(_NOTHING)

    def hover(self, spot: QPointF) -> None:
        """Light up the place under the pointer that a click would take."""
        pointed = self._pointed(spot)
        self._session.found.emit(_NOTHING if pointed is None else pointed.edges)
        if self._task is None:
            self._ask("" if pointed is None else said_place(self._session.assembly, pointed.anchor))

    def click(self, spot: QPointF) -> None:
        """Take the place under the pointer, as the line's own or as the one that it is set on."""
        pointed = self._pointed(spot)
        if pointed is None:
            return
        if self._moving is None:
            self._moving = pointed.anchor
            self._session.found.emit(_NOTHING)
            self._ask("")
            return
        key, moving, target = self._key, self._moving, pointed.anchor
        assembly = self._session.assembly
        words = f"Seat {assembly.node(key).name} on {said_place(assembly, target)}"
        self.leave()
        self._session.edit(words, lambda before: moved_to(before, key, moving, target), key)

    def _pointed(self, spot: QPointF) -> Pointed | None:
        """Return the place at a spot, if it is on the right side of the seat."""
        assembly = self._session.assembly
        part = self._view.key_at(spot)
        if not part or part not in assembly or self._is_own(part) != (self._moving is None):
            return None
        if finding_takes_long(assembly.node(part)):
            self._look_at(part)
            return None
        view = self._view
        return pointed_at(assembly, view.scene, view.camera, (spot.x(), spot.y()), view.frame_size)

    def _is_own(self, part: str) -> bool:
        return any(node.key == part for node, _ in walk((self._session.assembly.node(self._key),)))

    def _look_at(self, key: str) -> None:
        """Find the faces of a large mesh off the window's thread; the next movement finds them there."""
        part = self._session.assembly.node(key)
        if self._task is None:
            self._ask(f"looking for the faces of {part.name} …")
            said = self._session.said.emit
            self._task = Task(self, lambda _progress: find_places(part), lambda _found: self._looked(), said)

    def _looked(self) -> None:
        self._task = None
        if self.is_on:
            self._ask("")

    def _ask(self, place: str) -> None:
        name = self._session.assembly.node(self._key).name
        wanted = f"Click a face, edge or axis of {name}"
        if self._moving is not None:
            wanted = f"{name} by its {self._moving.datum}: click the place to seat it on"
        self.hint.setText(f"{wanted}, or Escape{f':  {place}' if place else ''}")
        self._place_hint()
        self.hint.show()
        self.hint.raise_()

    def _place_hint(self) -> None:
        """Lay the hint over the view's top: in one line, or in as many as it takes in a narrow view."""
        widest = self._view.width() - 2 * GRID
        self.hint.setWordWrap(False)
        size = self.hint.sizeHint()
        self.hint.setWordWrap(size.width() > widest)
        width = min(size.width(), widest)
        self.hint.setGeometry(GRID, GRID, width, max(size.height(), self.hint.heightForWidth(width)))

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Keep the hint inside the view when that gets another size; leave on Escape."""
        if self.is_on and event.type() == QEvent.Type.Resize:
            self._place_hint()
        if self.is_on and isinstance(event, QKeyEvent) and event.key() == Qt.Key.Key_Escape:
            if event.type() == QEvent.Type.KeyPress:
                self.leave()
            return True
        return super().eventFilter(watched, event)

    def _stay(self) -> None:
        """Leave when the line is gone, as when another document was opened."""
        if self.is_on and self._key not in self._session.assembly:
            self.leave()
