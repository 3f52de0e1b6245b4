"""Documents on disk as the window handles them: open, save, the question about unsaved work, recovery."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtWidgets import QMenu, QMessageBox

from app.window import autosave
from app.window.dialogs.choosing import DOCUMENT, DOCUMENTS, ask_file, ask_files, ask_where, with_ending
from app.window.dialogs.form import show_over
from app.window.session import judged_document
from app.window.tasks import Task
from core.errors import FileRefused
from core.mesh.formats import FORMATS

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtWidgets import QDialog, QWidget

    from app.window.session import Session
    from app.window.settings import Settings
    from app.window.start import Notice
    from core.machine import Machine

# A larger document takes long enough to be felt.
OPENED_AT_ONCE = 500_000
MESHES = f"Meshes ({' '.join(f'*.{suffix} *.{suffix.upper()}' for suffix in FORMATS)} *.stl.gz)"


class Files(QObject):
    """Asks where, warns before work is lost, and tells a refusal in one sentence.

    Signals:
        opened: another document is shown.
        meshes_chosen: paths of mesh files to add.
    """

    opened = Signal()
    meshes_chosen = Signal(object)

    def __init__(self, window: QWidget, session: Session, settings: Settings, notice: Notice) -> None:
        super().__init__(window)
        self._window, self._session, self._settings, self._notice = window, session, settings, notice
        self._question: QMessageBox | None = None
        self.autosave = autosave.Autosave(session)
        self.autosave.failed.connect(self._tell_no_autosave)

    def new(self) -> None:
        """Start an empty document."""
        self.when_safe(self._session.start_new)

    def ask_open(self) -> None:
        """Ask for a document and open it."""
        ask_file(self._window, "Open", self._session.folder, DOCUMENTS, self.open_path)

    def ask_meshes(self) -> None:
        """Ask for mesh files to add."""
        ask_files(self._window, "Add meshes", self._session.folder, MESHES, self.meshes_chosen.emit)

    def open_path(self, path: Path) -> None:
        """Open a document, or import a mesh."""
        if path.suffix.lower() == DOCUMENT:
            self.when_safe(lambda: self._open(path))
        else:
            self.meshes_chosen.emit([path])

    def drop(self, paths: list[Path]) -> None:
        """Open a dropped document, or add dropped meshes; a mixture is not taken."""
        documents = [path for path in paths if path.suffix.lower() == DOCUMENT]
        if documents and len(paths) > 1:
            self._session.refused.emit("Drop one document, or any number of meshes. Nothing was taken.")
        elif documents:
            self.open_path(documents[0])
        elif paths:
            self.meshes_chosen.emit(paths)

    def open_sample(self, path: Path) -> None:
        """Show a sample as a new document, so that saving it asks where."""
        self.when_safe(lambda: self._open_sample(path))

    def _open_sample(self, path: Path) -> None:
        if self._session.open(path):
            self._session.take(self._session.machine, None)
            self.opened.emit()

    def _open(self, path: Path) -> None:
        if path.is_file() and path.stat().st_size > OPENED_AT_ONCE:
            self._open_off_thread(path)
        elif self._session.open(path):
            self._settings.add_recent(path)
            self.opened.emit()

    def _open_off_thread(self, path: Path) -> None:
        """Read a large document in a worker; the one that is open stays until that is done."""

        def take(machine: Machine) -> None:
            self._session.take(machine, path)
            self._settings.add_recent(path)
            self.opened.emit()

        def done(machine: Machine) -> None:
            self._notice.hide()
            # Whatever was typed since the question about unsaved work is asked about once more.
            self.when_safe(lambda: take(machine))

        task = Task(self, lambda _progress: judged_document(path), done, self._session.refused.emit)
        self._notice.say(f"Opening {path.name} …", {"Leave it": task.leave})

    def fill_recent(self, menu: QMenu) -> None:
        """Put the documents used last into a menu."""
        menu.clear()
        for path in self._settings.recent:
            menu.addAction(str(path).replace("&", "&&"), partial(self.open_path, path))
        if menu.isEmpty():
            menu.addAction("none yet").setEnabled(False)

    def save(self, then: Callable[[], object] | None = None) -> None:
        """Save the document where it is, or ask where; go on with `then` once it is saved."""
        if self._session.path is None:
            self.save_as(then)
        elif self._session.save(self._session.path) and then is not None:
            then()

    def save_as(self, then: Callable[[], object] | None = None) -> None:
        """Ask where to save the document; go on with `then` once it is saved."""
        suggested = self._session.path or Path.home() / self._session.title
        ask_where(self._window, "Save as", suggested, DOCUMENTS, lambda chosen: self.save_under(chosen, then))

    def save_under(self, chosen: Path, then: Callable[[], object] | None = None) -> None:
        """Save under a chosen name, with our ending; a file that the user was not asked about is not replaced."""
        try:
            path = with_ending(chosen)
        except FileRefused as error:
            self._session.refused.emit(str(error))
            return
        if self._session.save(path):
            self._settings.add_recent(path)
            if then is not None:
                then()

    def show_dialog(self, dialog: QDialog) -> None:
        """Show a dialog over the window, without holding up the program; it goes when it is closed."""
        show_over(dialog)

    def show_beside(self, dialog: QDialog) -> None:
        """Show a dialog that lets the window be used meanwhile; it goes when it is closed."""
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def when_safe(self, go_on: Callable[[], object]) -> None:
        """Go on at once, or once the user has decided about unsaved work; never ask twice at the same time."""
        if not self._session.unsaved:
            go_on()
            return
        if self._question is not None:
            self._question.raise_()
            return
        words = f"{self._session.title} has unsaved changes."
        box = QMessageBox(QMessageBox.Icon.NoIcon, "Unsaved work", words, parent=self._window)
        box.setTextFormat(Qt.TextFormat.PlainText)
        save = box.addButton("Save", QMessageBox.ButtonRole.AcceptRole)
        drop = box.addButton("Do not save", QMessageBox.ButtonRole.DestructiveRole)
        box.setEscapeButton(box.addButton("Cancel", QMessageBox.ButtonRole.RejectRole))
        box.setDefaultButton(save)

        def decided() -> None:
            self._question = None
            if box.clickedButton() is drop:
                go_on()
            elif box.clickedButton() is save:
                self.save(go_on)

        box.finished.connect(decided)
        self._question = box
        self.show_dialog(box)

    def offer_recovery(self) -> None:
        """Offer the unsaved work of a session that ended without closing."""
        left = autosave.left_behind()
        if left:
            self._notice.say(
                "The last session ended with unsaved work.",
                {
                    "Open it": lambda: self.when_safe(lambda: self._recover(left[0])),
                    "Discard it": lambda: left[0].unlink(missing_ok=True),
                },
            )

    def _recover(self, path: Path) -> None:
        machine = autosave.recovered(path)
        if machine is None:
            self._notice.say(
                f"The unsaved work in {path} could not be read; it was left where it is.",
                {"Discard it": lambda: path.unlink(missing_ok=True)},
            )
            return
        self._session.take(machine, None, saved=False)
        self.autosave.take_over(path)
        self.opened.emit()

    def _tell_no_autosave(self, why: str) -> None:
        self._session.refused.emit(f"Unsaved work is not kept safe against a crash: {why} Save the document yourself.")
