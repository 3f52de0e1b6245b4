"""Seating a line: what a person who picks two places means, and the edits that follow."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import TYPE_CHECKING, Final

from core.assembly.seat import Facing, Seat
from core.assembly.seats.following import seated
from core.assembly.seats.standing import AGAINST, Standings

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly.assembly import Assembly
    from core.assembly.seat import Anchor

_QUARTER: Final = math.pi / 2
# rad: a turn this near to quarter turns is so many of them.
_ROUND_OFF: Final = 1e-9


def with_seat(assembly: Assembly, key: str, seat: Seat) -> Assembly:
    """Return the assembly with a line seated and standing there; what was typed for its pose is let go of.

    Raises:
        EditRefused: as `seated`, or no line has this key.
    """
    node = assembly.node(key)
    typed = tuple(pair for pair in node.typed if not pair[0].startswith(("position.", "turn.")))
    return seated(assembly.replaced(replace(node, seat=seat, typed=typed)))


def without_seat(assembly: Assembly, key: str) -> Assembly:
    """Return the assembly with a line that is seated no longer; it stays where it is.

    Raises:
        EditRefused: no line has this key.
    """
    node = assembly.node(key)
    typed = tuple(pair for pair in node.typed if not pair[0].startswith("seat."))
    return assembly.replaced(replace(node, seat=None, typed=typed))


def seat_as_it_stands(assembly: Assembly, key: str, moving: Anchor, target: Anchor) -> Seat:
    """Return the seat between two places that moves a line no more than it has to.

    Two faces (or rims) touch; anything else faces the way that is nearer to how the line stands. The line is turned
    about the direction as little as can be. An axis on an axis stays at its height.

    Raises:
        EditRefused: no line has this key, a place is not there, or it is on the wrong line.
    """
    node = assembly.node(key)
    standings = Standings(assembly)
    own, other = standings.datum(moving), standings.datum(target)
    tf_holder_moving = standings.first_copy(node) @ standings.own_frame(node, moving)
    tf_target_moving = standings.target_frame(node, target).inverse() @ tf_holder_moving
    assert own is not None
    assert other is not None
    facing: Facing = "along" if tf_target_moving.turn[2, 2] >= 0 else "against"
    if own.is_outward and other.is_outward:
        facing = "against"
    both_axes = own.kind == other.kind == "axis"
    offset = float(tf_target_moving.shift[2]) if both_axes else 0.0
    return Seat(moving, target, facing, offset, turn=_least_turn(tf_target_moving.turn, facing))


def moved_to(assembly: Assembly, key: str, moving: Anchor, target: Anchor) -> Assembly:
    """Return the assembly with a line seated by two places; one that is seated keeps its offset, aside and turn.

    Raises:
        EditRefused: as `seat_as_it_stands` and `seated`.
    """
    fresh = seat_as_it_stands(assembly, key, moving, target)
    old = assembly.node(key).seat
    if old is not None:
        fresh = replace(old, moving=moving, target=target, facing=fresh.facing)
    return with_seat(assembly, key, fresh)


def _least_turn(turn: FloatArray, facing: Facing) -> float:
    """Return the turn t in [−π, π] rad about z that brings the frames nearest: tr(turnᵀ·Rz(t)·F) is largest there."""
    back = (AGAINST if facing == "against" else AGAINST @ AGAINST) @ turn.T
    sine, cosine = back[0, 1] - back[1, 0], back[0, 0] + back[1, 1]
    if math.hypot(sine, cosine) < _ROUND_OFF:
        return 0.0
    angle = math.atan2(sine, cosine)
    quarters = round(angle / _QUARTER)
    return quarters * _QUARTER if abs(angle - quarters * _QUARTER) < _ROUND_OFF else angle
