"""Moving lines as they stand in the document: where a line's frame is there, and the edits that move it.

Of copies, of the line itself or of a group above it, the first one is meant; the others follow their pattern. A cut
stands in the frame of the part that it is taken out of.
"""

from __future__ import annotations

from dataclasses import replace
from functools import reduce
from typing import TYPE_CHECKING

import numpy as np

from core.assembly.nodes import Group, table_of
from core.assembly.selection import selected
from core.placement import Placement, Pose, Ring

if TYPE_CHECKING:
    from collections.abc import Iterable

    from core.arrays import FloatArray
    from core.assembly.assembly import Assembly
    from core.assembly.fields import AnyLine
    from core.placement import Copies


def frame_of(assembly: Assembly, key: str) -> Placement:
    """Return tf_document_outer: where the frame stands in which the line's pose is given.

    Raises:
        EditRefused: no line has this key.
    """
    node = assembly.node_of_line(key)
    above: tuple[AnyLine, ...] = assembly.groups_above(node.key)
    if assembly.is_cut(key):
        above = (*above, node)
    return reduce(lambda outer, line: outer @ first_of(line.copies, line.pose.placement), above, Placement.identity())


def standing_of(assembly: Assembly, key: str) -> Placement:
    """Return tf_document_line: where the line's own frame stands, of its first copy.

    Raises:
        EditRefused: no line has this key.
    """
    line = assembly.line(key)
    return frame_of(assembly, key) @ first_of(line.copies, line.pose.placement)


def pose_in_document(assembly: Assembly, key: str) -> Pose:
    """Return the line's pose as the document's frame has it, its copies left aside.

    Raises:
        EditRefused: no line has this key.
    """
    return Pose.of(frame_of(assembly, key) @ assembly.line(key).pose.placement)


def posed(assembly: Assembly, key: str, pose: Pose) -> Assembly:
    """Return the assembly with another pose of a line, in the frame that holds it.

    What was typed for a number of the pose that changes is dropped.

    Raises:
        EditRefused: no line has this key.
    """
    line = assembly.line(key)
    pairs = {
        **{f"position.{at}": (line.pose.position[at], pose.position[at]) for at in range(3)},
        **{f"turn.{at}": (line.pose.turns[at], pose.turns[at]) for at in range(3)},
    }
    typed = tuple((path, text) for path, text in line.typed if path not in pairs or pairs[path][0] == pairs[path][1])
    return assembly.with_line(replace(line, pose=pose, typed=typed))


def posed_in_document(assembly: Assembly, key: str, pose: Pose) -> Assembly:
    """Return the assembly with a line at a pose that is given in the document's frame, its copies left aside.

    Raises:
        EditRefused: no line has this key.
    """
    return posed(assembly, key, Pose.of(frame_of(assembly, key).inverse() @ pose.placement))


def moved(assembly: Assembly, keys: Iterable[str], motion: Placement) -> Assembly:
    """Return the assembly with lines, as they stand in the document, carried along by a rigid motion.

    A line that stands in another one of them goes with that one.

    Args:
        assembly: it stays as it is.
        keys: of parts, groups and cuts.
        motion: of points of the document frame; it does not mirror.

    Raises:
        EditRefused: no line has one of the keys.
    """
    return reduce(lambda after, key: _moved(after, key, motion), outermost(assembly, keys), assembly)


def outermost(assembly: Assembly, keys: Iterable[str]) -> tuple[str, ...]:
    """Return those of the lines that stand in no other of them, in the order of the keys.

    Raises:
        EditRefused: no line has one of the keys.
    """
    wanted = tuple(dict.fromkeys(keys))

    def goes_along(key: str) -> bool:
        node = assembly.node_of_line(key)
        above = {group.key for group in assembly.groups_above(node.key)} | ({node.key} - {key})
        return not above.isdisjoint(wanted)

    return tuple(key for key in wanted if not goes_along(key))


def standing_rows(assembly: Assembly, key: str) -> dict[str, Placement]:
    """Return tf_document_part of all copies of each part in a node, by the part's key, as they are in the totals.

    Raises:
        EditRefused: the key is that of no part or group.
    """
    table = selected(assembly, key).table
    return {
        part.key: Placement(table.standing.turn[rows], table.standing.shift[rows])
        for part, rows in zip(table.parts, table.rows_by_part, strict=True)
    }


def mass_centre_of(assembly: Assembly, key: str) -> FloatArray | None:
    """Return the centre of mass (3,) m of the first copy of a part or group, in the document frame.

    None for a cut, and where nothing in it has a mass.

    Raises:
        EditRefused: no line has this key.
    """
    if assembly.is_cut(key):
        return None
    counted = assembly.counted if key in assembly.counted else assembly
    node = counted.node(key)
    whole = table_of(node.members).moments.total() if isinstance(node, Group) else node.single
    if whole is None or not float(whole.mass) > 0:
        return None
    return standing_of(assembly, key).apply(whole.centre)


def _moved(assembly: Assembly, key: str, motion: Placement) -> Assembly:
    line, outer = assembly.line(key), frame_of(assembly, key)
    first = first_of(line.copies, line.pose.placement)
    within = outer.inverse() @ motion @ outer
    placed = Pose.of(unled(line.copies, within @ first))
    if np.array_equal(motion.turn, np.eye(3)):
        # A mere shift leaves the turns as they were typed.
        placed = replace(placed, turns=line.pose.turns)
    return posed(assembly, key, placed)


def first_of(copies: Copies, placed: Placement) -> Placement:
    """Return where the first copy stands of what was placed: a ring may turn it on, all others leave it there."""
    if not isinstance(copies, Ring):
        return placed
    lead = Placement.about(copies.point, copies.direction, copies.start)
    return lead @ placed if copies.turning else Placement(placed.turn, lead.apply(placed.shift))


def unled(copies: Copies, first: Placement) -> Placement:
    """Return what was placed, from where its first copy stands."""
    return first_of(replace(copies, start=-copies.start), first) if isinstance(copies, Ring) else first
