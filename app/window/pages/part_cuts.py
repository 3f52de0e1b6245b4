"""Cuts on the Part page: those of a part with a way to take out another, and where a selected cut is taken out."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QHBoxLayout, QMenu, QPushButton, QToolButton, QVBoxLayout, QWidget

from app.window.numbers import shown
from app.window.pages.section import Section
from app.window.style import GRID, Words
from core.assembly import Cut, Part
from core.assembly.first_cut import first_cut
from core.quantity import Kind
from core.shapes import SHAPES, OutlinedShape

if TYPE_CHECKING:
    from app.window.fields import Form
    from app.window.session import Session
    from core.assembly import Assembly
    from core.assembly.fields import AnyLine

# In the order in which a workshop takes material away; the other solids follow.
USUAL = ("cylinder", "box", "tube", "cone", "regular prism", "extruded profile")


class CutsSection(Section):
    """The cuts of a part: a click selects one, a menu takes out another."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Cuts")
        self._list = QVBoxLayout()
        self._list.setSpacing(2)
        self.add = QToolButton()
        self.add.setText("Take out a …")
        self.add.setAccessibleName("Take a shape out of the part")
        self.add.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        self.add.setMenu(self._menu())
        row = QHBoxLayout()
        row.addWidget(self.add)
        row.addStretch(1)
        page = QWidget()
        layout = QVBoxLayout(page)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID // 2)
        layout.addLayout(self._list)
        layout.addLayout(row)
        form.add_row(page)
        self._shown: tuple[Cut, ...] | None = None

    def _menu(self) -> QMenu:
        menu = QMenu(self.add)
        solids = [key for key, shape in SHAPES.items() if shape.measure == "volume"]
        first = [key for key in USUAL if key in solids]
        rest = [key for key in solids if key not in USUAL and not issubclass(SHAPES[key], OutlinedShape)]
        for keys in (first, rest):
            for key in keys:
                menu.addAction(SHAPES[key].title, partial(self.take_out, key))
            menu.addSeparator()
        return menu

    def take_out(self, shape: str) -> None:
        """Take a shape out of the part, and select the cut, ready to be made to measure."""
        made: list[str] = []

        def change(assembly: Assembly) -> Assembly:
            part = assembly.node(self.key)
            if not isinstance(part, Part):
                return assembly
            cut = first_cut(assembly, part, shape)
            made.append(cut.key)
            return assembly.inserted_cut(cut, self.key)

        name = self.session.assembly.node(self.key).name
        if self.session.edit(f"Cut a {SHAPES[shape].title} out of {name}", change) and made:
            self.session.select(frozenset({made[0]}))

    def show(self, node: AnyLine) -> None:
        """List the part's cuts."""
        if not isinstance(node, Part) or node.cuts == self._shown:
            return
        self._shown = node.cuts
        while (item := self._list.takeAt(0)) is not None:
            old = item.widget()
            if old is not None:
                old.deleteLater()
        for cut in node.cuts:
            button = QPushButton(cut.name if cut.copies.count == 1 else f"{cut.name}  × {cut.copies.count}")
            button.setAccessibleName(f"Edit the cut {cut.name}")
            button.clicked.connect(lambda _checked=False, key=cut.key: self.session.select(frozenset({key})))
            self._list.addWidget(button)


class CutHead(Section):
    """Which part a cut is taken out of, and how much it takes."""

    def __init__(self, session: Session, form: Form, cut: Cut) -> None:
        super().__init__(session, form, cut.key)
        self._says = form.say("", "text")
        back = QPushButton("Back to the part")
        back.clicked.connect(self._go_back)
        row = QWidget()
        layout = QHBoxLayout(row)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(back)
        layout.addStretch(1)
        form.add_row(row)
        self._more: Words = form.say("")

    def show(self, node: AnyLine) -> None:
        """Show what the cut takes out of which part."""
        part = self.session.assembly.part_of_cut(self.key)
        line = next((line for line in self.session.ledger.lines if line.key == self.key), None)
        weight = self.session.units[Kind.MASS]
        mass = None if line is None or line.mass is None else shown(self.session, -line.mass, weight)
        takes = "" if mass is None else f"; takes {mass} {weight.symbol}"
        self._says.setText(f"Taken out of {part.name}, in the part's own frame{takes}.")
        said = [check.text for check in part.checks if check.name == "cut" and node.name in check.text]
        self._more.setText(" ".join(said))

    def _go_back(self) -> None:
        self.session.select(frozenset({self.session.assembly.part_of_cut(self.key).key}))
