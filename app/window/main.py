"""The main window: the ledger above, the view and the pages below, the totals at the foot."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt, QTimer
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QGuiApplication
from PySide6.QtWidgets import (
    QApplication,
    QLineEdit,
    QMainWindow,
    QSizePolicy,
    QSplitter,
    QStackedWidget,
    QTabWidget,
    QWidget,
)

from app.window import commands
from app.window.about import about_box
from app.window.actions import Actions
from app.window.changed_files import ChangedFiles
from app.window.crash import CrashReporter
from app.window.dialogs.add_mesh import AddMeshDialog
from app.window.dialogs.axes import AxesDialog
from app.window.dialogs.known_part import KnownPartDialog
from app.window.dialogs.names import NamesDialog
from app.window.dialogs.variants import VariantsDialog
from app.window.duty_watch import DutyWatch
from app.window.files import Files
from app.window.gallery.panel import GalleryPanel
from app.window.ledger.columns import COLUMNS
from app.window.ledger.view import LedgerPane
from app.window.linked_commands import LinkedGroups
from app.window.numbers import copied, preview, shown
from app.window.overlap_watch import OverlapWatch
from app.window.own_commands import OwnListCommands
from app.window.pages.balance.page import BalancePage
from app.window.pages.checks import ChecksPage, counted
from app.window.pages.part import PartPage
from app.window.pages.sheet import SheetPage
from app.window.pages.torque.page import TorquePage
from app.window.placing import Placing
from app.window.seat_pointing import SeatPointing
from app.window.session import Session
from app.window.settings import Settings
from app.window.start import Notice, StartPanel, stacked
from app.window.style import Words, dress, icon
from app.window.view import ViewPane, prepare_opengl
from core.assembly import Node, Part, walk
from core.assembly.axes import driven_about
from core.quantity import UNIT_SETS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

SAID_MS = 8000


class MainWindow(QMainWindow):
    """Shows the session and sends it edits; it holds no numbers of its own."""

    def __init__(self) -> None:
        super().__init__()
        self.settings = Settings()
        self.session = Session(self)
        self.session.units = self.settings.units
        self.session.decimal_mark = self.settings.decimal_mark
        self.session.manner = self.settings.manner
        self.ledger = LedgerPane(self.session)
        self.view = ViewPane()
        self.part = PartPage(self.session)
        self.sheet = SheetPage(self.session)
        self.torque = TorquePage(self.session)
        self.balance = BalancePage(self.session)
        self.checks = ChecksPage(self.session)
        self.overlap_watch = OverlapWatch(self.session, self)
        self.duty_watch = DutyWatch(self.session, self)
        self.pages = QTabWidget()
        self.gallery = GalleryPanel(self.session)
        self.notice = Notice()
        self.totals = Words()
        self.told = Words("", "quiet")
        self.files = Files(self, self.session, self.settings, self.notice)
        self.changed_files = ChangedFiles(self.session, self.notice)
        self.placing = Placing(self.session, self.view, self)
        self.linked = LinkedGroups(self.session, self.notice)
        self.own_list = OwnListCommands(self.session, self.linked, self.notice)
        self.seat_pointing = SeatPointing(self.session, self.view, self)
        self.actions_ = Actions(self)
        self._place: QWidget = self.ledger
        self._given_up = False
        self._silence = QTimer(self, singleShot=True, interval=SAID_MS)
        self._hovered = ""
        self._lay_out()
        self._connect()
        self._restore()
        self.own_list.open()
        self.refresh()
        self._show_in_view()

    def _lay_out(self) -> None:
        for page, words in (
            (self.part, "Part"), (self.sheet, "Sheet"), (self.torque, "Torque"), (self.balance, "Balance"),
            (self.checks, "Checks"),
        ):
            self.pages.addTab(page, words)
        self.pages.setCurrentWidget(self.sheet)
        self.pages.setDocumentMode(True)
        self.pages.tabBar().setAccessibleName("Pages")
        self.pages.tabBar().setDrawBase(False)
        self.start = StartPanel(self.open_gallery, self.files.ask_meshes, self.files.open_sample)
        self.top = QStackedWidget()
        self.top.addWidget(self.ledger)
        self.top.addWidget(self.start)
        self.below = QSplitter(Qt.Orientation.Horizontal)
        self.below.addWidget(self.view)
        self.right = QStackedWidget()
        self.right.addWidget(self.pages)
        self.right.addWidget(self.gallery)
        self.below.addWidget(self.right)
        self.below.setSizes([560, 800])
        self.halves = QSplitter(Qt.Orientation.Vertical)
        self.halves.addWidget(self.top)
        self.halves.addWidget(self.below)
        self.halves.setSizes([340, 440])
        for splitter in (self.below, self.halves):
            splitter.setHandleWidth(1)
            splitter.setChildrenCollapsible(False)
        self.setCentralWidget(stacked(self.notice, self.halves))
        for line, room in ((self.totals, 1), (self.told, 1)):
            # A long name is cut off rather than making the window wide.
            line.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
            self.statusBar().addWidget(line, room)
        self.told.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.setAcceptDrops(True)
        self.setMinimumSize(960, 600)
        self.resize(1400, 880)
        self.setWindowIcon(icon("masswright"))

    def _connect(self) -> None:
        s, a = self.session, self.actions_
        for signal in (s.changed, s.shown_differently, s.file_changed):
            signal.connect(self.refresh)
        for signal in (s.settled, s.shown_differently, s.selection_changed):
            signal.connect(self._show_in_view)
        s.refused.connect(self.notice.say)
        s.said.connect(self._say)
        s.edited.connect(self.notice.clear_refusal)
        self._silence.timeout.connect(self.told.clear)
        self.files.opened.connect(self._opened)
        self.files.meshes_chosen.connect(self.add_meshes)
        application = QApplication.instance()
        if isinstance(application, QApplication):
            application.focusChanged.connect(self._note_place)
        s.placed_differently.connect(self._keep_manner)
        s.found.connect(self.view.light_up)
        s.prepare = self._prepare
        s.file_changed.connect(self.changed_files.look)
        self.gallery.previewed.connect(self.view.set_preview)
        self.gallery.kept.connect(self._keep_shape)
        self.gallery.closed.connect(self._close_gallery)
        self.view.picked.connect(self._pick)
        self.view.hovered.connect(self._hover)
        self.balance.vectors_changed.connect(self.view.show_vectors)
        self.ledger.tree.hovered.connect(self._hover)
        a.axes.chosen.connect(self._choose_axis)
        a.units.chosen.connect(self._choose_units)
        a.variants.chosen.connect(self._choose_variant)
        a.recent.aboutToShow.connect(lambda: self.files.fill_recent(a.recent))

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
            (f"columns {len(COLUMNS)}", (self.ledger.save_columns, self.ledger.restore_columns)),
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
        a.show_variants(s.assembly.variants, s.assembly.variant)
        if a.units.findData(s.units.name) < 0:
            a.units.addItem(s.units.name, s.units.name)
        a.units.set_value(s.units.name)
        a.marks[s.decimal_mark].setChecked(True)
        failed = sum(not finding.check.ok for finding in s.findings)
        self.pages.setTabText(self.pages.indexOf(self.checks), f"Checks  {failed}" if failed else "Checks")
        self._show_totals(failed)

    def _say(self, text: str) -> None:
        """Say what was done, beside the totals, for some seconds."""
        self.told.setText(self.told.fontMetrics().elidedText(text, Qt.TextElideMode.ElideRight, self.told.width()))
        self.told.setToolTip(text)
        self._silence.start()

    def _show_totals(self, failed: int) -> None:
        if not self.session.assembly.members:
            self.totals.setText("The ledger is empty: add a shape, drop a mesh, or open a sample.")
            return
        total, units = self.session.ledger.total, self.session.units
        if total.mass is None:
            self.totals.setText("No mass is known yet: choose a material, type a density or a weighed mass.")
            return
        mass = f"{shown(self.session, total.mass, units[Kind.MASS])} {units[Kind.MASS].symbol}"
        inertia = f"{shown(self.session, total.inertia, units[Kind.INERTIA])} {units[Kind.INERTIA].symbol}"
        look = f"{counted(failed)} a look" if failed else "no check needs a look"
        axis = self.session.assembly.drive
        of_all = "J of all parts about" if self.session.machine.turning_elsewhere else "J about"
        self.totals.setText(f"{mass}   ·   {of_all} {axis} {inertia}   ·   {look}")

    def _prepare(self, node: Node) -> None:
        """Make what is drawn of a line's parts, before it is shown; called from a worker."""
        for inner, _ in walk((node,)):
            if isinstance(inner, Part):
                self.view.store.of(inner.surface)

    def _show_in_view(self) -> None:
        self.view.show_assembly(self.session.assembly, self._selected_parts(), self._hovered or None)

    def _selected_parts(self) -> frozenset[str]:
        inside: set[str] = set()
        for key in self.session.selected:
            node = self.session.assembly.node_of_line(key)
            inside |= {each.key for each, _ in walk((node,)) if isinstance(each, Part)}
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
        self.session.edit(f"Drive axis {name}", lambda before: driven_about(before, str(name)))

    def _choose_variant(self, name: object) -> None:
        words = f"Variant {name}" if name else "All lines count"
        self.session.edit(words, lambda before: replace(before, variant=str(name)))

    def _choose_units(self, name: object) -> None:
        if str(name) in UNIT_SETS:
            self.settings.units = UNIT_SETS[str(name)]
            self.session.show_in(UNIT_SETS[str(name)])

    def _keep_manner(self) -> None:
        self.settings.manner = self.session.manner

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

    def open_gallery(self) -> None:
        """Show the gallery of shapes in the place of the pages."""
        self._commit_typing()
        self.right.setCurrentWidget(self.gallery)
        self.gallery.open_gallery()

    def _keep_shape(self, part: Part) -> None:
        """Add a part that was made in the gallery."""
        assembly, selected = self.session.assembly, self.session.selected
        part = replace(part, key=assembly.fresh_key(), name=assembly.fresh_name(part.name))
        self.session.edit(f"Add {part.name}", lambda before: commands.inserted_at(before, part, selected), part.key)

    def _close_gallery(self) -> None:
        """Show the pages again; the page of what is selected when something was added."""
        self.right.setCurrentWidget(self.pages)
        if self.session.selected:
            self.pages.setCurrentWidget(self.part)
        self.ledger.tree.setFocus(Qt.FocusReason.OtherFocusReason)

    def add_meshes(self, paths: list[Path]) -> None:
        """Read mesh files and ask for the unit of each."""
        self.files.show_dialog(AddMeshDialog(self.session, paths, self))

    def ask_known_part(self) -> None:
        """Ask for a data sheet's values and add the part."""
        self.files.show_dialog(KnownPartDialog(self.session, self))

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
            names = self.session.assembly.name_of_line(keys[0]) if len(keys) == 1 else f"{len(keys)} lines"
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
            name = self.session.assembly.name_of_line(key)
            self.session.edit(f"{verb} {name}", lambda before: change(before, key))

    def edit_axes(self) -> None:
        """Show the table of axes beside the window."""
        self.files.show_beside(AxesDialog(self.session, self))

    def edit_names(self) -> None:
        """Show the table of named dimensions beside the window."""
        self.files.show_beside(NamesDialog(self.session, self))

    def edit_variants(self) -> None:
        """Show the list of variants beside the window."""
        self.files.show_beside(VariantsDialog(self.session, self))

    # Copying

    def _note_place(self, _old: QWidget | None, now: QWidget | None) -> None:
        """Remember which table the keyboard was in last: opening a menu may take it out of there."""
        for place in (self.sheet, self.torque.inputs, self.torque.result, self.balance, self.checks, self.ledger):
            if now is not None and place.isAncestorOf(now):
                self._place = place

    def copy(self) -> None:
        """Copy what is selected where the keyboard is or was last: values, a finding, or cells of the ledger."""
        if self._place in (self.sheet, self.torque.inputs, self.torque.result, self.balance):
            self._place.copy_selection()
        elif self._place is self.checks:
            text = self.checks.copy_current()
            self._say_copied("the finding", text)
        else:
            self._say_copied("the selected cells", self.ledger.copy_block())

    def copy_with_headings(self) -> None:
        """Copy the selected cells of the ledger under their headings."""
        self._say_copied("the selected cells with their headings", self.ledger.copy_block_with_headings())

    def _say_copied(self, what: str, text: str) -> None:
        said = f"Copied {what}: {preview(text)}" if text else "Nothing is selected that could be copied"
        self.session.said.emit(said)

    def copy_sheet(self) -> None:
        """Copy the whole sheet."""
        self._commit_typing()
        self.sheet.copy_sheet()

    def copy_inertia(self) -> None:
        """Copy J about the drive axis: full precision, in the unit shown, no unit."""
        self._commit_typing()
        total, unit = self.session.ledger.total, self.session.units[Kind.INERTIA]
        if total.inertia is None:
            self.session.said.emit("Nothing to copy: no part has a mass yet")
            return
        text = copied(self.session, total.inertia, unit)
        QGuiApplication.clipboard().setText(text)
        self.session.said.emit(f"Copied {text} (J about {self.session.assembly.drive} in {unit.symbol})")

    # Files and the history

    def save(self) -> None:
        """Save the document where it is, or ask where."""
        self._commit_typing()
        self.files.save()

    def save_as(self) -> None:
        """Ask where to save the document."""
        self._commit_typing()
        self.files.save_as()

    def undo(self) -> None:
        """Take the last edit back; one that is still being typed counts as done."""
        self._commit_typing()
        self.session.undo()

    def redo(self) -> None:
        """Do the last undone edit again."""
        self.session.redo()

    def _commit_typing(self) -> None:
        """Take a text that is being typed as finished, so that what is saved or copied is what is seen."""
        field = QApplication.focusWidget()
        if not isinstance(field, QLineEdit) or not self.isAncestorOf(field):
            return
        if self.ledger.isAncestorOf(field):
            self.ledger.tree.setFocus()
        elif field.isModified():
            field.editingFinished.emit()

    def _opened(self) -> None:
        self.notice.clear_refusal()
        self.view.fit()

    def show_about(self) -> None:
        """Say what this is, which version, and what its numbers are not."""
        self.files.show_dialog(about_box(self))

    # Qt's events

    def closeEvent(self, event: QCloseEvent) -> None:
        """Ask once about unsaved work, then remember how the window stood."""
        self._commit_typing()
        if self.session.unsaved and not self._given_up:
            event.ignore()
            self.files.when_safe(self._close_for_good)
            return
        self._end()
        event.accept()

    def _close_for_good(self) -> None:
        self._given_up = True
        self.close()

    def _end(self) -> None:
        for name, (keep, _take) in self._states():
            self.settings.keep_state(name, keep())
        self.changed_files.stop()
        self.files.autosave.stop()
        self.overlap_watch.stop()
        self.duty_watch.stop()

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Take files."""
        if event.mimeData().hasUrls():
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        """Open a dropped document, or add dropped meshes."""
        event.acceptProposedAction()
        self.files.drop([Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()])

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if not hasattr(self, "actions_"):
            return
        if event.type() == QEvent.Type.PaletteChange:
            self.actions_.redraw_icons()
        if event.type() == QEvent.Type.ActivationChange and self.isActiveWindow():
            self.changed_files.look()


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
    window.files.offer_recovery()
    if path is not None:
        QTimer.singleShot(0, lambda: window.files.open_path(Path(path)))
    return application.exec()
