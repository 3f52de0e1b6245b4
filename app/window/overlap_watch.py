"""Looks for parts that penetrate each other, off the window's thread, whenever the document has come to rest."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer

from app.window.tasks import Task
from core.assembly.overlaps import Overlaps, overlaps_of

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly import Assembly
    from core.progress import Progress

# A change that is followed by another one sooner is not looked at.
REST_MS = 1000
# More bodies than this are not looked at while somebody works: it would take the window's time for a minute.
MOST_BODIES_WATCHED = 10_000


class OverlapWatch(QObject):
    """Searches the session's assembly after each change, and gives what was found to the session."""

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self._seen: Assembly | None = None
        self._task: Task[Overlaps] | None = None
        self._rest = QTimer(self, singleShot=True, interval=REST_MS)
        self._rest.timeout.connect(self._look)
        session.changed.connect(self._wait)
        self._wait()

    def stop(self) -> None:
        """Give up what is being looked for, for good."""
        self._rest.stop()
        self._session.changed.disconnect(self._wait)
        if self._task is not None:
            self._task.cancel()

    def _wait(self) -> None:
        if self._session.assembly is self._seen:
            return
        self._seen = self._session.assembly
        self._leave()
        self._rest.start()

    def _leave(self) -> None:
        if self._task is not None:
            self._task.leave()
            self._task.deleteLater()
            self._task = None

    def _look(self) -> None:
        assembly = self._session.assembly
        if not assembly.members:
            return
        if len(assembly.table.owner) > MOST_BODIES_WATCHED:
            if self._session.overlaps is not None and self._session.overlaps.skipped:
                return
            self._session.show_overlaps(Overlaps((), 0, (), skipped=True))
            return

        def search(progress: Progress) -> Overlaps:
            return overlaps_of(assembly, progress)

        self._task = Task(self, search, self._found, self._session.said.emit)

    def _found(self, overlaps: Overlaps) -> None:
        if self._task is not None:
            self._task.deleteLater()
            self._task = None
        self._session.show_overlaps(overlaps)
