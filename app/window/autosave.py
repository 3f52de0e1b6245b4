"""A crash loses at most ten seconds of work: it is written to the state folder, and offered at the next start."""

from __future__ import annotations

import os
from concurrent.futures import Future, ThreadPoolExecutor
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from app.window.crash import state_folder
from core.document import read_document, save_document
from core.errors import MasswrightError

if TYPE_CHECKING:
    from pathlib import Path

    from app.window.session import Session
    from core.machine import Machine

DELAY_MS = 5000
SUFFIX = ".masswright"


def folder() -> Path:
    """Return where unsaved work is kept, made if it is not there."""
    path = state_folder() / "unsaved"
    path.mkdir(exist_ok=True)
    return path


class Autosave(QObject):
    """Writes the document, in a thread, some seconds after an edit; removes it when the work is safe elsewhere.

    Signals:
        failed: the work could not be written; the sentence that says why, once.
    """

    failed = Signal(str)

    def __init__(self, session: Session) -> None:
        super().__init__(session)
        self._session = session
        self._pool = ThreadPoolExecutor(1)
        self._running: Future[None] | None = None
        self._told = False
        self._path = folder() / f"{os.getpid()}{SUFFIX}"
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(DELAY_MS)
        self._timer.timeout.connect(self.write)
        session.changed.connect(self._changed)
        session.file_changed.connect(self._changed)

    def _changed(self) -> None:
        if not self._session.unsaved:
            self._timer.stop()
            self._pool.submit(self._path.unlink, missing_ok=True)
        elif not self._timer.isActive():
            self._timer.start()

    def write(self) -> None:
        """Write the document as it is now."""
        if self._running is not None and not self._running.done():
            self._timer.start()
            return
        if self._session.unsaved:
            self._running = self._pool.submit(save_document, self._session.machine, self._path)
            self._running.add_done_callback(self._look_at)

    def take_over(self, old: Path) -> None:
        """Keep recovered work under this session's name; only then is the file that it came from removed."""
        self.write()
        if self._running is not None:
            self._running.add_done_callback(lambda done: None if done.exception() else old.unlink(missing_ok=True))

    def _look_at(self, done: Future[None]) -> None:
        error = done.exception()
        if error is not None and not self._told:
            self._told = True
            self.failed.emit(str(error))

    def stop(self) -> None:
        """End: the work is saved, or was given up on purpose."""
        self._timer.stop()
        self._pool.shutdown(wait=True)
        self._path.unlink(missing_ok=True)


def left_behind() -> list[Path]:
    """Return the unsaved work of sessions that ended without closing, the newest first."""
    found = [path for path in folder().glob(f"*{SUFFIX}") if not _alive(path.stem)]
    return sorted(found, key=lambda path: -path.stat().st_mtime)


def recovered(path: Path) -> Machine | None:
    """Return the unsaved work in a file; None where it cannot be read."""
    try:
        return read_document(path)
    except MasswrightError:
        return None


def _alive(process: str) -> bool:
    if not process.isdigit():
        return False
    try:
        os.kill(int(process), 0)
    except ProcessLookupError:
        return False
    except PermissionError:
        return True
    return True
