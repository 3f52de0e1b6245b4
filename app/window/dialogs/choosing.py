"""Asking for files: which to open, where to save; the program is not held up meanwhile."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QFileDialog

from app.window.dialogs.form import show_over
from core.errors import FileRefused

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtWidgets import QWidget

DOCUMENT = ".masswright"
DOCUMENTS = f"Masswright documents (*{DOCUMENT})"


def ask_files(
    parent: QWidget, title: str, folder: Path | None, pattern: str, then: Callable[[list[Path]], object],
    mode: QFileDialog.FileMode = QFileDialog.FileMode.ExistingFiles,
) -> None:
    """Ask for files of a pattern, from a folder on, and go on with those that were chosen."""
    dialog = QFileDialog(parent, title, "" if folder is None else str(folder), pattern)
    dialog.setFileMode(mode)
    dialog.filesSelected.connect(lambda names: then([Path(name) for name in names]))
    show_over(dialog)


def ask_file(parent: QWidget, title: str, folder: Path | None, pattern: str, then: Callable[[Path], object]) -> None:
    """Ask for one file of a pattern, from a folder on, and go on with the one that was chosen."""
    ask_files(parent, title, folder, pattern, lambda paths: then(paths[0]), QFileDialog.FileMode.ExistingFile)


def ask_where(
    parent: QWidget, title: str, suggested: Path, pattern: str, then: Callable[[Path], object]
) -> None:
    """Ask where a file is to be saved, and go on with the path that was chosen; replacing a file is asked about."""
    show_over(_place_dialog(parent, title, suggested, pattern, then))


def ask_new_file(
    parent: QWidget, title: str, suggested: Path, pattern: str, then: Callable[[Path], object]
) -> None:
    """Ask where a new file is to be written; whoever writes it refuses to replace one that is there."""
    dialog = _place_dialog(parent, title, suggested, pattern, then)
    dialog.setOption(QFileDialog.Option.DontConfirmOverwrite)
    show_over(dialog)


def _place_dialog(
    parent: QWidget, title: str, suggested: Path, pattern: str, then: Callable[[Path], object]
) -> QFileDialog:
    dialog = QFileDialog(parent, title, "", pattern)
    dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
    dialog.setFileMode(QFileDialog.FileMode.AnyFile)
    dialog.setDefaultSuffix(suggested.suffix.removeprefix("."))
    dialog.selectFile(str(suggested))
    dialog.fileSelected.connect(lambda name: then(Path(name)))
    return dialog


def with_ending(chosen: Path, ending: str = DOCUMENT) -> Path:
    """Return a chosen path with an ending of ours.

    Raises:
        FileRefused: with the ending it is that of a file, and the user was asked about another one.
    """
    if chosen.suffix.lower() == ending:
        return chosen
    path = chosen.with_name(chosen.name + ending)
    if path.exists():
        raise FileRefused("it is there already", where=path.name, remedy="To replace it, choose it itself")
    return path
