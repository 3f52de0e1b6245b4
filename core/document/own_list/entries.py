"""The entries of the own list, as values and as the named texts that stand for them in its files."""

from __future__ import annotations

import unicodedata
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Generic, Protocol, TypeAlias, TypeVar

from core.assembly import KnownAxial, KnownTensor
from core.errors import FileRefused
from core.material import MATERIALS, Material, check_density, plain_name
from core.quantity import Kind, parse
from core.quantity.tokens import quoted

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from core.placement import Triple

OWN_GROUP: Final = "own list"
LONGEST_NAME: Final = 200
LONGEST_TEXT: Final = 20_000
_LONGEST_QUANTITY = 200
_MOST_WORDS = 100

# What a table of the file holds: texts, and lists of texts.
Texts: TypeAlias = dict[str, str | tuple[str, ...]]


class Named(Protocol):
    """What every entry has."""

    @property
    def name(self) -> str:
        """The name it is found by."""


Entry = TypeVar("Entry", bound=Named)


@dataclass(frozen=True)
class OwnPart:
    """A known part that is used again: its name, and the values of its data sheet with their source."""

    name: str
    body: KnownTensor | KnownAxial


@dataclass(frozen=True)
class ListKind(Generic[Entry]):
    """One of the list's files.

    Attributes:
        file_name: in the folder of the list.
        table: the name of an entry's table in the file.
        words: what an entry is called, for a sentence.
        head: the comment at the top of a new file.
        entry_of: makes an entry of what a table holds; raises MasswrightError.
        texts_of: the texts that stand for an entry.
        reserved: names that no entry may have, plain.
    """

    file_name: str
    table: str
    words: str
    head: str
    entry_of: Callable[[Mapping[str, object]], Entry]
    texts_of: Callable[[Entry], Texts]
    reserved: frozenset[str] = frozenset()


class _Table:
    """Reads one table; whatever is not expected there is refused."""

    def __init__(self, values: Mapping[str, object], known: tuple[str, ...]) -> None:
        self._values = values
        for key in values:
            if key not in known:
                raise FileRefused("this version knows no such value", read=quoted(key), remedy="Take it out")

    def text(self, key: str, longest: int, otherwise: str | None = None) -> str:
        """Return a text; the one given otherwise where there is none."""
        value = self._values.get(key, otherwise)
        if value is None:
            raise FileRefused("a value is missing", where=key, remedy="Add it")
        if not isinstance(value, str) or len(value) > longest:
            raise FileRefused(
                f"this has to be a text of at most {longest} signs, in quotation marks", where=key,
                read=quoted(str(value)[:60]),
            )
        return value

    def name(self) -> str:
        """Return the name, which stands on one line and is not blank."""
        name = self.text("name", LONGEST_NAME).strip()
        if not name or any(unicodedata.category(sign) in {"Cc", "Zl", "Zp"} for sign in name):
            raise FileRefused("a name is one line of text", where="name", read=quoted(name), remedy="Type one")
        return name

    def texts(self, key: str, most: int) -> tuple[str, ...]:
        """Return a list of texts; none where there is none."""
        value = self._values.get(key, [])
        if not isinstance(value, list) or len(value) > most or not all(isinstance(each, str) for each in value):
            raise FileRefused(f"this has to be a list of at most {most} texts", where=key)
        return tuple(value)

    def quantity(self, key: str, kind: Kind, otherwise: str | None = None) -> float:
        """Return a quantity in SI that is written with its unit."""
        return parse(self.text(key, _LONGEST_QUANTITY, otherwise), kind, where=key).value

    def quantities(self, key: str, kind: Kind, count: int) -> list[float]:
        """Return so many quantities in SI."""
        values = self.texts(key, count)
        if len(values) != count:
            raise FileRefused(f"this has to be a list of {count} texts", where=key)
        return [parse(value, kind, where=key).value for value in values]


def _material_of(values: Mapping[str, object]) -> Material:
    table = _Table(values, ("name", "density", "low", "high", "source", "also"))
    name = table.name()
    if name[0].isdigit() or name[0] in ".,-+(":
        raise FileRefused(
            "the name of a material begins with a letter, so that it is not taken for a number", where="name",
            read=quoted(name), remedy="Put a word in front",
        )
    typed = table.text("density", _LONGEST_QUANTITY)
    density = check_density(table.quantity("density", Kind.DENSITY), where="density")
    low, high = (table.quantity(key, Kind.DENSITY, typed) for key in ("low", "high"))
    if not check_density(low, where="low") <= density <= check_density(high, where="high"):
        raise FileRefused("the density lies between low and high", where=name, read=f"{low:g}, {density:g}, {high:g}")
    also = table.texts("also", _MOST_WORDS)
    return Material(name, density, low, high, table.text("source", LONGEST_TEXT, ""), OWN_GROUP, also)


def _texts_of_material(material: Material) -> Texts:
    texts: Texts = {"name": material.name, "density": f"{material.density!r} kg/m³"}
    if (material.low, material.high) != (material.density, material.density):
        texts |= {"low": f"{material.low!r} kg/m³", "high": f"{material.high!r} kg/m³"}
    if material.source:
        texts["source"] = material.source
    return texts | ({"also": material.also} if material.also else {})


def _part_of(values: Mapping[str, object]) -> OwnPart:
    table = _Table(values, (
        "name", "mass", "centre", "inertia_about_axis", "length", "tensor", "about", "source", "page", "date",
    ))
    name = table.name()
    mass = table.quantity("mass", Kind.MASS)
    x, y, z = table.quantities("centre", Kind.LENGTH, 3)
    said = (table.text(key, LONGEST_TEXT, "") for key in ("source", "page", "date"))
    source = ", ".join(each for each in said if each)
    if ("tensor" in values) == ("inertia_about_axis" in values):
        raise FileRefused(
            "a known part has either a tensor or an inertia about its axis", where=name, remedy="Give one of them"
        )
    body = _tensor(table, mass, (x, y, z), source) if "tensor" in values else KnownAxial(
        mass, (x, y, z), table.quantity("inertia_about_axis", Kind.INERTIA),
        table.quantity("length", Kind.LENGTH, "0 m"), source,
    )
    _ = body.own  # refuses what makes no moments
    return OwnPart(name, body)


def _tensor(table: _Table, mass: float, centre: Triple, source: str) -> KnownTensor:
    about = table.text("about", LONGEST_NAME)
    if about not in {"centre", "origin"}:
        raise FileRefused('a tensor is about "centre" or "origin"', where="about", read=quoted(about))
    xx, yy, zz, xy, xz, yz = table.quantities("tensor", Kind.INERTIA, 6)
    return KnownTensor(mass, centre, (xx, yy, zz, xy, xz, yz), "centre" if about == "centre" else "origin", source)


def _texts_of_part(part: OwnPart) -> Texts:
    body = part.body
    texts: Texts = {
        "name": part.name, "mass": f"{body.mass!r} kg", "centre": tuple(f"{each!r} m" for each in body.centre),
    }
    if isinstance(body, KnownTensor):
        texts |= {"tensor": tuple(f"{each!r} kg·m²" for each in body.tensor), "about": body.about}
    else:
        texts |= {"inertia_about_axis": f"{body.inertia_about_axis!r} kg·m²", "length": f"{body.length!r} m"}
    return texts | ({"source": body.source} if body.source else {})


OWN_MATERIALS: Final = ListKind(
    "materials.toml", "material", "material",
    "# Materials of your own list. A density has its unit; low and high say between which values it lies.\n",
    _material_of, _texts_of_material, frozenset(plain_name(known.name) for known in MATERIALS),
)
KNOWN_PARTS: Final = ListKind(
    "known_parts.toml", "known_part", "known part",
    "# Known parts of your own list, with the values of their data sheets. A tensor is Ixx, Iyy, Izz, Ixy, Ixz, Iyz,\n"
    "# as tensor elements (Ixy = −∫xy dm), about the centre of mass or the part's origin.\n",
    _part_of, _texts_of_part,
)
