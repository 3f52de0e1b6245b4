"""Where linked files are: absolute while a document is open, told from its own folder in its file."""

from __future__ import annotations

import os
from pathlib import Path, PurePath
from typing import TYPE_CHECKING, Final

from core.assembly.linked_groups import linked_groups
from core.errors import DocumentError

if TYPE_CHECKING:
    from core.assembly import Assembly


# How the name of a document's file ends.
DOCUMENT_SUFFIX: Final = ".masswright"


def path_from(folder: str, path: str) -> str:
    """Return how a document in a folder tells an absolute path: relative, with "/" between its steps.

    A path that shares no more than the root with the folder, or lies on another drive, is told as it is.

    >>> path_from("/machines/dial", "/machines/parts/fixture.masswright")
    '../parts/fixture.masswright'
    >>> path_from("/machines/dial", "/library/fixture.masswright")
    '/library/fixture.masswright'
    """
    try:
        shared = os.path.commonpath([folder, path])
    except ValueError:
        return path
    if os.path.dirname(shared) == shared:  # noqa: PTH120  # any text may be asked about
        return path
    return PurePath(os.path.relpath(path, folder)).as_posix()


def path_of(folder: str, told: str) -> str:
    """Return the absolute path that a document in a folder tells; without a folder as it is told.

    >>> path_of("/machines/dial", "../parts/fixture.masswright")
    '/machines/parts/fixture.masswright'
    """
    return os.path.normpath(os.path.join(folder, told)) if folder else told  # noqa: PTH118  # as above


def real_path(path: str) -> str:
    """Return a path with the links of the file system followed; what cannot be a path as it is."""
    try:
        return os.path.realpath(path)
    except ValueError:  # a character that no path has
        return path


def refuse_to_hold_itself(assembly: Assembly, target: Path) -> None:
    """Refuse a document under a path that one of its linked groups, or one inside them, is read from.

    Raises:
        DocumentError: it would hold itself.
    """
    for group, link in linked_groups(assembly.members):
        if real_path(link.path) == real_path(str(target)):
            raise DocumentError(
                "a document cannot hold itself as a linked group", where=group.name, read=link.path,
                remedy="Save it under another name, or break the link first",
            )
