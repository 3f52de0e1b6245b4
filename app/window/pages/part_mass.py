"""The fields for what says a part's mass, and what follows from it."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QCompleter

from app.window.fields import ChoiceField, Form, QuantityField
from app.window.numbers import shown
from app.window.pages.section import Section, typed_for
from core.assembly import Driver, Node, Part
from core.errors import EditRefused
from core.material import MATERIALS, ByDensity, ByMaterial, NotSet, Weighed, material
from core.quantity import Kind

if TYPE_CHECKING:
    from app.window.session import Session
    from core.moments import Moments

DRIVERS: list[tuple[str, object]] = [
    ("not set yet", NotSet),
    ("a material", ByMaterial),
    ("a density", ByDensity),
    ("a weighed mass", Weighed),
]
STEEL_LIKE = 7850.0


class MassSection(Section):
    """Exactly one thing says what the part weighs."""

    def __init__(self, session: Session, form: Form, part: Part) -> None:
        super().__init__(session, form, part.key)
        form.heading("Mass")
        self._by = ChoiceField("What says the mass", DRIVERS)
        form.add("comes from", self._by)
        self._by.chosen.connect(self._choose)
        self._material: ChoiceField | None = None
        self._number: QuantityField | None = None
        if isinstance(part.driver, ByMaterial):
            self._material = _material_field()
            form.add("material", self._material)
            self._material.chosen.connect(self._choose_material)
        elif isinstance(part.driver, ByDensity):
            self._number = QuantityField(session, "density", Kind.DENSITY)
            form.add("density ρ", self._number)
            self.bind(self._number, "Density", "density", lambda node, value: _driven(node, ByDensity(value)))
        elif isinstance(part.driver, Weighed):
            self._number = QuantityField(session, "weighed mass of one", Kind.MASS)
            form.add("weighed, one piece", self._number)
            self.bind(self._number, "Weighed mass", "weighed", lambda node, value: _driven(node, Weighed(value)))
        self._follows = form.say("")

    def show(self, node: Node) -> None:
        """Show what says the mass, and what follows from it."""
        if not isinstance(node, Part):
            return
        driver = node.driver
        self._by.set_value(type(driver))
        if self._material is not None and isinstance(driver, ByMaterial):
            self._material.set_value(driver.name)
        if self._number is not None and isinstance(driver, ByDensity):
            self._number.set_value(driver.density, typed_for(node, "density"))
        if self._number is not None and isinstance(driver, Weighed):
            self._number.set_value(driver.mass, typed_for(node, "weighed"))
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
        def change(node: Node) -> Node:
            if not isinstance(node, Part) or isinstance(node.driver, _type_of(kind)):
                return node
            return _driven(node, _first_guess(kind, node.single, node.volume))

        self.edit(f"Mass of {self.session.assembly.node(self.key).name}: {self._by.currentText()}", change)

    def _choose_material(self, name: object) -> None:
        found = material(str(name))
        self.edit(
            f"Material of {self.session.assembly.node(self.key).name}: {found.name}",
            lambda node: _driven(node, ByMaterial(found.name, found.density)),
        )


def _type_of(kind: object) -> type:
    return kind if isinstance(kind, type) else NotSet


def _first_guess(kind: object, single: Moments | None, volume: float | None) -> Driver:
    """Return a driver of the kind asked for that keeps the mass the part has, where it has one."""
    mass = None if single is None else float(single.mass)
    density = STEEL_LIKE if mass is None or not volume else mass / volume
    if kind is ByMaterial:
        return ByMaterial(MATERIALS[0].name, MATERIALS[0].density)
    if kind is ByDensity:
        return ByDensity(density)
    if kind is Weighed:
        return Weighed(mass if mass is not None else density * (volume or 1e-3))
    return NotSet()


def _driven(node: Node, driver: Driver) -> Node:
    if not isinstance(node, Part):
        raise EditRefused("a group has no material of its own", where=node.name)
    return replace(node, driver=driver)


def _material_field() -> ChoiceField:
    field = ChoiceField("Material", [(each.name, each.name) for each in MATERIALS])
    for at, each in enumerate(MATERIALS):
        tip = f"{each.density:.0f} kg/m³ ({each.low:.0f} to {each.high:.0f}); {each.source}"
        field.setItemData(at, tip, Qt.ItemDataRole.ToolTipRole)
    field.setEditable(True)
    field.setInsertPolicy(ChoiceField.InsertPolicy.NoInsert)
    completer = QCompleter(field.model(), field)
    completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
    completer.setFilterMode(Qt.MatchFlag.MatchContains)
    field.setCompleter(completer)
    completer.activated.connect(field.chosen.emit)
    return field
