"""An unexpected error: one plain message with the details to copy, a line in the log, the document as it was."""

from __future__ import annotations

import logging
import sys
import threading
import traceback
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QMessageBox

if TYPE_CHECKING:
    from pathlib import Path
    from types import TracebackType

LOG_NAME = "errors.log"
MOST_BYTES = 1_000_000


def state_folder() -> Path:
    """Return the user's folder for state that outlives the program, made if it is not there."""
    from platformdirs import user_state_path

    folder = user_state_path("masswright", appauthor=False)
    folder.mkdir(parents=True, exist_ok=True)
    return folder


class CrashReporter(QObject):
    """Takes what no code has caught, from any thread, and shows it once in the window's thread."""

    caught = Signal(str, str)

    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        self._open: QMessageBox | None = None
        self.caught.connect(self._show, Qt.ConnectionType.QueuedConnection)

    def install(self) -> None:
        """Take over from Python's way of printing errors, until the application ends."""
        sys.excepthook = self.take
        threading.excepthook = lambda told: self.take(
            told.exc_type, told.exc_value or told.exc_type(), told.exc_traceback
        )

    def take(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        """Log an error and have it shown; an interrupt from the keyboard ends the program."""
        if issubclass(kind, KeyboardInterrupt):
            QApplication.quit()
            return
        details = "".join(traceback.format_exception(kind, error, trace))
        write_log(details)
        self.caught.emit(f"{kind.__name__}: {error}", details)

    def _show(self, summary: str, details: str) -> None:
        if self._open is not None:
            return
        box = QMessageBox(QApplication.activeWindow())
        box.setIcon(QMessageBox.Icon.Warning)
        box.setWindowTitle("Masswright")
        box.setTextFormat(Qt.TextFormat.PlainText)
        box.setText("Something unexpected went wrong. The document is as it was before; save it if you have not.")
        box.setInformativeText(f"{summary}\nThe details are in {log_path()}.")
        box.setDetailedText(details)
        copy = box.addButton("Copy details", QMessageBox.ButtonRole.ActionRole)
        copy.clicked.connect(lambda: QGuiApplication.clipboard().setText(details))
        box.addButton(QMessageBox.StandardButton.Close)
        box.finished.connect(self._closed)
        box.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self._open = box
        box.open()

    def _closed(self) -> None:
        self._open = None


def log_path() -> Path:
    """Return where errors are logged."""
    return state_folder() / LOG_NAME


def write_log(details: str) -> None:
    """Add an error to the log, which starts anew when it has grown too long."""
    path = log_path()
    fresh = path.exists() and path.stat().st_size > MOST_BYTES
    handler = logging.FileHandler(path, mode="w" if fresh else "a", encoding="utf-8")
    record = logging.LogRecord("masswright", logging.ERROR, "", 0, details, None, None)
    handler.setFormatter(logging.Formatter("%(asctime)s %(message)s"))
    handler.emit(record)
    handler.close()
