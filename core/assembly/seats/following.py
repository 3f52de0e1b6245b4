"""Lines that follow their seats: after an edit each stands where its seat says, in the order of their dependence."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.assembly.names import USES
from core.assembly.nodes import Group, Node, Part
from core.assembly.seat import Anchor
from core.assembly.seats.standing import Standings, pose_of_first, seat_placement
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping

    from core.assembly.assembly import Assembly
    from core.placement import Placement, Pose

# A place that differs by less than this from the one before, relative to the lengths that lead to it, is the same.
SAME_PLACE: Final = 1e-12


def seated(assembly: Assembly, before: Assembly | None = None) -> Assembly:
    """Return the assembly with every seated line where its seat says; the same one where all of them are there.

    A seat goes, and its line stays where it is, when a line or axis that it is on goes. It follows an axis that gets
    another name.

    Args:
        assembly: as an edit leaves it.
        before: as it was before the edit; a line that the edit moved away from its seat is then refused.

    Raises:
        EditRefused: seats depend on one another in a loop, one is on a place that its line no longer has or on the
            seated line itself, or a seated line was moved by other means.
    """
    nodes = {node.key: node for node in seated_in(assembly.members)}
    if not nodes:
        return assembly
    known = {key: _kept(assembly, before, node) for key, node in nodes.items()}
    changed = {key: node for key, node in known.items() if node is not nodes[key]}
    assembly = _with_nodes(assembly, changed)
    follower = _Follower(
        Standings(assembly), {key: node for key, node in known.items() if node.seat is not None},
        None if before is None else Standings(before),
    )
    moved: dict[str, Node] = {}
    for key in follower.in_order():
        node = known[key]
        pose = follower.pose_of(node)
        if pose is not node.pose:
            if before is not None:
                _refuse_moved(before, assembly, node)
            moved[key] = replace(node, pose=pose)
            follower.standings.poses[key] = pose
    return _with_nodes(assembly, moved)


def seated_in(members: tuple[Node, ...]) -> Iterator[Node]:
    """Yield the lines that are seated, inside groups too, in the order of the ledger."""
    for node in members:
        if node.seat is not None:
            yield node
        if isinstance(node, Group) and node.holds_seats:
            yield from seated_in(node.members)


def check_seats(assembly: Assembly) -> None:
    """Refuse a seat on a line or an axis that is not there.

    Raises:
        EditRefused: there is one.
    """
    for node in seated_in(assembly.members):
        if not _is_whole(assembly, node):
            raise EditRefused(
                "the seat is on a line or axis that is not there", where=node.name,
                remedy="Remove the seat, or bring back what it is on",
            )


@dataclass(frozen=True)
class _Follower:
    """Finds where seated lines belong, and in which order that can be asked.

    Attributes:
        standings: of the assembly, with the poses that were found so far.
        nodes: the seated lines by key.
        before: of the assembly before the edit, in which all of them were where they belong; None: of no such one.
    """

    standings: Standings
    nodes: Mapping[str, Node]
    before: Standings | None = None

    def in_order(self) -> tuple[str, ...]:
        """Return the keys of the seated lines so that each stands behind all that its place depends on.

        Raises:
            EditRefused: one depends on itself; the chain is in the sentence.
        """
        done: dict[str, None] = {}
        for start in self.nodes:
            # Depth first with a stack of its own: a chain of a thousand seats must not end the program.
            path: dict[str, list[str]] = {} if start in done else {start: self._needs(start)}
            while path:
                last = next(reversed(path))
                if not path[last]:
                    path.popitem()
                    done[last] = None
                    continue
                following = path[last].pop(0)
                if following in path:
                    steps = [*path]
                    chain = [*steps[steps.index(following) :], following]
                    raise EditRefused(
                        "the seats depend on one another in a loop", where=self.nodes[following].name,
                        read=USES.join(self.nodes[key].name for key in chain), remedy="Remove one of these seats",
                    )
                if following not in done:
                    path[following] = self._needs(following)
        return tuple(done)

    def pose_of(self, node: Node) -> Pose:
        """Return where a line's seat puts it; its own pose, as the same object, where it is there.

        Raises:
            EditRefused: a place of the seat is not there, or on the wrong line.
        """
        assert node.seat is not None
        if self._is_untouched(node):
            return node.pose
        own = self.standings.own_frame(node, node.seat.moving)
        target = self.standings.target_frame(node, node.seat.target)
        aim = seat_placement(node.seat)
        wanted = target @ aim @ own.inverse()
        scale = sum(float(np.abs(each.shift).max()) for each in (own, target, aim))
        if _agree(wanted, self.standings.first_copy(node), scale):
            return node.pose
        return pose_of_first(node.copies, wanted, scale)

    def _is_untouched(self, node: Node) -> bool:
        """Return whether the edit left alone all that a line's place follows from; False where that is not plain."""
        assert node.seat is not None
        before, now = self.before, self.standings
        if before is None or before.assembly.axes is not now.assembly.axes:
            return False
        for anchor in (Anchor(node.key, ""), node.seat.moving, node.seat.target):
            if anchor.key and anchor.key not in before.assembly:
                return False
            path, old = now.path_to(anchor), before.path_to(anchor)
            if len(path) != len(old) or any(each.key in now.poses for each in path):
                return False
            if not all(map(_stands_alike, path, old)) or (path and not _has_same_places(path[-1], old[-1])):
                return False
        return before.assembly.node(node.key).seat is node.seat

    def _needs(self, key: str) -> list[str]:
        """Return the seated lines that decide where a line's seat is."""
        node = self.nodes[key]
        assert node.seat is not None
        above, path = self.standings.apart(node, node.seat.target)
        inner = [each.key for each in self.standings.path_to(node.seat.moving)]
        inner = inner[inner.index(key) + 1 :] if key in inner else []
        keys = [*(each.key for each in (*above, *path)), *inner]
        return [each for each in keys if each in self.nodes and each != key]


def _stands_alike(one: Node, other: Node) -> bool:
    return one is other or (one.key == other.key and one.pose is other.pose and one.copies is other.copies)


def _has_same_places(one: Node, other: Node) -> bool:
    if one is other or isinstance(one, Group):
        return one is other or isinstance(other, Group)
    return isinstance(other, Part) and one.body is other.body and one.cuts is other.cuts and one.driver is other.driver


def _agree(one: Placement, other: Placement, scale: float) -> bool:
    turned = float(np.abs(one.turn - other.turn).max())
    shifted = float(np.abs(one.shift - other.shift).max())
    return turned <= SAME_PLACE and shifted <= SAME_PLACE * scale


def _is_whole(assembly: Assembly, node: Node) -> bool:
    """Return whether the lines or the axis that a seat is between are there."""
    assert node.seat is not None
    moving, target = node.seat.moving, node.seat.target
    there = target.key in assembly if target.key else any(axis.name == target.datum for axis in assembly.axes)
    return there and moving.key in assembly


def _kept(assembly: Assembly, before: Assembly | None, node: Node) -> Node:
    """Return a seated line with its seat as the edit leaves it: without one where what it was on is gone."""
    if _is_whole(assembly, node):
        return node
    assert node.seat is not None
    target = node.seat.target
    if not target.key and before is not None and len(before.axes) == len(assembly.axes):
        for old, new in zip(before.axes, assembly.axes, strict=True):
            if old.name == target.datum:
                return replace(node, seat=replace(node.seat, target=replace(target, datum=new.name)))
    return replace(node, seat=None)


def _refuse_moved(before: Assembly, assembly: Assembly, node: Node) -> None:
    """Refuse an edit that moved a line which its seat puts elsewhere."""
    if node.key not in before:
        return
    old = before.node_of_line(node.key)
    holders = [tuple(group.key for group in each.groups_above(node.key)) for each in (before, assembly)]
    if old.key == node.key and old.seat == node.seat and old.pose != node.pose and holders[0] == holders[1]:
        raise EditRefused(
            "a seated line stands where its seat says", where=node.name,
            remedy="Change the offset or turn of its seat, or remove the seat first",
        )


def _with_nodes(assembly: Assembly, changed: Mapping[str, Node]) -> Assembly:
    """Return the assembly with seated lines replaced by those of the same key; all else stays the same object."""
    return replace(assembly, members=_rebuilt(assembly.members, changed)) if changed else assembly


def _rebuilt(members: tuple[Node, ...], changed: Mapping[str, Node]) -> tuple[Node, ...]:
    return tuple(_rebuilt_node(changed.get(node.key, node), changed) for node in members)


def _rebuilt_node(node: Node, changed: Mapping[str, Node]) -> Node:
    if not isinstance(node, Group) or not node.holds_seats:
        return node
    inner = _rebuilt(node.members, changed)
    same = all(new is old for new, old in zip(inner, node.members, strict=True))
    return node if same else replace(node, members=inner)
