"""The user's own list in the window: read from its folder, changed by its dialogs, told of when a file is damaged."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, TypeVar

from PySide6.QtCore import QObject, Signal

from app.window.tasks import Task
from core.document.own_list import (
    KNOWN_PARTS,
    OWN_MATERIALS,
    group_files,
    read_list,
    with_entries_exported,
    with_entries_imported,
    with_entry_kept,
    with_group_exported,
    with_group_imported,
    with_group_kept,
    without_entry,
    without_group,
)
from core.errors import MasswrightError

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable
    from pathlib import Path

    from core.document.own_list import Imported, ListKind, OwnPart
    from core.machine import Machine
    from core.material import Material

Result = TypeVar("Result")


def data_folder() -> Path:
    """Return the user's folder for data of the program, which need not be there."""
    from platformdirs import user_data_path

    return user_data_path("masswright", appauthor=False)


class OwnList(QObject):
    """Materials, known parts and groups of the user's own; empty until a folder is opened.

    Signals:
        changed: the list holds something else.
        refused: something of it could not be read, or an edit of it not be done; the sentence that says why.
        said: what was done, for the foot of the window.
    """

    changed = Signal()
    refused = Signal(str)
    said = Signal(str)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.folder: Path | None = None
        self.materials: tuple[Material, ...] = ()
        self.known_parts: tuple[OwnPart, ...] = ()
        self.groups: tuple[Path, ...] = ()

    def open_folder(self, folder: Path) -> None:
        """Read the list in a folder."""
        self.folder = folder
        self.refresh()

    def refresh(self) -> None:
        """Read the list anew: its files may have been edited by hand. What cannot be read counts as empty."""
        if self.folder is None:
            return
        before = (self.materials, self.known_parts, self.groups)
        self.materials, self.known_parts = self._read(OWN_MATERIALS), self._read(KNOWN_PARTS)
        self.groups = group_files(self.folder)
        if before != (self.materials, self.known_parts, self.groups):
            self.changed.emit()

    def _read(self, kind: ListKind[Any]) -> tuple[Any, ...]:
        try:
            return () if self.folder is None else read_list(kind, self.folder)
        except MasswrightError as error:
            self.refused.emit(f"Your own list: {error} The other lists work as before.")
            return ()

    def keep(self, kind: ListKind[Any], entry: Material | OwnPart) -> str:
        """Write a material or a known part into the list; return "" or the sentence that refuses it."""
        return self._attempt(lambda folder: with_entry_kept(kind, folder, entry), f"Kept {entry.name} in your list")

    def drop(self, kind: ListKind[Any], name: str) -> str:
        """Take a material or a known part out of the list; return "" or the sentence that refuses it."""
        return self._attempt(lambda folder: without_entry(kind, folder, name), f"Took {name} out of your list")

    def take_in(self, kind: ListKind[Any], path: Path) -> str:
        """Add what another list file holds; return "" or the sentence that refuses it."""
        return self._attempt(lambda folder: with_entries_imported(kind, folder, path), _told)

    def write_out(self, kind: ListKind[Any], entries: Iterable[Any], path: Path) -> str:
        """Write entries to a new file; return "" or the sentence that refuses it."""
        return self._attempt(lambda _folder: with_entries_exported(kind, entries, path), f"Wrote {path.name}")

    def keep_group(self, machine: Machine, name: str) -> str:
        """Write a document among the groups; return "" or the sentence that refuses it."""
        return self._attempt(lambda folder: with_group_kept(folder, machine, name), _kept)

    def take_in_group(self, path: Path, refuse: Callable[[str], None]) -> None:
        """Write a copy of a document among the groups, in a worker; call refuse with the sentence if it cannot be."""
        folder = self.folder
        if folder is not None:
            Task(self, lambda _progress: with_group_imported(folder, path), lambda kept: self._did(_kept(kept)), refuse)

    def write_out_group(self, group: Path, path: Path, refuse: Callable[[str], None]) -> None:
        """Write a copy of a group to a new file, in a worker; call refuse with the sentence if it cannot be."""
        Task(
            self, lambda _progress: with_group_exported(group, path), lambda _none: self._did(f"Wrote {path.name}"),
            refuse,
        )

    def drop_group(self, group: Path) -> str:
        """Delete the document of a group; return "" or the sentence that refuses it."""
        return self._attempt(lambda _folder: without_group(group), f"Took {group.stem} out of your list")

    def _attempt(self, edit: Callable[[Path], Result], words: str | Callable[[Result], str]) -> str:
        if self.folder is None:
            return "There is no folder for your own list."
        try:
            result = edit(self.folder)
        except MasswrightError as error:
            return str(error)
        self._did(words if isinstance(words, str) else words(result))
        return ""

    def _did(self, words: str) -> None:
        self.refresh()
        self.said.emit(words)


def _told(came: Imported) -> str:
    """Return what came of an import, in one line."""
    told = [f"{len(came.added)} added"]
    if came.renamed:
        told.append("taken names changed: " + ", ".join(f"{old} is {new}" for old, new in came.renamed))
    if came.same:
        told.append(f"{len(came.same)} there already")
    return "; ".join(told)


def _kept(path: Path) -> str:
    return f"Kept the group as {path.stem}"
