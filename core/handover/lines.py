"""The lines of a sheet: each value with its symbol, point, frame, axis and unit in words of its own."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Literal, TypeAlias

import numpy as np

from core.arrays import settled
from core.moments import radius_of_gyration
from core.placement import Triple
from core.quantity.units import UNITS, Kind, Unit

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.arrays import FloatArray
    from core.moments import Moments, Principal
    from core.quantity import UnitSet

FOR_THE_DRIVE: Final = "For the drive"
MASS_AND_CENTRE: Final = "Mass and centre"
PRINCIPAL: Final = "Principal moments and axes"

About: TypeAlias = Literal["centre", "origin"] | Triple
Along: TypeAlias = Literal["document", "principal"]
Products: TypeAlias = Literal["tensor", "integral"]

_METRE: Final = UNITS["m"]
_PLAIN: Final = UNITS[""]
_TIES: Final = {
    "12": "Principal moments 1 and 2 agree: every axis in the plane of 1 and 2 is a principal axis.",
    "23": "Principal moments 2 and 3 agree: every axis in the plane of 2 and 3 is a principal axis.",
    "123": "The three principal moments agree: every axis through the centre of mass is a principal axis.",
}


@dataclass(frozen=True)
class SheetChoice:
    """Which tensor a sheet shows.

    Attributes:
        about: the point: the centre of mass, the origin of the frame, or a point in that frame, m.
        along: the frame's axes, or the principal axes of the body.
        products: as tensor elements (−∫xy dm) or as product integrals (+∫xy dm).

    """

    about: About = "centre"
    along: Along = "document"
    products: Products = "tensor"


@dataclass(frozen=True)
class Entry:
    """One value to hand over.

    Attributes:
        section: the heading it stands under.
        symbol: short, as a formula would name it.
        label: what it is, with its point, frame and axis.
        si: the value in the SI unit of its kind; None where nothing gives it.
        unit: in which it is shown.
        basis: where it came from.
        reason: why there is no value; "" where there is one.

    """

    section: str
    symbol: str
    label: str
    si: float | None
    unit: Unit
    basis: str = ""
    reason: str = ""

    @property
    def kind(self) -> Kind:
        """What it measures."""
        return self.unit.kind

    @property
    def value(self) -> float | None:
        """The value in the unit shown."""
        return None if self.si is None else self.unit.from_si(self.si)


@dataclass(frozen=True)
class AxisLine:
    """An axis that J is asked about: through point (m) along direction (any length), subject's frame."""

    name: str
    point: Triple
    direction: Triple


@dataclass(frozen=True, eq=False)
class Subject:
    """The body that a sheet is about.

    Attributes:
        body: its moments, kg and m, in the frame; None while the mass is not known.
        geometry: moments of the same form at any uniform density; None where no volume is bounded.
        frame: whose origin and axes the values refer to: "document" or "file".
        axis: that J is asked about, if any.
        basis: where the values came from.
        reason: why there is no mass, and what gives one.

    """

    body: Moments | None
    geometry: Moments | None
    frame: Literal["document", "file"]
    axis: AxisLine | None
    basis: str
    reason: str = ""

    @property
    def form(self) -> Moments | None:
        """What gives the values that do not depend on the mass."""
        return self.geometry if self.body is None else self.body


@dataclass(frozen=True)
class LineMaker:
    """Makes entries of one section with one basis and one reason for what is missing."""

    section: str
    units: UnitSet
    basis: str
    reason: str

    def line(self, symbol: str, label: str, si: float | None, unit: Unit) -> Entry:
        """Return one entry; a value that is not finite counts as missing."""
        known = si is not None and math.isfinite(si)
        value = float(si) if known and si is not None else None
        return Entry(self.section, symbol, label, value, unit, self.basis, "" if known else self.reason)

    def of(self, kind: Kind, symbol: str, label: str, si: float | None) -> Entry:
        """Return one entry in the unit that the set has for this kind."""
        return self.line(symbol, label, si, unit_of(self.units, kind))


def joint_basis(bases: Iterable[str]) -> str:
    """Return the one basis of several values, or "mixed" with all of them, each named once.

    >>> joint_basis(["computed", "weighed", "computed"])
    'mixed: computed, weighed'
    """
    named = tuple(dict.fromkeys(bases))
    return named[0] if len(named) == 1 else f"mixed: {', '.join(named)}" if named else "empty"


def unit_of(units: UnitSet, kind: Kind) -> Unit:
    """Return the unit that a set shows this kind in."""
    return _PLAIN if kind is Kind.NUMBER else units[kind]


def lines_of(subject: Subject, choice: SheetChoice, units: UnitSet) -> tuple[Entry, ...]:
    """Return every line about the subject: for the drive, mass and centre, tensor, principal axes."""
    return (
        *_drive_lines(subject, units),
        *_mass_lines(subject, units),
        *_tensor_lines(subject, choice, units),
        *_principal_lines(subject, units),
    )


def tie_note(subject: Subject) -> tuple[str, ...]:
    """Return the sentence that says which principal axes are not determined; nothing when all are."""
    note = "" if subject.form is None else _TIES.get(subject.form.principal.tie, "")
    return (note,) if note else ()


def _drive_lines(subject: Subject, units: UnitSet) -> list[Entry]:
    axis, body, form = subject.axis, subject.body, subject.form
    if axis is None:
        return []
    make = LineMaker(FOR_THE_DRIVE, units, subject.basis, subject.reason)
    whole = None if body is None else float(body.inertia_about_axis(axis.point, axis.direction))
    own = None if body is None else float(body.own_inertia_along(axis.direction))
    transfer = None if body is None else float(body.mass) * _offset(body, axis) ** 2
    offset = None if form is None else _offset(form, axis)
    radius = None
    if form is not None:
        radius = float(radius_of_gyration(form.inertia_about_axis(axis.point, axis.direction), form.mass))
    name = axis.name
    return [
        make.of(Kind.INERTIA, "J", f"Moment of inertia about {name}", whole),
        make.line("GD²", f"Flywheel effect GD² = 4·J about {name}", whole, units.gd2),
        make.line("WR²", f"Flywheel effect WR² = J about {name}", whole, units.wr2),
        make.of(Kind.LENGTH, "k", f"Radius of gyration √(J/m) about {name}", radius),
        make.of(Kind.LENGTH, "d", f"Offset of the centre of mass from {name}", offset),
        make.of(
            Kind.INERTIA,
            "J_own",
            f"Own J of the whole: about the axis through its centre of mass, parallel to {name}",
            own,
        ),
        make.of(
            Kind.INERTIA, "m·d²", f"Parallel-axis term m·d² of the whole, from its centre of mass to {name}", transfer
        ),
    ]


def extent_of(form: Moments) -> float:
    """Return how large a body is and how far out it lies, m: round-off of its lengths is relative to that."""
    gyration = np.sqrt(np.abs(form.inertia_about_centre).max() / abs(float(form.mass)))
    return float(gyration + np.abs(form.centre).max())


def _offset(form: Moments, axis: AxisLine) -> float:
    """Return the distance of the centre of mass from an axis, m, exactly 0 where only round-off is left."""
    reach = extent_of(form) + float(np.abs(axis.point).max())
    return float(settled(form.offset_from_axis(axis.point, axis.direction), reach))


def _mass_lines(subject: Subject, units: UnitSet) -> list[Entry]:
    make = LineMaker(MASS_AND_CENTRE, units, subject.basis, subject.reason)
    form, mass = subject.form, None if subject.body is None else float(subject.body.mass)
    lines = [make.of(Kind.MASS, "m", "Mass", mass)]
    for i, letter in enumerate("xyz"):
        at = None if form is None else float(settled(form.centre[i], extent_of(form)))
        label = f"Centre of mass {letter}, from the {subject.frame}'s origin along the {subject.frame}'s axes"
        lines.append(make.of(Kind.LENGTH, f"{letter}_c", label, at))
    return lines


def _tensor_lines(subject: Subject, choice: SheetChoice, units: UnitSet) -> list[Entry]:
    point = point_words(choice.about, subject.frame, units)
    along = f"the {subject.frame}'s axes" if choice.along == "document" else "the principal axes"
    letters = "xyz" if choice.along == "document" else "123"
    make = LineMaker(f"Tensor about {point} along {along}", units, subject.basis, subject.reason)
    tensor = None if subject.body is None else tensor_chosen(subject.body, choice)
    lines = []
    for i in range(3):
        symbol = f"I{letters[i] * 2}"
        value = None if tensor is None else float(tensor[i, i])
        lines.append(make.of(Kind.INERTIA, symbol, f"{symbol} about {point}, along {along}", value))
    for i, j in ((0, 1), (0, 2), (1, 2)):
        pair = letters[i] + letters[j]
        value = None if tensor is None else float(tensor[i, j])
        symbol, kind, shown = product_words(pair, choice.products, value)
        lines.append(make.of(Kind.INERTIA, symbol, f"{kind} about {point}, along {along}", shown))
    return lines


def product_words(pair: str, products: Products, element: float | None) -> tuple[str, str, float | None]:
    """Return symbol, label with sign convention, and value of a product of inertia given as tensor element.

    >>> product_words("xy", "integral", -2.5)
    ('Pxy', 'Pxy (product integral, +∫xy dm)', 2.5)
    """
    dm = "".join(f"r{digit}" for digit in pair) if pair.isdigit() else pair
    if products == "tensor":
        return f"I{pair}", f"I{pair} (tensor element, −∫{dm} dm)", element
    # 0 − x, so that a product of 0 is not shown as −0.
    return f"P{pair}", f"P{pair} (product integral, +∫{dm} dm)", None if element is None else 0.0 - element


def tensor_chosen(body: Moments, choice: SheetChoice) -> FloatArray:
    """Return the tensor (3, 3) kg·m², tensor elements, about the chosen point along the chosen axes."""
    if choice.about == "centre":
        tensor = body.inertia_about_centre
    else:
        tensor = body.inertia_about_point((0.0, 0.0, 0.0) if choice.about == "origin" else choice.about)
    if choice.along == "document":
        return settled(tensor, np.abs(tensor).max())
    axes = body.principal.axes
    return settled(axes @ tensor @ axes.T, np.abs(tensor).max())


def point_words(about: About, frame: str, units: UnitSet) -> str:
    """Return how a sentence names the point that a tensor is about."""
    if about == "centre":
        return "the centre of mass"
    if about == "origin":
        return f"the {frame}'s origin"
    return f"the point {_triple_text(about, unit_of(units, Kind.LENGTH))}"


def axis_words(point: Triple, direction: Triple, unit: Unit) -> str:
    """Return how a sentence names an axis that has no name of its own; point in m, shown in a length unit.

    >>> axis_words((0.0, 0.01, 0.0), (0.0, 0.0, 1.0), UNITS["mm"])
    'through (0; 10; 0) mm along (0; 0; 1)'
    """
    return f"through {_triple_text(point, unit)} along {_triple_text(direction, _PLAIN)}".rstrip()


def _triple_text(triple: Triple, unit: Unit) -> str:
    return f"({'; '.join(f'{unit.from_si(part):.9g}' for part in triple)}) {unit.symbol}"


def _principal_lines(subject: Subject, units: UnitSet) -> list[Entry]:
    make = LineMaker(PRINCIPAL, units, subject.basis, subject.reason)
    form = subject.form
    principal: Principal | None = None if form is None else form.principal
    axes = None if principal is None else settled(principal.axes, 1.0)
    radii = None if principal is None or form is None else radius_of_gyration(principal.moments, form.mass)
    lines = []
    for i in range(3):
        value = None if principal is None or subject.body is None else float(principal.moments[i])
        label = f"Principal moment {i + 1} about the centre of mass"
        lines.append(make.of(Kind.INERTIA, f"I{i + 1}", label, value))
    for i in range(3):
        radius = None if radii is None else float(radii[i])
        label = f"Radius of gyration about principal axis {i + 1} through the centre of mass"
        lines.append(make.of(Kind.LENGTH, f"k{i + 1}", label, radius))
    for i in range(3):
        for j, letter in enumerate("xyz"):
            value = None if axes is None else float(axes[i, j])
            label = f"Principal axis {i + 1}, component along the {subject.frame}'s {letter}"
            lines.append(make.line(f"e{i + 1}_{letter}", label, value, _PLAIN))
    return lines
