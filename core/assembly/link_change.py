"""What reading linked groups again would change, in numbers, before it is done."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.assembly.ledger import ledger_of
from core.assembly.linked_groups import with_link_read
from core.assembly.nodes import Group, walk

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.assembly.assembly import Assembly
    from core.assembly.ledger import Line
    from core.assembly.linked_groups import LinkedDocument


@dataclass(frozen=True, eq=False)
class LinkChange:
    """One linked group before and after.

    Attributes:
        before, after: its line of the ledger: all its copies, document frame, J about the drive axis.
        gone, come: the names of the lines that the other document has no more, and of those that it has now.
    """

    before: Line
    after: Line
    gone: tuple[str, ...]
    come: tuple[str, ...]


def link_changes(assembly: Assembly, keys: Sequence[str], document: LinkedDocument) -> tuple[LinkChange, ...]:
    """Return what taking a document anew changes of each of these linked groups.

    Raises:
        EditRefused: one of them is no linked group of this document's own, or the assembly cannot hold the lines.
    """
    after = assembly
    for key in keys:
        after = with_link_read(after, key, document)
    lines = ({line.key: line for line in ledger_of(each).lines} for each in (assembly, after))
    then, now = lines
    return tuple(
        LinkChange(then[key], now[key], _only_in(assembly, after, key), _only_in(after, assembly, key)) for key in keys
    )


def _only_in(one: Assembly, other: Assembly, key: str) -> tuple[str, ...]:
    group = one.node(key)
    members = group.members if isinstance(group, Group) else ()
    return tuple(node.name for node, _ in walk(members) if node.key not in other)
