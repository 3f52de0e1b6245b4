"""The open document: its history, its file, what is selected, and how numbers are shown; it tells who listens."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal

from core.assembly import Assembly, Finding, Ledger, Part, findings_of, ledger_of
from core.assembly.names import values_of
from core.assembly.overlap_findings import overlap_findings
from core.document import read_document, save_document
from core.errors import MasswrightError
from core.history import History
from core.quantity import DEFAULT_UNITS, UnitSet

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from core.assembly import Node
    from core.assembly.overlaps import Overlaps
    from core.quantity import Names


class Session(QObject):
    """The one thing that the parts of the window share.

    Signals:
        changed: the assembly is another one; ledger and findings are those of the new one.
        selection_changed: other lines are selected.
        shown_differently: the same assembly in other units or with another decimal mark.
        file_changed: the document has another path, or was saved.
        refused: an edit or a file could not be taken; the sentence that says why.
        said: something worth a line at the foot of the window.
        found: edges (k, 2, 3) m of the document frame to light up in the view; none to take them away.
    """

    changed = Signal()
    selection_changed = Signal()
    shown_differently = Signal()
    file_changed = Signal()
    refused = Signal(str)
    said = Signal(str)
    found = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.history = History(Assembly())
        self.path: Path | None = None
        self.units: UnitSet = DEFAULT_UNITS
        self.decimal_mark = "."
        self.selected: frozenset[str] = frozenset()
        # What makes a line ready to be shown before it is; the window puts the view's preparation here.
        self.prepare: Callable[[Node], None] = lambda _node: None
        self._saved = self.history.present
        self.ledger: Ledger = ledger_of(self.assembly)
        self.findings: tuple[Finding, ...] = findings_of(self.assembly)
        # Of the assembly as it is now; None until somebody has looked.
        self.overlaps: Overlaps | None = None

    @property
    def assembly(self) -> Assembly:
        """The assembly as it is now."""
        return self.history.present

    @property
    def names(self) -> Names:
        """The named dimensions that number fields may use."""
        return values_of(self.assembly.names)

    @property
    def unsaved(self) -> bool:
        """Whether the file does not hold what is shown."""
        return self.history.present is not self._saved

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
        """Do one edit under a name for undo; return "" or the sentence that refuses it.

        A refused edit leaves everything as it was.
        """
        try:
            after = change(self.assembly)
            # Evaluated before it counts: an assembly that cannot be added up is refused as a whole.
            ledger, findings = ledger_of(after), findings_of(after)
        except MasswrightError as error:
            return str(error)
        if after is not self.assembly:
            self.history = self.history.edited(name, after)
            self.ledger, self.findings, self.overlaps = ledger, findings, None
            self._after_change(select)
        return ""

    def edit(self, name: str, change: Callable[[Assembly], Assembly], select: str | None = None) -> bool:
        """Do one edit as `attempt` does; tell a refusal through `refused`, and return whether it was taken."""
        refusal = self.attempt(name, change, select)
        if refusal:
            self.refused.emit(refusal)
        return not refusal

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

    def start_new(self) -> None:
        """Start an empty document."""
        self.take(Assembly(), None)

    def open(self, path: Path) -> bool:
        """Open a document; return whether it could be read. What was open stays where it could not."""
        try:
            assembly = judged_document(path)
        except MasswrightError as error:
            self.refused.emit(str(error))
            return False
        self.take(assembly, path)
        return True

    def take(self, assembly: Assembly, path: Path | None, *, saved: bool = True) -> None:
        """Show another document, with a history of its own; a recovered one is not saved yet."""
        self.history = History(assembly)
        self.path = path
        self._saved = assembly if saved else Assembly()
        self.selected = frozenset()
        self.overlaps = None
        self._judge()
        self._after_change(None)
        self.file_changed.emit()

    def save(self, path: Path) -> bool:
        """Save the document under a path and go on with it there; return whether that worked."""
        assembly = self.assembly
        try:
            save_document(assembly, path)
        except MasswrightError as error:
            self.refused.emit(str(error))
            return False
        self.path, self._saved = path, assembly
        self.file_changed.emit()
        self.said.emit(f"Saved {path.name}")
        return True

    def _step(self, history: History, words: str) -> None:
        if history is self.history:
            return
        self.history, self.overlaps = history, None
        self._judge()
        self._after_change(None)
        self.said.emit(words)

    def look_again(self) -> None:
        """Judge the same assembly anew: what is known of its meshes has grown."""
        self._judge()
        self.changed.emit()

    def show_overlaps(self, overlaps: Overlaps) -> None:
        """Count what a search of this assembly for overlaps found among the findings."""
        self.overlaps = overlaps
        self.look_again()

    def _judge(self) -> None:
        self.ledger = ledger_of(self.assembly)
        overlaps = () if self.overlaps is None else overlap_findings(self.assembly, self.overlaps)
        self.findings = (*findings_of(self.assembly), *overlaps)

    def _after_change(self, select: str | None) -> None:
        wanted = self.selected if select is None else frozenset({select})
        kept = frozenset(key for key in wanted if key in self.assembly)
        moved = kept != self.selected
        self.selected = kept
        self.changed.emit()
        if moved:
            self.selection_changed.emit()


def judged_document(path: Path) -> Assembly:
    """Return the assembly in a document, added up and checked; what that found is kept with its parts.

    Raises:
        MasswrightError: it cannot be read, or not be added up.
    """
    assembly = read_document(path)
    ledger_of(assembly)
    findings_of(assembly)
    return assembly
