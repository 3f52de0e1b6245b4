"""The fields for how a line repeats."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.fields import ChoiceField, Form, QuantityField, TripleField
from app.window.pages.section import Section
from core.assembly.fields import typed_for
from core.placement import Copies, Mirrored, Ring, Row, Several
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.assembly.fields import AnyLine

PATTERNS: list[tuple[str, object]] = [
    ("at one place", Several),
    ("ring, on a pitch circle", Ring),
    ("row", Row),
    ("mirror image", Mirrored),
]


class CopiesSection(Section):
    """How often the line is there, and where its copies stand."""

    def __init__(self, session: Session, form: Form, node: AnyLine) -> None:
        super().__init__(session, form, node.key)
        form.heading("Repeats")
        self._pattern = ChoiceField("How it repeats", PATTERNS)
        form.add("as", self._pattern)
        self._pattern.chosen.connect(self._choose)
        self._count: QuantityField | None = None
        self._angles: list[tuple[str, QuantityField]] = []
        self._triples: list[tuple[str, TripleField]] = []
        self._turning: ChoiceField | None = None
        if not isinstance(node.copies, Mirrored):
            self._count = QuantityField(session, "quantity", Kind.NUMBER)
            form.add("quantity ×", self._count)
            self.bind(self._count, "Quantity", "copies.count")
        self._pattern_fields(node.copies)

    def _pattern_fields(self, copies: Copies) -> None:
        if isinstance(copies, Ring):
            self._angle("start", "first copy at", "Turn of the first copy away from where the part was placed.")
            self._angle("span", "over", "360° spaces the copies evenly all round.")
            turning: list[tuple[str, object]] = [("turn with the ring", True), ("keep their orientation", False)]
            self._turning = ChoiceField("Copies turn", turning)
            self.form.add("copies", self._turning)
            self._turning.chosen.connect(self._choose_turning)
            self._triple("point", "axis through", Kind.LENGTH, "A point on the ring's axis, in the group's frame.")
            self._triple("direction", "axis along", Kind.NUMBER, "The direction of the ring's axis.")
        elif isinstance(copies, Row):
            self._triple("step", "step", Kind.LENGTH, "From each copy to the next, in the group's frame.")
        elif isinstance(copies, Mirrored):
            self._triple("point", "plane through", Kind.LENGTH, "A point of the mirror plane.")
            self._triple("normal", "plane across", Kind.NUMBER, "The direction across the mirror plane.")

    def _angle(self, name: str, label: str, tip: str) -> None:
        field = QuantityField(self.session, label, Kind.ANGLE, UNITS["°"])
        self.form.add(label, field, tip)
        self.bind(field, label.capitalize(), f"copies.{name}")
        self._angles.append((name, field))

    def _triple(self, name: str, label: str, kind: Kind, tip: str) -> None:
        triple = TripleField(self.session, label, kind)
        self.form.add(label, triple, tip)
        for at, field in enumerate(triple.fields):
            self.bind(field, label.capitalize(), f"copies.{name}.{at}")
        self._triples.append((name, triple))

    def show(self, node: AnyLine) -> None:
        """Show how the line repeats."""
        self._pattern.set_value(type(node.copies))
        if self._count is not None:
            self._count.set_value(float(node.copies.count), typed_for(node, "copies.count"))
        for name, field in self._angles:
            field.set_value(getattr(node.copies, name), typed_for(node, f"copies.{name}"))
        for name, triple in self._triples:
            triple.set_values(
                getattr(node.copies, name), lambda at, name=name: typed_for(node, f"copies.{name}.{at}")  # type: ignore[misc]  # bound now
            )
        if self._turning is not None and isinstance(node.copies, Ring):
            self._turning.set_value(node.copies.turning)

    def _choose(self, pattern: object) -> None:
        def change(node: AnyLine) -> AnyLine:
            count = node.copies.count
            fresh: dict[object, Copies] = {
                Several: Several(count), Ring: Ring(max(count, 2)), Row: Row(max(count, 2)), Mirrored: Mirrored(),
            }
            return node if isinstance(node.copies, type(fresh[pattern])) else replace(node, copies=fresh[pattern])

        name = self.session.assembly.line(self.key).name
        self.edit(f"{name} repeats {self._pattern.currentText()}", change)

    def _choose_turning(self, turning: object) -> None:
        self.edit("Orientation of the copies", lambda node: _copies_with(node, turning=bool(turning)))


def _copies_with(node: AnyLine, **values: object) -> AnyLine:
    return replace(node, copies=replace(node.copies, **values))  # type: ignore[arg-type]  # fields of one of the patterns
