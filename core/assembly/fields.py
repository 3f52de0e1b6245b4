"""The numbers of a line or axis that a person types, each under a path: what it measures, its value, one with another.

Paths:
    dimension.NAME                        of a shape (of a part, or of a cut)
    outline.LOOP.POINT.FIELD              of its outline, see core.assembly.outline_numbers
    density, per area, per length, weighed    what says the mass of a part
    known.mass, known.centre.I, known.tensor.I, known.axial, known.length    of a data sheet
    position.I, turn.I                    of the pose
    seat.offset, seat.aside.I, seat.turn  of the seat
    axis.point.I, axis.direction.I, axis.second.I    of an axis, which has these only
    copies.count, copies.start, copies.span, copies.point.I, copies.direction.I, copies.step.I, copies.normal.I
I counts from 0. What a person typed for a number ("3/8 in + 2 mm") is kept under the same path.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, fields, is_dataclass, replace
from typing import TYPE_CHECKING, Any, Final, TypeAlias, TypeVar

from core.assembly.axis import DriveAxis
from core.assembly.bodies import KnownAxial, KnownTensor, ShapeBody
from core.assembly.cuts import Cut
from core.assembly.nodes import Group, Node, Part
from core.assembly.outline_numbers import OUTLINE, outline_value, outline_words, with_outline_values
from core.errors import EditRefused, QuantityError
from core.material import ByDensity, PerArea, PerLength, Weighed
from core.quantity.units import Kind
from core.shapes import OutlinedShape

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.shapes import Shape

AnyLine: TypeAlias = Node | Cut
Typable: TypeAlias = AnyLine | DriveAxis
Line = TypeVar("Line", bound=Part | Group | Cut | DriveAxis)
Numbered: TypeAlias = ByDensity | PerArea | PerLength | Weighed

# Of a mass: path → what holds the number.
DRIVER_PATHS: Final[Mapping[str, type[Numbered]]] = {
    "density": ByDensity, "per area": PerArea, "per length": PerLength, "weighed": Weighed,
}


@dataclass(frozen=True)
class Spot:
    """Where a number stands in a line: an attribute of one of its values, or one of three or six numbers in it.

    Attributes:
        kind: what it measures.
        words: what it is called, for a sentence.
        attribute: of the value that holds it.
        at: which of several numbers; None: the attribute is the number.
    """

    kind: Kind
    words: str
    attribute: str
    at: int | None = None


_XYZ: Final = "xyz"
_TENSOR: Final = ("Ixx", "Iyy", "Izz", "Ixy", "Ixz", "Iyz")
_DIMENSION_KINDS: Final = {"length": Kind.LENGTH, "angle": Kind.ANGLE, "count": Kind.NUMBER}


def _triple(path: str, kind: Kind, words: str, attribute: str) -> dict[str, Spot]:
    return {f"{path}.{at}": Spot(kind, f"{words} {_XYZ[at]}", attribute, at) for at in range(3)}


_POSE: Final = {
    **_triple("position", Kind.LENGTH, "position", "position"), **_triple("turn", Kind.ANGLE, "turn about", "turns"),
}
_SEAT: Final = {
    "seat.offset": Spot(Kind.LENGTH, "offset of the seat", "offset"),
    **{f"seat.aside.{at}": Spot(Kind.LENGTH, f"seat aside along {'uv'[at]}", "aside", at) for at in range(2)},
    "seat.turn": Spot(Kind.ANGLE, "turn of the seat", "turn"),
}
_COPIES: Final = {
    "copies.count": Spot(Kind.NUMBER, "quantity", "count"),
    "copies.start": Spot(Kind.ANGLE, "first copy at", "start"),
    "copies.span": Spot(Kind.ANGLE, "copies over", "span"),
    **_triple("copies.point", Kind.LENGTH, "axis or plane through", "point"),
    **_triple("copies.direction", Kind.NUMBER, "axis along", "direction"),
    **_triple("copies.step", Kind.LENGTH, "step", "step"),
    **_triple("copies.normal", Kind.NUMBER, "plane across", "normal"),
}
_KNOWN: Final = {
    "known.mass": Spot(Kind.MASS, "mass", "mass"),
    **_triple("known.centre", Kind.LENGTH, "centre of mass", "centre"),
    **{f"known.tensor.{at}": Spot(Kind.INERTIA, words, "tensor", at) for at, words in enumerate(_TENSOR)},
    "known.axial": Spot(Kind.INERTIA, "J about its axis", "inertia_about_axis"),
    "known.length": Spot(Kind.LENGTH, "length", "length"),
}
_AXIS: Final = {
    **_triple("axis.point", Kind.LENGTH, "through", "point"),
    **_triple("axis.direction", Kind.NUMBER, "along", "direction"),
    **_triple("axis.second", Kind.LENGTH, "second point", "second"),
}
_DRIVER: Final = {
    "density": Spot(Kind.DENSITY, "density", "density"),
    "per area": Spot(Kind.AREA_DENSITY, "mass per area", "mass_per_area"),
    "per length": Spot(Kind.LINEAR_DENSITY, "mass per length", "mass_per_length"),
    "weighed": Spot(Kind.MASS, "weighed mass", "mass"),
}


def kind_of(line: Typable, path: str) -> Kind:
    """Return what the number under a path measures.

    Raises:
        EditRefused: no such line has a number there.
    """
    return _spot(line, path).kind


def words_of(line: Typable, path: str) -> str:
    """Return what the number under a path is called, for a sentence.

    Raises:
        EditRefused: no such line has a number there.
    """
    return _spot(line, path).words


def value_of(line: Typable, path: str) -> float | None:
    """Return the number under a path in SI; None where the line as it is now has no such number."""
    if path.startswith(OUTLINE):
        return outline_value(_shape(line), path)
    if path.startswith("dimension."):
        shape = _shape(line)
        return None if shape is None else shape.values().get(path.removeprefix("dimension."))
    spot = _SPOTS.get(path)
    holder = None if spot is None else _holder(line, path)
    if spot is None or not _has(holder, spot.attribute):
        return None
    found = getattr(holder, spot.attribute)
    return float(found if spot.at is None else found[spot.at])


def with_value(line: Line, path: str, value: float) -> Line:
    """Return a line with another number (SI) under a path; `with_values` for one."""
    return with_values(line, {path: value})


def with_values(line: Line, values: Mapping[str, float]) -> Line:
    """Return a line with other numbers (SI) by path, all put in at once: a tube may grow past its old outside.

    A mass is then said by what the path names.

    Raises:
        EditRefused: the line has no number there.
        QuantityError: a quantity that is not whole.
        ShapeError, ValueRefused, MaterialError: the line cannot be with these numbers.
    """
    sizes: dict[str, float] = {}
    points: dict[str, float] = {}
    changes: dict[str, Any] = {}
    inside: dict[str, dict[str, Any]] = {}
    for path, value in values.items():
        spot = _spot(line, path)
        if path.startswith("dimension."):
            sizes[spot.attribute] = value
        elif path.startswith(OUTLINE):
            points[path] = value
        elif path in DRIVER_PATHS:
            if not isinstance(line, Part):
                raise EditRefused("only a part has a material or mass of its own", where=line.name)
            changes["driver"] = DRIVER_PATHS[path](value)
        else:
            _put(line, path, inside.setdefault(_HOLDERS[path.partition(".")[0]], {}), value)
    for attribute, numbers in inside.items():
        several = {name: tuple(each) if isinstance(each, list) else each for name, each in numbers.items()}
        changes |= {attribute: replace(getattr(line, attribute), **several)} if attribute else several
    shape = _shape(line)
    if shape is not None and (sizes or points):
        changed_shape = shape.resized(sizes) if sizes else shape
        if isinstance(changed_shape, OutlinedShape) and points:
            changed_shape = with_outline_values(changed_shape, points)
        changes |= {"shape": changed_shape} if isinstance(line, Cut) else {"body": ShapeBody(changed_shape)}
    changed: Line = replace(line, **changes)
    return changed


def _put(line: Typable, path: str, numbers: dict[str, Any], value: float) -> None:
    """Put a number among those of its holder that are to change."""
    spot, holder = _spot(line, path), _holder(line, path)
    if not _has(holder, spot.attribute):
        raise _nothing_there(line, path)
    if spot.at is not None:
        numbers.setdefault(spot.attribute, [*getattr(holder, spot.attribute)])[spot.at] = value
    else:
        numbers[spot.attribute] = _whole(value, line.name) if spot.attribute == "count" else value


def typed_for(line: Typable, path: str) -> str:
    """Return what was typed for the number under a path; "" where the number says it all."""
    return dict(line.typed).get(path, "")


def with_typed(line: Line, path: str, text: str) -> Line:
    """Return a line with the text that was typed for one of its numbers kept, or dropped where it is ""."""
    typed = {**dict(line.typed), path: text}
    kept: Line = replace(line, typed=tuple(sorted((key, value) for key, value in typed.items() if value)))
    return kept


_SPOTS: Final[Mapping[str, Spot]] = {**_POSE, **_SEAT, **_COPIES, **_KNOWN, **_DRIVER, **_AXIS}
# First step of a path → the attribute of the line that holds the number; an axis holds its numbers itself.
_HOLDERS: Final = {
    "position": "pose", "turn": "pose", "seat": "seat", "copies": "copies", "known": "body",
    **dict.fromkeys(_DRIVER, "driver"), "axis": "",
}


def _spot(line: Typable, path: str) -> Spot:
    if path.startswith("dimension."):
        shape, name = _shape(line), path.removeprefix("dimension.")
        for dimension in shape.dimensions if shape is not None else ():
            if dimension.name == name:
                return Spot(_DIMENSION_KINDS[dimension.kind], dimension.label, name)
    if path.startswith(OUTLINE) and outline_value(_shape(line), path) is not None:
        return Spot(Kind.LENGTH, outline_words(path), path)
    spot = _SPOTS.get(path)
    if spot is None:
        raise _nothing_there(line, path)
    return spot


def _nothing_there(line: Typable, path: str) -> EditRefused:
    return EditRefused("this line has no such number", where=line.name, read=path)


def _holder(line: Typable, path: str) -> object:
    """Return the value of a line that would hold the number under a path; None where it is of another kind."""
    first = path.partition(".")[0]
    if first == "axis":
        return line if isinstance(line, DriveAxis) else None
    holder = getattr(line, _HOLDERS[first], None)
    if first == "known":
        return holder if isinstance(holder, KnownTensor | KnownAxial) else None
    if path in DRIVER_PATHS:
        return holder if isinstance(holder, DRIVER_PATHS[path]) else None
    return holder


def _has(holder: object, attribute: str) -> bool:
    has = is_dataclass(holder) and any(field.name == attribute for field in fields(holder))
    return has and getattr(holder, attribute) is not None


def _shape(line: Typable) -> Shape | None:
    if isinstance(line, Cut):
        return line.shape
    body = line.body if isinstance(line, Part) else None
    return body.shape if isinstance(body, ShapeBody) else None


def _whole(value: float, name: str) -> int:
    if not math.isclose(value, round(value)):
        raise QuantityError(
            "a quantity is a whole number", where=name, read=f"{value:g}", remedy="Type how many there are"
        )
    return round(value)
