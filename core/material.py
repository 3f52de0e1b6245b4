"""What a part is made of, and the one thing that says its mass.

A part has exactly one mass driver: a material of the table, a density, of a thin body a mass per area or per
length, a weighed mass, or none yet. Each is a frozen value with `measure` (what it multiplies; None for nothing),
`mass_of(extent)` (kg for so many m³, m² or m), `basis` (where the mass comes from) and `label` (as a ledger shows it).
"""

from __future__ import annotations

import difflib
import math
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar, Final, TypeAlias

from core.checks import DENSITY_RANGE
from core.errors import MaterialError
from core.material_table import MATERIALS, Material
from core.quantity import compact
from core.quantity.tokens import quoted

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.measure import Measure

__all__ = [
    "MATERIALS", "ByDensity", "ByMaterial", "Material", "NotSet", "PerArea", "PerLength", "Weighed",
    "check_density", "check_measure", "implied_density", "material", "plain_name", "search", "with_own",
]

_NAMED_IN_AN_ERROR: Final = 4


@dataclass(frozen=True)
class NotSet:
    """Nothing says the mass yet. That is not 0 kg: the mass is unknown."""

    measure: ClassVar[Measure | None] = None
    basis: ClassVar[str] = "not set"
    label: ClassVar[str] = "not set"

    def mass_of(self, extent: float) -> float | None:  # noqa: ARG002  (the same call for every driver)
        """Return None: the mass is unknown."""
        return None


@dataclass(frozen=True)
class ByMaterial:
    """The mass follows from a material of the table.

    The density is kept beside the name, so that a later change of the table changes no saved part in silence.

    Raises:
        MaterialError: the density is not a positive number.

    >>> ByMaterial.named("steel").mass_of(0.5)
    3925.0
    """

    name: str
    density: float
    measure: ClassVar[Measure | None] = "volume"
    basis: ClassVar[str] = "computed"

    def __post_init__(self) -> None:
        _positive(self.density, "density", "kg/m³")

    @classmethod
    def named(cls, text: str) -> ByMaterial:
        """Return the driver for the material that text names.

        Raises:
            MaterialError: it names none, or several.
        """
        found = material(text)
        return cls(found.name, found.density)

    @property
    def label(self) -> str:
        """The material's name."""
        return self.name

    @property
    def differs_from_table(self) -> str:
        """Say how name and density differ from the table's; nothing where they agree."""
        known = next((known for known in MATERIALS if known.name == self.name), None)
        if known is None:
            return f'"{self.name}" is not in the table; its own {_density_text(self.density)} counts'
        if known.density == self.density:
            return ""
        return (
            f'"{self.name}" counts with {_density_text(self.density)} here, and the table now says '
            f"{_density_text(known.density)}"
        )

    def mass_of(self, extent: float) -> float:
        """Return the mass in kg of a volume in m³."""
        return self.density * extent


@dataclass(frozen=True)
class ByDensity:
    """The mass follows from a density in kg/m³.

    Raises:
        MaterialError: the density is not a positive number.
    """

    density: float
    measure: ClassVar[Measure | None] = "volume"
    basis: ClassVar[str] = "computed"

    def __post_init__(self) -> None:
        _positive(self.density, "density", "kg/m³")

    @property
    def label(self) -> str:
        """The density with its unit."""
        return _density_text(self.density)

    def mass_of(self, extent: float) -> float:
        """Return the mass in kg of a volume in m³."""
        return self.density * extent


@dataclass(frozen=True)
class PerArea:
    """The mass of a sheet or shell follows from its mass per area in kg/m²: density times thickness.

    Raises:
        MaterialError: it is not a positive number.

    >>> PerArea(12.0).mass_of(0.25)
    3.0
    """

    mass_per_area: float
    measure: ClassVar[Measure | None] = "area"
    basis: ClassVar[str] = "computed"

    def __post_init__(self) -> None:
        _positive(self.mass_per_area, "mass per area", "kg/m²")

    @property
    def label(self) -> str:
        """The mass per area with its unit."""
        return f"{compact(self.mass_per_area, 6)} kg/m²"

    def mass_of(self, extent: float) -> float:
        """Return the mass in kg of an area in m²."""
        return self.mass_per_area * extent


@dataclass(frozen=True)
class PerLength:
    """The mass of a rod or ring follows from its mass per length in kg/m: density times cross-section.

    Raises:
        MaterialError: it is not a positive number.

    >>> PerLength(0.8).mass_of(2.5)
    2.0
    """

    mass_per_length: float
    measure: ClassVar[Measure | None] = "length"
    basis: ClassVar[str] = "computed"

    def __post_init__(self) -> None:
        _positive(self.mass_per_length, "mass per length", "kg/m")

    @property
    def label(self) -> str:
        """The mass per length with its unit."""
        return f"{compact(self.mass_per_length, 6)} kg/m"

    def mass_of(self, extent: float) -> float:
        """Return the mass in kg of a length in m."""
        return self.mass_per_length * extent


@dataclass(frozen=True)
class Weighed:
    """The mass was weighed, in kg; the body's own volume, area or length then implies the rest.

    Raises:
        MaterialError: the mass is not a positive number.
    """

    mass: float
    measure: ClassVar[Measure | None] = None
    basis: ClassVar[str] = "weighed"
    label: ClassVar[str] = "weighed"

    def __post_init__(self) -> None:
        _positive(self.mass, "weighed mass", "kg")

    def mass_of(self, extent: float) -> float:  # noqa: ARG002  (the same call for every driver)
        """Return the weighed mass in kg, whatever the extent."""
        return self.mass


def check_measure(driver: _Driver, measure: Measure, where: str) -> None:
    """Refuse a driver that multiplies what the body does not have, and say what is missing.

    Args:
        driver: of the part.
        measure: of its body.
        where: the part's name.

    Raises:
        MaterialError: a density for a body without thickness, a mass per area for one that has a volume, ….
    """
    if driver.measure is None or driver.measure == measure:
        return
    if driver.measure == "volume":
        what = f"a density needs a volume, and the {_MISSING[measure]} of this body is not given"
    else:
        what = f"a mass per {driver.measure} does not fit a body that has {_EXTENT[measure]}"
    raise MaterialError(what, where=where, read=driver.label, remedy=_HOW_TO_WEIGH[measure])


_Driver: TypeAlias = ByMaterial | ByDensity | PerArea | PerLength | Weighed | NotSet
_MISSING: Final[dict[Measure, str]] = {"area": "thickness", "length": "cross-section", "pieces": "size"}
_EXTENT: Final[dict[Measure, str]] = {
    "volume": "a volume", "area": "an area", "length": "a length", "pieces": "no size",
}
_HOW_TO_WEIGH: Final[dict[Measure, str]] = {
    "volume": 'Give a material, a density like "7850 kg/m³", or a weighed mass',
    "area": 'Give its mass per area (density times thickness) like "12 kg/m²", or weigh it',
    "length": 'Give its mass per length (density times cross-section) like "0.8 kg/m", or weigh it',
    "pieces": 'Give its mass like "1.2 kg"',
}


def implied_density(mass: float, volume: float) -> float | None:
    """Return the density in kg/m³ of mass kg in volume m³, or None where there is no volume.

    >>> implied_density(3925.0, 0.5), implied_density(1.0, 0.0)
    (7850.0, None)
    """
    return mass / volume if volume > 0.0 else None


def material(name: str, own: Iterable[Material] = ()) -> Material:
    """Return the material that name means, of the table and of a list of one's own.

    Case, blanks and punctuation do not matter. A material of one's own stands in the place of one of the
    same name. A full name or other name comes first, then the only material whose name begins with it, then the only
    one that holds it anywhere.

    Raises:
        MaterialError: nothing fits, or several do; the nearest are named.

    >>> material("en aw 6082").name
    'aluminium EN AW-6082'
    """
    wanted, known_ones = plain_name(name), with_own(own)
    # A few digits shorten nothing: "1.43" is more likely a slip in another field than the steel 1.4301.
    rules = (str.__eq__, str.startswith, str.__contains__) if re.search("[a-z]", wanted) else (str.__eq__,)
    for fits in rules:
        found = [known for known in known_ones if any(fits(word, wanted) for word in _names(known))]
        if len(found) == 1:
            return found[0]
        if found:
            raise _refused("several materials fit this name", name, [known.name for known in found])
    spelled = {word: known.name for known in known_ones for word in _names(known)}
    near = difflib.get_close_matches(wanted, spelled, n=_NAMED_IN_AN_ERROR, cutoff=0.6)
    raise _refused("no material has this name", name, list(dict.fromkeys(spelled[word] for word in near)))


def with_own(own: Iterable[Material]) -> tuple[Material, ...]:
    """Return materials of one's own, and behind them those of the table that have other names."""
    first = tuple(own)
    names = {plain_name(known.name) for known in first}
    return (*first, *(known for known in MATERIALS if plain_name(known.name) not in names))


def search(text: str) -> tuple[Material, ...]:
    """Return the materials whose names hold every word of text, in the order of the table; all for no text.

    >>> [found.name for found in search("titan 6al")]
    ['titanium Ti-6Al-4V']
    """
    words = [plain_name(word) for word in text.split()]
    return tuple(
        known
        for known in MATERIALS
        if all(any(word in name for name in (*_names(known), plain_name(known.group))) for word in words)
    )


def check_density(density: float, *, where: str = "") -> float:
    """Return density (kg/m³) if something solid can have it.

    Raises:
        MaterialError: it lies outside DENSITY_RANGE, with the slip that probably made it.

    >>> check_density(2700.0)
    2700.0
    """
    low, high = DENSITY_RANGE
    if low <= density <= high:
        return density
    raise MaterialError(
        f"a density lies between {compact(low)} and {compact(high)} kg/m³",
        where=where,
        read=_density_text(density),
        remedy=_likely_slip(density),
    )


def _likely_slip(density: float) -> str:
    if math.isfinite(density) and density > 0.0:
        low, high = 500.0, 20_000.0
        if low <= density * 1000.0 <= high:
            return f"If {compact(density)} g/cm³ is meant, write that unit behind it"
        if low <= density / 1000.0 <= high:
            return "Check the decimal mark, and whether g/m³ was meant"
    return "Check the number and its unit"


def _positive(value: float, what: str, unit: str) -> None:
    if not (math.isfinite(value) and value > 0.0):
        raise MaterialError(
            f"a {what} is a number greater than zero",
            read=f"{compact(value)} {unit}",
            remedy='Correct it, or choose "not set"',
        )


def _density_text(density: float) -> str:
    return f"{compact(density, 6)} kg/m³"


def plain_name(text: str) -> str:
    """Return a name without case, blanks and punctuation, as names are compared.

    >>> plain_name("EN AW-6082")
    'enaw6082'
    """
    return re.sub(r"[\W_]+", "", text.casefold())


def _names(known: Material) -> tuple[str, ...]:
    return tuple(plain_name(word) for word in (known.name, *known.also))


def _refused(what: str, name: str, near: list[str]) -> MaterialError:
    shown = "; ".join(near[:_NAMED_IN_AN_ERROR])
    rest = f" and {len(near) - _NAMED_IN_AN_ERROR} more" if len(near) > _NAMED_IN_AN_ERROR else ""
    remedy = f"The nearest are: {shown}{rest}" if near else 'Write e.g. "steel", or give a density'
    return MaterialError(what, read=quoted(name), remedy=remedy)
