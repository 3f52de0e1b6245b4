"""The lines of an assembly: parts and groups, each standing in the frame of the group that holds it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from itertools import groupby, pairwise
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from core.assembly.bodies import Body, KnownAxial, KnownTensor, MeshBody, ShapeBody, equal_ellipsoid
from core.assembly.cuts import Cut, check_cuts
from core.assembly.cutting import CUT_AT_ONCE, Cutting, cutting_of, is_cut_already, surface_without
from core.assembly.part_checks import checks_of_part
from core.checks import REMARKS
from core.errors import EditRefused
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed, check_measure
from core.moments import Moments
from core.placement import Copies, Placement, Pose, Several

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import FloatArray, IntArray
    from core.assembly.link import Link
    from core.assembly.seat import Seat
    from core.checks import Check
    from core.facets import Facets
    from core.measure import Measure
    from core.progress import Progress

# A ledger of more bodies than this is refused: nested rings multiply, and nobody means ten million bolts.
MOST_BODIES = 1_000_000


@dataclass(frozen=True)
class DataSheet:
    """The mass of a known part comes from its data sheet, with its inertia."""

    basis = "data sheet"
    label = "data sheet"


Driver: TypeAlias = ByMaterial | ByDensity | PerArea | PerLength | Weighed | NotSet | DataSheet


@dataclass(frozen=True)
class Part:
    """One body, or several equal ones, with what it is made of and where it stands.

    Attributes:
        key: its identity in the document; stays the same through every edit.
        name: as shown.
        body: a shape, a mesh, or a data sheet's values.
        driver: the one thing that says what it weighs; DataSheet exactly for known bodies.
        pose: of the part frame in the frame of the group that holds it.
        copies: how often it is there and where the copies stand.
        typed: what the user typed for a number, by field, where that says more than the number ("3/8 in + 2 mm").
        note: free text.
        cuts: what is taken out of each copy, in the order of the ledger. A weighed mass is that of the finished part.
        only_in: the variants of the document that it belongs to; none named: all of them.
        seat: the place of another line that it follows, which then says its pose; None where it stands by itself.

    Whether a cut takes nothing out, or leaves nothing, is seen when its values are first asked for.

    Raises:
        EditRefused: the mass comes from what the body has not, or cuts are taken out of what cannot be cut.
    """

    key: str
    name: str
    body: Body
    driver: Driver = NotSet()
    pose: Pose = Pose()
    copies: Copies = Several(1)
    typed: tuple[tuple[str, str], ...] = ()
    note: str = ""
    cuts: tuple[Cut, ...] = ()
    only_in: tuple[str, ...] = ()
    seat: Seat | None = None

    def __post_init__(self) -> None:
        known = isinstance(self.body, KnownTensor | KnownAxial)
        if known != isinstance(self.driver, DataSheet):
            raise EditRefused(
                "a known part takes its mass from its data sheet, and only a known part does", where=self.name,
                remedy="Give it a material, a density or a weighed mass, or make it a known part",
            )
        if isinstance(self.body, ShapeBody | MeshBody) and not isinstance(self.driver, DataSheet):
            check_measure(self.driver, self.body.measure, self.name)
        check_cuts(self.body, self.cuts, self.name)

    @cached_property
    def cutting(self) -> Cutting | None:
        """What the cuts take out of one copy; None where there are none, and of a mesh that bounds no volume.

        Raises:
            EditRefused: a cut takes nothing out, nothing is left, or the body's surface cannot be cut.
        """
        return self.cut_with(None)

    def cut_with(self, progress: Progress | None) -> Cutting | None:
        """Return `cutting`; a worker that asks ahead of time can be watched and stopped.

        Raises:
            EditRefused: as `cutting`.
            Cancelled: progress was cancelled.
        """
        if not self.cuts or not isinstance(self.body, ShapeBody | MeshBody) or self.body.solid is None:
            return None
        return cutting_of(self.body, self.cuts, self.name, progress)

    @property
    def cuts_take_long(self) -> bool:
        """Whether somebody who asks for the values would have to wait: a large mesh, cut for the first time."""
        if not self.cuts or not isinstance(self.body, MeshBody):
            return False
        return self.body.asset.survey.triangles > CUT_AT_ONCE and not is_cut_already(self.body, self.cuts)

    def after_cuts(self, solid: Moments | None) -> Moments | None:
        """Return what the cuts leave of the body's moments at unit density (or of another set of them); part frame."""
        return solid if solid is None or self.cutting is None else solid - self.cutting.total

    @cached_property
    def solid(self) -> Moments | None:
        """Moments of one copy after its cuts at unit mass per measure, part frame.

        None for a known part, and for a mesh that bounds no volume.
        """
        return self.after_cuts(self.body.solid) if isinstance(self.body, ShapeBody | MeshBody) else None

    @cached_property
    def single(self) -> Moments | None:
        """Moments of one copy in the part frame; None while nothing says what it weighs, or it bounds no volume."""
        if isinstance(self.body, KnownTensor | KnownAxial):
            return self.body.own
        if self.solid is None or isinstance(self.driver, DataSheet):
            return None
        mass = self.driver.mass_of(float(self.solid.mass))
        return None if mass is None else self.solid.with_mass(mass)

    @cached_property
    def standing(self) -> Placement:
        """Placements tf_outer_part of all copies, a batch (n,)."""
        return self.copies.placements(self.pose.placement)

    @cached_property
    def surface(self) -> Facets:
        """What is drawn for one copy, in the part frame; a known part is drawn as the ellipsoid of equal moments."""
        if isinstance(self.body, ShapeBody | MeshBody):
            return surface_without(self.body, self.cuts) if self.cuts else self.body.surface
        return equal_ellipsoid(self.body.own)

    @cached_property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around one copy, (2, 3) m in the part frame.

        Cuts in closed form lie inside the body and leave its box as it is.
        """
        if isinstance(self.body, ShapeBody | MeshBody) and (self.cutting is None or self.cutting.exact):
            return self.body.bounds
        return self.surface.box

    @property
    def measure(self) -> Measure | None:
        """What a mass per unit multiplies in it; None for a known part."""
        return self.body.measure if isinstance(self.body, ShapeBody | MeshBody) else None

    @property
    def extent(self) -> float | None:
        """Its measure, of one copy after its cuts: m³, m², m or 1; None for a known part and a mesh without volume."""
        return None if self.solid is None else float(self.solid.mass)

    @property
    def volume(self) -> float | None:
        """Volume of one copy in m³; None for a known part, a thin body, and a mesh that bounds none."""
        return self.extent if self.measure == "volume" else None

    @property
    def basis(self) -> str:
        """Where its values come from, in a word or two, as shown beside them."""
        if isinstance(self.body, MeshBody) and self.body.asset.survey.basis != "computed":
            return self.body.asset.survey.basis
        return self.driver.basis

    @cached_property
    def checks(self) -> tuple[Check, ...]:
        """What was checked on one copy, in the order that a reader wants it."""
        return checks_of_part(self)

    @cached_property
    def telling(self) -> tuple[Check, ...]:
        """What of its checks a reader has to know: those that failed, and remarks on what was done to its body."""
        return tuple(check for check in self.checks if not check.ok or check.name in REMARKS)

    def known_sound(self) -> None:
        """Keep that no check tells anything, for somebody who found that of thousands of parts at once."""
        self.__dict__["telling"] = ()

    @cached_property
    def table(self) -> Table:
        """Its copies as rows, in the frame of the group that holds it."""
        return _table_of_parts((self,))


@dataclass(frozen=True)
class Group:
    """Parts and groups that belong together and move as one.

    Attributes:
        key, name, pose, copies, typed, note, only_in, seat: as of a Part.
        members: in the order of the ledger.
        link: of a linked group, the document that its members were read from; they are the last values of it.
    """

    key: str
    name: str
    members: tuple[Node, ...] = ()
    pose: Pose = Pose()
    copies: Copies = Several(1)
    typed: tuple[tuple[str, str], ...] = ()
    note: str = ""
    only_in: tuple[str, ...] = ()
    link: Link | None = None
    seat: Seat | None = None

    @cached_property
    def holds_seats(self) -> bool:
        """Whether a line in it is seated, however deep."""
        return any(
            node.seat is not None or (isinstance(node, Group) and node.holds_seats) for node in self.members
        )

    @cached_property
    def table(self) -> Table:
        """Everything in it as rows, in the frame of the group that holds it."""
        return table_of(self.members).repeated(self.copies.placements(self.pose.placement))


Node: TypeAlias = Part | Group


@dataclass(frozen=True, eq=False)
class Table:
    """Bodies as arrays: one row for every copy of every part.

    Attributes:
        parts: the lines, in the order of the ledger.
        owner: (n,) which of the parts a row is a copy of.
        standing: placements tf_frame_part, a batch (n,).
        moments: a batch (n,) in the frame; mass 0 where a part's mass is not known.
    """

    parts: tuple[Part, ...]
    owner: IntArray
    standing: Placement
    moments: Moments

    @cached_property
    def rows_by_part(self) -> tuple[IntArray, ...]:
        """The rows of each part's copies, in their order."""
        order = np.argsort(self.owner, kind="stable")
        ends = np.searchsorted(self.owner[order], np.arange(len(self.parts) + 1))
        return tuple(order[first:last] for first, last in pairwise(ends))

    def repeated(self, placements: Placement) -> Table:
        """Return the rows as they stand in the outer frame, once for each of the placements, a batch (k,)."""
        times, rows = len(placements.shift), len(self.owner)
        if times * rows > MOST_BODIES:
            raise EditRefused(
                f"an assembly holds at most {MOST_BODIES} bodies", read=f"{times} copies of {rows}",
                remedy="Make the ring or row smaller",
            )
        wide = Placement(np.repeat(placements.turn, rows, axis=0), np.repeat(placements.shift, rows, axis=0))
        inner = Placement(np.tile(self.standing.turn, (times, 1, 1)), np.tile(self.standing.shift, (times, 1)))
        batch = Moments(
            np.tile(self.moments.mass, times),
            np.tile(self.moments.centre, (times, 1)),
            np.tile(self.moments.spread, (times, 1, 1)),
        )
        return Table(self.parts, np.tile(self.owner, times), wide @ inner, wide.place(batch))


def table_of(members: tuple[Node, ...]) -> Table:
    """Return everything in nodes that stand in the same frame as rows in that frame."""
    tables: list[Table] = []
    for _, run in groupby(members, key=type):
        nodes = tuple(run)
        parts = tuple(node for node in nodes if isinstance(node, Part))
        tables += [_table_of_parts(parts)] if parts else [node.table for node in nodes]
    return _joined(tables)


def _table_of_parts(parts: tuple[Part, ...]) -> Table:
    """Return the copies of all the parts as rows; placed together, which for many parts takes far less time."""
    nothing = Moments.nothing()
    owner = np.repeat(np.arange(len(parts)), [part.copies.count for part in parts])
    singles = [nothing if part.single is None else part.single for part in parts]
    standing = Placement(
        np.concatenate([part.standing.turn for part in parts]),
        np.concatenate([part.standing.shift for part in parts]),
    )
    batch = Moments(
        np.array([single.mass for single in singles])[owner],
        np.array([single.centre for single in singles])[owner],
        np.array([single.spread for single in singles])[owner],
    )
    return Table(parts, owner, standing, standing.place(batch))


def _joined(tables: list[Table]) -> Table:
    """Return the tables one under the other; they stand in the same frame."""
    if not tables:
        nothing = Moments(np.zeros(0), np.zeros((0, 3)), np.zeros((0, 3, 3)))
        return Table((), np.zeros(0, dtype=np.int64), Placement(np.zeros((0, 3, 3)), np.zeros((0, 3))), nothing)
    first = np.cumsum([0] + [len(table.parts) for table in tables[:-1]])
    return Table(
        tuple(part for table in tables for part in table.parts),
        np.concatenate([table.owner + start for table, start in zip(tables, first, strict=True)]),
        Placement(
            np.concatenate([table.standing.turn for table in tables]),
            np.concatenate([table.standing.shift for table in tables]),
        ),
        Moments(
            np.concatenate([table.moments.mass for table in tables]),
            np.concatenate([table.moments.centre for table in tables]),
            np.concatenate([table.moments.spread for table in tables]),
        ),
    )


def walk(members: tuple[Node, ...], depth: int = 0) -> Iterator[tuple[Node, int]]:
    """Yield every node with its depth, in the order of the ledger: a group before its members."""
    for node in members:
        yield node, depth
        if isinstance(node, Group):
            yield from walk(node.members, depth + 1)
