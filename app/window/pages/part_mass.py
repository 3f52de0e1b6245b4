"""The fields for what says a part's mass, and what follows from it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt

from app.window.fields import ChoiceField, Form, QuantityField
from app.window.materials import MaterialsModel
from app.window.numbers import shown
from app.window.pages.section import Section
from core.assembly import Driver, Part
from core.assembly.fields import AnyLine, Numbered, typed_for, value_of
from core.errors import EditRefused
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed, material
from core.quantity import Kind

if TYPE_CHECKING:
    from collections.abc import Sequence

    from PySide6.QtWidgets import QWidget

    from app.window.session import Session
    from core.material import Material
    from core.measure import Measure

# What can say the mass of a body, by what the body has; a point mass has nothing to multiply.
DRIVERS: dict[Measure, list[tuple[str, object]]] = {
    "volume": [
        ("not set yet", NotSet), ("a material", ByMaterial), ("a density", ByDensity), ("a weighed mass", Weighed),
    ],
    "area": [("not set yet", NotSet), ("a mass per area", PerArea), ("a weighed mass", Weighed)],
    "length": [("not set yet", NotSet), ("a mass per length", PerLength), ("a weighed mass", Weighed)],
    "pieces": [("not set yet", NotSet), ("a weighed mass", Weighed)],
}


@dataclass(frozen=True)
class Entry:
    """A number that says the mass.

    Attributes:
        kind: what it measures.
        label, spoken, words: before its field, as a screen reader says it, and in the name of an edit.
        path: under which the text as typed is kept.

    """

    kind: Kind
    label: str
    spoken: str
    words: str
    path: str


ENTRIES: dict[type[Numbered], Entry] = {
    ByDensity: Entry(Kind.DENSITY, "density ρ", "density", "Density", "density"),
    PerArea: Entry(Kind.AREA_DENSITY, "mass per area", "mass per area", "Mass per area", "per area"),
    PerLength: Entry(Kind.LINEAR_DENSITY, "mass per length", "mass per length", "Mass per length", "per length"),
    Weighed: Entry(Kind.MASS, "weighed, one piece", "weighed mass of one", "Weighed mass", "weighed"),
}
# How much of what a body has: its name, its kind, and the driver that goes with it.
EXTENTS: dict[Measure, tuple[str, Kind, type[ByDensity | PerArea | PerLength]]] = {
    "volume": ("volume", Kind.VOLUME, ByDensity),
    "area": ("area", Kind.AREA, PerArea),
    "length": ("length", Kind.LENGTH, PerLength),
}


class MassSection(Section):
    """Exactly one thing says what the part weighs."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Mass")
        # What was chosen to say the mass, until its value is typed: nothing is made up for it.
        self._awaited: type | None = None
        measure = part.measure or "volume"
        choices = DRIVERS[measure]
        self._by = ChoiceField("What says the mass", choices)
        form.add("comes from", self._by)
        self._material = _material_field(session.own.materials)
        form.add("material", self._material)
        self._numbers = {driver: self._number(driver) for _, driver in choices if driver in ENTRIES}
        self._wrong = form.say("", "failed")
        self._follows = form.say("")
        self._by.chosen.connect(self._choose)
        self._material.chosen.connect(self._choose_material)
        self._material.typed.connect(self._choose_material)

    def _number(self, kind: type[Numbered]) -> QuantityField:
        entry = ENTRIES[kind]
        field = QuantityField(self.session, entry.spoken, entry.kind)
        self.form.add(entry.label, field)
        self.bind(field, entry.words, entry.path)
        return field

    def show(self, node: AnyLine) -> None:
        """Show what says the mass, and what follows from it."""
        if not isinstance(node, Part):
            return
        driver = node.driver
        if isinstance(driver, self._awaited or NotSet):
            self._awaited = None
        wanted = self._awaited or type(driver)
        self._by.set_value(wanted)
        self.form.show_row(self._material, wanted=wanted is ByMaterial)
        for kind, field in self._numbers.items():
            self.form.show_row(field, wanted=wanted is kind)
            field.set_value(*_entered(node, kind))
        self._refuse("")
        if isinstance(driver, ByMaterial):
            self._material.setCurrentIndex(self._material.findData(driver.name))
            self._material.setEditText(driver.name)
        else:
            self._material.setCurrentIndex(-1)
        self._follows.setText(self._consequence(node))
        self._follows.set_role("estimate" if node.single is None else "quiet")

    def _consequence(self, part: Part) -> str:
        measure, extent = part.measure, part.extent
        if measure is None or extent is None:
            return "The mesh bounds no volume, so nothing follows from a density; see Checks."
        if measure == "pieces":
            return "It has no size, so nothing but its mass counts."
        name, kind, driver = EXTENTS[measure]
        words = f"One piece: {name} {self._said(extent, kind)}"
        if part.single is None:
            return f"{words}; its mass is not known yet, so the totals leave it out."
        mass, entry = float(part.single.mass), ENTRIES[driver]
        return (
            f"{words}, mass {self._said(mass, Kind.MASS)}, "
            f"{entry.spoken} {self._said(mass / extent, entry.kind)}"
        )

    def _said(self, value: float, kind: Kind) -> str:
        unit = self.session.units[kind]
        return f"{shown(self.session, value, unit)} {unit.symbol}"

    def _choose(self, kind: object) -> None:
        node = self.session.assembly.node(self.key)
        if not isinstance(node, Part) or not isinstance(kind, type):
            return
        driver = _same_mass(kind, node)
        self._awaited = kind if driver is None and not isinstance(node.driver, kind) else None
        if driver is None or isinstance(node.driver, kind):
            self.show(node)
            self._wait_for_value()
        else:
            self.edit(f"Mass of {node.name}: {self._by.currentText()}", lambda line: _driven(line, driver))

    def _wait_for_value(self) -> None:
        """Put the keyboard into the field whose value is still missing."""
        lines: dict[type, QWidget] = {kind: field.line for kind, field in self._numbers.items()}
        if self._awaited is not None:
            lines.get(self._awaited, self._material).setFocus(Qt.FocusReason.OtherFocusReason)

    def _choose_material(self, name: object) -> None:
        node = self.session.assembly.node(self.key)
        text = str(name).strip()
        if not isinstance(node, Part) or text == getattr(node.driver, "name", ""):
            self._refuse("")
            return

        def change(line: AnyLine) -> AnyLine:
            found = material(text, self.session.own.materials)
            return _driven(line, ByMaterial(found.name, found.density))

        self._refuse(self.attempt(f"Material of {node.name}: {text}", change))

    def _refuse(self, sentence: str) -> None:
        self._wrong.setText(sentence)
        self.form.show_row(self._wrong, wanted=bool(sentence))


def _entered(part: Part, kind: type[Numbered]) -> tuple[float | None, str]:
    """Return the number that counts, with its text as typed; None where another thing counts."""
    path = ENTRIES[kind].path
    value = value_of(part, path)
    return (None, "") if value is None else (value, typed_for(part, path))


def _same_mass(kind: type, part: Part) -> Driver | None:
    """Return a driver of a kind that keeps the mass the part has; None where only the user can say it."""
    if kind is NotSet:
        return NotSet()
    if part.single is None or not part.extent or part.measure is None:
        return None
    mass = float(part.single.mass)
    if kind is Weighed:
        return Weighed(mass)
    fitting = EXTENTS.get(part.measure)
    return fitting[2](mass / part.extent) if fitting is not None and kind is fitting[2] else None


def _driven(node: AnyLine, driver: Driver) -> AnyLine:
    if not isinstance(node, Part):
        raise EditRefused("a group has no material of its own", where=node.name)
    return replace(node, driver=driver)


def _material_field(own: Sequence[Material]) -> ChoiceField:
    field = ChoiceField("Material", [])
    field.setModel(MaterialsModel(own, field))
    field.take_typing("choose or type one")
    return field
