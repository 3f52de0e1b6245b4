"""What typing into a cell of the ledger means: text in, an edit with a name out."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import replace
from typing import TYPE_CHECKING

from app.window.fields import kept_text
from core.assembly import Assembly, Cut, DataSheet, Driver, Group, Part
from core.assembly.fields import DRIVER_PATHS, with_typed, with_value
from core.assembly.names import values_of
from core.errors import EditRefused, QuantityError
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed, material
from core.placement import Mirrored
from core.quantity import UNITS, Kind, UnitSet, names_in, parse

if TYPE_CHECKING:
    from collections.abc import Callable, Sequence

    from core.material import Material
    from core.quantity import Names


def renamed(key: str, text: str) -> Callable[[Assembly], Assembly]:
    """Return the edit that gives a line another name."""
    name = text.strip()

    def change(assembly: Assembly) -> Assembly:
        if not name:
            raise EditRefused("a line needs a name", where=assembly.name_of_line(key))
        if assembly.is_cut(key):
            return assembly.replaced_cut(replace(assembly.cut(key), name=name))
        return assembly.replaced(replace(assembly.node(key), name=name))

    return change


def counted(key: str, text: str) -> Callable[[Assembly], Assembly]:
    """Return the edit that changes how many equal copies a line stands for, the pattern staying what it is."""

    def change(assembly: Assembly) -> Assembly:
        line = assembly.cut(key) if assembly.is_cut(key) else assembly.node(key)
        count = _count(assembly, text, line.name)
        if isinstance(line.copies, Mirrored):
            raise EditRefused(
                "a mirrored line is there twice", where=line.name, remedy="Change how it repeats on the Part page"
            )
        changed = with_typed(with_value(line, "copies.count", count), "copies.count", kept_text(text))
        return assembly.replaced_cut(changed) if isinstance(changed, Cut) else assembly.replaced(changed)

    return change


def _count(assembly: Assembly, text: str, where: str) -> float:
    """Return how many are meant: a whole number as it is, or one that follows from named dimensions."""
    names = values_of(assembly.names)
    if names_in(text, names):
        return parse(text, Kind.NUMBER, where=where, names=names).value
    if not text.strip().isascii() or not text.strip().isdigit():
        raise QuantityError(
            "a quantity is a whole number", where=where, read=f'"{text}"', remedy="Type how many there are"
        )
    return float(text)


def made_of(
    key: str, text: str, units: UnitSet, own: Sequence[Material] = ()
) -> Callable[[Assembly], Assembly]:
    """Return the edit that sets what says a part's mass: a material, a density, a mass per area or length, a mass."""

    def change(assembly: Assembly) -> Assembly:
        part = _part(assembly, key)
        if isinstance(part.driver, DataSheet):
            raise EditRefused(
                "a known part takes its mass from its data sheet", where=part.name, remedy="Edit it on the Part page"
            )
        driver = driver_of(text, units, part.name, values_of(assembly.names), own)
        path = next((path for path, kind in DRIVER_PATHS.items() if isinstance(driver, kind)), "")
        made = replace(part, driver=driver)
        return assembly.replaced(with_typed(made, path, kept_text(text)) if path else made)

    return change


def weighing(key: str, text: str, units: UnitSet) -> Callable[[Assembly], Assembly]:
    """Return the edit that gives a part the mass one copy was weighed at."""

    def change(assembly: Assembly) -> Assembly:
        part = _part(assembly, key)
        if isinstance(part.driver, DataSheet):
            raise EditRefused(
                "a known part takes its mass from its data sheet", where=part.name, remedy="Edit it on the Part page"
            )
        mass = parse(text, Kind.MASS, units[Kind.MASS], names=values_of(assembly.names)).value
        return assembly.replaced(with_typed(with_value(part, "weighed", mass), "weighed", kept_text(text)))

    return change


def driver_of(
    text: str, units: UnitSet, where: str, names: Names | None = None, own: Sequence[Material] = ()
) -> Driver:
    """Return what says a mass: of text that starts with a number its unit tells which, other text is a material.

    A bare number is a weighed mass. A text with one of the names counts as a number. A material is one of the user's
    own or of the table.

    Raises:
        MaterialError, QuantityError: neither.

    """
    words = text.strip()
    if not words:
        return NotSet()
    if not (words[0].isdigit() or words[0] in ".,-+(" or names_in(words, names or ())):
        found = material(words, own)
        return ByMaterial(found.name, found.density)
    try:
        return Weighed(parse(words, Kind.MASS, units[Kind.MASS], names=names).value)
    except QuantityError as not_a_mass:
        for kind, unit, driver in _MASS_PER:
            with suppress(QuantityError):
                return driver(parse(words, kind, UNITS[unit], names=names).value)
        raise QuantityError(
            "this is no material, density or mass", where=where, read=f'"{text}"',
            remedy='Type a material\'s name, a density like "7850 kg/m³", a weighed mass like "1.2 kg", or of a thin '
            'body its mass per area or length like "12 kg/m²" or "0.8 kg/m"',
        ) from not_a_mass


_MASS_PER: tuple[tuple[Kind, str, type[ByDensity | PerArea | PerLength]], ...] = (
    (Kind.DENSITY, "kg/m³", ByDensity),
    (Kind.AREA_DENSITY, "kg/m²", PerArea),
    (Kind.LINEAR_DENSITY, "kg/m", PerLength),
)


def _part(assembly: Assembly, key: str) -> Part:
    node = assembly.node(key)
    if isinstance(node, Group):
        raise EditRefused("a group has no material of its own", where=node.name, remedy="Set it on the parts it holds")
    return node
