"""Axes that follow the parts whose own axes they are."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import settled
from core.assembly.axis import DriveAxis
from core.assembly.nodes import Part
from core.assembly.own_axis import own_axis_along, own_axis_of
from core.assembly.placing import standing_of
from core.errors import EditRefused
from core.moments import unit_vector

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly


def axis_of_part(assembly: Assembly, key: str, name: str) -> DriveAxis:
    """Return the own axis of a part, named and pointing the drive axis's way; it follows the part from then on.

    Raises:
        EditRefused: the key is not that of a part, or the part has no axis of its own.
    """
    part = assembly.node_of_line(key)
    if not isinstance(part, Part):
        raise EditRefused(
            "an axis follows a part, and this is a group", where=part.name, remedy="Choose one of its parts"
        )
    own = own_axis_of(assembly, part.key, assembly.drive_axis)
    ahead = standing_of(assembly, part.key).turn_only(own.direction) @ assembly.drive_axis.unit >= 0
    x, y, z = settled(own.direction if ahead else -own.direction, 1.0).tolist()
    return _kept(assembly, DriveAxis(name, part=part.key, toward=(x, y, z)))


def kept_on_parts(assembly: Assembly) -> tuple[DriveAxis, ...]:
    """Return the assembly's axes with those of parts where the parts stand now; the same object if none moves.

    An axis whose part is gone stands by itself, where the part was last.

    Raises:
        EditRefused: a part has lost its own axis.
    """
    axes = tuple(_kept(assembly, axis) if axis.part else axis for axis in assembly.axes)
    return assembly.axes if all(new is old for new, old in zip(axes, assembly.axes, strict=True)) else axes


def _kept(assembly: Assembly, axis: DriveAxis) -> DriveAxis:
    if axis.part not in assembly or not isinstance(assembly.line(axis.part), Part):
        return replace(axis, part="")
    toward, standing = unit_vector(axis.toward), standing_of(assembly, axis.part)
    try:
        own = own_axis_along(assembly, axis.part, toward)
    except EditRefused as error:
        raise EditRefused(
            f'the axis "{axis.name}" is the one of this part, and {error.what}', where=error.where, read=error.read,
            remedy="Give the axis a point and a direction first",
        ) from error
    point = standing.apply(own.point)
    direction = standing.turn_only(own.direction if own.direction @ toward >= 0 else -own.direction)
    (x, y, z), (u, v, w) = settled(point, np.abs(point).max()).tolist(), settled(direction, 1.0).tolist()
    moved = replace(axis, point=(x, y, z), direction=(u, v, w), second=None, typed=())
    return axis if moved == axis else moved
