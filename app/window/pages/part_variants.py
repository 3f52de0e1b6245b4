"""The field for the variants that a line belongs to; a document without variants has none."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QCheckBox, QVBoxLayout, QWidget

from app.window.pages.section import Section
from app.window.style import GRID, Words
from core.assembly import Cut
from core.assembly.variants import with_membership

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.session import Session
    from core.assembly import Node
    from core.assembly.fields import AnyLine

ALL = "in all variants, and in those added later"


class VariantsSection(Section):
    """A box for each variant of the document."""

    def __init__(self, session: Session, form: Form, node: Node) -> None:
        super().__init__(session, form, node.key)
        form.heading("Variants")
        boxes = QWidget()
        layout = QVBoxLayout(boxes)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID // 2)
        self.boxes: dict[str, QCheckBox] = {}
        for name in session.assembly.variants:
            box = QCheckBox(name)
            box.setAccessibleName(f"In the variant {name}")
            box.clicked.connect(lambda _checked=False: self._choose())
            layout.addWidget(box)
            self.boxes[name] = box
        self._said = Words("", "quiet")
        layout.addWidget(self._said)
        form.add("is in", boxes, "A line that is in no chosen variant does not count; its group must be in it, too.")

    def show(self, node: AnyLine) -> None:
        """Show the variants that the line is in."""
        if isinstance(node, Cut):
            return
        for name, box in self.boxes.items():
            box.setChecked(not node.only_in or name in node.only_in)
        out = ", ".join(name for name in self.boxes if node.only_in and name not in node.only_in)
        self._said.setText(f"not in {out}" if out else ALL)

    def _choose(self) -> None:
        wanted = frozenset(name for name, box in self.boxes.items() if box.isChecked())
        node = self.session.assembly.node(self.key)
        if not wanted:
            self.session.refused.emit(f"{node.name}: a line is in one variant at least. To leave it out, delete it.")
            self.show(node)
            return
        self.session.edit(f"Variants of {node.name}", lambda before: with_membership(before, self.key, wanted))
