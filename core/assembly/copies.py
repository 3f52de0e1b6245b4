"""One copy of a ring, row or quantity made a part of its own, where it stands; the others stay as they are."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from core.assembly.meeting import is_round
from core.assembly.nodes import Part
from core.errors import EditRefused
from core.placement import Mirrored, Placement, Pose, Ring, Row, Several

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.placement import Copies

_FULL_TURN_GAP = 1e-9


def taken_apart(assembly: Assembly, key: str, index: int) -> Assembly:
    """Return the assembly with one copy of a part as a part of its own, where it stood; all moments stay.

    The others keep their pattern: a full ring becomes an arc, a row or an arc is split in two where a copy from its
    middle is taken. The new parts stand behind the old one, which stays the first of what is left. Marks of overlaps
    that are meant hold for the new parts too. The old one stays seated where its first copy stays where it was.

    Args:
        assembly: it stays as it is.
        key: of the part.
        index: of the copy, from 0.

    Raises:
        EditRefused: it is a group or a single part, there is no such copy, or the copy is a mirror image that no
            turn makes.
    """
    part = assembly.node(key)
    count = part.copies.count
    if not isinstance(part, Part) or count == 1:
        raise EditRefused(
            "only a part that is there several times has copies that can be taken apart", where=part.name,
            remedy="Choose a part with a quantity, ring, row or mirror image",
        )
    if not 0 <= index < count:
        raise EditRefused(
            "there is no such copy", where=part.name, read=str(index + 1), remedy=f"Choose one from 1 to {count}"
        )
    single = _alone(part, index)
    rest = _seated_as(part, _rest(part, index))
    above = assembly.groups_above(key)
    group = above[-1] if above else None
    place = [node.key for node in (group.members if group else assembly.members)].index(key)
    after = assembly.replaced(rest[0])
    added = [replace(one, key="", cuts=()) for one in (*rest[1:], single)]
    for at, (one, whole) in enumerate(zip(added, (*rest[1:], single), strict=True), start=1):
        fresh = after.fresh_key()
        after = after.inserted(
            replace(one, key=fresh, name=after.fresh_name(part.name)), group.key if group else None, place + at
        )
        for cut in whole.cuts:
            after = after.inserted_cut(replace(cut, key=after.fresh_key("c")), fresh)
        after = _meant_too(after, key, fresh)
    return after


def _alone(part: Part, index: int) -> Part:
    """Return the part as the one copy, single."""
    turn, shift = part.standing.turn[index], part.standing.shift[index]
    if np.linalg.det(turn) < 0:
        if not is_round(part):
            raise EditRefused(
                "the mirror image of this body cannot stand as a part of its own", where=part.name,
                read=f"copy {index + 1}", remedy="Leave it as a mirror image, or build the mirrored body",
            )
        # A body that is round about z is its own mirror image in x.
        turn = turn @ np.diag([-1.0, 1.0, 1.0])
    pose = Pose.of(Placement(turn, shift))
    typed = tuple(pair for pair in part.typed if not pair[0].startswith(("position", "turn", "copies", "seat")))
    return replace(part, pose=pose, copies=Several(1), typed=typed, seat=None)


def _seated_as(part: Part, rest: tuple[Part, ...]) -> tuple[Part, ...]:
    """Return what is left of a part: seated is the first line, if its first copy is still the one that was seated."""
    first = rest[0].standing
    stays = np.allclose(first.turn[0], part.standing.turn[0]) and np.allclose(first.shift[0], part.standing.shift[0])
    return (replace(rest[0], seat=part.seat if stays else None), *(replace(one, seat=None) for one in rest[1:]))


def _rest(part: Part, index: int) -> tuple[Part, ...]:
    """Return the part as all copies but one, in one or two lines."""
    copies, count = part.copies, part.copies.count
    if isinstance(copies, Mirrored):
        return (_alone(part, 1 - index),)
    if isinstance(copies, Several):
        return (_with_copies(part, Several(count - 1)),)
    if isinstance(copies, Ring) and abs(abs(copies.span) - 2 * np.pi) < _FULL_TURN_GAP:
        pitch = copies.span / count
        return (_run(part, copies.start + pitch * (index + 1), pitch, index + 1, count - 1),)
    runs = [(0, index), (index + 1, count - index - 1)]
    pitch = copies.span / (count - 1) if isinstance(copies, Ring) else 0.0
    start = copies.start if isinstance(copies, Ring) else 0.0
    return tuple(_run(part, start + pitch * first, pitch, first, times) for first, times in runs if times)


def _run(part: Part, start: float, pitch: float, first: int, times: int) -> Part:
    """Return the part as so many copies in a run, the first of which was this one of them."""
    copies = part.copies
    if times == 1:
        return _alone(part, first % copies.count)
    if isinstance(copies, Ring):
        return _with_copies(part, replace(copies, count=times, start=start, span=pitch * (times - 1)))
    moved = _alone(part, first)
    assert isinstance(copies, Row)
    return replace(_with_copies(part, replace(copies, count=times)), pose=moved.pose if first else part.pose)


def _with_copies(part: Part, copies: Copies) -> Part:
    typed = tuple(pair for pair in part.typed if not pair[0].startswith("copies"))
    return replace(part, copies=copies, typed=typed)


def _meant_too(assembly: Assembly, key: str, fresh: str) -> Assembly:
    """Return the assembly with the marks on one part set on another one, too."""
    for mark in assembly.meant:
        if key in {mark.key_a, mark.key_b}:
            keys = [fresh if one == key else one for one in (mark.key_a, mark.key_b)]
            carrier = fresh if mark.carried_by == key else mark.carried_by
            assembly = assembly.with_meant(replace(mark, key_a=keys[0], key_b=keys[1], carried_by=carrier))
            if mark.key_a == mark.key_b:
                assembly = assembly.with_meant(replace(mark, key_b=fresh))
    return assembly
