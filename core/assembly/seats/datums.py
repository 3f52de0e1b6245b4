"""The named places of a line: its faces, edge centres and axes, its own frame and its centre of mass.

Names come from where a place lies in the part's own frame ("face +z", "rim +z", "edge +x +y"), so that they stay when
dimensions change. Of several with one name the outermost has it, and the next ones have a number behind it.
"""

from __future__ import annotations

import math
import re
from collections import Counter
from dataclasses import dataclass, field, replace
from functools import cached_property
from typing import TYPE_CHECKING, Final, Literal, TypeAlias
from weakref import WeakKeyDictionary

import numpy as np

from core.arrays import FloatArray, IntArray, frozen
from core.assembly.bodies import KnownAxial, KnownTensor, MeshBody, ShapeBody
from core.assembly.cuts import Cut
from core.assembly.nodes import Node, Part
from core.assembly.seats.regions import SAME_WAY, Border, Region, Regions, across_of, regions_of
from core.facets import Facets
from core.mesh.weld import weld_exactly
from core.placement import Placement

if TYPE_CHECKING:
    from collections.abc import Mapping, Sequence

    from core.assembly.fields import AnyLine
    from core.mesh import MeshAsset

DatumKind: TypeAlias = Literal["face", "rim", "edge", "axis", "point"]

CENTRE_OF_MASS: Final = "centre of mass"
ORIGIN: Final = "origin"
# Of the size of a body: places nearer than this to one another are one.
_SAME_PLACE: Final = 1e-6
# Places are put in order by so many digits of where they lie, so that round-off puts none before another.
_RANK_DIGITS: Final = 6
_IN_COPY: Final = re.compile(r"copy ([1-9][0-9]{0,5}): (.+)")


@dataclass(frozen=True, eq=False)
class Datum:
    """A named place of a body: a point with a direction.

    Attributes:
        name: its identity in the part, as shown.
        kind: a face, a rim (the centre of a circular edge), an edge (the middle of a straight one), an axis, or a
            mere point.
        point: (3,) m.
        direction: (3,) unit; out of a face and of the face that a rim is on, along an axis or a straight edge.
        edges: (k, 2, 3) m, what to light up; none where there is nothing to see.
        facets: (f,) of `DatumSet.facets` that it lies in; none but for faces and axes of round surfaces.
    """

    name: str
    kind: DatumKind
    point: FloatArray
    direction: FloatArray
    edges: FloatArray = field(default_factory=lambda: frozen(np.zeros((0, 2, 3))))
    facets: IntArray = field(default_factory=lambda: np.zeros(0, dtype=np.int64))

    @property
    def is_outward(self) -> bool:
        """Whether its direction points out of the material, so that two of them are set against each other."""
        return self.kind in {"face", "rim"}

    @cached_property
    def frame(self) -> Placement:
        """The placement tf_part_datum: u, v and the direction as axes, the point as origin."""
        return Placement(np.stack([*across_of(self.direction), self.direction], axis=1), self.point)

    def placed(self, tf_outer_part: Placement) -> Datum:
        """Return the same place in an outer frame."""
        return replace(
            self, point=tf_outer_part.apply(self.point), direction=tf_outer_part.turn_only(self.direction),
            edges=tf_outer_part.apply(self.edges),
        )


@dataclass(frozen=True, eq=False)
class DatumSet:
    """The places that a body's surface has, with the facets they were found in; part frame, m."""

    facets: Facets
    datums: tuple[Datum, ...]

    @cached_property
    def named(self) -> Mapping[str, Datum]:
        """The places by name."""
        return {datum.name: datum for datum in self.datums}


FRAME: Final[tuple[Datum, ...]] = (
    *(Datum(f"axis {'xyz'[at]}", "axis", frozen(np.zeros(3)), frozen(np.eye(3)[at])) for at in (2, 0, 1)),
    Datum(ORIGIN, "point", frozen(np.zeros(3)), frozen([0.0, 0.0, 1.0])),
)

# Triangles of a mesh whose places are found in less than a tenth of a second.
FOUND_AT_ONCE: Final = 15_000
# What was found in a body's surface, for as long as an equal body is there; of a mesh in the file's own unit.
_shapes: WeakKeyDictionary[ShapeBody, DatumSet] = WeakKeyDictionary()
_meshes: WeakKeyDictionary[MeshAsset, DatumSet] = WeakKeyDictionary()


def datums_of(line: AnyLine) -> tuple[Datum, ...]:
    """Return the named places of a part or group in its own frame, or of a cut's first copy in its part's frame.

    The faces of a cut are those of the part that it leaves: they point into the hole.
    """
    if isinstance(line, Cut):
        return tuple(_in_part(line, datum, 0) for datum in _of_shape(line))
    if not isinstance(line, Part):
        return FRAME
    found = () if isinstance(line.body, KnownTensor | KnownAxial) else surface_datums(line.body).datums
    return (*found, *_frame_beside(found), *_centre_of_mass(line))


def datum_named(line: AnyLine, name: str) -> Datum | None:
    """Return the place of a line that has this name; None where there is none.

    Of a cut the places of the other copies have names as well: "copy 3: rim +z".
    """
    if isinstance(line, Part) and isinstance(line.body, ShapeBody | MeshBody):
        found = surface_datums(line.body).named.get(name)
        if found is not None:
            return found
    if isinstance(line, Cut):
        number, inner = _of_copy(name)
        datum = next((each for each in _of_shape(line) if each.name == inner), None)
        return None if datum is None or number > line.copies.count else _in_part(line, datum, number - 1)
    return next((datum for datum in datums_of(line) if datum.name == name), None)


def name_in_copy(name: str, index: int) -> str:
    """Return the name of a place of a cut in one of its copies, counted from 0."""
    return f"copy {index + 1}: {name}" if index else name


def _of_copy(name: str) -> tuple[int, str]:
    found = _IN_COPY.fullmatch(name)
    return (1, name) if found is None else (int(found[1]), found[2])


def _of_shape(cut: Cut) -> tuple[Datum, ...]:
    found = surface_datums(ShapeBody(cut.shape)).datums
    return (*found, *_frame_beside(found))


def _in_part(cut: Cut, datum: Datum, index: int) -> Datum:
    """Return a place of a cut's shape in the part's frame, of one of its copies; faces point into the hole."""
    shown = replace(datum, direction=-datum.direction) if datum.is_outward else datum
    placed = shown.placed(Placement(cut.standing.turn[index], cut.standing.shift[index]))
    return replace(placed, name=name_in_copy(datum.name, index))


def _frame_beside(found: Sequence[Datum]) -> tuple[Datum, ...]:
    """Return the origin and axes of the frame that are not among the axes found in the surface already."""
    names = {datum.name for datum in found}
    return tuple(datum for datum in FRAME if datum.name not in names)


def surface_datums(body: ShapeBody | MeshBody) -> DatumSet:
    """Return the places in a body's surface before its cuts; of a large mesh in the lighter one that is drawn.

    About 0.4 s of processor time of a mesh of 150,000 facets when first asked; then it is kept.
    """
    if isinstance(body, ShapeBody):
        if body not in _shapes:
            facets = Facets(*weld_exactly(np.ascontiguousarray(body.surface.triangles)))
            _shapes[body] = _found_in(facets) if body.shape.measure != "pieces" else DatumSet(facets, ())
        return _shapes[body]
    if body.asset not in _meshes:
        _meshes[body.asset] = _found_in(body.asset.facets_for_view())
    return _enlarged(_meshes[body.asset], body.metres_per_unit)


def finding_takes_long(node: Node) -> bool:
    """Return whether somebody who asks for the places of a line has to wait: of a large mesh, for the first time."""
    if not isinstance(node, Part) or not isinstance(node.body, MeshBody):
        return False
    return node.body.asset not in _meshes and node.body.asset.survey.triangles > FOUND_AT_ONCE


def find_places(node: Node) -> None:
    """Find the places of a line, and keep them; a worker may do so ahead of time."""
    datums_of(node)


def _found_in(facets: Facets) -> DatumSet:
    return DatumSet(facets, _named(regions_of(facets)))


def _enlarged(found: DatumSet, metres_per_unit: float) -> DatumSet:
    datums = tuple(
        replace(datum, point=datum.point * metres_per_unit, edges=datum.edges * metres_per_unit)
        for datum in found.datums
    )
    return DatumSet(Facets(found.facets.points * metres_per_unit, found.facets.corners), datums)


def _centre_of_mass(part: Part) -> tuple[Datum, ...]:
    moments = part.single or part.solid
    if moments is None:
        return ()
    return (Datum(CENTRE_OF_MASS, "point", frozen(moments.centre), frozen([0.0, 0.0, 1.0])),)


# Names: found places by words, those with the same words told apart by where they lie.


@dataclass(frozen=True, eq=False)
class _Place:
    words: str
    datum: Datum


def _named(found: Regions) -> tuple[Datum, ...]:
    """Return regions and borders as datums: faces, circular edges, straight edges, axes."""
    faces = [
        _Place(_words("face", region.direction), _datum("face", region))
        for region in found.regions if region.is_plane
    ]
    rounds = [_round_axis(region, found.size) for region in found.regions if not region.is_plane]
    rims = [
        _Place(_words("rim", border.direction), _datum("rim", border))
        for border in found.borders if not border.is_straight
    ]
    straight = [
        _Place(_edge_words(*(found.regions[at].direction for at in border.regions)), _datum("edge", border))
        for border in found.borders if border.is_straight
    ]
    several = (faces, _merged(rims, found.size), straight, _merged(rounds, found.size))
    return tuple(datum for places in several for datum in _numbered(places, found.size))


def _datum(kind: DatumKind, found: Region | Border) -> Datum:
    datum = Datum("", kind, found.point, found.direction, found.edges)
    return replace(datum, facets=found.facets) if isinstance(found, Region) else datum


def _round_axis(region: Region, size: float) -> _Place:
    """Return the axis of a round; where that is an axis of the frame, it is this one."""
    datum = _datum("axis", region)
    for axis in FRAME[:3]:
        off = np.linalg.norm(np.cross(region.point, axis.direction))
        if off <= _SAME_PLACE * size and abs(axis.direction @ region.direction) == 1:
            return _Place(axis.name, replace(datum, point=axis.point, direction=axis.direction))
    return _Place(_words("round axis", np.abs(region.direction)).replace("+", ""), datum)


def _merged(places: list[_Place], size: float) -> list[_Place]:
    """Return places with those made one that lie on the same spot: the rims of a tube's bore and of its outside.

    Of axes the same line is enough; the place of the largest counts.
    """
    kept: list[_Place] = []
    for place in places:
        for at, other in enumerate(kept):
            if place.words == other.words and _is_same(place.datum, other.datum, size):
                both = replace(
                    other.datum, edges=frozen(np.concatenate([other.datum.edges, place.datum.edges])),
                    facets=np.concatenate([other.datum.facets, place.datum.facets]),
                )
                kept[at] = _Place(other.words, both)
                break
        else:
            kept.append(place)
    return kept


def _is_same(one: Datum, other: Datum, size: float) -> bool:
    apart = one.point - other.point
    if one.kind == "axis":
        apart = np.cross(apart, other.direction)
    return bool(np.linalg.norm(apart) <= _SAME_PLACE * size and abs(one.direction @ other.direction) > 1 - SAME_WAY)


def _numbered(places: list[_Place], size: float) -> list[Datum]:
    """Return the places in their order, each with a name of its own: the outermost of several has the plain words."""
    inside_out = sorted(range(len(places)), key=lambda at: _rank(places[at].datum, size))
    taken: Counter[str] = Counter()
    names: dict[int, str] = {}
    for at in inside_out:
        words = places[at].words
        taken[words] += 1
        names[at] = words if taken[words] == 1 else f"{words} ({taken[words]})"
    return [replace(place.datum, name=names[at]) for at, place in enumerate(places)]


def _rank(datum: Datum, size: float) -> tuple[float, ...]:
    """Return what puts places with the same words in order.

    Those along an axis of the frame: how far out they lie, then at which angle about it, then how far off. Slanted
    ones: at which angle about z they lie, then how high.
    """
    if not _signed(datum.direction):
        x, y, z = datum.point / size
        return (_turns(x, y), *(round(float(each), _RANK_DIGITS) for each in (z, math.hypot(x, y), *datum.direction)))
    x, y = across_of(datum.direction) @ datum.point / size
    height = float(datum.direction @ datum.point) / size
    return (-round(height, _RANK_DIGITS), _turns(x, y), round(math.hypot(x, y), _RANK_DIGITS))


def _turns(x: float, y: float) -> float:
    """Return the angle of (x, y) in turns, from 0 to 1; 0 in the middle."""
    if math.hypot(x, y) < _SAME_PLACE:
        return 0.0
    return round(math.atan2(y, x) / (2 * math.pi), _RANK_DIGITS) % 1


def _words(noun: str, direction: FloatArray) -> str:
    signed = _signed(direction)
    return f"{noun} {signed}" if signed else f"slanted {noun}"


def _edge_words(one: FloatArray, other: FloatArray) -> str:
    sides = [_signed(one), _signed(other)]
    return f"edge {' '.join(sorted(sides, key=_by_letter))}" if all(sides) else "slanted edge"


def _by_letter(signed: str) -> str:
    return signed[-1]


def _signed(direction: FloatArray) -> str:
    """Return a direction along an axis of the frame as a person writes it ("+z"), "" where it is slanted."""
    at = int(np.abs(direction).argmax())
    return f"{'+' if direction[at] > 0 else '−'}{'xyz'[at]}" if abs(direction[at]) == 1 else ""
