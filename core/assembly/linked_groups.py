"""Linked groups: their members are another document's lines as last read, and are only read here.

The keys of the lines inside are the other document's keys behind the group's own ("g7/p3"), so that whatever refers to
one of them still does after the file was read again.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.assembly.nodes import Group, Node, walk
from core.checks import Check
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Iterable, Iterator

    from core.assembly.assembly import Assembly, MeantOverlap
    from core.assembly.link import Link

LINKED = "linked file"
_BETWEEN = "/"


@dataclass(frozen=True, eq=False)
class LinkedDocument:
    """A document as a linked group takes it.

    Attributes:
        link: the file, and the hash of the bytes that were read.
        name: for a new group.
        assembly: what the file holds.
    """

    link: Link
    name: str
    assembly: Assembly


def linked_groups(members: tuple[Node, ...]) -> Iterator[tuple[Group, Link]]:
    """Yield every linked group with its link, those inside others too, in the order of the ledger."""
    for node, _ in walk(members):
        if isinstance(node, Group) and node.link is not None:
            yield node, node.link


def held_by(assembly: Assembly, key: str) -> Group | None:
    """Return the outermost linked group that a line lies in; None where it may be edited, as the group itself may.

    Raises:
        EditRefused: no line has this key.
    """
    around = assembly.groups_above(assembly.node_of_line(key).key)
    return next((group for group in around if group.link is not None), None)


def with_linked_group(assembly: Assembly, document: LinkedDocument, group: str | None, index: int | None) -> Assembly:
    """Return the assembly with a document placed as a new linked group, in a group (None: outermost) before index.

    Raises:
        EditRefused: the group or the assembly cannot hold it.
    """
    key = fresh_group_key(assembly)
    members, meant = _taken(document, key)
    placed = Group(key, assembly.fresh_name(document.name), members, link=document.link)
    return _with_marks(assembly.inserted(placed, group, index), meant)


def fresh_group_key(assembly: Assembly) -> str:
    """Return the key that the next linked group gets: none that a line has, or that a line's key begins with."""
    number = 1
    taken = {node.key for node, _ in walk(assembly.members)}
    taken |= {key.split(_BETWEEN)[0] for key in taken}
    while f"g{number}" in taken or f"g{number}" in assembly:
        number += 1
    return f"g{number}"


def with_link_read(assembly: Assembly, key: str, document: LinkedDocument) -> Assembly:
    """Return the assembly with the members of a linked group as a document has them now; its pose and name stay.

    Raises:
        EditRefused: there is no such linked group, it lies in another one, or the assembly cannot hold the members.
    """
    group = _own_linked_group(assembly, key)
    members, meant = _taken(document, key)
    after = assembly.replaced(replace(group, members=members, link=document.link))
    kept = tuple(mark for mark in after.meant if mark.key_a in after and mark.key_b in after)
    return _with_marks(after if kept == after.meant else replace(after, meant=kept), meant)


def without_link(assembly: Assembly, key: str) -> Assembly:
    """Return the assembly with a linked group as an ordinary one; its members stay as they are.

    Raises:
        EditRefused: there is no such linked group, or it lies in another one.
    """
    return assembly.replaced(replace(_own_linked_group(assembly, key), link=None))


def check_linked_lines(before: Assembly, after: Assembly) -> None:
    """Refuse an edit that changes a line of a linked document; reading it again or breaking the link is none.

    Raises:
        EditRefused: it does; the line is named.
    """
    for group, link in linked_groups(before.members):
        now = after.node(group.key) if group.key in after else None
        # A group that was read again has another link, be it to the same file.
        if isinstance(now, Group) and now.link is link and now.members != group.members:
            raise read_only_here(link, _first_changed(group.members, now.members))


def read_only_here(link: Link, line: str) -> EditRefused:
    """Return the refusal of an edit of a line that belongs to a linked document."""
    return EditRefused(
        f"this line belongs to the linked document {link.file_name}, and is only read here", where=line,
        remedy="Edit it there and read it again, or break the link on the Part page of the group",
    )


def link_checks(assembly: Assembly) -> Iterator[tuple[Group, Check]]:
    """Yield what is known of the file behind each linked group that counts; nothing where nobody has looked."""
    for group, link in linked_groups(assembly.counted.members):
        held = held_by(assembly, group.key)
        outer = held.link.file_name if held is not None and held.link is not None else ""
        if link.state == "missing":
            mend = f"Put it back, or mend the link in {outer}" if outer else (
                "Put it back, choose the file on the Part page of the group, or break the link"
            )
            text = f"{group.name}: linked file missing: last values of {link.path} count. {mend}."
        elif link.state == "changed":
            mend = f"Open {outer}, and read it again there" if outer else "Read it again on the Part page of the group"
            text = f"{group.name}: the linked file {link.path} has changed; the values of before count. {mend}."
        elif link.state == "as read":
            text = f"{group.name}: the linked file {link.path} holds what was read from it"
        else:
            continue
        yield group, Check(LINKED, ok=link.state == "as read", text=text)


def _own_linked_group(assembly: Assembly, key: str) -> Group:
    """Return a linked group of this document's own.

    Raises:
        EditRefused: it is no linked group, or lies in another one.
    """
    group = assembly.node(key)
    if not isinstance(group, Group) or group.link is None:
        raise EditRefused("this is no linked group", where=group.name, remedy="Choose one")
    holder = held_by(assembly, key)
    if holder is not None and holder.link is not None:
        raise read_only_here(holder.link, group.name)
    return group


def _taken(document: LinkedDocument, key: str) -> tuple[tuple[Node, ...], tuple[MeantOverlap, ...]]:
    """Return the lines of a document that count there, and its marks on them, with their keys behind a group's key."""
    counted = document.assembly.counted
    members = tuple(_as_read(node, key) for node in counted.members)
    meant = tuple(
        replace(
            mark, key_a=_inner(key, mark.key_a), key_b=_inner(key, mark.key_b),
            carried_by=_inner(key, mark.carried_by) if mark.carried_by else "",
        )
        for mark in document.assembly.meant
        if mark.key_a in counted and mark.key_b in counted
    )
    return members, meant


def _as_read(node: Node, key: str) -> Node:
    """Return a line of another document as it stands here: its texts, variants and seat belong to that document."""
    if isinstance(node, Group):
        members = tuple(_as_read(member, key) for member in node.members)
        return replace(node, key=_inner(key, node.key), members=members, typed=(), only_in=(), seat=None)
    cuts = tuple(replace(cut, key=_inner(key, cut.key), typed=()) for cut in node.cuts)
    return replace(node, key=_inner(key, node.key), cuts=cuts, typed=(), only_in=(), seat=None)


def _inner(group: str, key: str) -> str:
    return f"{group}{_BETWEEN}{key}"


def _with_marks(assembly: Assembly, meant: Iterable[MeantOverlap]) -> Assembly:
    """Return the assembly with these marks on overlaps, where it has none on the same parts."""
    new = tuple(mark for mark in meant if assembly.meant_overlap(mark.key_a, mark.key_b) is None)
    return replace(assembly, meant=(*assembly.meant, *new)) if new else assembly


def _first_changed(before: tuple[Node, ...], after: tuple[Node, ...]) -> str:
    """Return the name of the innermost line that is another one, or is there no more; of one that came otherwise."""
    now = {node.key: node for node in after}
    for node in before:
        other = now.pop(node.key, None)
        if other == node:
            continue
        if isinstance(node, Group) and isinstance(other, Group) and node.members != other.members:
            return _first_changed(node.members, other.members)
        return node.name
    return next((node.name for node in now.values()), before[0].name if before else "")
