"""The files behind linked groups: looked at by their hash, told where they are missing or have changed since."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject

from app.window.linked_commands import own_groups, read_again
from app.window.tasks import Task
from core.document import hash_of, linked_paths, note_links

if TYPE_CHECKING:
    from app.window.session import Session
    from app.window.start import Notice
    from core.assembly import Assembly

# So many files are offered to be read again at once; the checks name all.
MOST_OFFERED = 3


class LinkedFiles(QObject):
    """Looks at linked files when the window is come back to, in a worker; what it found is kept with the links."""

    def __init__(self, session: Session, notice: Notice) -> None:
        super().__init__(session)
        self._session = session
        self._notice = notice
        self._task: Task[dict[str, str | None]] | None = None
        self._stamps: dict[str, tuple[int, int] | None] = {}
        self._hashes: dict[str, str | None] = {}
        self._followed: Assembly | None = None
        self._offered = ""
        session.changed.connect(self._follow)

    def look(self) -> None:
        """Look whether a linked file is another one than at the last look, and if so what it holds now."""
        if self._task is not None:
            return
        stale = [path for path in linked_paths(self._session.assembly) if self._is_news(path)]
        if stale:
            self._task = Task(
                self, lambda progress: {path: hash_of(path, progress) for path in stale}, self._found, self._lost
            )

    @property
    def busy(self) -> bool:
        """Whether files are being read."""
        return self._task is not None

    def stop(self) -> None:
        """Stop looking; the window closes."""
        if self._task is not None:
            self._task.cancel()

    def _is_news(self, path: str) -> bool:
        stamp = _stamp(path)
        news = path not in self._hashes or self._stamps.get(path) != stamp
        self._stamps[path] = stamp
        return news

    def _lost(self, _sentence: str) -> None:
        self._task = None

    def _found(self, hashes: dict[str, str | None]) -> None:
        self._task = None
        self._hashes |= hashes
        self._tell()
        self._offer(set(hashes))

    def _follow(self) -> None:
        """Tell the links of another assembly, such as one that undo brought back, what is known of their files."""
        if self._session.assembly is not self._followed:
            self._followed = self._session.assembly
            self._tell()
            if any(path not in self._hashes for path in linked_paths(self._followed)):
                self.look()

    def _tell(self) -> None:
        if note_links(self._session.assembly, self._hashes):
            self._session.look_again()
        changed = any(link.state == "changed" for _, link in own_groups(self._session.assembly))
        if not changed and self._offered and self._notice.words.text() == self._offered:
            self._notice.hide()

    def _offer(self, paths: set[str]) -> None:
        """Offer to read again what has changed; a group inside another linked document is for that one to read."""
        changed = {
            link.path: link.file_name
            for _, link in own_groups(self._session.assembly)
            if link.path in paths and link.state == "changed"
        }
        if not changed:
            return
        names = ", ".join(changed.values())
        words = f"The linked file {names} has changed." if len(changed) == 1 else f"Linked files have changed: {names}."
        several, self._offered = len(changed) > 1, words
        self._notice.say(words, {
            f"Read {name} again…" if several else "Read it again…": lambda path=path: self._read(path)  # type: ignore[misc]  # bound now
            for path, name in list(changed.items())[:MOST_OFFERED]
        })

    def _read(self, path: str) -> None:
        keys = [group.key for group, link in own_groups(self._session.assembly) if link.path == path]
        if keys:
            read_again(self._session, keys, path, self._notice.window())


def _stamp(path: str) -> tuple[int, int] | None:
    """Return what changes when a file does; None where there is none."""
    try:
        state = Path(path).stat()
    except (OSError, ValueError):
        return None
    return state.st_mtime_ns, state.st_size
