"""The fields for the seat of a line: by which place it is set on which place of another one, and how."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

from PySide6.QtWidgets import QComboBox, QHBoxLayout, QPushButton, QWidget

from app.window.fields import NARROW_WIDTH, ChoiceField, Form, QuantityField
from app.window.pages.section import Section
from app.window.style import GRID, Words
from app.window.tasks import Task
from core.assembly import Cut
from core.assembly.fields import typed_for
from core.assembly.seat import Anchor
from core.assembly.seats import lines_to_seat_on, moved_to, own_places_of, places_of, said_place, without_seat
from core.assembly.seats.datums import find_places, finding_takes_long
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from PySide6.QtGui import QFocusEvent

    from app.window.session import Session
    from core.assembly import Node
    from core.assembly.fields import AnyLine

FACINGS: Final[list[tuple[str, object]]] = [
    ("against it, as faces that touch", "against"),
    ("the same way, as faces that are flush", "along"),
]
WIDTH_IN_LETTERS: Final = 30
STANDS: Final = "Not seated: it stands where its placement says."


class PlaceField(ChoiceField):
    """A choice from a long list that is made when it is asked for; typing searches in it."""

    def __init__(self, label: str, entries: Callable[[], list[tuple[str, object]]]) -> None:
        super().__init__(label, [])
        self._entries = entries
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(WIDTH_IN_LETTERS)
        self.take_typing("type to search")
        self.typed.connect(self._take_text)

    def show_value(self, value: object, words: str) -> None:
        """Show a value without telling about it, unless a text is being typed; the list is made when asked for."""
        line = self.lineEdit()
        if line is not None and line.hasFocus() and line.isModified():
            return
        if self.view().isVisible():
            return
        at = next((at for at in range(self.count()) if self.itemData(at) == value), -1)
        if at < 0 and value is not None:
            self.addItem(words, value)
            at = self.count() - 1
        self.setCurrentIndex(at)
        self.setEditText(words)

    def showPopup(self) -> None:
        """Make the list, then show it."""
        self._fill()
        super().showPopup()

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Make the list that typing searches in."""
        super().focusInEvent(event)
        self._fill()

    def _fill(self) -> None:
        value, words = self.currentData(), self.currentText()
        entries = self._entries()
        if [self.itemData(at) for at in range(self.count())] == [entry for _, entry in entries]:
            return
        self.clear()
        for shown, entry in entries:
            self.addItem(shown, entry)
        at = next((at for at, (_, entry) in enumerate(entries) if value is not None and entry == value), -1)
        self.setCurrentIndex(at)
        self.setEditText(words)

    def _take_text(self, text: str) -> None:
        """Choose what was typed in full; anything else leaves the choice as it was."""
        at = self.findText(text)
        if at >= 0 and at != self.currentIndex():
            self.setCurrentIndex(at)
            self.chosen.emit(self.itemData(at))
        elif at < 0:
            self.setEditText(self.itemText(self.currentIndex()))


class SeatSection(Section):
    """By which place a line is seated, on which one, and how far off and turned."""

    def __init__(self, session: Session, form: Form, node: Node) -> None:
        super().__init__(session, form, node.key)
        form.heading("Seat")
        self._says = form.say("")
        self._own: Anchor | None = None
        self._line: object = None
        self._target: Anchor | None = None
        self._task: Task[None] | None = None
        self.own = PlaceField("Seated by its place", lambda: self._places(self.key, own_places_of))
        form.add("by its", self.own, "A face, an edge or an axis of the line itself, named in its own frame.")
        self.line = PlaceField("Seated on the line", self._lines)
        form.add("on", self.line, "The line, or the axis of the document, that it follows.")
        self.place = PlaceField("Seated on the place", self._target_places)
        form.add("at its", self.place, "A face, an edge or an axis of that line, named in that line's own frame.")
        self.own.chosen.connect(self._choose_own)
        self.line.chosen.connect(self._choose_line)
        self.place.chosen.connect(self._choose_place)
        self._seat_fields: tuple[QuantityField, ...] = ()
        self._facing: ChoiceField | None = None
        if node.seat is not None:
            self._fields_of_seat()
        self._looking = form.say("")
        self.wrong = form.say("", "failed")
        self._tell("")
        self._refuse("")
        form.add_row(self._buttons(node))

    def _fields_of_seat(self) -> None:
        self._facing = ChoiceField("It faces", FACINGS)
        self.form.add("faces", self._facing, "Whether the directions of the two places are opposite or the same.")
        self._facing.chosen.connect(self._choose_facing)
        offset = QuantityField(self.session, "seat offset", Kind.LENGTH)
        self.form.add("offset", offset, "From the place of the other line, along its direction.")
        names = ("seat aside u", "seat aside v")
        aside = [QuantityField(self.session, name, Kind.LENGTH, width=NARROW_WIDTH) for name in names]
        self.form.add(
            "aside", _beside(aside),
            "Across the direction: u is the other line's own x axis as seen along it (its z where it runs along x), "
            "v is square to both.",
        )
        turn = QuantityField(self.session, "seat turn", Kind.ANGLE, UNITS["°"])
        self.form.add("turn", turn, "About the direction of the other line's place, right-handed.")
        for field, words, path in (
            (offset, "Seat offset", "seat.offset"), (aside[0], "Seat aside u", "seat.aside.0"),
            (aside[1], "Seat aside v", "seat.aside.1"), (turn, "Seat turn", "seat.turn"),
        ):
            self.bind(field, words, path)
        self._seat_fields = (offset, *aside, turn)

    def _buttons(self, node: Node) -> QWidget:
        point = QPushButton("Pick in the view")
        point.setToolTip("Click a place of this line in the view, then the place to seat it on. Escape leaves.")
        point.clicked.connect(lambda: self.session.seat_wanted.emit(self.key))
        self.act = QPushButton("Seat it" if node.seat is None else "Remove the seat")
        self.act.setToolTip("" if node.seat is None else "The line stays where it is.")
        self.act.clicked.connect(self._seat if node.seat is None else self._remove)
        row = QWidget()
        layout = QHBoxLayout(row)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(GRID)
        layout.addWidget(point)
        layout.addWidget(self.act)
        layout.addStretch(1)
        return row

    def show(self, node: AnyLine) -> None:
        """Show the seat, or what was chosen for one so far."""
        if isinstance(node, Cut):
            return
        seat, assembly = node.seat, self.session.assembly
        self._refuse("")
        if seat is None:
            self._forget_gone()
            self._says.setText(STANDS)
        else:
            self._own, self._target = seat.moving, seat.target
            self._line = self._line_of(seat.target)
            self._says.setText(f"Seated on {said_place(assembly, seat.target)}; it follows.")
            values = (seat.offset, *seat.aside, seat.turn)
            paths = ("seat.offset", "seat.aside.0", "seat.aside.1", "seat.turn")
            for field, value, path in zip(self._seat_fields, values, paths, strict=True):
                field.set_value(value, typed_for(node, path))
            if self._facing is not None:
                self._facing.set_value(seat.facing)
        self._show_choices()

    def _show_choices(self) -> None:
        self.own.show_value(self._own, self._words(self.key, self._own))
        self.line.show_value(self._line, self._line_words())
        on_axis = isinstance(self._line, Anchor)
        self.place.show_value(self._target, "" if on_axis else self._words(str(self._line), self._target))
        self.form.show_row(self.place, wanted=not on_axis)
        if self.session.assembly.node(self.key).seat is None:
            self.act.setEnabled(self._own is not None and self._target is not None)

    def _words(self, key: str, anchor: Anchor | None) -> str:
        """Return the name of a place as the list for a line has it."""
        if anchor is None:
            return ""
        if anchor.key == key:
            return anchor.datum
        return f"{self.session.assembly.name_of_line(anchor.key)}: {anchor.datum}"

    def _line_words(self) -> str:
        if isinstance(self._line, Anchor):
            return said_place(self.session.assembly, self._line)
        return self.session.assembly.node(str(self._line)).name if self._line else ""

    def _line_of(self, target: Anchor) -> object:
        return self.session.assembly.node_of_line(target.key).key if target.key else target

    def _forget_gone(self) -> None:
        """Forget what was chosen on lines that are gone."""
        assembly = self.session.assembly
        if self._own is not None and self._own.key not in assembly:
            self._own = None
        if isinstance(self._line, str) and self._line not in assembly:
            self._line = self._target = None
        if self._target is not None and self._target.key and self._target.key not in assembly:
            self._target = None

    def _tell(self, sentence: str) -> None:
        self._looking.setText(sentence)
        self.form.show_row(self._looking, wanted=bool(sentence))

    def _refuse(self, sentence: str) -> None:
        self.wrong.setText(sentence)
        self.form.show_row(self.wrong, wanted=bool(sentence))

    # The lists

    def _lines(self) -> list[tuple[str, object]]:
        assembly = self.session.assembly
        axes: list[tuple[str, object]] = [(f"the axis {axis.name}", Anchor("", axis.name)) for axis in assembly.axes]
        return [*axes, *(("   " * depth + name, key) for name, depth, key in lines_to_seat_on(assembly, self.key))]

    def _target_places(self) -> list[tuple[str, object]]:
        return self._places(self._line, places_of) if isinstance(self._line, str) else []

    def _places(self, key: str, places: Callable[..., tuple[tuple[str, Anchor], ...]]) -> list[tuple[str, object]]:
        """Return places of a line; those of a large mesh once they are found, off the window's thread."""
        assembly = self.session.assembly
        node = assembly.node(key)
        if not finding_takes_long(node):
            return [*places(assembly, key)]
        if self._task is None:
            self._tell(f"Looking for the faces of {node.name}; open the list again in a moment.")
            said = self._refuse
            self._task = Task(self.own, lambda _progress: find_places(node), lambda _found: self._looked(), said)
        return []

    def _looked(self) -> None:
        self._task = None
        self._tell("")

    # The edits

    def _choose_own(self, anchor: object) -> None:
        self._own = anchor if isinstance(anchor, Anchor) else None
        self._apply()

    def _choose_line(self, line: object) -> None:
        if line != self._line:
            self._line = line
            self._target = line if isinstance(line, Anchor) else None
            self._apply()

    def _choose_place(self, anchor: object) -> None:
        self._target = anchor if isinstance(anchor, Anchor) else None
        self._apply()

    def _apply(self) -> None:
        """Move a seated line to what was chosen; wait with one that is not seated yet."""
        seat = self.session.assembly.node(self.key).seat
        if seat is not None and self._target is not None and (self._own, self._target) != (seat.moving, seat.target):
            self._seat()
        else:
            self._show_choices()

    def _seat(self) -> None:
        own, target = self._own, self._target
        if own is None or target is None:
            return
        assembly = self.session.assembly
        words = f"Seat {assembly.node(self.key).name} on {said_place(assembly, target)}"
        refusal = self.session.attempt(words, lambda before: moved_to(before, self.key, own, target))
        if refusal:
            self.show(self.session.assembly.node(self.key))
            self._refuse(refusal)

    def _remove(self) -> None:
        name = self.session.assembly.node(self.key).name
        self.session.edit(f"Remove the seat of {name}", lambda before: without_seat(before, self.key))

    def _choose_facing(self, facing: object) -> None:
        def change(node: AnyLine) -> AnyLine:
            if isinstance(node, Cut) or node.seat is None:
                return node
            return replace(node, seat=replace(node.seat, facing="along" if facing == "along" else "against"))

        self.edit(f"Facing of {self.session.assembly.node(self.key).name}", change)


def _beside(fields: list[QuantityField]) -> QWidget:
    """Return two fields in a row, u and v; what is refused is said below them."""
    row = QWidget()
    layout = QHBoxLayout(row)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setSpacing(GRID // 2)
    for letter, field in zip("uv", fields, strict=True):
        layout.addWidget(Words(letter, "quiet"))
        layout.addWidget(field)
    layout.addStretch(1)
    return row
