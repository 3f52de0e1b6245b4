"""Works out what a long duty asks of the drive, off the window's thread."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer

from app.window.tasks import Task

if TYPE_CHECKING:
    from app.window.session import Session
    from core.drive import DriveAnswer
    from core.machine import Machine

# A change that is followed by another one sooner is not worked out.
REST_MS = 250


class DutyWatch(QObject):
    """Has the answer of the session's machine worked out where that takes long; the session then judges it anew."""

    def __init__(self, session: Session, parent: QObject) -> None:
        super().__init__(parent)
        self._session = session
        self._seen: Machine | None = None
        self._task: Task[DriveAnswer] | None = None
        self._rest = QTimer(self, singleShot=True, interval=REST_MS)
        self._rest.timeout.connect(self._work)
        session.changed.connect(self._wait)
        self._wait()

    def stop(self) -> None:
        """Give up what is being worked out, for good."""
        self._rest.stop()
        self._session.changed.disconnect(self._wait)
        self._leave()

    def _wait(self) -> None:
        machine = self._session.machine
        if machine is self._seen:
            return
        self._seen = machine
        self._leave()
        self._rest.stop()
        if machine.at_once is not machine:
            self._rest.start()

    def _leave(self) -> None:
        if self._task is not None:
            self._task.leave()
            self._task.deleteLater()
            self._task = None

    def _work(self) -> None:
        machine = self._session.machine
        # What it finds is kept with the machine, where whoever shows it looks for it.
        self._task = Task(self, lambda _progress: machine.worked_out(), self._found, self._found)

    def _found(self, _outcome: DriveAnswer | str) -> None:
        """Let the answer be looked at, or the sentence of its refusal; the machine knows which it is."""
        if self._task is not None:
            self._task.deleteLater()
            self._task = None
        self._session.look_again()
