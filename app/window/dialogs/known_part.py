"""Adding a known part: what a data sheet says, with the point its inertia is quoted about chosen by hand."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtWidgets import QCheckBox, QStackedWidget, QWidget

from app.window.dialogs.form import FormDialog
from app.window.fields import ChoiceField, Form, QuantityField, TextField, TripleField, kept_text
from app.window.pages.part_body import TENSOR_LABELS, TENSOR_TIP
from core.assembly import DataSheet, KnownAxial, KnownTensor, Part
from core.document.own_list import KNOWN_PARTS, OwnPart
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session

ABOUT: list[tuple[str, object]] = [
    ("choose what the data sheet says…", ""),
    ("one inertia, about the part's own axis", "axis"),
    ("a tensor about the centre of mass", "centre"),
    ("a tensor about the part's origin", "origin"),
]


class KnownPartDialog(FormDialog):
    """A form that adds one part to the ledger when it is complete."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__("Add known part", "Add part", 560, parent)
        self._session = session
        self.name = TextField("Name", "motor rotor, bearing, brake disc …")
        self.source = TextField("Source", "document, page, date")
        self.mass = QuantityField(session, "mass", Kind.MASS)
        self.centre = TripleField(session, "centre of mass", Kind.LENGTH)
        self.centre.set_values((0.0, 0.0, 0.0))
        self.about = ChoiceField("What the inertia is about", ABOUT)
        self.axial = QuantityField(session, "J about the part's axis", Kind.INERTIA)
        self.length = QuantityField(session, "length", Kind.LENGTH)
        self.length.set_value(0.0)
        self.tensor = [QuantityField(session, label, Kind.INERTIA) for label in TENSOR_LABELS]
        for field in self.tensor[3:]:
            field.set_value(0.0)
        self._kinds = QStackedWidget()
        parts = session.own.known_parts
        self.own = ChoiceField("From your own list", [("type one below", None), *((one.name, one) for one in parts)])
        self.keep = QCheckBox("Keep it in my own list, too")
        self._lay_out()
        self.about.chosen.connect(self._choose)
        self.own.chosen.connect(self._fill)

    def _lay_out(self) -> None:
        form = Form()
        form.add("own list", self.own, "Known parts that you have kept. Part menu, Own list…, holds all of them.")
        form.show_row(self.own, wanted=bool(self._session.own.known_parts))
        form.add("name", self.name)
        form.add("source", self.source, "Where the values come from; printed with the result.")
        form.add("mass m", self.mass)
        form.add("centre of mass", self.centre, "From the part's own origin; its axis is z.")
        form.add("inertia given as", self.about)
        axial = Form()
        axial.add("J about its axis", self.axial, 'Also as a flywheel effect: "1.8 kgf·m² GD2" is taken as J = GD²/4.')
        axial.add("length L", self.length, "Stands in for the inertia across the axis: ½ J + m·L²/12. 0: a thin disc.")
        tensor = Form()
        tensor.say(TENSOR_TIP)
        for label, field in zip(TENSOR_LABELS, self.tensor, strict=True):
            tensor.add(label, field, TENSOR_TIP)
        for page in (QWidget(), axial, tensor):
            self._kinds.addWidget(page)
        self.stack(form, self._kinds, self.keep)

    def _fill(self, one: object) -> None:
        """Show the values of a part of the own list."""
        if not isinstance(one, OwnPart):
            return
        body = one.body
        self.name.set_value(one.name)
        self.source.set_value(body.source)
        self.mass.set_value(body.mass)
        self.centre.set_values(body.centre)
        about = body.about if isinstance(body, KnownTensor) else "axis"
        self.about.set_value(about)
        self._choose(about)
        if isinstance(body, KnownTensor):
            for field, value in zip(self.tensor, body.tensor, strict=True):
                field.set_value(value)
        else:
            self.axial.set_value(body.inertia_about_axis)
            self.length.set_value(body.length)

    def _choose(self, about: object) -> None:
        self._kinds.setCurrentIndex({"": 0, "axis": 1}.get(str(about), 2))

    def take(self) -> None:
        """Add the part, or say in place what is missing."""
        self.refuse("")
        body = self._body()
        if body is None:
            return
        name = self.name.text().strip() or "known part"
        kept = OwnPart(name, body)
        if self.keep.isChecked() and kept not in self._session.own.known_parts:
            refusal = self._session.own.keep(KNOWN_PARTS, kept)
            if refusal:
                self.refuse(f"Nothing was added: {refusal}")
                return
        assembly = self._session.assembly
        key = assembly.fresh_key()
        part = Part(key, assembly.fresh_name(name), body, DataSheet(), typed=self._typed(body))
        refusal = self._session.attempt(f"Add {part.name}", lambda before: before.inserted(part), select=key)
        self.refuse(refusal)
        if not refusal:
            self.accept()

    def _typed(self, body: KnownAxial | KnownTensor) -> tuple[tuple[str, str], ...]:
        """Return the texts that say more than their numbers, under the paths that the Part page knows them by."""
        fields = {"known.mass": self.mass}
        fields |= {f"known.centre.{at}": field for at, field in enumerate(self.centre.fields)}
        if isinstance(body, KnownAxial):
            fields |= {"known.axial": self.axial, "known.length": self.length}
        else:
            fields |= {f"known.tensor.{at}": field for at, field in enumerate(self.tensor)}
        kept = ((path, kept_text(field.line.text())) for path, field in fields.items())
        return tuple(sorted((path, text) for path, text in kept if text))

    def _body(self) -> KnownAxial | KnownTensor | None:
        mass, centre, about = self.mass.read(), self.centre.read(), self.about.currentData()
        if not about:
            self.refuse(
                "Choose what the data sheet's inertia is about: about another point, the same number is another body."
            )
        if mass is None or centre is None or not about:
            return None
        source = self.source.text().strip()
        if about == "axis":
            axial, length = self.axial.read(), self.length.read()
            if axial is None or length is None:
                return None
            return KnownAxial(mass.value, centre, axial.value, length.value, source)
        values = [understood.value for understood in (field.read() for field in self.tensor) if understood is not None]
        if len(values) != len(TENSOR_LABELS):
            return None
        xx, yy, zz, xy, xz, yz = values
        return KnownTensor(mass.value, centre, (xx, yy, zz, xy, xz, yz), about, source)
