"""The Part page: everything that can be typed about the selected line."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QScrollArea, QVBoxLayout, QWidget

from app.window.fields import Form, QuantityField, TextField
from app.window.outline.section import OutlineSection, is_profile
from app.window.pages.part_body import KnownSection, ShapeSection
from app.window.pages.part_copies import CopiesSection
from app.window.pages.part_cuts import CutHead, CutsSection
from app.window.pages.part_link import HeldHead, LinkSection
from app.window.pages.part_mass import MassSection
from app.window.pages.part_mesh import MeshSection
from app.window.pages.part_seat import SeatSection
from app.window.pages.part_stand import PlaceSection
from app.window.pages.part_turning import TurningSection
from app.window.pages.part_variants import VariantsSection
from app.window.pages.section import Section
from app.window.pages.swap import swap, swap_in_place
from app.window.style import GRID, Words
from core.assembly import Cut, Group, MeshBody, Part, ShapeBody
from core.assembly.linked_groups import held_by

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly.fields import AnyLine

NOTHING = (
    "Select a line of the ledger, or click a part in the view, to edit it here.\n"
    "Add shape, Add mesh and Add known part put a new line into the ledger."
)


class NameSection(Section):
    """The name of the line, and a note on it."""

    def __init__(self, session: Session, form: Form, node: AnyLine) -> None:
        super().__init__(session, form, node.key)
        self._name = TextField("Name")
        form.add("name", self._name)
        self._note = TextField("Note", "what is worth knowing about it")
        form.add("note", self._note)
        self._name.entered.connect(self._rename)
        self._note.entered.connect(lambda text: self.edit("Note", lambda line: replace(line, note=text)))

    def show(self, node: AnyLine) -> None:
        """Show name and note."""
        self._name.set_value(node.name)
        self._note.set_value(node.note)

    def _rename(self, text: str) -> None:
        if text.strip():
            self.edit(f"Rename to {text.strip()}", lambda node: replace(node, name=text.strip()))
        else:
            self._name.set_value(self.session.assembly.line(self.key).name)


class PartPage(QScrollArea):
    """Rebuilt when another kind of line is selected, refreshed in place when its values change."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self._signature: object = None
        self._key: str | None = None
        self._sections: list[Section] = []
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setAccessibleName("Part page")
        self.setObjectName("page")
        for signal in (
            session.changed, session.selection_changed, session.shown_differently, session.placed_differently,
            session.own.changed,
        ):
            signal.connect(self.refresh)
        self.refresh()

    def refresh(self) -> None:
        """Show the selected line as it is now."""
        node = self._selected()
        inside = _signature(node) if node else len(self._session.selected)
        held = None if node is None else held_by(self._session.assembly, node.key)
        linked = held and (held.key, held.name, held.link)
        signature = (inside, self._session.assembly.variants, linked, self._session.own.materials)
        if signature != self._signature:
            self._signature = signature
            self._build(node, held)
        if node is not None:
            for section in self._sections:
                section.show(node)

    def edit_first_dimension(self) -> None:
        """Put the keyboard into the first dimension of a shape, its text selected."""
        for section in self._sections:
            if isinstance(section, ShapeSection):
                field: QuantityField = section.first_field()
                field.line.setFocus(Qt.FocusReason.OtherFocusReason)
                field.line.selectAll()
                return

    def _selected(self) -> AnyLine | None:
        if len(self._session.selected) != 1:
            return None
        return self._session.assembly.line(next(iter(self._session.selected)))

    def _build(self, node: AnyLine | None, held: Group | None) -> None:
        page = QWidget()
        page.setObjectName("page")
        layout = QVBoxLayout(page)
        layout.setContentsMargins(2 * GRID, GRID, 2 * GRID, 2 * GRID)
        self._sections = []
        if node is None:
            several = len(self._session.selected)
            words = Words(f"{several} lines are selected. Select one to edit it here." if several else NOTHING, "quiet")
            words.setWordWrap(True)
            layout.addWidget(words)
        else:
            form = Form()
            if held is not None:
                head = Form()
                HeldHead(self._session, head, node, held)
                layout.addWidget(head)
                form.setEnabled(False)
            self._sections = _sections(self._session, form, node)
            layout.addWidget(form)
        layout.addStretch(1)
        same_line = node is not None and node.key == self._key
        self._key = None if node is None else node.key
        (swap_in_place if same_line else swap)(self, page)


def _signature(node: AnyLine) -> tuple[object, ...]:
    """Return what decides which fields a line has."""
    if isinstance(node, Group):
        return (node.key, Group, type(node.copies), node.link is not None, node.seat is None)
    if isinstance(node, Cut):
        return (node.key, Cut, type(node.shape), type(node.copies))
    inner = type(node.body.shape) if isinstance(node.body, ShapeBody) else getattr(node.body, "about", "")
    return (node.key, type(node.body), inner, type(node.copies), node.seat is None)


def _sections(session: Session, form: Form, node: AnyLine) -> list[Section]:
    sections: list[Section] = [NameSection(session, form, node)]
    if isinstance(node, Cut):
        sections += [CutHead(session, form, node), ShapeSection(session, form, node)]
        if is_profile(node):
            sections.append(OutlineSection(session, form, node))
    if isinstance(node, Group) and node.link is not None:
        sections.append(LinkSection(session, form, node))
    if isinstance(node, Part):
        sections += _body_sections(session, form, node)
    sections.append(PlaceSection(session, form, node))
    if not isinstance(node, Cut):
        sections.append(SeatSection(session, form, node))
    sections.append(CopiesSection(session, form, node))
    if not isinstance(node, Cut):
        sections.append(TurningSection(session, form, node))
    if session.assembly.variants and not isinstance(node, Cut):
        sections.append(VariantsSection(session, form, node))
    return sections


def _body_sections(session: Session, form: Form, part: Part) -> list[Section]:
    if isinstance(part.body, MeshBody):
        sections: list[Section] = [MeshSection(session, form, part)]
    elif isinstance(part.body, ShapeBody):
        sections = [ShapeSection(session, form, part)]
        if is_profile(part):
            sections.append(OutlineSection(session, form, part))
    else:
        return [KnownSection(session, form, part)]
    return [*sections, MassSection(session, form, part), CutsSection(session, form, part)]
