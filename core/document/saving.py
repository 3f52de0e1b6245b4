"""A document saved so that a crash, a full disk or a pulled plug leaves the old file or the new one."""

from __future__ import annotations

import errno
from pathlib import Path
from typing import TYPE_CHECKING

from core.document.archive import write_archive
from core.document.layout import json_of
from core.document.link_path import refuse_to_hold_itself
from core.document.replacing import replace_file
from core.document.validation import checked
from core.document.writing import data_of_machine, meshes_of
from core.errors import DocumentError

if TYPE_CHECKING:

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
        replace_file(target.resolve(), lambda file: write_archive(file, json, meshes))
    except OSError as error:
        raise _not_saved(target, error) from error


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
