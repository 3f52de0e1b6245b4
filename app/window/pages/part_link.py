"""What the Part page says of a linked group, and of a line that belongs to one."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QHBoxLayout, QPushButton, QWidget

from app.window.linked_commands import break_link, choose_file, read_again
from app.window.pages.section import Section
from app.window.style import GRID
from core.assembly import Group

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.session import Session
    from core.assembly.fields import AnyLine
    from core.assembly.link import LinkState

STATES: dict[LinkState, tuple[str, str]] = {
    "not looked at": ("Its lines are the values last read from it.", "quiet"),
    "as read": ("The file holds what was read from it.", "sound"),
    "changed": ("The file has changed; the values of before count until it is read again.", "failed"),
    "missing": ("The file is missing; its last values count.", "failed"),
}


class LinkSection(Section):
    """The document that a linked group was read from, how that file is now, and what may be done."""

    def __init__(self, session: Session, form: Form, group: Group) -> None:
        super().__init__(session, form, group.key)
        form.heading("Linked document")
        self.path = form.say("", "text")
        self.state = form.say("")
        buttons = QWidget()
        row = QHBoxLayout(buttons)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(GRID)
        self.read = _button(row, "Read again…", "Reads the file, and shows what it would change before it is taken.")
        self.choose = _button(row, "Choose file…", "Reads the group from another file.")
        self.free = _button(row, "Break the link", "Makes it an ordinary group, whose lines can be edited here.")
        row.addStretch(1)
        form.add_row(buttons)
        self.read.clicked.connect(lambda _checked=False: self._read())
        self.choose.clicked.connect(lambda _checked=False: choose_file(session, self._group(), self.form.window()))
        self.free.clicked.connect(lambda _checked=False: break_link(session, self._group()))

    def show(self, node: AnyLine) -> None:
        """Show the file, and what the last look at it told."""
        if isinstance(node, Group) and node.link is not None:
            self.path.setText(breakable(node.link.path))
            words, role = STATES[node.link.state]
            self.state.setText(words)
            self.state.set_role(role)

    def _read(self) -> None:
        group = self._group()
        if group.link is not None:
            read_again(self.session, [group.key], group.link.path, self.form.window())

    def _group(self) -> Group:
        node = self.session.assembly.node(self.key)
        assert isinstance(node, Group)
        return node


class HeldHead(Section):
    """The one thing that can be said of a line of a linked document: where it is edited."""

    def __init__(self, session: Session, form: Form, node: AnyLine, holder: Group) -> None:
        super().__init__(session, form, node.key)
        file = holder.link.file_name if holder.link is not None else ""
        form.say(
            f"Only read here: this line belongs to the linked document {file}. Edit it there and read it again, or "
            f"break the link of the group {holder.name}.",
        )

    def show(self, node: AnyLine) -> None:
        """Show nothing more: what it says holds for every value."""


def breakable(path: str) -> str:
    """Return a path that may be broken into lines behind each of its steps."""
    return re.sub(r"([/\\])", "\\1\u200b", path)


def _button(row: QHBoxLayout, words: str, tip: str) -> QPushButton:
    button = QPushButton(words)
    button.setToolTip(tip)
    row.addWidget(button)
    return button
