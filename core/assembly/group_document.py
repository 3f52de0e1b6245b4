"""A group as a document of its own: its lines in its own frame, with the names and variants that they use."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import settled
from core.assembly.assembly import Assembly
from core.assembly.names import in_order
from core.assembly.naming import entries_of
from core.assembly.nodes import Group, Part, walk
from core.assembly.seats import seated
from core.errors import EditRefused
from core.placement import Placement
from core.quantity import names_in

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.assembly.axis import DriveAxis
    from core.assembly.names import NamedDimension


def document_of_group(assembly: Assembly, key: str) -> Assembly:
    """Return the members of a group as a document whose frame is the group's own.

    Its drive axis is this document's as it lies in the frame of the group's first copy, so that J about it is that of
    the first copy. Of the named dimensions those are taken along that its lines use, of the variants and of the marks
    on overlaps those that its lines are in.

    Raises:
        EditRefused: it is no group.
    """
    group = assembly.node(key)
    if not isinstance(group, Group):
        raise EditRefused(
            "only a group becomes a document of its own", where=group.name, remedy="Put the part into a group first"
        )
    inside = {node.key for node, _ in walk(group.members)}
    variants = assembly.variants if any(node.only_in for node, _ in walk(group.members)) else ()
    # Seats on what stays behind go; their lines stay where they are.
    return seated(Assembly(
        group.name,
        group.members,
        (_axis_inside(assembly.drive_axis, _standing(assembly, group), inside),),
        assembly.drive,
        tuple(mark for mark in assembly.meant if mark.key_a in inside and mark.key_b in inside),
        tuple(_used_names(assembly, group)),
        variants,
        assembly.variant if variants else "",
    ))


def _standing(assembly: Assembly, group: Group) -> Placement:
    """Return the placement tf_document_group of the first copy of a group, in the first copies of those around it."""
    standing = Placement.identity()
    for each in (*assembly.groups_above(group.key), group):
        copies = each.copies.placements(each.pose.placement)
        standing = standing @ Placement(copies.turn[0], copies.shift[0])
    return standing


def _axis_inside(axis: DriveAxis, standing: Placement, inside: set[str]) -> DriveAxis:
    """Return an axis as it lies in the frame that stands so in the document; it follows a part that is inside."""
    back = standing.inverse()
    reach = np.abs(axis.point).max() + np.abs(back.shift).max()
    x, y, z = settled(back.apply(axis.point), reach).tolist()
    u, v, w = settled(back.turn_only(axis.direction), np.abs(axis.direction).max()).tolist()
    part = axis.part if axis.part in inside else ""
    return replace(axis, point=(x, y, z), direction=(u, v, w), second=None, part=part, typed=())


def _used_names(assembly: Assembly, group: Group) -> Iterator[NamedDimension]:
    """Yield the named dimensions that the texts of the lines inside use, and those that these use, in their order."""
    entries = {entry.name: entry for entry in entries_of(assembly)}
    texts = [text for node, _ in walk(group.members) for text in _texts(node)]
    used = {name for text in texts for name in names_in(text, entries)}
    # From what depends on others down to what they are made of.
    for name in reversed(in_order(entries)):
        if name in used:
            used.update(names_in(entries[name].text, entries))
    return (one for one in assembly.names if one.name in used)


def _texts(node: Part | Group) -> Iterator[str]:
    for line in (node, *(node.cuts if isinstance(node, Part) else ())):
        yield from (text for _, text in line.typed)
