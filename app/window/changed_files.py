"""Mesh files that changed on disk since they were imported: noticed by their hash, offered with the differences."""

from __future__ import annotations

import hashlib
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject

from app.window.linked_files import LinkedFiles
from app.window.numbers import shown
from app.window.tasks import Task
from core.assembly import MeshBody, change_of, taken_anew
from core.errors import MeshFileError
from core.mesh.formats import FORMATS, read_bodies
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from app.window.start import Notice
    from core.assembly import Assembly, Change
    from core.mesh import MeshAsset
    from core.progress import Progress


class ChangedFiles(QObject):
    """Looks at the files behind mesh parts and linked groups when the window is come back to, in workers."""

    def __init__(self, session: Session, notice: Notice) -> None:
        super().__init__(session)
        self._session = session
        self._notice = notice
        self._task: Task[list[Change]] | None = None
        self._seen: dict[Path, tuple[int, int]] = {}
        self._linked = LinkedFiles(session, notice)

    def look(self) -> None:
        """Look whether a file is another one than at the last look, and if so what it holds now."""
        self._linked.look()
        if self._task is not None:
            return
        assembly, folder = self._session.assembly, self._session.folder
        stale = {path for path in origins(assembly, folder).values() if self._is_news(path)}
        if stale:
            self._task = Task(
                self, lambda progress: _changes(assembly, folder, stale, progress), self._offer, self._lost
            )

    @property
    def busy(self) -> bool:
        """Whether files are being read."""
        return self._task is not None or self._linked.busy

    def stop(self) -> None:
        """Stop looking; the window closes."""
        self._linked.stop()
        if self._task is not None:
            self._task.cancel()

    def _is_news(self, path: Path) -> bool:
        try:
            state = path.stat()
        except OSError:
            return False
        stamp = (state.st_mtime_ns, state.st_size)
        news = self._seen.get(path) != stamp
        self._seen[path] = stamp
        return news

    def _lost(self, _sentence: str) -> None:
        self._task = None

    def _offer(self, changes: list[Change]) -> None:
        self._task = None
        changes = [change for change in changes if change.key in self._session.assembly]
        if changes:
            words = " ".join(self._words(change) for change in changes)
            offer = "Take it anew" if len(changes) == 1 else "Take them anew"
            self._notice.say(words, {offer: lambda: self._take(changes)})

    def _words(self, change: Change) -> str:
        if change.volume is None or change.inertia is None or change.shift is None:
            return f"The file of {change.name} has changed; it or the old one bounds no volume."
        percent, unit = UNITS["%"], self._session.units[Kind.LENGTH]
        volume, inertia = (shown(self._session, value, percent, 3) for value in (change.volume, change.inertia))
        moved = shown(self._session, change.shift, unit, 3)
        return (
            f"The file of {change.name} has changed: volume {volume} %, own J {inertia} %, centre moved by "
            f"{moved} {unit.symbol}."
        )

    def _take(self, changes: list[Change]) -> None:
        def change_all(assembly: Assembly) -> Assembly:
            for change in changes:
                assembly = taken_anew(assembly, change)
            return assembly

        self._session.edit(f"Take {', '.join(change.name for change in changes)} anew", change_all)


def origins(assembly: Assembly, folder: Path | None) -> dict[str, Path]:
    """Return the file behind each mesh part: where it was, or the one of its name beside the document."""
    found = {}
    for part in assembly.table.parts:
        if not isinstance(part.body, MeshBody) or not part.body.origin:
            continue
        path = Path(part.body.origin)
        beside = folder / path.name if folder is not None else path
        for candidate in (path, beside):
            # A document may name any path; only what looks like a mesh file is looked at.
            if candidate.suffix.lower().removeprefix(".") in {*FORMATS, "gz"} and candidate.is_file():
                found[part.key] = candidate
                break
    return found


def _changes(assembly: Assembly, folder: Path | None, stale: set[Path], progress: Progress) -> list[Change]:
    """Read the files anew, and return what they change; a file that cannot be read changes nothing."""
    read: dict[Path, dict[str, MeshAsset]] = {}
    places = origins(assembly, folder)
    for path in stale:
        try:
            if not _is_as_imported(assembly, path, {key for key, place in places.items() if place == path}):
                read[path] = {asset.name: asset for asset in read_bodies(path, progress)}
        except (MeshFileError, OSError):
            # Perhaps it is just being written; the next look will see.
            continue
    changes = []
    for key, path in places.items():
        part = next(part for part in assembly.table.parts if part.key == key)
        asset = read.get(path, {}).get(part.body.asset.name) if isinstance(part.body, MeshBody) else None
        change = None if asset is None else change_of(assembly, part, asset)
        if change is not None:
            changes.append(change)
    return changes


def _is_as_imported(assembly: Assembly, path: Path, keys: set[str]) -> bool:
    """Tell by the hash whether a file that is held as it is, an STL, is the one that was imported."""
    with path.open("rb") as file:
        now = hashlib.file_digest(file, "sha256").hexdigest()
    bodies = [part.body for part in assembly.table.parts if part.key in keys]
    return all(isinstance(body, MeshBody) and (body.asset.source or body.asset.sha256) == now for body in bodies)
