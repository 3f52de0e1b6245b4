"""The edits that menus and keys ask for, each as a function from one assembly to the next."""

from __future__ import annotations

from dataclasses import replace
from functools import reduce
from typing import TYPE_CHECKING

from core.assembly import Assembly, Group, Node, Part, ShapeBody
from core.assembly.axes import driven_about_part
from core.assembly.linked_groups import held_by
from core.assembly.own_axis import laid_on_axis, own_axis_of
from core.assembly.placing import outermost
from core.errors import EditRefused, MasswrightError
from core.material import NotSet
from core.shapes import SHAPES

if TYPE_CHECKING:
    from collections.abc import Iterable

    from app.window.session import Session


def new_shape(assembly: Assembly, shape: str) -> Part:
    """Return a new part of a shape with its default dimensions, with a key and a name that no line has."""
    kind = SHAPES[shape]
    return Part(assembly.fresh_key(), assembly.fresh_name(kind.title), ShapeBody(kind.of({})), NotSet())


def inserted_at(assembly: Assembly, node: Node, selected: frozenset[str]) -> Assembly:
    """Return the assembly with a new line: in the selected group, behind the selected line, or at the end."""
    return assembly.inserted(node, *place_for(assembly, selected))


def place_for(assembly: Assembly, selected: frozenset[str]) -> tuple[str | None, int | None]:
    """Return where a new line goes: the group that is to hold it (None: outermost), and before which index.

    That is in the selected group, behind the selected line, or at the end; behind a linked group, never in it.
    """
    if len(selected) != 1:
        return None, None
    node = assembly.node_of_line(next(iter(selected)))
    node = held_by(assembly, node.key) or node
    if isinstance(node, Group) and node.link is None:
        return node.key, None
    above = assembly.groups_above(node.key)
    siblings = above[-1].members if above else assembly.members
    place = [sibling.key for sibling in siblings].index(node.key) + 1
    return (above[-1].key if above else None), place


def grouped(assembly: Assembly, keys: frozenset[str], key: str) -> Assembly:
    """Return the assembly with a new group that holds these lines, where the first of them was.

    Raises:
        EditRefused: the lines are not all in the same group.

    """
    outer = [each for each in keys if not any(above.key in keys for above in assembly.groups_above(each))]
    homes = {tuple(above.key for above in assembly.groups_above(each)) for each in outer}
    group = Group(key, assembly.fresh_name("group"))
    if not outer:
        return assembly.inserted(group)
    if len(homes) > 1:
        raise EditRefused(
            "lines of different groups cannot be put into one new group",
            remedy="Select lines that stand in the same group",
        )
    home = next(iter(homes))
    holder = assembly.node(home[-1]) if home else None
    siblings = holder.members if isinstance(holder, Group) else assembly.members
    chosen = [node for node in siblings if node.key in outer]
    place = [node.key for node in siblings].index(chosen[0].key)
    left = assembly.removed(tuple(node.key for node in chosen))
    filled = Group(key, group.name, tuple(chosen))
    # What was said of the lines holds as before: they were never away.
    whole = left.inserted(filled, home[-1] if home else None, place)
    return replace(whole, meant=assembly.meant, axes=assembly.axes)


def shifted(assembly: Assembly, key: str, step: int) -> Assembly:
    """Return the assembly with a line moved up (−1) or down (+1) among its siblings; the same at either end."""
    if assembly.is_cut(key):
        cuts = [cut.key for cut in assembly.part_of_cut(key).cuts]
        target = cuts.index(key) + step
        return assembly.moved_cut(key, target) if 0 <= target < len(cuts) else assembly
    above = assembly.groups_above(key)
    group = above[-1].key if above else None
    siblings = above[-1].members if above else assembly.members
    place = [node.key for node in siblings].index(key)
    target = place + step
    if not 0 <= target < len(siblings):
        return assembly
    return assembly.moved(key, group, target)


def taken_out(assembly: Assembly, key: str) -> Assembly:
    """Return the assembly with a line moved out of its group, to just behind it; the same for an outermost line."""
    above = assembly.groups_above(key)
    if not above:
        return assembly
    outer = above[-2] if len(above) > 1 else None
    siblings = outer.members if outer else assembly.members
    place = [node.key for node in siblings].index(above[-1].key) + 1
    return assembly.moved(key, outer.key if outer else None, place)


def lay_on_drive_axis(session: Session, keys: Iterable[str]) -> None:
    """Lay the own axis of each of these lines on the drive axis, in one edit that says which axis that is."""
    before, axis = session.assembly, session.assembly.drive_axis
    lines = outermost(before, sorted(keys))
    if not lines:
        session.said.emit("Nothing is selected that could be laid on the drive axis")
        return
    try:
        owns = [own_axis_of(before, key, axis) for key in lines]
    except MasswrightError as error:
        session.refused.emit(str(error))
        return
    name = before.name_of_line(lines[0]) if len(lines) == 1 else f"{len(lines)} lines"
    by = f" by {owns[0].words}" if len(lines) == 1 else ""
    taken = session.edit(
        f"Lay {name} on {axis.name}{by}",
        lambda assembly: reduce(lambda after, key: laid_on_axis(after, key, axis), lines, assembly),
    )
    if taken and session.assembly is before:
        session.said.emit(f"{name} {'lies' if len(lines) == 1 else 'lie'} on {axis.name} already")


def drive_about_part(session: Session) -> None:
    """Make the own axis of the selected part the drive axis, in one edit."""
    if len(session.selected) != 1:
        session.refused.emit("The drive axis is the axis of one part. Select one line of the ledger.")
        return
    key = next(iter(session.selected))
    name = session.assembly.node_of_line(key).name
    session.edit(f"Drive about the axis of {name}", lambda before: driven_about_part(before, key))
