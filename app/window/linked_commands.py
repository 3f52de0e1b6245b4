"""The commands about linked groups: save a group as a document, place one, read it again, break its link."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from app.window.commands import place_for
from app.window.dialogs.choosing import DOCUMENT, DOCUMENTS, ask_file, ask_where, with_ending
from app.window.dialogs.form import show_over
from app.window.dialogs.read_again import ReadAgainDialog
from app.window.tasks import Task
from core.assembly import Group
from core.assembly.group_document import document_of_group
from core.assembly.linked_groups import fresh_group_key, held_by, linked_groups, with_linked_group, without_link
from core.document import read_linked, save_document
from core.errors import EditRefused, MasswrightError
from core.machine import Machine

if TYPE_CHECKING:
    from collections.abc import Callable, Iterator, Sequence

    from PySide6.QtWidgets import QWidget

    from app.window.session import Session
    from app.window.start import Notice
    from core.assembly import Assembly
    from core.assembly.link import Link
    from core.assembly.linked_groups import LinkedDocument


class LinkedGroups:
    """The commands of the menu; each acts on the selected group."""

    def __init__(self, session: Session, notice: Notice) -> None:
        self._session, self._notice = session, notice

    def save_group(self) -> None:
        """Ask where the selected group is to be saved as a document of its own."""
        group = self._selected("Select the group that is to become a document of its own.")
        if group is not None:
            where = (self._session.folder or Path.home()) / f"{group.name.replace('/', '-')}{DOCUMENT}"
            ask_where(
                self._notice.window(), "Save group as a document", where, DOCUMENTS,
                lambda chosen: self.save_group_under(group, chosen),
            )

    def save_group_under(self, group: Group, chosen: Path) -> None:
        """Save a group as a document of its own; the open document is not touched."""
        own = self._session.path
        try:
            path = with_ending(chosen)
            if own is not None and path.resolve() == own.resolve():
                raise EditRefused(
                    "this is the file of the open document", where=path.name, remedy="Save the group under another name"
                )
            save_document(Machine(document_of_group(self._session.assembly, group.key)), path)
        except MasswrightError as error:
            self._session.refused.emit(str(error))
        else:
            self._session.said.emit(f"Saved {group.name} as {path.name}")

    def place(self) -> None:
        """Ask for a document, and place it as a linked group."""
        ask_file(self._notice.window(), "Place a linked group", self._session.folder, DOCUMENTS, self.place_file)

    def place_file(self, path: Path) -> None:
        """Read a document in a worker, and place it as a linked group at the selected line."""
        self._place(path, "linked", lambda assembly, _key: assembly)

    def place_copy(self, path: Path) -> None:
        """Read a document in a worker, and place its lines as an ordinary group at the selected line."""
        self._place(path, "as a copy", without_link)

    def _place(self, path: Path, how: str, finish: Callable[[Assembly, str], Assembly]) -> None:
        session = self._session

        def placed(document: LinkedDocument) -> None:
            self._notice.hide()
            key = fresh_group_key(session.assembly)
            where = place_for(session.assembly, session.selected)
            words = f"Place {document.name}, {how}"
            session.edit(words, lambda before: finish(with_linked_group(before, document, *where), key), key)

        own = session.path
        task = Task(session, lambda _progress: read_linked(path, own), placed, session.refused.emit)
        self._notice.say(f"Reading {path.name} …", {"Leave it": task.leave})

    def read_again(self) -> None:
        """Read the file of the selected linked group, and show what it would change."""
        group = self._selected_linked()
        if group is not None and group.link is not None:
            read_again(self._session, [group.key], group.link.path, self._notice.window())

    def break_link(self) -> None:
        """Make the selected linked group an ordinary one."""
        group = self._selected_linked()
        if group is not None:
            break_link(self._session, group)

    def _selected_linked(self) -> Group | None:
        group = self._selected("Select a linked group.")
        if group is not None and group.link is None:
            self._session.refused.emit(f"{group.name} is an ordinary group. Select a linked group.")
            return None
        return group

    def _selected(self, otherwise: str) -> Group | None:
        keys = self._session.selected
        node = self._session.assembly.line(next(iter(keys))) if len(keys) == 1 else None
        if not isinstance(node, Group):
            self._session.refused.emit(otherwise)
            return None
        return node


def read_again(session: Session, keys: Sequence[str], path: str, parent: QWidget) -> None:
    """Read a file for these linked groups in a dialog that shows what it would change."""
    show_over(ReadAgainDialog(session, keys, path, parent))


def choose_file(session: Session, group: Group, parent: QWidget) -> None:
    """Ask for the file that a linked group is to be read from, and show what it would change."""
    ask_file(
        parent, f"File of {group.name}", session.folder, DOCUMENTS,
        lambda path: read_again(session, [group.key], str(path), parent),
    )


def break_link(session: Session, group: Group) -> None:
    """Make a linked group an ordinary one."""
    session.edit(f"Break the link of {group.name}", partial(without_link, key=group.key))


def own_groups(assembly: Assembly) -> Iterator[tuple[Group, Link]]:
    """Yield the linked groups of this document's own, those in other linked groups left out."""
    for group, link in linked_groups(assembly.members):
        if held_by(assembly, group.key) is None:
            yield group, link
