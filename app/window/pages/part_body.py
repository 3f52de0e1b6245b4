"""The fields for what a part is made of: the dimensions of a shape, or a data sheet's values."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QWidget

from app.window.fields import LABEL_WIDTH, ChoiceField, Form, QuantityField, TextField, TripleField
from app.window.gallery.drawing import can_be_drawn
from app.window.gallery.families import size_named_for
from app.window.gallery.picture import SIDE_PX, ShapePicture
from app.window.pages.section import Section
from app.window.style import GRID
from core.assembly import Cut, KnownAxial, KnownTensor, Part, ShapeBody
from core.assembly.fields import AnyLine, kind_of, typed_for
from core.errors import EditRefused, MasswrightError
from core.quantity import UNITS, Kind
from core.shapes import OutlinedShape
from core.shapes.sections import section_sizes

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.session import Session
    from core.shapes import Dimension, Shape

OWN_SIZE = "own dimensions"
# Height of the picture, px, where a canvas stands below it.
BESIDE_AN_OUTLINE = 112
# A field with its gap, and the highest picture, px.
FIELD_HEIGHT, LARGEST_PX = 32, 272
TENSOR_LABELS = ("Ixx", "Iyy", "Izz", "Ixy", "Ixz", "Iyz")
TENSOR_TIP = "Tensor elements: Ixy = −∫xy dm. Where the data sheet prints +∫xy dm, change the sign of the products."


class ShapeSection(Section):
    """The dimensions of a shape, beside a picture that shows where each is measured.

    Attributes:
        tried: told of the shape that a text being typed would make, or of None and the sentence that refuses it.
    """

    def __init__(self, session: Session, form: Form, part: Part | Cut) -> None:
        super().__init__(session, form, part.key)
        shape = _shape(part)
        form.heading(f"Dimensions of the {shape.title}")
        self.tried: Callable[[Shape | None, str], None] = lambda _shape, _refusal: None
        self._shown = shape
        self._fields: dict[str, QuantityField] = {}
        self._picture = ShapePicture(_picture_height(shape))
        labels = [_label(dimension) for dimension in shape.dimensions]
        metrics = form.fontMetrics()
        rows = Form(max(LABEL_WIDTH, *(metrics.horizontalAdvance(label) + GRID for label in labels)))
        self._size = self._size_field(rows, shape)
        for dimension in shape.dimensions:
            self._add(rows, part, dimension)
        beside = QWidget()
        layout = QHBoxLayout(beside)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(rows, 3, Qt.AlignmentFlag.AlignTop)
        layout.addWidget(self._picture, 2, Qt.AlignmentFlag.AlignTop)
        form.add_row(beside)
        if shape.note:
            form.say(shape.note)

    def _add(self, rows: Form, part: Part | Cut, dimension: Dimension) -> None:
        unit = UNITS["°"] if dimension.kind == "angle" else None
        kind = kind_of(part, f"dimension.{dimension.name}")
        field = QuantityField(self.session, dimension.label, kind, unit)
        rows.add(_label(dimension), field)
        self.bind(field, dimension.label, f"dimension.{dimension.name}")
        field.typing.connect(lambda value: self._try(dimension.name, value))
        self._picture.watch(field.line, dimension.name)
        self._fields[dimension.name] = field

    def _size_field(self, rows: Form, shape: Shape) -> ChoiceField | None:
        sizes = [size for size in section_sizes().values() if size.shape == shape.key]
        if not sizes:
            return None
        field = ChoiceField("Standard size", [(OWN_SIZE, ""), *((size.name, size.name) for size in sizes)])
        for at, size in enumerate(sizes, start=1):
            field.setItemData(at, size.source, Qt.ItemDataRole.ToolTipRole)
        field.setSizeAdjustPolicy(ChoiceField.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        field.setMinimumContentsLength(14)
        field.chosen.connect(self._choose_size)
        rows.add("standard size", field)
        return field

    def show(self, node: AnyLine) -> None:
        """Show the dimensions."""
        self._shown = _shape(node)
        values = self._shown.values()
        for name, field in self._fields.items():
            field.set_value(values[name], typed_for(node, f"dimension.{name}"))
        if self._size is not None:
            self._size.set_value(size_named_for(self._shown))
        self._picture.show_shape(self._shown)

    def first_field(self) -> QuantityField:
        """Return the field in which a new shape is made to measure first: of a standard size its length."""
        fields = list(self._fields.values())
        return fields[-1] if self._size is not None and size_named_for(self._shown) else fields[0]

    def _try(self, name: str, value: float | None) -> None:
        if value is None:
            return
        try:
            shape = self._shown.resized({name: value})
        except MasswrightError as error:
            self.tried(None, str(error))
            return
        if can_be_drawn(shape):
            self._picture.show_shape(shape)
            self.tried(shape, "")

    def _choose_size(self, name: object) -> None:
        size = section_sizes().get(str(name))
        if size is None:
            return

        def change(node: AnyLine) -> AnyLine:
            return _with_shape(node, _shape(node).resized(size.dimensions))

        self.edit(f"Size of {self.session.assembly.line(self.key).name}: {size.name}", change)


def _picture_height(shape: Shape) -> int:
    """Return how high (px) the picture is: about as high as the fields; a profile has its outline below."""
    if isinstance(shape, OutlinedShape):
        return BESIDE_AN_OUTLINE
    return min(max(SIDE_PX, FIELD_HEIGHT * len(shape.dimensions)), LARGEST_PX)


def _label(dimension: Dimension) -> str:
    return f"{dimension.label} {dimension.symbol}".rstrip()


def _with_shape(line: AnyLine, shape: Shape) -> AnyLine:
    if isinstance(line, Cut):
        return replace(line, shape=shape)
    return replace(line, body=ShapeBody(shape)) if isinstance(line, Part) else line


def _shape(node: AnyLine) -> Shape:
    if isinstance(node, Cut):
        return node.shape
    if isinstance(node, Part) and isinstance(node.body, ShapeBody):
        return node.body.shape
    raise EditRefused("this line is no shape", where=node.name)


class KnownSection(Section):
    """The values of a data sheet, and where they come from."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Data sheet")
        self._mass = QuantityField(session, "mass", Kind.MASS)
        form.add("mass m", self._mass)
        self.bind(self._mass, "Mass", "known.mass")
        self._centre = TripleField(session, "centre of mass", Kind.LENGTH)
        form.add("centre of mass", self._centre, "From the part's own origin.")
        for at, field in enumerate(self._centre.fields):
            self.bind(field, "Centre", f"known.centre.{at}")
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
                self.bind(field, label, f"known.tensor.{at}")
                fields.append(field)
            return fields
        self.form.say("Inertia about the part's own z axis, through its origin.")
        inertia = QuantityField(self.session, "J about the part's axis", Kind.INERTIA)
        self.form.add("J about its axis", inertia)
        self.bind(inertia, "J", "known.axial")
        length = QuantityField(self.session, "length", Kind.LENGTH)
        self.form.add("length L", length, "Stands in for the inertia across the axis: ½ J + m·L²/12.")
        self.bind(length, "Length", "known.length")
        return [inertia, length]

    def show(self, node: AnyLine) -> None:
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


def _known(node: AnyLine, **values: object) -> AnyLine:
    if isinstance(node, Part) and isinstance(node.body, KnownTensor | KnownAxial):
        return replace(node, body=replace(node.body, **values))  # type: ignore[arg-type]  # fields of either class
    raise EditRefused("this line has no data sheet", where=node.name)
