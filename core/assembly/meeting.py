"""Which bodies may penetrate one another, and which pairs of them lie to one another alike.

Boxes around all bodies first, then pairs of equal geometry in an equal relative position are made one kind: six pins
on a pitch circle stand in a round plate alike, so that one of them tells what the plate and all six have in common.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from core.assembly.bodies import MeshBody, ShapeBody
from core.assembly.nodes import Group, Part, walk
from core.mesh.boxes import BoxTree
from core.placement import Placement, Several

if TYPE_CHECKING:
    from collections.abc import Hashable

    from core.arrays import BoolArray, FloatArray, IntArray
    from core.assembly.assembly import Assembly
    from core.shapes import Shape

# Relative to the size of the two bodies, and rad: positions nearer than this are one.
ALIKE = 1e-7
# Pairs of boxes that are looked at, at most; more of them meet only where everything lies on one heap.
MOST_PAIRS = 500_000

# Shapes that every turn about their z axis leaves as they are, and every mirror through it.
_ROUND = frozenset({
    "hemisphere", "spherical cap", "cone", "frustum", "hollow frustum", "cylinder", "tube", "sphere", "hollow sphere",
    "turned profile", "circular hollow section", "round bar", "torus",
})


@dataclass(frozen=True, eq=False)
class Bodies:
    """The solid bodies of an assembly as rows; equal copies without a spacing are one row.

    Attributes:
        parts: the parts that are looked at, in the order of the ledger.
        owner: (n,) which of the parts a row is a copy of.
        standing: placements tf_document_part, a batch (n,).
        times: (n,) how many equal copies stand there, because their spacing does not matter.
    """

    parts: tuple[Part, ...]
    owner: IntArray
    standing: Placement
    times: IntArray

    @cached_property
    def geometry(self) -> IntArray:
        """Return (m,) a number for each part; parts of the same form have the same."""
        numbers: dict[Hashable, int] = {}
        return np.array([numbers.setdefault(_form(part), len(numbers)) for part in self.parts], dtype=np.int64)

    @cached_property
    def round(self) -> BoolArray:
        """Return (m,) whether each part looks the same however it is turned about its z axis."""
        return np.array([is_round(part) for part in self.parts], dtype=bool)

    @cached_property
    def sizes(self) -> FloatArray:
        """Return (m,) the diagonal of the box around each part, m."""
        return np.array([float(np.linalg.norm(np.ptp(part.bounds, axis=0))) for part in self.parts])

    @cached_property
    def boxes(self) -> tuple[FloatArray, FloatArray]:
        """Return lowest and highest corners (n, 3) m of the boxes around the rows, in the document frame."""
        bounds = np.array([part.bounds for part in self.parts])[self.owner]
        centre = self.standing.apply(0.5 * (bounds[:, 0] + bounds[:, 1]))
        half = np.einsum("nij,nj->ni", np.abs(self.standing.turn), 0.5 * (bounds[:, 1] - bounds[:, 0]))
        half -= ALIKE * self.sizes[self.owner, None]  # boxes that only touch have nothing in common
        return centre - half, centre + half


@dataclass(frozen=True, eq=False)
class Pairs:
    """Pairs of rows whose boxes meet, sorted into kinds.

    Attributes:
        first, second: (p,) rows of the bodies.
        standing: placements tf_document_pair of a frame that lies in the same way to both bodies of every pair of
            a kind; a batch (p,).
        turned: placements tf_pair_first, a batch (p,): about z only, and only where the first body is round.
        kind: (p,) from 0.
        skipped: pairs of boxes beyond MOST_PAIRS.
    """

    first: IntArray
    second: IntArray
    standing: Placement
    turned: Placement
    kind: IntArray
    skipped: bool


def is_round(part: Part) -> bool:
    """Return whether a part looks the same however it is turned about its z axis."""
    return isinstance(part.body, ShapeBody) and is_round_shape(part.body.shape) and not part.cuts


def is_round_shape(shape: Shape) -> bool:
    """Return whether a shape looks the same however it is turned about its z axis."""
    return shape.key in _ROUND


def bodies_of(assembly: Assembly, parts: tuple[Part, ...]) -> Bodies:
    """Return the copies of some of an assembly's parts as rows."""
    table = assembly.table
    places = {part.key: at for at, part in enumerate(parts)}
    number = np.array([places.get(part.key, -1) for part in table.parts], dtype=np.int64)
    owner = number[table.owner] if len(table.owner) else np.zeros(0, dtype=np.int64)
    rows = np.flatnonzero(owner >= 0)
    heaped = _on_one_place(assembly)
    kept, times = [], []
    loose = np.array([parts[at].key in heaped for at in owner[rows]], dtype=bool)
    kept.append(rows[~loose])
    times.append(np.ones((~loose).sum(), dtype=np.int64))
    if loose.any():
        some = rows[loose]
        numbers = np.column_stack([owner[some], table.standing.turn[some].reshape(-1, 9), table.standing.shift[some]])
        _, at, count = np.unique(numbers, axis=0, return_index=True, return_counts=True)
        kept.append(some[at])
        times.append(count)
    chosen = np.concatenate(kept)
    order = np.argsort(chosen)
    chosen = chosen[order]
    standing = Placement(table.standing.turn[chosen], table.standing.shift[chosen])
    return Bodies(parts, owner[chosen], standing, np.concatenate(times)[order])


def pairs_of(bodies: Bodies) -> Pairs:
    """Return the pairs of bodies whose boxes meet, and which of them lie to one another alike."""
    first, second, skipped = _meeting(bodies)
    forms, rounds = bodies.geometry[bodies.owner], bodies.round[bodies.owner]
    # A round body first, so that its turn may be chosen; otherwise by form, so that equal pairs agree.
    rank = forms + np.where(rounds, 0, len(bodies.parts))
    swap = rank[first] > rank[second]
    first, second = np.where(swap, second, first), np.where(swap, first, second)
    key, turn = _relative(bodies, first, second)
    equal = np.flatnonzero(forms[first] == forms[second])
    if len(equal):
        # Two of one form: seen from either of them, whichever way comes first.
        other_key, other_turn = _relative(bodies, second[equal], first[equal])
        back = equal[_comes_first(other_key, key[equal])]
        taken = np.isin(equal, back)
        key[back], turn[back] = other_key[taken], other_turn[taken]
        first[back], second[back] = second[back], first[back]
    _, kind = np.unique(key, axis=0, return_inverse=True)
    spin = _about_z(turn)
    own = Placement(bodies.standing.turn[first], bodies.standing.shift[first])
    standing = Placement(own.turn @ spin, own.shift)
    back_turn = Placement(np.swapaxes(spin, 1, 2), np.zeros((len(first), 3)))
    return Pairs(first, second, standing, back_turn, kind.reshape(-1), skipped)


def _form(part: Part) -> Hashable:
    cuts = tuple((cut.shape, cut.pose, cut.copies) for cut in part.cuts)
    if isinstance(part.body, MeshBody):
        return (part.body.asset.sha256, part.body.metres_per_unit, cuts)
    return (part.body.shape if isinstance(part.body, ShapeBody) else part.key, cuts)


def _on_one_place(assembly: Assembly) -> set[str]:
    """Return the keys of the parts of which equal copies stand at one place, because the spacing does not matter."""
    found: set[str] = set()
    above: list[bool] = []
    for node, depth in walk(assembly.members):
        several = isinstance(node.copies, Several) and node.copies.count > 1
        above[depth:] = [several or (depth > 0 and above[depth - 1])]
        if not isinstance(node, Group) and above[depth]:
            found.add(node.key)
    return found


def _meeting(bodies: Bodies) -> tuple[IntArray, IntArray, bool]:
    if not len(bodies.owner):
        nothing = np.zeros(0, dtype=np.int64)
        return nothing, nothing, False
    low, high = bodies.boxes
    firsts, seconds, count = [], [], 0
    for askers, others in BoxTree(low, high).meeting(low, high):
        once = askers < others
        firsts.append(askers[once])
        seconds.append(others[once])
        count += len(firsts[-1])
        if count > MOST_PAIRS:
            break
    first, second = np.concatenate(firsts), np.concatenate(seconds)
    return first[:MOST_PAIRS], second[:MOST_PAIRS], count > MOST_PAIRS


def _relative(bodies: Bodies, first: IntArray, second: IntArray) -> tuple[IntArray, FloatArray]:
    """Return whole numbers (p, 14) that equal pairs share, and the turn (p,) rad about the first body's z axis."""
    one = Placement(bodies.standing.turn[first], bodies.standing.shift[first])
    rest = one.inverse() @ Placement(bodies.standing.turn[second], bodies.standing.shift[second])
    owners = bodies.owner[first], bodies.owner[second]
    size = bodies.sizes[owners[0]] + bodies.sizes[owners[1]]
    both_round = bodies.round[owners[1]]
    turn = np.where(bodies.round[owners[0]], _azimuth(rest, size, both_round), 0.0)
    back = np.swapaxes(_about_z(turn), 1, 2)
    turned = back @ rest.turn
    turned[both_round, :, :2] = 0.0
    shift = np.einsum("nij,nj->ni", back, rest.shift) / size[:, None]
    numbers = np.concatenate([turned.reshape(-1, 9), shift], axis=1)
    forms = np.stack([bodies.geometry[owner] for owner in owners], axis=1)
    return np.concatenate([forms, np.rint(numbers / ALIKE).astype(np.int64)], axis=1), turn


def _azimuth(rest: Placement, size: FloatArray, both_round: BoolArray) -> FloatArray:
    """Return the angles (p,) about z at which the second bodies stand: by position, or else by how they are turned."""
    angle = np.where(both_round, 0.0, np.arctan2(rest.turn[:, 1, 0], rest.turn[:, 0, 0]))
    leaning = np.hypot(rest.turn[:, 0, 2], rest.turn[:, 1, 2]) > ALIKE
    angle = np.where(leaning, np.arctan2(rest.turn[:, 1, 2], rest.turn[:, 0, 2]), angle)
    aside = np.hypot(rest.shift[:, 0], rest.shift[:, 1]) > ALIKE * size
    return np.where(aside, np.arctan2(rest.shift[:, 1], rest.shift[:, 0]), angle)


def _about_z(angle: FloatArray) -> FloatArray:
    turn = np.zeros((len(angle), 3, 3))
    turn[:, 0, 0] = turn[:, 1, 1] = np.cos(angle)
    turn[:, 1, 0], turn[:, 0, 1], turn[:, 2, 2] = np.sin(angle), -np.sin(angle), 1.0
    return turn


def _comes_first(one: IntArray, other: IntArray) -> BoolArray:
    """Return (p,) whether rows of whole numbers come before those of another array, column by column."""
    apart = one != other
    column = apart.argmax(axis=1)
    rows = np.arange(len(one))
    return np.asarray(one[rows, column] < other[rows, column])
