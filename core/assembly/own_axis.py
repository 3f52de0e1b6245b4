"""The axis that a line has of its own, and the smallest move that lays it on a drive axis."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import FloatArray, frozen
from core.assembly.bodies import KnownAxial, KnownTensor, ShapeBody
from core.assembly.cuts import Cut
from core.assembly.meeting import is_round_shape
from core.assembly.nodes import Group, Part, table_of
from core.assembly.placing import moved, standing_of
from core.errors import EditRefused
from core.placement import Placement, smallest_turn

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.assembly.assembly import Assembly
    from core.assembly.axis import DriveAxis
    from core.assembly.fields import AnyLine
    from core.moments import Moments

# Two principal moments whose gap is this part of the gap to the third, or less, belong to a body that is round but
# for a keyway or the facets of its mesh.
NEARLY_ROUND = 0.05
# Relative, and rad: what lies this near to an axis lies on it.
_SAME = 1e-13


@dataclass(frozen=True, eq=False)
class OwnAxis:
    """An axis that belongs to a body.

    Attributes:
        point: (3,) m, in the line's own frame.
        direction: (3,), of length one, in the line's own frame.
        words: which axis it is, for the name of an edit.
    """

    point: FloatArray
    direction: FloatArray
    words: str


def own_axis_of(assembly: Assembly, key: str, axis: DriveAxis) -> OwnAxis:
    """Return a line's own axis; its cuts, and the copies of the line, are left aside.

    It is the axis of revolution of a round shape and of a known part with one inertia; else, through the centre of
    mass, the principal axis whose moment stands apart from two that are nearly alike; and where all three differ, or
    none does, the principal axis that the given axis is nearest to. A cut's is that of its shape; a point mass takes
    any direction.

    Raises:
        EditRefused: nothing in it has a mass, or its mesh bounds no volume.
    """
    toward = standing_of(assembly, key).inverse().turn_only(axis.unit)
    return _own_axis(assembly, key, toward, _apart)


def own_axis_along(assembly: Assembly, key: str, toward: FloatArray) -> OwnAxis:
    """Return the axis of a line that is nearest to a direction (3,) of length one in the line's own frame.

    Unlike that of `own_axis_of` it stays the same one however the line is turned, and when its dimensions change.

    Raises:
        EditRefused: as own_axis_of.
    """
    return _own_axis(assembly, key, toward, lambda _moments: None)


def _own_axis(
    assembly: Assembly, key: str, toward: FloatArray, chosen: Callable[[FloatArray], int | None]
) -> OwnAxis:
    """Return a line's own axis: the principal one that is chosen by the moments, else the one nearest to `toward`."""
    line = assembly.line(key)
    if _is_round_about_z(line):
        return OwnAxis(np.zeros(3), np.array([0.0, 0.0, 1.0]), "its axis z")
    whole = _whole(assembly, key)
    if whole is None or not float(whole.mass) > 0:
        raise EditRefused(
            "it has no axis of its own: nothing in it has a mass or bounds a volume", where=line.name,
            remedy="Give its parts a material or a mass, or place it by numbers",
        )
    principal = whole.principal
    if not principal.moments.any():
        return OwnAxis(frozen(whole.centre), frozen(toward), "its centre of mass")
    number = chosen(principal.moments)
    if number is None:
        number = int(np.abs(principal.axes @ toward).argmax())
    words = f"its principal axis {number + 1}, through its centre of mass"
    return OwnAxis(frozen(whole.centre), frozen(principal.axes[number]), words)


def laid_on_axis(assembly: Assembly, key: str, axis: DriveAxis) -> Assembly:
    """Return the assembly with a line's own axis on an axis of the document, by the smallest move that does it.

    It is turned by the smallest turn that makes the two parallel or opposite, about a point of its own axis, and then
    shifted square to the axis: how far along the axis it stands, and how it is turned about it, stays as it was. Of
    copies the first one is laid there. What lies there already is left as it is.

    Raises:
        EditRefused: it has no axis of its own; see own_axis_of.
    """
    own, standing = own_axis_of(assembly, key, axis), standing_of(assembly, key)
    point, direction = standing.apply(own.point), standing.turn_only(own.direction)
    unit = axis.unit if direction @ axis.unit >= 0 else -axis.unit
    turn = smallest_turn(direction, unit)
    lever = np.asarray(axis.point, dtype=float) - point
    shift = lever - (lever @ unit) * unit
    size = max(float(np.abs(lever).max()), float(np.abs(standing.shift).max()), np.finfo(float).tiny)
    if np.abs(turn - np.eye(3)).max() <= _SAME and np.abs(shift).max() <= _SAME * size:
        return assembly
    return moved(assembly, (key,), Placement(turn, point + shift - turn @ point))


def _is_round_about_z(line: AnyLine) -> bool:
    if isinstance(line, Cut):
        return is_round_shape(line.shape)
    body = line.body if isinstance(line, Part) else None
    return isinstance(body, KnownAxial) or (isinstance(body, ShapeBody) and is_round_shape(body.shape))


def _whole(assembly: Assembly, key: str) -> Moments | None:
    """Return the moments that tell a line's principal axes, in its own frame; a body's before its cuts."""
    line = assembly.line(key)
    if isinstance(line, Group):
        counted = assembly.counted.node(key) if key in assembly.counted else line
        return table_of(counted.members).moments.total() if isinstance(counted, Group) else None
    if isinstance(line, Cut):
        return line.shape.moments()
    return line.body.own if isinstance(line.body, KnownTensor | KnownAxial) else line.body.solid


def _apart(moments: FloatArray) -> int | None:
    """Return which of three ascending principal moments stands apart from two that are nearly alike, or None."""
    low, high = float(moments[1] - moments[0]), float(moments[2] - moments[1])
    if low < NEARLY_ROUND * high:
        return 2
    return 0 if high < NEARLY_ROUND * low else None
