"""The fields for what a part is made of: the dimensions of a shape, or a data sheet's values."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.fields import Form, QuantityField, TextField, TripleField
from app.window.pages.section import NumberChange, Section, typed_for, with_component
from core.assembly import KnownAxial, KnownTensor, Node, Part, ShapeBody
from core.errors import EditRefused
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.shapes import Dimension, Shape

TENSOR_LABELS = ("Ixx", "Iyy", "Izz", "Ixy", "Ixz", "Iyz")
TENSOR_TIP = "Tensor elements: Ixy = −∫xy dm. Where the data sheet prints +∫xy dm, change the sign of the products."


class ShapeSection(Section):
    """The dimensions of a shape."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        shape = _shape(part)
        form.heading(f"Dimensions of the {shape.title}")
        self._fields: dict[str, QuantityField] = {}
        for dimension in shape.dimensions:
            unit = UNITS["°"] if dimension.kind == "angle" else None
            field = QuantityField(session, dimension.label, _kind(dimension), unit)
            form.add(f"{dimension.label} {dimension.symbol}".rstrip(), field)
            self.bind(field, dimension.label, f"dimension.{dimension.name}", _resized(dimension.name))
            self._fields[dimension.name] = field

    def show(self, node: Node) -> None:
        """Show the dimensions."""
        values = _shape(node).values()
        for name, field in self._fields.items():
            field.set_value(values[name], typed_for(node, f"dimension.{name}"))

    def first_field(self) -> QuantityField:
        """Return the field in which a new shape is made to measure first."""
        return next(iter(self._fields.values()))


def _shape(node: Node) -> Shape:
    if isinstance(node, Part) and isinstance(node.body, ShapeBody):
        return node.body.shape
    raise EditRefused("this line is no shape", where=node.name)


def _kind(dimension: Dimension) -> Kind:
    return {"length": Kind.LENGTH, "angle": Kind.ANGLE, "count": Kind.NUMBER}[dimension.kind]


def _resized(name: str) -> NumberChange:
    def change(node: Node, value: float) -> Node:
        shape = _shape(node)
        resized = ShapeBody(shape.resized({name: value}))
        return replace(node, body=resized) if isinstance(node, Part) else node

    return change


class KnownSection(Section):
    """The values of a data sheet, and where they come from."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Data sheet")
        self._mass = QuantityField(session, "mass", Kind.MASS)
        form.add("mass m", self._mass)
        self.bind(self._mass, "Mass", "known.mass", lambda node, value: _known(node, mass=value))
        self._centre = TripleField(session, "centre of mass", Kind.LENGTH)
        form.add("centre of mass", self._centre, "From the part's own origin.")
        for at, field in enumerate(self._centre.fields):
            self.bind(field, "Centre", f"known.centre.{at}", _known_centre(at))
        self._inertia = self._inertia_fields(part)
        self._source = TextField("source", "document, page, date")
        form.add("source", self._source)
        self._source.entered.connect(
            lambda text: self.edit("Source of a data sheet's values", lambda node: _known(node, source=text))
        )

    def _inertia_fields(self, part: Part) -> list[QuantityField]:
        fields = []
        if isinstance(part.body, KnownTensor):
            about = "centre of mass" if part.body.about == "centre" else "part's origin"
            self.form.say(f"Tensor about the {about}, along the part's axes. {TENSOR_TIP}")
            for at, label in enumerate(TENSOR_LABELS):
                field = QuantityField(self.session, label, Kind.INERTIA)
                self.form.add(label, field, TENSOR_TIP)
                self.bind(field, label, f"known.tensor.{at}", _known_tensor(at))
                fields.append(field)
            return fields
        self.form.say("Inertia about the part's own z axis, through its origin.")
        inertia = QuantityField(self.session, "J about the part's axis", Kind.INERTIA)
        self.form.add("J about its axis", inertia)
        self.bind(inertia, "J", "known.axial", lambda node, value: _known(node, inertia_about_axis=value))
        length = QuantityField(self.session, "length", Kind.LENGTH)
        self.form.add("length L", length, "Stands in for the inertia across the axis: ½ J + m·L²/12.")
        self.bind(length, "Length", "known.length", lambda node, value: _known(node, length=value))
        return [inertia, length]

    def show(self, node: Node) -> None:
        """Show the data sheet's values."""
        if not (isinstance(node, Part) and isinstance(node.body, KnownTensor | KnownAxial)):
            return
        body = node.body
        self._mass.set_value(body.mass, typed_for(node, "known.mass"))
        self._centre.set_values(body.centre, lambda at: typed_for(node, f"known.centre.{at}"))
        self._source.set_value(body.source)
        if isinstance(body, KnownTensor):
            for at, field in enumerate(self._inertia):
                field.set_value(body.tensor[at], typed_for(node, f"known.tensor.{at}"))
        else:
            self._inertia[0].set_value(body.inertia_about_axis, typed_for(node, "known.axial"))
            self._inertia[1].set_value(body.length, typed_for(node, "known.length"))


def _known(node: Node, **values: object) -> Node:
    if isinstance(node, Part) and isinstance(node.body, KnownTensor | KnownAxial):
        return replace(node, body=replace(node.body, **values))  # type: ignore[arg-type]  # fields of either class
    raise EditRefused("this line has no data sheet", where=node.name)


def _known_centre(at: int) -> NumberChange:
    def change(node: Node, value: float) -> Node:
        if isinstance(node, Part) and isinstance(node.body, KnownTensor | KnownAxial):
            return _known(node, centre=with_component(node.body.centre, at, value))
        return node

    return change


def _known_tensor(at: int) -> NumberChange:
    def change(node: Node, value: float) -> Node:
        if isinstance(node, Part) and isinstance(node.body, KnownTensor):
            six = [*node.body.tensor]
            six[at] = value
            return _known(node, tensor=tuple(six))
        return node

    return change
