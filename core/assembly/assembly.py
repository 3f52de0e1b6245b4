"""The document as one immutable value: a tree of parts and groups, the axes, and the edits that make a new one."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING

from core.arrays import FloatArray, frozen
from core.assembly.axis import DriveAxis
from core.assembly.following import kept_on_parts
from core.assembly.membership import check_membership, check_variants, members_in
from core.assembly.nodes import MOST_BODIES, Group, Node, Part, Table, table_of, walk
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.assembly.cuts import Cut
    from core.assembly.names import NamedDimension
    from core.moments import Moments

# Deeper nesting than this is refused: no machine has it, and a reader of the file must not be led into the ground.
DEEPEST = 32


@dataclass(frozen=True)
class MeantOverlap:
    """A mark that two parts penetrate each other on purpose, as a press fit or a thread drawn as two cylinders.

    It is a mark only: the totals count the common volume twice as before, and the overlap is listed with it, until
    `carrying.counted_once` takes the carrier out of the other.

    Attributes:
        key_a, key_b: of the parts, in any order; twice the same for copies of one part.
        carried_by: key of the part that the common volume belongs to in truth; "" where nobody said.
        note: free text.
    """

    key_a: str
    key_b: str
    carried_by: str = ""
    note: str = ""

    def __post_init__(self) -> None:
        if self.carried_by and self.carried_by not in {self.key_a, self.key_b}:
            raise EditRefused(
                "a common volume is carried by one of the two parts", read=self.carried_by,
                remedy="Choose one of them, or none",
            )

    def is_about(self, one: str, other: str) -> bool:
        """Return whether the parts with these keys are the two."""
        return {self.key_a, self.key_b} == {one, other}


@dataclass(frozen=True)
class Assembly:
    """Everything a document says.

    Attributes:
        name: of the document, as shown.
        members: the outermost parts and groups, in the order of the ledger.
        axes: at least one, names all different. The axis of a part stands where the part stands.
        drive: the name of the one that is driven.
        meant: marks of overlaps that are as they should be.
        names: named dimensions that number fields use; in the order of their table, names all different.
        variants: of the machine, such as "payload empty"; names all different.
        variant: the one whose values count; "" for all lines, whatever variants they belong to.

    Every edit returns a new assembly that shares all it can with the old one; keys are unique.
    """

    name: str = "untitled"
    members: tuple[Node, ...] = ()
    axes: tuple[DriveAxis, ...] = (DriveAxis(),)
    drive: str = "Spindle"
    meant: tuple[MeantOverlap, ...] = ()
    names: tuple[NamedDimension, ...] = ()
    variants: tuple[str, ...] = ()
    variant: str = ""

    def __post_init__(self) -> None:
        _check_axes(self.axes, self.drive)
        check_variants(self.variants, self.variant)
        self._paths  # noqa: B018  # refuses double keys, bottomless nesting and too many bodies at once
        self._cut_homes  # noqa: B018  # refuses double keys
        object.__setattr__(self, "axes", kept_on_parts(self))

    @cached_property
    def _paths(self) -> dict[str, tuple[int, ...]]:
        paths: dict[str, tuple[int, ...]] = {}
        trail: list[int] = []
        times: list[int] = []
        bodies = 0
        for node, depth in walk(self.members):
            if depth >= DEEPEST:
                raise EditRefused(f"groups nest at most {DEEPEST} deep", where=node.name)
            trail[depth:] = [trail[depth] + 1 if depth < len(trail) else 0]
            check_membership(node, self.variants)
            if node.key in paths:
                raise EditRefused("two lines have the same key", where=node.name, read=node.key)
            paths[node.key] = tuple(trail)
            times[depth:] = [(times[depth - 1] if depth else 1) * node.copies.count]
            bodies += times[depth] if isinstance(node, Part) else 0
            if bodies > MOST_BODIES:
                raise EditRefused(
                    f"an assembly holds at most {MOST_BODIES} bodies", where=node.name,
                    remedy="Make a ring, row or quantity smaller",
                )
        return paths

    @cached_property
    def _cut_homes(self) -> dict[str, Part]:
        """The part that each cut is taken out of, by the cut's key."""
        homes: dict[str, Part] = {}
        for node, _ in walk(self.members):
            if isinstance(node, Part):
                for cut in node.cuts:
                    if cut.key in self._paths or cut.key in homes:
                        where = f"{node.name}, {cut.name}"
                        raise EditRefused("two lines have the same key", where=where, read=cut.key)
                    homes[cut.key] = node
        return homes

    @property
    def drive_axis(self) -> DriveAxis:
        """The axis that the ledger and the sheet speak of."""
        return self.axis(self.drive)

    def axis(self, name: str) -> DriveAxis:
        """Return the axis of this name.

        Raises:
            EditRefused: there is none.
        """
        for axis in self.axes:
            if axis.name == name:
                return axis
        raise EditRefused(
            "the document has no such axis", read=repr(name),
            remedy=f"Choose one of {', '.join(axis.name for axis in self.axes)}",
        )

    @cached_property
    def counted(self) -> Assembly:
        """The assembly with only the lines of the chosen variant; itself where that leaves nothing out."""
        members = members_in(self.members, self.variant) if self.variant else self.members
        return self if members is self.members else replace(self, members=members)

    @cached_property
    def table(self) -> Table:
        """Every body of the chosen variant as a row, in the document frame."""
        return table_of(self.counted.members)

    @cached_property
    def total(self) -> Moments:
        """Moments of everything in the chosen variant whose mass is known, in the document frame."""
        return self.table.moments.total()

    @cached_property
    def without_mass(self) -> tuple[Part, ...]:
        """The parts that the totals leave out, because nothing says what they weigh or they bound no volume."""
        return tuple(part for part in self.table.parts if part.single is None)

    @property
    def bases(self) -> Mapping[str, str]:
        """Where the values of each part that counts come from, by its key, as shown beside them.

        In a linked group whose file is missing or has changed all are last values; that may be found at any time.
        """
        doubtful = [(group, group.link.basis) for group in self._linked if group.link is not None and group.link.basis]
        # The outermost group has the last word.
        last = {part.key: basis for group, basis in reversed(doubtful) for part in group.table.parts}
        return {**self._own_bases, **last} if last else self._own_bases

    @cached_property
    def _own_bases(self) -> Mapping[str, str]:
        return {part.key: part.basis for part in self.table.parts}

    @cached_property
    def _linked(self) -> tuple[Group, ...]:
        """The linked groups that count, an outer one before those in it."""
        nodes = (node for node, _ in walk(self.counted.members))
        return tuple(node for node in nodes if isinstance(node, Group) and node.link is not None)

    @cached_property
    def bounds(self) -> FloatArray | None:
        """Lowest and highest corner of the box around everything, (2, 3) m in the document frame; None when empty."""
        table = self.table
        if not len(table.owner):
            return None
        import numpy as np

        low, high = np.array([part.bounds for part in table.parts])[table.owner].swapaxes(0, 1)
        # The box around a turned box: its half-widths are |R| times the old ones.
        centre = table.standing.apply(0.5 * (low + high))
        half = np.einsum("nij,nj->ni", np.abs(table.standing.turn), 0.5 * (high - low))
        return frozen([(centre - half).min(axis=0), (centre + half).max(axis=0)])

    def __contains__(self, key: object) -> bool:
        """Return whether a line has this key: a part, a group or a cut."""
        return key in self._paths or key in self._cut_homes

    def meant_overlap(self, one: str, other: str) -> MeantOverlap | None:
        """Return the mark that these two parts overlap on purpose, or None."""
        return next((mark for mark in self.meant if mark.is_about(one, other)), None)

    def with_meant(self, mark: MeantOverlap) -> Assembly:
        """Return the assembly with this mark, in the place of any other on the same two parts.

        Raises:
            EditRefused: one of the two is no part of it.
        """
        for key in (mark.key_a, mark.key_b):
            self.node(key)
        return replace(self, meant=(*self.without_meant(mark.key_a, mark.key_b).meant, mark))

    def without_meant(self, one: str, other: str) -> Assembly:
        """Return the assembly without the mark that these two parts overlap on purpose."""
        return replace(self, meant=tuple(mark for mark in self.meant if not mark.is_about(one, other)))

    def node(self, key: str) -> Node:
        """Return the part or group with this key.

        Raises:
            EditRefused: there is none; the key of a cut is not one.
        """
        return self._along(self._path(key))[-1]

    def line(self, key: str) -> Node | Cut:
        """Return the part, group or cut with this key.

        Raises:
            EditRefused: there is none.
        """
        return self.cut(key) if self.is_cut(key) else self.node(key)

    def is_cut(self, key: str) -> bool:
        """Return whether the line with this key is a cut."""
        return key in self._cut_homes

    def cut(self, key: str) -> Cut:
        """Return the cut with this key.

        Raises:
            EditRefused: there is none.
        """
        return next(cut for cut in self.part_of_cut(key).cuts if cut.key == key)

    def part_of_cut(self, key: str) -> Part:
        """Return the part that the cut with this key is taken out of.

        Raises:
            EditRefused: there is no such cut.
        """
        if key not in self._cut_homes:
            raise EditRefused("the assembly has no such cut", read=key)
        return self._cut_homes[key]

    def node_of_line(self, key: str) -> Node:
        """Return the part or group with this key, or the part that the cut with this key is taken out of.

        Raises:
            EditRefused: no line has this key.
        """
        return self.part_of_cut(key) if self.is_cut(key) else self.node(key)

    def name_of_line(self, key: str) -> str:
        """Return the name of the part, group or cut with this key.

        Raises:
            EditRefused: no line has this key.
        """
        return self.cut(key).name if self.is_cut(key) else self.node(key).name

    def groups_above(self, key: str) -> tuple[Group, ...]:
        """Return the groups that hold this node, the outermost first."""
        return tuple(node for node in self._along(self._path(key))[:-1] if isinstance(node, Group))

    def fresh_key(self, stem: str = "p") -> str:
        """Return a key that no line has."""
        number = len(self._paths) + len(self._cut_homes) + 1
        while f"{stem}{number}" in self:
            number += 1
        return f"{stem}{number}"

    def fresh_name(self, stem: str) -> str:
        """Return stem, or stem with the first number that makes it a name no line has."""
        names = {node.name for node, _ in walk(self.members)}
        names |= {self.cut(key).name for key in self._cut_homes}
        number = 2
        name = stem
        while name in names:
            name, number = f"{stem} {number}", number + 1
        return name

    def with_line(self, line: Node | Cut) -> Assembly:
        """Return the assembly with the part, group or cut of the same key replaced by this one."""
        return self.replaced(line) if isinstance(line, Part | Group) else self.replaced_cut(line)

    def replaced(self, node: Node) -> Assembly:
        """Return the assembly with the node of the same key replaced by this one."""
        path = self._path(node.key)
        return replace(self, members=_rebuilt(self.members, path, (node,)))

    def inserted(self, node: Node, group: str | None = None, index: int | None = None) -> Assembly:
        """Return the assembly with a node put into a group (None: outermost) before index (None: at the end)."""
        if group is None:
            return replace(self, members=_with(self.members, node, index))
        holder = self.node(group)
        if not isinstance(holder, Group):
            raise EditRefused("only a group holds other parts", where=holder.name, remedy="Choose a group, or add one")
        return self.replaced(replace(holder, members=_with(holder.members, node, index)))

    def removed(self, keys: tuple[str, ...]) -> Assembly:
        """Return the assembly without these nodes and all they hold, and without these cuts."""
        left = self
        for key in keys:
            home = key
            instead: tuple[Node, ...] = ()
            if left.is_cut(key):
                part = left.part_of_cut(key)
                home, instead = part.key, (replace(part, cuts=tuple(cut for cut in part.cuts if cut.key != key)),)
            if home in left:
                left = replace(left, members=_rebuilt(left.members, left._path(home), instead))
            elif not self.is_cut(key):
                self._path(key)  # refused, unless it went with a group that held it
        # A key may be given again, and its new bearer is not meant.
        kept = tuple(mark for mark in left.meant if mark.key_a in left and mark.key_b in left)
        return left if kept == left.meant else replace(left, meant=kept)

    def replaced_cut(self, cut: Cut) -> Assembly:
        """Return the assembly with the cut of the same key replaced by this one."""
        part = self.part_of_cut(cut.key)
        return self.replaced(replace(part, cuts=tuple(cut if one.key == cut.key else one for one in part.cuts)))

    def inserted_cut(self, cut: Cut, part: str, index: int | None = None) -> Assembly:
        """Return the assembly with a cut taken out of a part, before the cut at index (None: after all of them).

        Raises:
            EditRefused: the key is not that of a part, or nothing can be cut out of it.
        """
        holder = self.node(part)
        if not isinstance(holder, Part):
            raise EditRefused(
                "a cut is taken out of a part, not of a group", where=holder.name, remedy="Choose one of its parts"
            )
        at = len(holder.cuts) if index is None else index
        return self.replaced(replace(holder, cuts=(*holder.cuts[:at], cut, *holder.cuts[at:])))

    def moved_cut(self, key: str, index: int) -> Assembly:
        """Return the assembly with a cut put before the cut at index among the other cuts of its part."""
        cut, part = self.cut(key), self.part_of_cut(key)
        return self.removed((key,)).inserted_cut(cut, part.key, index)

    def moved(self, key: str, group: str | None = None, index: int | None = None) -> Assembly:
        """Return the assembly with a node taken out and put into a group before index, its pose as it was.

        Raises:
            EditRefused: the group lies inside the node itself.
        """
        node = self.node(key)
        if group is not None and (group == key or key in {above.key for above in self.groups_above(group)}):
            raise EditRefused("a group cannot be put into itself", where=node.name)
        left = self.removed((key,))
        # What was said of it holds as before: it was never away.
        return replace(left.inserted(node, group, index), meant=self.meant, axes=self.axes)

    def _path(self, key: str) -> tuple[int, ...]:
        if key in self._cut_homes:
            raise EditRefused(
                "a cut stays with the part that it is taken out of", where=self.cut(key).name,
                remedy="Choose its part, or edit the cut itself",
            )
        if key not in self._paths:
            raise EditRefused("the assembly has no such line", read=key)
        return self._paths[key]

    def _along(self, path: tuple[int, ...]) -> list[Node]:
        nodes: list[Node] = []
        members = self.members
        for step in path:
            nodes.append(members[step])
            members = nodes[-1].members if isinstance(nodes[-1], Group) else ()
        return nodes


def _check_axes(axes: tuple[DriveAxis, ...], drive: str) -> None:
    """Refuse axes of one name, and a drive axis that is not there."""
    names = [axis.name for axis in axes]
    double = next((name for at, name in enumerate(names) if name in names[:at]), None)
    if double is not None:
        raise EditRefused(
            "two axes have the same name", where="axes", read=repr(double), remedy="Give one of them another name"
        )
    if drive not in names:
        raise EditRefused(
            '"drive" names an axis that is not there', where="drive axis",
            read=f"{drive!r}, where the axes are {', '.join(names) or 'none'}",
            remedy="Name one of them as the drive axis, or add an axis of that name",
        )


def _with(members: tuple[Node, ...], node: Node, index: int | None) -> tuple[Node, ...]:
    at = len(members) if index is None else index
    return (*members[:at], node, *members[at:])


def _rebuilt(members: tuple[Node, ...], path: tuple[int, ...], instead: tuple[Node, ...]) -> tuple[Node, ...]:
    """Return the members with the node at path replaced by those given instead."""
    at, deeper = path[0], path[1:]
    node = members[at]
    if deeper and isinstance(node, Group):
        instead = (replace(node, members=_rebuilt(node.members, deeper, instead)),)
    return (*members[:at], *instead, *members[at + 1 :])
