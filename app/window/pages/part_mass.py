"""The fields for what says a part's mass, and what follows from it."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt

from app.window.fields import ChoiceField, Form, QuantityField
from app.window.numbers import shown
from app.window.pages.section import Section, typed_for
from core.assembly import Driver, Node, Part
from core.errors import EditRefused
from core.material import MATERIALS, ByDensity, ByMaterial, NotSet, Weighed, material
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session

DRIVERS: list[tuple[str, object]] = [
    ("not set yet", NotSet),
    ("a material", ByMaterial),
    ("a density", ByDensity),
    ("a weighed mass", Weighed),
]


class MassSection(Section):
    """Exactly one thing says what the part weighs."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Mass")
        # What was chosen to say the mass, until its value is typed: nothing is made up for it.
        self._awaited: type | None = None
        self._by = ChoiceField("What says the mass", DRIVERS)
        form.add("comes from", self._by)
        self._material = _material_field()
        form.add("material", self._material)
        self._density = QuantityField(session, "density", Kind.DENSITY)
        form.add("density ρ", self._density)
        self._weighed = QuantityField(session, "weighed mass of one", Kind.MASS)
        form.add("weighed, one piece", self._weighed)
        self._wrong = form.say("", "failed")
        self._follows = form.say("")
        self.bind(self._density, "Density", "density", lambda node, value: _driven(node, ByDensity(value)))
        self.bind(self._weighed, "Weighed mass", "weighed", lambda node, value: _driven(node, Weighed(value)))
        self._by.chosen.connect(self._choose)
        self._material.chosen.connect(self._choose_material)
        self._material.typed.connect(self._choose_material)

    def show(self, node: Node) -> None:
        """Show what says the mass, and what follows from it."""
        if not isinstance(node, Part):
            return
        driver = node.driver
        if isinstance(driver, self._awaited or NotSet):
            self._awaited = None
        wanted = self._awaited or type(driver)
        self._by.set_value(wanted)
        for field, kind in ((self._material, ByMaterial), (self._density, ByDensity), (self._weighed, Weighed)):
            self.form.show_row(field, wanted=wanted is kind)
        self._refuse("")
        if isinstance(driver, ByMaterial):
            self._material.setCurrentIndex(self._material.findData(driver.name))
            self._material.setEditText(driver.name)
        else:
            self._material.setCurrentIndex(-1)
        self._density.set_value(*_entered(node, ByDensity, "density"))
        self._weighed.set_value(*_entered(node, Weighed, "weighed"))
        self._follows.setText(self._consequence(node))
        self._follows.set_role("estimate" if node.single is None else "quiet")

    def _consequence(self, part: Part) -> str:
        volume = part.volume
        if volume is None:
            return "The mesh bounds no volume, so nothing follows from a density; see Checks."
        space = self.session.units[Kind.VOLUME]
        words = f"One piece: volume {shown(self.session, volume, space)} {space.symbol}"
        if part.single is None:
            return f"{words}; its mass is not known yet, so the totals leave it out."
        weight, dense = self.session.units[Kind.MASS], self.session.units[Kind.DENSITY]
        density = float(part.single.mass) / volume
        return (
            f"{words}, mass {shown(self.session, float(part.single.mass), weight)} {weight.symbol}, "
            f"density {shown(self.session, density, dense)} {dense.symbol}"
        )

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
        fields = {ByMaterial: self._material, ByDensity: self._density.line, Weighed: self._weighed.line}
        if self._awaited is not None:
            fields[self._awaited].setFocus(Qt.FocusReason.OtherFocusReason)

    def _choose_material(self, name: object) -> None:
        node = self.session.assembly.node(self.key)
        text = str(name).strip()
        if not isinstance(node, Part) or text == getattr(node.driver, "name", ""):
            self._refuse("")
            return

        def change(line: Node) -> Node:
            found = material(text)
            return _driven(line, ByMaterial(found.name, found.density))

        self._refuse(self.attempt(f"Material of {node.name}: {text}", change))

    def _refuse(self, sentence: str) -> None:
        self._wrong.setText(sentence)
        self.form.show_row(self._wrong, wanted=bool(sentence))


def _entered(part: Part, kind: type, path: str) -> tuple[float | None, str]:
    """Return the density or the weighed mass that counts, with its text as typed; None where another thing counts."""
    driver = part.driver
    if not isinstance(driver, kind):
        return None, ""
    return getattr(driver, "density" if kind is ByDensity else "mass"), typed_for(part, path)


def _same_mass(kind: type, part: Part) -> Driver | None:
    """Return a driver of a kind that keeps the mass the part has; None where only the user can say it."""
    if kind is NotSet:
        return NotSet()
    if part.single is None or not part.volume:
        return None
    mass = float(part.single.mass)
    if kind is ByDensity:
        return ByDensity(mass / part.volume)
    return Weighed(mass) if kind is Weighed else None


def _driven(node: Node, driver: Driver) -> Node:
    if not isinstance(node, Part):
        raise EditRefused("a group has no material of its own", where=node.name)
    return replace(node, driver=driver)


def _material_field() -> ChoiceField:
    field = ChoiceField("Material", [(each.name, each.name) for each in MATERIALS])
    for at, each in enumerate(MATERIALS):
        tip = f"{each.density:.0f} kg/m³ ({each.low:.0f} to {each.high:.0f}); {each.source}"
        field.setItemData(at, tip, Qt.ItemDataRole.ToolTipRole)
    field.take_typing("choose or type one")
    return field
