"""A document saved so that a crash, a full disk or a pulled plug leaves the old file or the new one."""

from __future__ import annotations

import contextlib
import errno
import os
import secrets
from pathlib import Path
from typing import IO, TYPE_CHECKING

from core.document.archive import write_archive
from core.document.layout import json_of
from core.document.link_path import refuse_to_hold_itself
from core.document.validation import checked
from core.document.writing import data_of_machine, meshes_of
from core.errors import DocumentError

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.machine import Machine

_FULL = {errno.ENOSPC, errno.EDQUOT, errno.EFBIG}
_REMEDY = "Change it and save again; the file is as it was"


def save_document(machine: Machine, path: str | Path) -> None:
    """Save the machine; the same machine always gives the same bytes.

    What is written is first held against the schema, so that whatever was saved can be read. A link is
    followed, and a file that is replaced keeps its permissions.

    Raises:
        DocumentError: the machine holds something that a document cannot, or the file cannot be written.
            The old file is then as it was, and nothing is left beside it.

    """
    target = Path(path)
    try:
        refuse_to_hold_itself(machine.assembly, target)
        data = data_of_machine(machine, str(target.resolve().parent))
        checked(data, _REMEDY)
    except DocumentError as error:
        where = f"{target.name}, {error.where}" if error.where else target.name
        raise DocumentError(error.what, where=where, read=error.read, remedy=error.remedy) from error
    json, meshes = json_of(data), meshes_of(machine.assembly)
    try:
        _replace(target.resolve(), lambda file: write_archive(file, json, meshes))
    except OSError as error:
        raise _not_saved(target, error) from error


def _replace(target: Path, write: Callable[[IO[bytes]], None]) -> None:
    """Write a new file beside the target and put it in its place once it lies on the disk, whole."""
    if target.is_dir():
        raise IsADirectoryError(errno.EISDIR, os.strerror(errno.EISDIR))
    if target.exists() and not os.access(target, os.W_OK):
        raise PermissionError(errno.EACCES, os.strerror(errno.EACCES))
    beside = target.with_name(f".masswright-{secrets.token_hex(8)}.saving")
    done = False
    try:
        with beside.open("xb") as file:
            write(file)
            file.flush()
            if target.exists():
                beside.chmod(target.stat().st_mode & 0o7777)
            os.fsync(file.fileno())
        beside.replace(target)
        done = True
    finally:
        # Whatever stopped it, an interrupt included, is passed on; only the half-written file does not stay.
        if not done:
            with contextlib.suppress(OSError):
                beside.unlink(missing_ok=True)
    _sync_folder(target.parent)


def _sync_folder(folder: Path) -> None:
    """Bring the folder's new entry onto the disk, where folders can be synced; the file itself is there."""
    if not hasattr(os, "O_DIRECTORY"):
        return
    with contextlib.suppress(OSError):
        handle = os.open(folder, os.O_RDONLY | os.O_DIRECTORY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)


def _not_saved(target: Path, error: OSError) -> DocumentError:
    if error.errno in _FULL:
        what, remedy = "not saved, because the disk is full", "Make room, or save it somewhere else"
    elif isinstance(error, FileNotFoundError | NotADirectoryError):
        what, remedy = "not saved, because there is no such folder", "Choose another folder"
    elif isinstance(error, IsADirectoryError):
        what, remedy = "not saved, because a folder has this name", "Choose another name"
    elif isinstance(error, PermissionError):
        what, remedy = "not saved, because it may not be written there", "Save it somewhere else"
    else:
        what, remedy = "not saved, because the disk refused it", "Save it somewhere else"
    return DocumentError(what, where=str(target), read=error.strerror or "", remedy=remedy)
