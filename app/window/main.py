"""The main window: the ledger above, the view and the pages below, the totals at the foot."""

from __future__ import annotations

import sys
from dataclasses import replace
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt, QTimer
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QGuiApplication
from PySide6.QtWidgets import (
    QApplication,
    QDialog,
    QFileDialog,
    QMainWindow,
    QMessageBox,
    QSplitter,
    QStackedWidget,
    QTabWidget,
    QVBoxLayout,
    QWidget,
)

from app.window import autosave, commands
from app.window.actions import Actions
from app.window.crash import CrashReporter
from app.window.dialogs.add_mesh import AddMeshDialog
from app.window.dialogs.axis import AxisDialog
from app.window.dialogs.known_part import KnownPartDialog
from app.window.ledger.view import LedgerPane
from app.window.numbers import copied, shown
from app.window.pages.checks import ChecksPage, counted
from app.window.pages.part import PartPage
from app.window.pages.sheet import SheetPage
from app.window.session import Session
from app.window.settings import Settings
from app.window.start import SAMPLE, Notice, StartPanel
from app.window.style import Words, dress, icon
from app.window.view import ViewPane, prepare_opengl
from core.assembly import Part, walk
from core.quantity import UNIT_SETS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

DOCUMENT = ".masswright"
DOCUMENTS = f"Masswright documents (*{DOCUMENT})"
MESHES = "Meshes (*.stl *.STL *.stl.gz)"


class MainWindow(QMainWindow):
    """Shows the session and sends it edits; it holds no numbers of its own."""

    def __init__(self) -> None:
        super().__init__()
        self.settings = Settings()
        self.session = Session(self)
        self.session.units = self.settings.units
        self.session.decimal_mark = self.settings.decimal_mark
        self.ledger = LedgerPane(self.session)
        self.view = ViewPane()
        self.part = PartPage(self.session)
        self.sheet = SheetPage(self.session)
        self.checks = ChecksPage(self.session)
        self.pages = QTabWidget()
        self.notice = Notice()
        self.totals = Words()
        self.actions_ = Actions(self)
        self._autosave = autosave.Autosave(self.session)
        self._hovered = ""
        self._lay_out()
        self._connect()
        self._restore()
        self.refresh()

    def _lay_out(self) -> None:
        for page, words in ((self.part, "Part"), (self.sheet, "Sheet"), (self.checks, "Checks")):
            self.pages.addTab(page, words)
        self.pages.setCurrentWidget(self.sheet)
        self.pages.setDocumentMode(True)
        self.start = StartPanel(self.actions_.shapes, self.ask_meshes, self.open_sample)
        self.top = QStackedWidget()
        self.top.addWidget(self.ledger)
        self.top.addWidget(self.start)
        self.below = QSplitter(Qt.Orientation.Horizontal)
        self.below.addWidget(self.view)
        self.below.addWidget(self.pages)
        self.below.setSizes([560, 800])
        self.halves = QSplitter(Qt.Orientation.Vertical)
        self.halves.addWidget(self.top)
        self.halves.addWidget(self.below)
        self.halves.setSizes([340, 440])
        for splitter in (self.below, self.halves):
            splitter.setHandleWidth(1)
            splitter.setChildrenCollapsible(False)
        middle = QWidget()
        layout = QVBoxLayout(middle)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.notice)
        layout.addWidget(self.halves, 1)
        self.setCentralWidget(middle)
        self.statusBar().addWidget(self.totals, 1)
        self.setAcceptDrops(True)
        self.setMinimumSize(960, 600)
        self.resize(1400, 880)
        self.setWindowIcon(icon("masswright"))

    def _connect(self) -> None:
        s, a = self.session, self.actions_
        for signal in (s.changed, s.shown_differently, s.file_changed):
            signal.connect(self.refresh)
        s.selection_changed.connect(self._show_in_view)
        s.refused.connect(self.notice.say)
        s.said.connect(lambda text: self.statusBar().showMessage(text, 4000))
        self.view.picked.connect(self._pick)
        self.view.hovered.connect(self._hover)
        self.ledger.tree.hovered.connect(self._hover)
        a.axes.chosen.connect(self._choose_axis)
        a.units.chosen.connect(self._choose_units)
        a.recent.aboutToShow.connect(self._fill_recent)

    def _restore(self) -> None:
        for name, take in self._states():
            state = self.settings.state(name)
            if state is not None:
                take[1](state)

    def _states(self) -> list[tuple[str, tuple[Callable, Callable]]]:  # type: ignore[type-arg]  # Qt's save and restore of any widget
        return [
            ("window", (self.saveGeometry, self.restoreGeometry)),
            ("below", (self.below.saveState, self.below.restoreState)),
            ("halves", (self.halves.saveState, self.halves.restoreState)),
            ("columns", (self.ledger.save_columns, self.ledger.restore_columns)),
        ]

    # What is shown

    def refresh(self) -> None:
        """Show the session as it is now."""
        s, a = self.session, self.actions_
        self.setWindowTitle(f"{s.title}[*] — Masswright")
        self.setWindowModified(s.unsaved)
        self.top.setCurrentWidget(self.ledger if s.assembly.members else self.start)
        for action, verb, name in ((a.undo, "Undo", s.history.undo_name), (a.redo, "Redo", s.history.redo_name)):
            action.setEnabled(bool(name))
            action.setToolTip(f"{verb}: {name}" if name else f"Nothing to {verb.lower()}")
            action.setText(verb)
        a.axes.clear()
        for axis in s.assembly.axes:
            a.axes.addItem(axis.name, axis.name)
        a.axes.set_value(s.assembly.drive)
        if a.units.findData(s.units.name) < 0:
            a.units.addItem(s.units.name, s.units.name)
        a.units.set_value(s.units.name)
        a.marks[s.decimal_mark].setChecked(True)
        failed = sum(not finding.check.ok for finding in s.findings)
        self.pages.setTabText(self.pages.indexOf(self.checks), f"Checks  {failed}" if failed else "Checks")
        self._show_totals(failed)
        self._show_in_view()

    def _show_totals(self, failed: int) -> None:
        total, units = self.session.ledger.total, self.session.units
        mass = f"{shown(self.session, total.mass, units[Kind.MASS])} {units[Kind.MASS].symbol}"
        inertia = f"{shown(self.session, total.inertia, units[Kind.INERTIA])} {units[Kind.INERTIA].symbol}"
        look = f"{counted(failed)} a look" if failed else "no check needs a look"
        axis = self.session.assembly.drive
        self.totals.setText(f"{mass}   ·   J about {axis} {inertia}   ·   {look}")

    def _show_in_view(self) -> None:
        self.view.show_assembly(self.session.assembly, self._selected_parts(), self._hovered or None)

    def _selected_parts(self) -> frozenset[str]:
        inside: set[str] = set()
        for key in self.session.selected:
            inside |= {node.key for node, _ in walk((self.session.assembly.node(key),)) if isinstance(node, Part)}
        return frozenset(inside)

    def _pick(self, key: str, more: bool) -> None:
        already = self.session.selected if more else frozenset()
        self.session.select((already ^ {key}) if key else already)
        if key:
            self.pages.setCurrentWidget(self.part)

    def _hover(self, key: str) -> None:
        self._hovered = key
        self._show_in_view()

    def _choose_axis(self, name: object) -> None:
        self.session.edit(f"Drive axis {name}", lambda before: replace(before, drive=str(name)))

    def _choose_units(self, name: object) -> None:
        if str(name) in UNIT_SETS:
            self.settings.units = UNIT_SETS[str(name)]
            self.session.show_in(UNIT_SETS[str(name)])

    def choose_mark(self, mark: str) -> None:
        """Show and copy numbers with this decimal mark, from now on."""
        self.settings.decimal_mark = mark
        self.session.mark_decimals_with(mark)

    # Adding and arranging lines

    def add_shape(self, shape: str) -> None:
        """Add a shape with its default dimensions, ready to be made to measure."""
        part = commands.new_shape(self.session.assembly, shape)
        selected = self.session.selected
        if self.session.edit(f"Add {part.name}", lambda before: commands.inserted_at(before, part, selected), part.key):
            self.pages.setCurrentWidget(self.part)
            QTimer.singleShot(0, self.part.edit_first_dimension)

    def ask_meshes(self) -> None:
        """Ask for mesh files and add them."""
        self._ask_files("Add meshes", MESHES, QFileDialog.FileMode.ExistingFiles, self.add_meshes)

    def add_meshes(self, paths: list[Path]) -> None:
        """Read mesh files and ask for the unit of each."""
        self._open_dialog(AddMeshDialog(self.session, paths, self))

    def ask_known_part(self) -> None:
        """Ask for a data sheet's values and add the part."""
        self._open_dialog(KnownPartDialog(self.session, self))

    def add_group(self) -> None:
        """Put the selected lines into a new group, and edit its name."""
        key = self.session.assembly.fresh_key("g")
        keys = self.session.selected
        if self.session.edit("Add group", lambda before: commands.grouped(before, keys, key), key):
            self.ledger.tree.edit_name(key)

    def delete(self) -> None:
        """Delete the selected lines."""
        keys = tuple(self.session.selected)
        if keys:
            names = self.session.assembly.node(keys[0]).name if len(keys) == 1 else f"{len(keys)} lines"
            self.session.edit(f"Delete {names}", lambda before: before.removed(keys))

    def move_line(self, step: int) -> None:
        """Move the selected line up or down among its siblings."""
        self._rearrange("Move", lambda before, key: commands.shifted(before, key, step))

    def move_out(self) -> None:
        """Move the selected line out of its group."""
        self._rearrange("Move out", commands.taken_out)

    def _rearrange(self, verb: str, change: Callable) -> None:  # type: ignore[type-arg]  # (assembly, key) to assembly
        if len(self.session.selected) == 1:
            key = next(iter(self.session.selected))
            name = self.session.assembly.node(key).name
            self.session.edit(f"{verb} {name}", lambda before: change(before, key))

    def edit_axis(self) -> None:
        """Edit the drive axis."""
        self._open_dialog(AxisDialog(self.session, self.session.assembly.drive_axis, self))

    def new_axis(self) -> None:
        """Add an axis; it becomes the drive axis."""
        self._open_dialog(AxisDialog(self.session, None, self))

    def _open_dialog(self, dialog: QDialog) -> None:
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.open()

    # Copying

    def copy(self) -> None:
        """Copy what is selected where the keyboard is: values of the sheet, or cells of the ledger."""
        if self.sheet.isAncestorOf(QApplication.focusWidget() or self):
            self.sheet.copy_selection()
        elif self.ledger.copy_block():
            self.session.said.emit("Copied the selected cells")

    def copy_with_headings(self) -> None:
        """Copy the selected cells of the ledger under their headings."""
        if self.ledger.copy_block_with_headings():
            self.session.said.emit("Copied the selected cells with their headings")

    def copy_sheet(self) -> None:
        """Copy the whole sheet."""
        self.sheet.copy_sheet()

    def copy_inertia(self) -> None:
        """Copy J about the drive axis: full precision, in the unit shown, no unit."""
        total, unit = self.session.ledger.total, self.session.units[Kind.INERTIA]
        if total.inertia is not None:
            text = copied(self.session, total.inertia, unit)
            QGuiApplication.clipboard().setText(text)
            self.session.said.emit(f"Copied {text} (J about {self.session.assembly.drive} in {unit.symbol})")

    # Files

    def new(self) -> None:
        """Start an empty document."""
        self._when_safe(self.session.start_new)

    def ask_open(self) -> None:
        """Ask for a document and open it."""
        self._ask_files("Open", DOCUMENTS, QFileDialog.FileMode.ExistingFile, lambda paths: self.open_path(paths[0]))

    def open_path(self, path: Path) -> None:
        """Open a document, or import a mesh."""
        if path.suffix.lower() == DOCUMENT:
            self._when_safe(lambda: self._opened(path))
        else:
            self.add_meshes([path])

    def _opened(self, path: Path) -> None:
        if self.session.open(path):
            self.notice.hide()
            self.settings.add_recent(path)
            self.view.fit()

    def open_sample(self) -> None:
        """Open the sample."""
        self._when_safe(lambda: self._opened(SAMPLE))

    def _fill_recent(self) -> None:
        self.actions_.recent.clear()
        for path in self.settings.recent:
            self.actions_.recent.addAction(str(path), partial(self.open_path, path))
        if self.actions_.recent.isEmpty():
            self.actions_.recent.addAction("none yet").setEnabled(False)

    def save(self) -> bool:
        """Save the document where it is; return whether it is saved."""
        return self.session.save(self.session.path) if self.session.path else self.save_as()

    def save_as(self) -> bool:
        """Ask where to save the document; return whether it is saved."""
        suggestion = str(self.session.path or Path.home() / self.session.title)
        name, _ = QFileDialog.getSaveFileName(self, "Save as", suggestion, DOCUMENTS)
        if not name:
            return False
        path = Path(name) if Path(name).suffix else Path(f"{name}{DOCUMENT}")
        if not self.session.save(path):
            return False
        self.settings.add_recent(path)
        return True

    def _ask_files(
        self, title: str, pattern: str, mode: QFileDialog.FileMode, then: Callable[[list[Path]], None]
    ) -> None:
        folder = str(self.session.path.parent) if self.session.path else ""
        dialog = QFileDialog(self, title, folder, pattern)
        dialog.setFileMode(mode)
        dialog.filesSelected.connect(lambda names: then([Path(name) for name in names]))
        self._open_dialog(dialog)

    def _when_safe(self, go_on: Callable[[], object]) -> None:
        """Go on at once, or once the user has decided about unsaved work."""
        if not self.session.unsaved:
            go_on()
            return
        words = f"{self.session.title} has unsaved changes."
        box = QMessageBox(QMessageBox.Icon.NoIcon, "Unsaved work", words, parent=self)
        save = box.addButton("Save", QMessageBox.ButtonRole.AcceptRole)
        drop = box.addButton("Do not save", QMessageBox.ButtonRole.DestructiveRole)
        box.addButton("Cancel", QMessageBox.ButtonRole.RejectRole)
        box.setDefaultButton(save)

        def decided() -> None:
            if box.clickedButton() is drop or (box.clickedButton() is save and self.save()):
                go_on()

        box.finished.connect(decided)
        self._open_dialog(box)

    def offer_recovery(self) -> None:
        """Offer the unsaved work of a session that ended without closing."""
        left = autosave.left_behind()
        if left:
            self.notice.say(
                "The last session ended with unsaved work.",
                {"Open it": lambda: self._recover(left[0]), "Discard it": lambda: left[0].unlink(missing_ok=True)},
            )

    def _recover(self, path: Path) -> None:
        assembly = autosave.recovered(path)
        if assembly is None:
            self.notice.say("The unsaved work could not be read; it was left where it is.")
        else:
            self.session.take(assembly, None, saved=False)

    def show_about(self) -> None:
        """Say what this is, which version, and what its numbers are not."""
        from importlib.metadata import version

        words = f"Masswright {version('masswright')}"
        box = QMessageBox(QMessageBox.Icon.NoIcon, "About Masswright", words, parent=self)
        box.setInformativeText(
            "Mass, centre of mass and inertia of what a drive has to move.\n\n"
            "Values carry no margin. Rotating and lifted masses hurt people: the applicable machine-safety standards, "
            "local codes and a responsible engineer decide."
        )
        self._open_dialog(box)

    # Qt's events

    def closeEvent(self, event: QCloseEvent) -> None:
        """Ask once about unsaved work, then remember how the window stood."""
        if self.session.unsaved:
            event.ignore()
            self._when_safe(self._close_for_good)
            return
        self._end()
        event.accept()

    def _close_for_good(self) -> None:
        self.session.take(self.session.assembly, self.session.path)
        self.close()

    def _end(self) -> None:
        for name, (keep, _take) in self._states():
            self.settings.keep_state(name, keep())
        self._autosave.stop()

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Take files."""
        if event.mimeData().hasUrls():
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        """Open a dropped document, or add dropped meshes."""
        paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
        documents = [path for path in paths if path.suffix.lower() == DOCUMENT]
        event.acceptProposedAction()
        if documents:
            self.open_path(documents[0])
        elif paths:
            self.add_meshes(paths)

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "actions_"):
            self.actions_.redraw_icons()


def open_window(path: str | Path | None) -> int:
    """Open the window, with a document or a mesh where one is given; return the exit status when it is closed."""
    prepare_opengl()
    application = QApplication(sys.argv[:1])
    application.setApplicationName("masswright")
    prepare_opengl()
    reporter = CrashReporter(application)
    reporter.install()
    dress(application)
    window = MainWindow()
    window.show()
    window.offer_recovery()
    if path is not None:
        QTimer.singleShot(0, lambda: window.open_path(Path(path)))
    return application.exec()
