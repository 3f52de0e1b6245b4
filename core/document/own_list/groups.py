"""The list's groups: documents in a folder of their own, to be placed as copies or linked."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, Final

from core.document.link_path import DOCUMENT_SUFFIX
from core.document.reading import read_document
from core.document.replacing import reserved
from core.document.saving import save_document
from core.errors import FileRefused

if TYPE_CHECKING:
    from pathlib import Path

    from core.machine import Machine

FOLDER: Final = "groups"
_MOST_OF_A_NAME = 100
_MOST_TRIES = 1_000


def group_files(folder: Path) -> tuple[Path, ...]:
    """Return the documents among the list's groups, by name; what is in them is not looked at."""
    try:
        found = [path for path in (folder / FOLDER).iterdir() if path.suffix.lower() == DOCUMENT_SUFFIX]
    except OSError:
        return ()
    return tuple(sorted(found, key=lambda path: path.stem.casefold()))


def with_group_kept(folder: Path, machine: Machine, name: str) -> Path:
    """Write a document among the groups, under its name or, where that is taken, with a number behind it.

    Raises:
        FileRefused: it cannot be written.
    """
    stem = _file_stem(name)
    try:
        (folder / FOLDER).mkdir(parents=True, exist_ok=True)
        taken = {path.stem.casefold() for path in group_files(folder)}
        free = (each for each in _numbered(stem) if each.casefold() not in taken)
        path = folder / FOLDER / f"{next(free)}{DOCUMENT_SUFFIX}"
        with reserved(path):
            save_document(machine, path)
    except (OSError, StopIteration) as error:
        raise _not_written(name, error) from error
    return path


def with_group_imported(folder: Path, path: Path) -> Path:
    """Write a copy of a document among the groups; linked files in it are found from there as well.

    Raises:
        FileRefused: it is no document, or the copy cannot be written.
    """
    return with_group_kept(folder, read_document(path), path.stem)


def with_group_exported(group: Path, path: Path) -> None:
    """Write a copy of one of the groups to a new file.

    Raises:
        FileRefused: the group is no document any more, there is a file of this name, or none can be written.
    """
    machine = read_document(group)
    try:
        with reserved(path):
            save_document(machine, path)
    except OSError as error:
        raise _not_written(path.name, error) from error


def without_group(group: Path) -> None:
    """Delete the document of a group.

    Raises:
        FileRefused: it cannot be deleted.
    """
    try:
        group.unlink(missing_ok=True)
    except OSError as error:
        raise FileRefused(
            "the file cannot be deleted", where=group.name, read=error.strerror or "", remedy="Look at its rights"
        ) from error


def _file_stem(name: str) -> str:
    """Return a name as a file can have it on any system."""
    stem = re.sub(r'[<>:"/\\|?*\x00-\x1f\x7f]', "-", name).strip(" .")[:_MOST_OF_A_NAME].strip(" .")
    return stem or "group"


def _numbered(stem: str) -> list[str]:
    return [stem, *(f"{stem} {number}" for number in range(2, _MOST_TRIES))]


def _not_written(name: str, error: Exception) -> FileRefused:
    read = getattr(error, "strerror", None) or ""
    return FileRefused("the file cannot be written", where=name, read=read, remedy="Look at the folder and its rights")
