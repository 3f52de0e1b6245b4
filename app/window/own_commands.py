"""The commands about the user's own list: manage it, keep the selected group, place one of its groups."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt

from app.window.dialogs.own_list import OwnListDialog
from app.window.own_list import data_folder
from core.assembly import Group
from core.assembly.group_document import document_of_group
from core.errors import MasswrightError
from core.machine import Machine

if TYPE_CHECKING:
    from PySide6.QtWidgets import QMenu

    from app.window.linked_commands import LinkedGroups
    from app.window.session import Session
    from app.window.start import Notice


class OwnListCommands:
    """What the Part menu offers about the own list."""

    def __init__(self, session: Session, linked: LinkedGroups, notice: Notice) -> None:
        self._session, self._linked, self._notice = session, linked, notice
        session.own.refused.connect(session.refused)
        session.own.said.connect(session.said)

    def open(self) -> None:
        """Read the list in the user's data folder."""
        self._session.own.open_folder(data_folder())

    def manage(self) -> None:
        """Show the list beside the window, read anew."""
        self._session.own.refresh()
        dialog = OwnListDialog(self._session, self, self._notice.window())
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def fill(self, menu: QMenu) -> None:
        """Put the groups of the list into a menu, each to be placed as a copy or linked."""
        menu.clear()
        for path in self._session.own.groups:
            name = path.stem.replace("&", "&&")
            menu.addAction(name, partial(self._linked.place_copy, path))
            menu.addAction(f"{name}, linked", partial(self._linked.place_file, path))
        if menu.isEmpty():
            menu.addAction("none yet").setEnabled(False)

    def place_copy(self, at: int) -> None:
        """Place a copy of one of the groups."""
        self._linked.place_copy(self._session.own.groups[at])

    def place_linked(self, at: int) -> None:
        """Place one of the groups, linked."""
        self._linked.place_file(self._session.own.groups[at])

    def keep_group(self) -> str:
        """Write the selected group into the list; return "" or the sentence that refuses it."""
        keys = self._session.selected
        node = self._session.assembly.line(next(iter(keys))) if len(keys) == 1 else None
        if not isinstance(node, Group):
            return "Select one group in the ledger first."
        try:
            machine = Machine(document_of_group(self._session.assembly, node.key))
        except MasswrightError as error:
            return str(error)
        return self._session.own.keep_group(machine, node.name)

    def keep_selected_group(self) -> None:
        """Write the selected group into the list; what refuses it is told at the top of the window."""
        refusal = self.keep_group()
        if refusal:
            self._session.refused.emit(refusal)
