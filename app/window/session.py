"""The open document: its history, its file, what is selected, and how numbers are shown; it tells who listens."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from app.window.manner import Manner
from app.window.own_list import OwnList
from core.assembly import Assembly, Finding, Ledger, Part, ledger_of
from core.assembly.linked_groups import check_linked_lines
from core.assembly.names import values_of
from core.assembly.overlap_findings import overlap_findings
from core.document import read_document, save_document
from core.errors import MasswrightError
from core.history import History
from core.machine import Machine
from core.quantity import DEFAULT_UNITS, UnitSet

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from core.assembly import Node
    from core.assembly.overlaps import Overlaps
    from core.drive import DriveSettings
    from core.quantity import Names


# With more parts than this the ledger is shown first, and what follows it this much later.
FEW_PARTS, SETTLE_MS = 1_000, 30
UNNAMED = Assembly().name


class Session(QObject):
    """The one thing that the parts of the window share.

    Signals:
        changed: the document is another one; ledger and findings are those of the new one.
        settled: the same for what shows much at once, as the view: at once with a document of few parts, with one of
            thousands as soon as the ledger has been shown.
        edited: the document is another one because of somebody at the window, not of work in the background.
        selection_changed: other lines are selected.
        shown_differently: the same assembly in other units or with another decimal mark.
        placed_differently: lines are placed by hand in another manner.
        file_changed: the document has another path, or was saved.
        refused: an edit or a file could not be taken; the sentence that says why.
        said: something worth a line at the foot of the window.
        seat_wanted: the line with this key is to be seated by pointing in the view.
        found: edges (k, 2, 3) m of the document frame to light up in the view; none to take them away.
    """

    changed = Signal()
    settled = Signal()
    edited = Signal()
    selection_changed = Signal()
    shown_differently = Signal()
    placed_differently = Signal()
    file_changed = Signal()
    refused = Signal(str)
    said = Signal(str)
    seat_wanted = Signal(str)
    found = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.own = OwnList(self)
        self.history = History(Machine())
        self.path: Path | None = None
        self.units: UnitSet = DEFAULT_UNITS
        self.decimal_mark = "."
        self.manner = Manner()
        self.selected: frozenset[str] = frozenset()
        # What makes a line ready to be shown before it is; the window puts the view's preparation here.
        self.prepare: Callable[[Node], None] = lambda _node: None
        self._saved = self.history.present
        self._settling = QTimer(self, singleShot=True, interval=SETTLE_MS)
        self._settling.timeout.connect(self.settled)
        self.ledger: Ledger = ledger_of(self.assembly)
        self.findings: tuple[Finding, ...] = self.machine.findings_at_once()
        # Of the assembly as it is now; None until somebody has looked.
        self.overlaps: Overlaps | None = None

    @property
    def machine(self) -> Machine:
        """The document as it is now: the assembly and its drive, with what follows from both."""
        return self.history.present

    @property
    def assembly(self) -> Assembly:
        """The assembly as it is now."""
        return self.machine.assembly

    @property
    def drive(self) -> DriveSettings:
        """What is entered about the drive."""
        return self.machine.drive

    @property
    def names(self) -> Names:
        """The named dimensions that number fields may use."""
        return values_of(self.assembly.names)

    @property
    def unsaved(self) -> bool:
        """Whether the file does not hold what is shown."""
        return self.history.present is not self._saved

    @property
    def folder(self) -> Path | None:
        """The folder of the document's file; None where it has none yet."""
        return self.path.parent if self.path else None

    @property
    def title(self) -> str:
        """The document's name as the window's title bar has it."""
        return self.path.name if self.path else f"{self.assembly.name}.masswright"

    @property
    def selected_part(self) -> Part | None:
        """The part of the selected line, when exactly one is: itself, or the one that a cut is taken out of."""
        if len(self.selected) != 1:
            return None
        node = self.assembly.node_of_line(next(iter(self.selected)))
        return node if isinstance(node, Part) else None

    def attempt(self, name: str, change: Callable[[Assembly], Assembly], select: str | None = None) -> str:
        """Do one edit of the assembly under a name for undo; return "" or the sentence that refuses it.

        A refused edit leaves everything as it was.
        """
        return self.attempt_machine(name, lambda machine: machine.with_assembly(change(machine.assembly)), select)

    def attempt_machine(self, name: str, change: Callable[[Machine], Machine], select: str | None = None) -> str:
        """Do one edit of assembly and drive together, as `attempt` does."""
        try:
            after = change(self.machine)
            check_linked_lines(self.assembly, after.assembly)
            # Evaluated before it counts: an assembly that cannot be added up is refused as a whole.
            ledger, findings = ledger_of(after.assembly), after.findings_at_once()
        except MasswrightError as error:
            return str(error)
        self._take_edit(self.history.edited(name, after), ledger, findings, select)
        return ""

    def amend(self, name: str, change: Callable[[Assembly], Assembly]) -> str:
        """Do the last edit over, from the assembly before it and under another name; otherwise as `attempt`."""
        before = self.history.undone().present
        try:
            after = before.with_assembly(change(before.assembly))
            check_linked_lines(before.assembly, after.assembly)
            ledger, findings = ledger_of(after.assembly), after.findings_at_once()
        except MasswrightError as error:
            return str(error)
        self._take_edit(self.history.merged(name, after), ledger, findings, None)
        return ""

    def attempt_drive(self, name: str, change: Callable[[DriveSettings], DriveSettings]) -> str:
        """Do one edit of the drive's settings under a name for undo; return "" or the sentence that refuses it.

        What cannot be worked out is refused, unless that was so before: then entries are mended one by one.
        """
        try:
            after = self.machine.with_drive(change(self.drive))
        except MasswrightError as error:
            return str(error)
        refusal = _refusal_of_drive(after)
        if refusal and not _refusal_of_drive(self.machine):
            return refusal
        self._take_edit(self.history.edited(name, after), self.ledger, after.findings_at_once(), None)
        return ""

    def edit(self, name: str, change: Callable[[Assembly], Assembly], select: str | None = None) -> bool:
        """Do one edit as `attempt` does; tell a refusal through `refused`, and return whether it was taken."""
        return self._told(self.attempt(name, change, select))

    def edit_drive(self, name: str, change: Callable[[DriveSettings], DriveSettings]) -> bool:
        """Do one edit as `attempt_drive` does; tell a refusal through `refused`, and return whether it was taken."""
        return self._told(self.attempt_drive(name, change))

    def _told(self, refusal: str) -> bool:
        if refusal:
            self.refused.emit(refusal)
        return not refusal

    def _take_edit(
        self, history: History, ledger: Ledger, findings: tuple[Finding, ...], select: str | None
    ) -> None:
        if history.present is self.machine:
            return
        self._forget_overlaps(history.present.assembly)
        self.history = history
        self.ledger, self.findings = ledger, (*findings, *self._overlap_findings())
        self._after_change(select)

    def undo(self) -> None:
        """Take the last edit back."""
        self._step(self.history.undone(), f"Undone: {self.history.undo_name}")

    def redo(self) -> None:
        """Do the last undone edit again."""
        self._step(self.history.redone(), f"Done again: {self.history.redo_name}")

    def select(self, keys: frozenset[str]) -> None:
        """Select these lines and no others."""
        keys = frozenset(key for key in keys if key in self.assembly)
        if keys != self.selected:
            self.selected = keys
            self.selection_changed.emit()

    def show_in(self, units: UnitSet) -> None:
        """Show quantities in these units."""
        self.units = units
        self.shown_differently.emit()

    def mark_decimals_with(self, mark: str) -> None:
        """Show and copy numbers with "." or "," as their decimal mark."""
        self.decimal_mark = mark
        self.shown_differently.emit()

    def set_manner(self, manner: Manner) -> None:
        """Place lines by hand in this manner."""
        if manner != self.manner:
            self.manner = manner
            self.placed_differently.emit()

    def start_new(self) -> None:
        """Start an empty document."""
        self.take(Machine(), None)

    def open(self, path: Path) -> bool:
        """Open a document; return whether it could be read. What was open stays where it could not."""
        try:
            machine = judged_document(path)
        except MasswrightError as error:
            self.refused.emit(str(error))
            return False
        self.take(machine, path)
        return True

    def take(self, machine: Machine, path: Path | None, *, saved: bool = True) -> None:
        """Show another document, with a history of its own; a recovered one is not saved yet."""
        self.history = History(machine)
        self.path = path
        self._saved = machine if saved else Machine()
        self.selected = frozenset()
        self.overlaps = None
        self._judge()
        self._after_change(None)
        self.file_changed.emit()

    def save(self, path: Path) -> bool:
        """Save the document under a path and go on with it there; return whether that worked.

        A document without a name of its own takes the file's, which the sheet and the values then have.
        """
        machine = _named_after(path, self.machine)
        try:
            save_document(machine, path)
        except MasswrightError as error:
            self.refused.emit(str(error))
            return False
        self.path, self._saved = path, machine
        if machine is not self.machine:
            self._forget_overlaps(machine.assembly)
            self.history = replace(self.history, present=machine)
            self._judge()
            self._after_change(None)
        self.file_changed.emit()
        self.said.emit(f"Saved {path.name}")
        return True

    def _step(self, history: History, words: str) -> None:
        if history is self.history:
            return
        self._forget_overlaps(history.present.assembly)
        self.history = history
        self._judge()
        self._after_change(None)
        self.said.emit(words)

    def look_again(self) -> None:
        """Judge the same assembly anew: what is known of its meshes has grown."""
        self._judge()
        self._tell_changed()

    def show_overlaps(self, overlaps: Overlaps) -> None:
        """Count what a search of this assembly for overlaps found among the findings."""
        self.overlaps = overlaps
        self.look_again()

    def _tell_changed(self) -> None:
        self.changed.emit()
        if len(self.assembly.table.parts) <= FEW_PARTS:
            self._settling.stop()
            self.settled.emit()
        else:
            self._settling.start()

    def _judge(self) -> None:
        self.ledger = ledger_of(self.assembly)
        self.findings = (*self.machine.findings_at_once(), *self._overlap_findings())

    def _forget_overlaps(self, after: Assembly) -> None:
        """Drop what was found in an assembly that is another one now; that nobody looks in one so large stays true."""
        if after is not self.assembly and not (self.overlaps is not None and self.overlaps.skipped):
            self.overlaps = None

    def _overlap_findings(self) -> tuple[Finding, ...]:
        return () if self.overlaps is None else overlap_findings(self.assembly, self.overlaps)

    def _after_change(self, select: str | None) -> None:
        wanted = self.selected if select is None else frozenset({select})
        kept = frozenset(key for key in wanted if key in self.assembly)
        moved = kept != self.selected
        self.selected = kept
        self.edited.emit()
        self._tell_changed()
        if moved:
            self.selection_changed.emit()


def _named_after(path: Path, machine: Machine) -> Machine:
    assembly = machine.assembly
    return machine if assembly.name != UNNAMED else replace(machine, assembly=replace(assembly, name=path.stem))


def judged_document(path: Path) -> Machine:
    """Return what a document holds, added up and checked; what that found is kept with its parts.

    Raises:
        MasswrightError: it cannot be read, or not be added up.
    """
    machine = read_document(path)
    ledger_of(machine.assembly)
    _ = machine.findings()
    return machine


def _refusal_of_drive(machine: Machine) -> str:
    """Return the sentence that says why a drive cannot be worked out; "" where it can."""
    try:
        _ = machine.at_once.drive_answer, machine.balance_answer
    except MasswrightError as error:
        return str(error)
    return ""
