"""The numbers of a profile's outline, each under a path outline.LOOP.POINT.FIELD, counted from 0.

The fields of a point are 0 for x, 1 for y, 2 for its rounding and 3 for the arc to the next point; all in m.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, TypeVar

from core.shapes import Outline, OutlinedShape, OutlinePoint

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from core.assembly.cuts import Cut
    from core.assembly.nodes import Group, Part
    from core.shapes import Shape

AnyLine = TypeVar("AnyLine", bound="Part | Group | Cut")

OUTLINE = "outline."
FIELDS = OutlinePoint._fields


def outline_path(loop: int, point: int, field: int) -> str:
    """Return the path of a number of an outline."""
    return f"{OUTLINE}{loop}.{point}.{field}"


def outline_value(shape: Shape | None, path: str) -> float | None:
    """Return the number under a path, m; None where the shape has no outline, or its outline no such point."""
    steps = path.removeprefix(OUTLINE).split(".")
    if not isinstance(shape, OutlinedShape) or len(steps) != len(("loop", "point", "field")):
        return None
    if not all(step.isdecimal() for step in steps):
        return None
    loop, point, field = (int(step) for step in steps)
    loops = shape.outline.loops
    if loop >= len(loops) or point >= len(loops[loop]) or field >= len(FIELDS):
        return None
    return float(loops[loop][point][field])


def outline_words(path: str) -> str:
    """Return what the number under a path is called, for a sentence.

    >>> outline_words("outline.0.2.0"), outline_words("outline.1.0.3")
    ('point 3, x', 'point 1 of hole 1, arc')
    """
    loop, point, field = (int(step) for step in path.removeprefix(OUTLINE).split("."))
    hole = f" of hole {loop}" if loop else ""
    return f"point {point + 1}{hole}, {FIELDS[field]}"


def with_outline_values(shape: OutlinedShape, values: Mapping[str, float]) -> OutlinedShape:
    """Return the shape with other numbers (m) in its outline, by path, all put in at once.

    Raises:
        ShapeError: they make no outline, or not one of this shape.
    """
    loops = [[list(point) for point in loop] for loop in shape.outline.loops]
    for path, value in values.items():
        loop, point, field = (int(step) for step in path.removeprefix(OUTLINE).split("."))
        loops[loop][point][field] = value
    return shape.with_outline(Outline.of(*loops))


def with_places_moved(line: AnyLine, moved: Callable[[int, int], tuple[int, int] | None]) -> AnyLine:
    """Return a line whose texts of outline numbers go with their points.

    Args:
        line: made from an outline whose points have changed places.
        moved: gives the new loop and point of an old loop and point; None where the point is gone.
    """
    typed: list[tuple[str, str]] = []
    for path, text in line.typed:
        if not path.startswith(OUTLINE):
            typed.append((path, text))
            continue
        loop, point, field = (int(step) for step in path.removeprefix(OUTLINE).split("."))
        place = moved(loop, point)
        if place is not None:
            typed.append((outline_path(*place, field), text))
    kept = tuple(sorted(typed))
    return line if kept == line.typed else replace(line, typed=kept)
