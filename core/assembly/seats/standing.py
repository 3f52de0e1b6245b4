"""Where places of lines stand in one another's frames, the first copy of every line and group counting."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import reduce
from operator import matmul
from typing import TYPE_CHECKING, Final

import numpy as np

from core.arrays import settled
from core.assembly.placing import first_of, standing_of, unled
from core.assembly.seats.datums import Datum, datum_named
from core.errors import EditRefused
from core.placement import Placement, Pose, matrix_of_turns

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Node
    from core.assembly.seat import Anchor, Seat
    from core.placement import Copies

# Half a turn about u: what points along a datum's direction then points against it.
AGAINST: Final = np.diag([1.0, -1.0, -1.0])


@dataclass
class Standings:
    """Finds places in the frames of lines.

    Attributes:
        assembly: whose lines they are.
        poses: by key of a line, where it stands instead of where the assembly has it.
    """

    assembly: Assembly
    poses: dict[str, Pose] = field(default_factory=dict)

    def path_to(self, anchor: Anchor) -> tuple[Node, ...]:
        """Return the groups that hold a place's line, the outermost first, and the line.

        The line of a place on a cut is the part that it is taken out of; that of an axis of a part is the part. Other
        axes of the document have none.
        """
        key = anchor.key or next((axis.part for axis in self.assembly.axes if axis.name == anchor.datum), "")
        if not key:
            return ()
        node = self.assembly.node_of_line(key)
        return (*self.assembly.groups_above(node.key), node)

    def apart(self, node: Node, target: Anchor) -> tuple[tuple[Node, ...], tuple[Node, ...]]:
        """Return the groups above a seated line and the path to its target, from where the two part."""
        above, path = self.assembly.groups_above(node.key), self.path_to(target)
        common = 0
        while common < min(len(above), len(path)) and above[common].key == path[common].key:
            common += 1
        return above[common:], path[common:]

    def own_frame(self, node: Node, moving: Anchor) -> Placement:
        """Return the placement tf_node_datum of a place in a line.

        Raises:
            EditRefused: the place is not in the line, or the line has none of this name.
        """
        path = self.path_to(moving)
        keys = [each.key for each in path]
        if node.key not in keys:
            raise EditRefused(
                "a line is seated by a place of its own", where=node.name, read=_said(self.assembly, moving),
                remedy="Choose one of its faces, edges or axes, or of a part in it",
            )
        inner = path[keys.index(node.key) + 1 :]
        return self._through(inner) @ self._datum(node, moving).frame

    def target_frame(self, node: Node, target: Anchor) -> Placement:
        """Return the placement tf_holder_datum of a place, in the frame that a seated line stands in.

        Raises:
            EditRefused: the place is on the line itself, or its line has none of this name.
        """
        above, path = self.apart(node, target)
        if node.key in {each.key for each in path}:
            raise EditRefused(
                "a line cannot be seated on itself", where=node.name, read=_said(self.assembly, target),
                remedy="Choose a place of another line",
            )
        return self._through(above).inverse() @ self._through(path) @ self._datum(node, target).frame

    def first_copy(self, node: Node) -> Placement:
        """Return the placement tf_holder_node of the first copy of a line."""
        return first_of(node.copies, self.poses.get(node.key, node.pose).placement)

    def _through(self, nodes: Sequence[Node]) -> Placement:
        placements = [self.first_copy(node) for node in nodes]
        return reduce(matmul, placements) if placements else Placement.identity()

    def _datum(self, node: Node, anchor: Anchor) -> Datum:
        found = self.datum(anchor)
        if found is None:
            raise EditRefused(
                "its seat is on a place that is not there", where=node.name,
                read=_said(self.assembly, anchor), remedy="Remove the seat first, or seat the line on another place",
            )
        return found

    def datum(self, anchor: Anchor) -> Datum | None:
        """Return the place in the frame of the line that `path_to` leads to; None where no such place is there."""
        if anchor.key:
            return datum_named(self.assembly.line(anchor.key), anchor.datum)
        axis = next((axis for axis in self.assembly.axes if axis.name == anchor.datum), None)
        if axis is None:
            return None
        # The axes of parts are kept where the parts of this assembly stand, whatever poses are asked for instead.
        back = standing_of(self.assembly, axis.part).inverse() if axis.part else Placement.identity()
        return Datum(axis.name, "axis", back.apply(axis.point), back.turn_only(axis.unit))


def pose_of_first(copies: Copies, tf_holder_first: Placement, scale: float) -> Pose:
    """Return the pose whose first copy stands there; what is round-off of lengths as large as scale (m) is 0."""
    placed = unled(copies, tf_holder_first)
    return Pose.of(Placement(placed.turn, settled(placed.shift, scale)))


def seat_placement(seat: Seat) -> Placement:
    """Return the placement tf_target_moving that a seat asks for between the frames of its two datums."""
    turn = matrix_of_turns((0.0, 0.0, seat.turn))
    return Placement(turn @ AGAINST if seat.facing == "against" else turn, (*seat.aside, seat.offset))


def _said(assembly: Assembly, anchor: Anchor) -> str:
    if not anchor.key:
        return f'the axis "{anchor.datum}"'
    return f'"{anchor.datum}" of {assembly.name_of_line(anchor.key)}'
