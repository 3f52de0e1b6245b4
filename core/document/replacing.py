"""Files written whole: beside their place first, then renamed, so that a crash leaves the old one or the new one."""

from __future__ import annotations

import contextlib
import errno
import os
import secrets
from typing import IO, TYPE_CHECKING

from core.errors import FileRefused

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator
    from pathlib import Path


def replace_file(target: Path, write: Callable[[IO[bytes]], object]) -> None:
    """Write a new file beside the target and put it in its place once it lies on the disk, whole.

    Raises:
        OSError: it cannot be written; the old file is as it was, and nothing is left beside it.
    """
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


@contextlib.contextmanager
def reserved(target: Path) -> Iterator[None]:
    """Hold a name that no file has while its file is being written; given back where that fails.

    Raises:
        FileRefused: a file has the name already.
        OSError: no file can be there.
    """
    try:
        with target.open("xb"):
            pass
    except FileExistsError as error:
        raise FileRefused(
            "it is there already, and is not replaced", where=target.name, remedy="Choose another name"
        ) from error
    done = False
    try:
        yield
        done = True
    finally:
        if not done:
            with contextlib.suppress(OSError):
                target.unlink(missing_ok=True)


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
