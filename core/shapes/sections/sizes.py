"""The EN sizes by name: what "IPE 200" is, as a section with its dimensions."""

from __future__ import annotations

import re
from dataclasses import dataclass
from difflib import get_close_matches
from functools import cache
from math import atan
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from core.errors import ShapeError
from core.shapes.base import SHAPES
from core.shapes.sections import size_table as table
from core.shapes.sections.hollow_sections import (
    CircularHollowSection,
    RectangularHollowSection,
    SquareHollowSection,
)
from core.shapes.sections.i_sections import ISection, TaperedISection
from core.shapes.sections.open_sections import AngleSection, ChannelSection

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from core.arrays import ArrayLike
    from core.shapes.base import Shape

# Up to which wall, in mm, a cold formed corner is reckoned with which radii, in wall thicknesses (EN 10219-2).
_COLD_RADII = ((6.0, 2.0, 1.0), (10.0, 2.5, 1.5), (float("inf"), 3.0, 2.0))
_HOT_RADII = (1.5, 1.0)

_LONGEST_NAME = 100


@dataclass(frozen=True)
class SectionSize:
    """One size of a standard section.

    Attributes:
        name: as in the trade, "IPE 200" or "L 50x50x5".
        series: the family it stands under in a menu, "IPE", "L", "SHS hot".
        shape: the key of its shape in SHAPES.
        dimensions: all but the length, in m and rad.
        source: where the numbers are from.
    """

    name: str
    series: str
    shape: str
    dimensions: Mapping[str, float]
    source: str

    def section(self, length: ArrayLike) -> Shape:
        """Return the section at a length (...) in m."""
        return SHAPES[self.shape].of({**self.dimensions, "length": length})


@cache
def section_sizes() -> Mapping[str, SectionSize]:
    """Return every size by its name, in the order of the series and of their sizes."""
    return MappingProxyType({size.name: size for size in _all_sizes()})


def section_named(name: str) -> SectionSize:
    """Return the size with this name; capitals, blanks and the sign × do not matter, and "HEA 200" is "HE 200 A".

    Raises:
        ShapeError: there is no such size; the nearest ones are named.

    >>> section_named("hea200").name, section_named("L 50×5").name
    ('HE 200 A', 'L 50x50x5')
    """
    spelled = _spelling(name[:_LONGEST_NAME])
    known = _by_spelling()
    if spelled in known:
        return known[spelled]
    near = [known[key].name for key in get_close_matches(spelled, known, n=3, cutoff=0.5)]
    raise ShapeError(
        "there is no such size in the table", where="section", read=f'"{name[:_LONGEST_NAME]}"',
        remedy=f"Choose from {', '.join(dict.fromkeys(near))}" if near else 'Write a name such as "IPE 200"',
    )


@cache
def _by_spelling() -> Mapping[str, SectionSize]:
    known = {}
    for size in section_sizes().values():
        known[_spelling(size.name)] = size
        if size.series in ("L", "SHS hot", "SHS cold"):
            # Of equal sides one may be left out.
            known.setdefault(re.sub(r"^([a-z]+)([0-9.]+)x\2x", r"\1\2x", _spelling(size.name)), size)
    return MappingProxyType(known)


def _spelling(name: str) -> str:
    text = re.sub(r"\s+", "", name.casefold().replace("×", "x").replace("*", "x").replace(",", "."))
    return re.sub(r"^he([0-9]+)([ab])$", r"he\2\1", text)


def _all_sizes() -> Iterator[SectionSize]:
    yield from _rolled_i()
    yield from _channels()
    for longer, shorter, root, *walls in table.ANGLES:
        for wall in walls:
            name = f"L {longer:g}x{shorter:g}x{wall:g}"
            names = ("leg_y", "leg_x", "thickness", "root_radius", "toe_radius")
            lengths = _lengths(names, (longer, shorter, wall, root, root / 2))
            yield SectionSize(name, "L", AngleSection.key, lengths, table.ANGLE_SOURCE)
    yield from _boxes()
    for diameter, *walls in table.CIRCULAR_HOLLOW:
        for wall in walls:
            lengths = _lengths(("diameter", "wall"), (diameter, wall))
            source = table.HOLLOW_HOT_SOURCE.partition(";")[0]
            yield SectionSize(f"CHS {diameter:g}x{wall:g}", "CHS", CircularHollowSection.key, lengths, source)


def _rolled_i() -> Iterator[SectionSize]:
    names, source = ("height", "width", "web", "flange", "root_radius"), table.IPE_SOURCE
    for row in table.IPE:
        yield SectionSize(f"IPE {row[0]:g}", "IPE", ISection.key, _lengths(names, row), source)
    for letter, rows in (("A", table.HE_A), ("B", table.HE_B)):
        for nominal, *millimetres in rows:
            lengths = _lengths(names, millimetres)
            yield SectionSize(f"HE {nominal:g} {letter}", f"HE {letter}", ISection.key, lengths, source)
    for height, width, web, flange, toe in table.IPN:
        lengths = _lengths((*names, "toe_radius"), (height, width, web, flange, web, toe))
        slope = {"slope": atan(0.14)}
        yield SectionSize(f"IPN {height:g}", "IPN", TaperedISection.key, {**lengths, **slope}, source)


def _channels() -> Iterator[SectionSize]:
    names, source = ("height", "width", "web", "flange", "root_radius", "toe_radius"), table.IPE_SOURCE
    for height, width, web, flange, toe in table.UPN:
        lengths = _lengths(names, (height, width, web, flange, flange, toe))
        slope = {"slope": atan(0.08)}
        yield SectionSize(f"UPN {height:g}", "UPN", ChannelSection.key, {**lengths, **slope}, source)
    for row in table.UPE:
        lengths = _lengths(names, (*row, 0.0))
        yield SectionSize(f"UPE {row[0]:g}", "UPE", ChannelSection.key, {**lengths, "slope": 0.0}, source)


def _boxes() -> Iterator[SectionSize]:
    for made, source in (("hot", table.HOLLOW_HOT_SOURCE), ("cold", table.HOLLOW_COLD_SOURCE)):
        for side, *walls in table.SQUARE_HOLLOW:
            for wall in walls:
                lengths = _lengths(("side", "wall", *_RADII), (side, wall, *_radii(made, wall)))
                name = f"SHS {side:g}x{side:g}x{wall:g} {made}"
                yield SectionSize(name, f"SHS {made}", SquareHollowSection.key, lengths, source)
        for height, width, *walls in table.RECTANGULAR_HOLLOW:
            for wall in walls:
                lengths = _lengths(("height", "width", "wall", *_RADII), (height, width, wall, *_radii(made, wall)))
                name = f"RHS {height:g}x{width:g}x{wall:g} {made}"
                yield SectionSize(name, f"RHS {made}", RectangularHollowSection.key, lengths, source)


_RADII: Final = ("outer_radius", "inner_radius")


def _radii(made: str, wall: float) -> tuple[float, float]:
    """Return the outer and inner corner radius in mm that the standard reckons with, for a wall in mm."""
    if made == "hot":
        return _HOT_RADII[0] * wall, _HOT_RADII[1] * wall
    outer, inner = next((outer, inner) for most, outer, inner in _COLD_RADII if wall <= most)
    return outer * wall, inner * wall


def _lengths(names: Sequence[str], millimetres: Sequence[float]) -> dict[str, float]:
    # Divided, not multiplied: 8.5/1000 is the double nearest to 0.0085.
    return {name: value / 1000 for name, value in zip(names, millimetres, strict=True)}
