"""The files behind linked groups: read with the same bounds as any document, looked at, followed to find loops."""

from __future__ import annotations

import hashlib
import os
from contextlib import suppress
from pathlib import Path
from typing import TYPE_CHECKING

from core.assembly.link import Link
from core.assembly.linked_groups import LinkedDocument, linked_groups
from core.document.archive import MOST_BYTES
from core.document.link_path import DOCUMENT_SUFFIX, path_of, real_path
from core.document.reading import entries_of_document, opened, read_document_file
from core.errors import DocumentError

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from core.assembly import Assembly
    from core.document.schema import NodeEntry
    from core.progress import Progress

# More files than this are not followed in search of a loop.
_MOST_FOLLOWED = 200
_CHUNK = 4 * 2**20
_THEN = " → "


def read_linked(path: str | Path, holder: Path | None = None) -> LinkedDocument:
    """Return what a document file holds, for a linked group.

    Args:
        path: of the file.
        holder: of the document that is to hold the group; None where it has no file yet.

    Raises:
        DocumentError: the file cannot be read, is no document, or leads back to itself or to the holder; then the
            chain of files is told.

    """
    file_path = Path(os.path.abspath(path))  # noqa: PTH100  # links of the file system stay as they are
    if not _may_be_read(str(file_path)):
        raise DocumentError(
            "there is no such document", where=str(path), remedy=f"Choose a {DOCUMENT_SUFFIX} file, or put it back"
        )
    _refuse_loop(str(file_path), None if holder is None else str(holder))
    with opened(file_path) as file:
        sha256 = hashlib.file_digest(file, "sha256").hexdigest()
        file.seek(0)
        machine = read_document_file(file, file_path)
    link = Link(str(file_path), sha256)
    link.note(sha256)
    return LinkedDocument(link, file_path.stem, machine.assembly)


def look_at_links(assembly: Assembly) -> None:
    """Note on every link of an assembly what its file holds now; each file is read once."""
    _ = note_links(assembly, {path: hash_of(path) for path in linked_paths(assembly)})


def note_links(assembly: Assembly, hashes: Mapping[str, str | None]) -> bool:
    """Note on every link of an assembly the SHA-256 that was found for its path, None for a file that is not there.

    Return whether more or something else is known of one of them now.
    """
    links = [link for _, link in linked_groups(assembly.members) if link.path in hashes]
    before = [link.state for link in links]
    for link in links:
        link.note(hashes[link.path])
    return before != [link.state for link in links]


def linked_paths(assembly: Assembly) -> tuple[str, ...]:
    """Return the path of every linked file once, in the order of the ledger."""
    return tuple(dict.fromkeys(link.path for _, link in linked_groups(assembly.members)))


def hash_of(path: str, progress: Progress | None = None) -> str | None:
    """Return the SHA-256 of a document file's bytes; None where it is not there, may not be read, or cannot be one.

    Raises:
        Cancelled: progress was cancelled.
    """
    if not _may_be_read(path):
        return None
    found = hashlib.sha256()
    try:
        with Path(path).open("rb") as file:
            while chunk := file.read(_CHUNK):
                found.update(chunk)
                if progress is not None:
                    progress.advance(len(chunk))
    except OSError:
        return None
    return found.hexdigest()


def _may_be_read(path: str) -> bool:
    """Tell whether a path leads to what may be a document; a document may name any path, a device or a pipe too."""
    try:
        ours = path.lower().endswith(DOCUMENT_SUFFIX) and Path(path).is_file()
        return ours and Path(path).stat().st_size <= MOST_BYTES
    except OSError:
        return False


def _refuse_loop(path: str, holder: str | None) -> None:
    """Refuse a file whose linked files lead back to one on the way, or to the holder; depth first."""
    trail: list[tuple[str, Iterator[str]]] = [] if holder is None else [(holder, iter((path,)))]
    trail = trail or [(path, iter(_links_in(path)))]
    done: set[str] = set()
    while trail:
        following = next(trail[-1][1], None)
        if following is None:
            done.add(real_path(trail.pop()[0]))
            continue
        steps = [step for step, _ in trail]
        if real_path(following) in map(real_path, steps):
            raise _loop([*steps, following])
        if real_path(following) not in done and len(done) + len(trail) < _MOST_FOLLOWED:
            trail.append((following, iter(_links_in(following))))


def _loop(steps: list[str]) -> DocumentError:
    return DocumentError(
        "a document cannot hold itself as a linked group", where=Path(steps[-1]).name,
        read=_THEN.join(Path(step).name for step in steps), remedy="Break one of these links first",
    )


def _links_in(path: str) -> list[str]:
    """Return the paths of the files that a document file links; none where it cannot be read."""
    found: list[str] = []
    if not _may_be_read(path):
        return found
    # What cannot be read is told when it is to be placed; on the way to others it leads nowhere.
    with suppress(DocumentError), opened(Path(path)) as file:
        folder = str(Path(path).resolve().parent)
        found += [path_of(folder, told) for told in _told_in(entries_of_document(file).members)]
    return found


def _told_in(members: list[NodeEntry]) -> Iterator[str]:
    """Yield the paths of linked files as they are told; those inside a linked group are for its own file to tell."""
    for entry in members:
        if entry.kind == "group" and entry.link is not None:
            yield entry.link.path
        elif entry.kind == "group":
            yield from _told_in(entry.members)
