"""A common volume that is meant, counted once: the part that carries it is cut out of the other one.

What is cut is the carrier's own shape at the carrier's place, so that totals, view and overlap search need to know
nothing about it. Copies of the carrier on a ring or row become a ring or row of cuts where the frames allow.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.arrays import settled
from core.assembly.bodies import KnownAxial, KnownTensor, ShapeBody
from core.assembly.cuts import Cut
from core.assembly.meeting import is_round_shape
from core.assembly.nodes import Part
from core.assembly.overlaps import meetings_of
from core.assembly.placing import first_of, frame_of, standing_of
from core.assembly.plain_cuts import box_of, corners_of
from core.errors import EditRefused
from core.placement import Copies, Placement, Pose, Ring, Row, Several
from core.shapes import Box

if TYPE_CHECKING:
    from core.arrays import IntArray
    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Node
    from core.assembly.overlaps import Meetings

# Copies of both parts together that are looked at, and cuts that one act puts in, at most.
MOST_LOOKED_AT: Final = 400
MOST_CUTS_AT_ONCE: Final = 50
# Relative to the carrier's size, and of directions: placements nearer than this are one.
_ONE_PLACE: Final = 1e-9
# Relative to the common volume and its size: two copies that are met by the carrier as nearly alike are met alike.
_ALIKE: Final = 1e-4


def counted_once(assembly: Assembly, carrier_key: str, other_key: str) -> Assembly:
    """Return the assembly with the carrier's shape taken out of the other part, wherever copies of the two overlap.

    The cuts are called "room of ‹carrier›" and keep what was typed for the carrier's dimensions. A mark that the
    overlap is meant goes, and its note stays with the cuts: there is no overlap any more, and one that comes about
    later is a new one. The mass of a weighed part stays: it is that of the finished part.

    Args:
        assembly: it stays as it is.
        carrier_key: of the part that the common volume belongs to.
        other_key: of the part that it is taken out of.

    Raises:
        EditRefused: the carrier is not a whole shape where the two meet, the other part cannot be cut, they have
            nothing in common, the copies are not met alike, or there are too many of them.
    """
    carrier, other = _checked(assembly, carrier_key, other_key)
    meetings = meetings_of(assembly, carrier, other)
    stands = _whole(carrier, _stands(meetings, carrier, other), other)
    copies = _patterned(assembly, carrier, meetings, stands)
    if len(copies) > MOST_CUTS_AT_ONCE:
        raise EditRefused(
            f"at most {MOST_CUTS_AT_ONCE} cuts are put in at once", where=other.name,
            read=f"{len(copies)} places of {carrier.name} that are no single ring or row",
            remedy="Cut the room out by hand, as rings or rows of cuts",
        )
    return _with_cuts(assembly, carrier, other, copies)


def _checked(assembly: Assembly, carrier_key: str, other_key: str) -> tuple[Part, Part]:
    """Return the two parts, after what is seen without looking where they are."""
    carrier, other = assembly.node(carrier_key), assembly.node(other_key)
    if not isinstance(carrier, Part) or not isinstance(other, Part) or carrier is other:
        raise EditRefused("a common volume is carried by one of two parts", read=f"{carrier.name} and {other.name}")
    why = _why_not(assembly, carrier, other)
    if why:
        back = not _why_not(assembly, other, carrier)
        remedy = f"Let {other.name} carry it, or cut the room out by hand" if back else "Cut the room out by hand"
        raise EditRefused(why, where=f"{carrier.name} out of {other.name}", remedy=remedy)
    count = int(np.isin([part.key for part in assembly.table.parts], (carrier_key, other_key))[
        assembly.table.owner].sum())
    if count > MOST_LOOKED_AT:
        raise EditRefused(
            f"at most {MOST_LOOKED_AT} copies are looked at", where=f"{carrier.name} out of {other.name}",
            read=str(count), remedy="Cut the room out by hand, as a ring or row of cuts",
        )
    return carrier, other


def _why_not(assembly: Assembly, carrier: Part, other: Part) -> str:
    """Return why the one cannot be taken out of the other whatever the places; "" where nothing speaks against it."""
    if isinstance(other.body, KnownTensor | KnownAxial):
        return f"nothing can be cut out of {other.name}: its data sheet gives the values of the finished part"
    if other.measure != "volume":
        return f"nothing can be cut out of {other.name}: it has no thickness"
    if not isinstance(carrier.body, ShapeBody):
        return f"only a shape can be taken out of a part, and {carrier.name} is none"
    if carrier.measure != "volume":
        return f"only a solid can be taken out of a part, and {carrier.name} has no thickness"
    if not _belongs_to(assembly, other) <= _belongs_to(assembly, carrier):
        return f"{carrier.name} is missing in a variant in which {other.name} is there, and would leave its room empty"
    return ""


def _with_cuts(assembly: Assembly, carrier: Part, other: Part, copies: list[tuple[Pose, Copies]]) -> Assembly:
    """Return the assembly with the carrier's shape cut out of the other at these places, and without the mark."""
    assert isinstance(carrier.body, ShapeBody)  # others were refused
    mark = assembly.meant_overlap(carrier.key, other.key)
    note = mark.note if mark is not None else ""
    typed = tuple(pair for pair in carrier.typed if pair[0].startswith("dimension."))
    after = assembly.without_meant(carrier.key, other.key)
    for pose, several in copies:
        name = after.fresh_name(f"room of {carrier.name}")
        cut = Cut(after.fresh_key("c"), name, carrier.body.shape, pose, several, typed, note)
        after = after.inserted_cut(cut, other.key)
    return after


def _belongs_to(assembly: Assembly, part: Part) -> set[str]:
    """Return the variants in which a part is there; "" stands for all lines together."""
    there = {"", *assembly.variants}
    lines: tuple[Node, ...] = (*assembly.groups_above(part.key), part)
    for line in lines:
        if line.only_in:
            there &= {"", *line.only_in}
    return there


def _stands(meetings: Meetings, carrier: Part, other: Part) -> list[Placement]:
    """Return where the carrier stands in the other part, tf_other_carrier, once for each volume they have in common."""
    bodies, met = meetings.bodies, meetings.rows
    if not len(met):
        raise EditRefused(
            "the two have nothing in common", where=f"{carrier.name} and {other.name}", remedy="Nothing has to be done"
        )
    if (bodies.times[met] > 1).any():
        heaped = bodies.parts[int(bodies.times[met[:, 1]].max() > 1)]
        raise EditRefused(
            "equal copies without a spacing stand at one place", where=heaped.name,
            remedy="Make them a ring or row, or one part",
        )
    rows = [np.flatnonzero(met[:, 1] == copy) for copy in np.flatnonzero(bodies.owner == 1)]
    if any(not _alike(meetings, rows[0], some) for some in rows[1:]):
        raise EditRefused(
            "its copies are not all met alike, and a cut is taken out of all of them", where=other.name,
            read=f"{len(rows)} copies, and {carrier.name} in {sum(len(some) > 0 for some in rows)} of them",
            remedy="Take the copies that differ apart",
        )
    first = rows[0].tolist()
    kept = [row for at, row in enumerate(first) if not any(_takes_the_same(meetings, row, one) for one in first[:at])]
    standing = bodies.standing
    inverse = Placement(standing.turn[met[kept[0], 1]], standing.shift[met[kept[0], 1]]).inverse()
    return [inverse @ Placement(standing.turn[row], standing.shift[row]) for row in met[kept, 0]]


def _alike(meetings: Meetings, some: IntArray, others: IntArray) -> bool:
    """Return whether two copies of the other part have the same volumes in common with the carrier."""
    return all(
        any(_takes_the_same(meetings, row, one) for one in there.tolist())
        for here, there in ((some, others), (others, some)) for row in here.tolist()
    )


def _takes_the_same(meetings: Meetings, one: int, other: int) -> bool:
    """Return whether two pairs have the same in common, seen from the second part; moments tell."""
    common = meetings.common
    size = float(np.sqrt(np.trace(common.spread[one]) / common.mass[one]))
    return bool(
        abs(common.mass[one] - common.mass[other]) <= _ALIKE * common.mass[one]
        and np.abs(common.centre[one] - common.centre[other]).max() <= _ALIKE * size
        and np.abs(common.spread[one] - common.spread[other]).max() <= _ALIKE * common.mass[one] * size**2
    )


def _whole(carrier: Part, stands: list[Placement], other: Part) -> list[Placement]:
    """Return the places, none of them mirrored, after seeing that the carrier has no cut of its own in the other."""
    assert isinstance(carrier.body, ShapeBody)  # others were refused
    shape = carrier.body.shape
    low, high = other.bounds
    turned = []
    for stand in stands:
        for cut in carrier.cuts:
            corners = stand.apply(corners_of(box_of(cut.shape), cut.standing)).reshape(-1, 8, 3)
            if ((corners.min(axis=1) < high) & (corners.max(axis=1) > low)).all(axis=1).any():
                raise EditRefused(
                    "it has a cut of its own where the two meet, which would be taken out as well",
                    where=f"{carrier.name}, {cut.name}", read=f"near {other.name}",
                    remedy="Make the carrier of a shape that has this room, such as a tube, or cut by hand",
                )
        if stand.mirrors and not is_round_shape(shape) and not isinstance(shape, Box):
            raise EditRefused(
                "the shape cannot stand for its own mirror image", where=f"{carrier.name} out of {other.name}",
                read=shape.title, remedy="Cut the room of the mirrored copy out by hand",
            )
        # Round about z, and of a box: its own mirror image in x.
        back = np.diag([-1.0 if stand.mirrors else 1.0, 1.0, 1.0])
        turned.append(Placement(stand.turn @ back, stand.shift))
    return turned


def _patterned(
    assembly: Assembly, carrier: Part, meetings: Meetings, stands: list[Placement]
) -> list[tuple[Pose, Copies]]:
    """Return the places as one ring or row that the carrier or a group above it stands in, or else one by one."""
    singly: list[tuple[Pose, Copies]] = [(Pose.of(one), Several(1)) for one in stands]
    if len(stands) == 1:
        return singly
    bodies = meetings.bodies
    row = int(np.flatnonzero(bodies.owner == 1)[0])
    tf_other_document = Placement(bodies.standing.turn[row], bodies.standing.shift[row]).inverse()
    lines: tuple[Node, ...] = (carrier, *reversed(assembly.groups_above(carrier.key)))
    for line in lines:
        tf_other_outer = tf_other_document @ frame_of(assembly, line.key)
        copies = _carried(line, tf_other_outer)
        if copies is None or copies.count != len(stands) or tf_other_outer.mirrors:
            continue
        tf_line_carrier = standing_of(assembly, line.key).inverse() @ standing_of(assembly, carrier.key)
        # Of a ring whose copies keep their orientation only what is placed itself runs round its axis.
        placed = tf_other_outer @ line.pose.placement @ tf_line_carrier
        if first_of(line.copies, line.pose.placement).mirrors or placed.mirrors:
            continue
        pose = Pose.of(placed)
        if _same_places(carrier, copies.placements(pose.placement), stands):
            return [(pose, copies)]
    return singly


def _carried(line: Node, tf_other_outer: Placement) -> Ring | Row | None:
    """Return a line's ring or row as it stands in the other part; None of other copies."""
    copies = line.copies
    if isinstance(copies, Ring):
        point, direction = tf_other_outer.apply(copies.point), tf_other_outer.turn_only(copies.direction)
        x, y, z = settled(point, np.abs(point).max()).tolist()
        a, b, c = settled(direction, np.abs(direction).max()).tolist()
        return replace(copies, point=(x, y, z), direction=(a, b, c))
    if isinstance(copies, Row):
        step = tf_other_outer.turn_only(copies.step)
        x, y, z = settled(step, np.abs(step).max()).tolist()
        return replace(copies, step=(x, y, z))
    return None


def _same_places(carrier: Part, batch: Placement, stands: list[Placement]) -> bool:
    """Return whether the carrier's shape stands at the same places, in any order; how it is turned counts if seen."""
    assert isinstance(carrier.body, ShapeBody)  # others were refused
    columns = slice(2, 3) if is_round_shape(carrier.body.shape) else slice(0, 3)
    turns, shifts = np.array([one.turn for one in stands]), np.array([one.shift for one in stands])
    size = float(np.linalg.norm(np.ptp(carrier.bounds, axis=0)))
    aside = np.abs(batch.shift[:, None] - shifts).max(axis=2) <= _ONE_PLACE * size
    turned = np.abs((batch.turn[:, None] - turns)[..., columns]).max(axis=(2, 3)) <= _ONE_PLACE
    return bool((aside & turned).any(axis=0).all() and (aside & turned).any(axis=1).all())
