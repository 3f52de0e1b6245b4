"""One line of the ledger as a body: all copies of a part or group, or the whole, in the document frame."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.assembly.nodes import table_of

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Part, Table


@dataclass(frozen=True, eq=False)
class Selection:
    """All copies of one node, or of everything.

    Attributes:
        name: of the node, or of the document.
        table: their bodies as rows, in the document frame.
        basis_of: where the values of each part come from, by its key; of parts beside the node too.

    """

    name: str
    table: Table
    basis_of: Mapping[str, str]

    @property
    def parts(self) -> tuple[Part, ...]:
        """The parts in it, in the order of the ledger."""
        return self.table.parts

    @property
    def without_mass(self) -> tuple[Part, ...]:
        """The parts whose mass is not known, which the moments leave out."""
        return tuple(part for part in self.parts if part.single is None)

    @property
    def bases(self) -> tuple[str, ...]:
        """The different bases of its parts, in the order of the ledger."""
        return tuple(dict.fromkeys(self.basis_of[part.key] for part in self.parts))


def selected(assembly: Assembly, key: str | None = None) -> Selection:
    """Return all copies of the node with this key as they stand in the document frame; None: everything.

    Of a node only what is in the chosen variant counts; that may be nothing.

    Raises:
        EditRefused: no node has this key.

    """
    basis_of = assembly.bases
    if key is None:
        return Selection(assembly.name, assembly.table, basis_of)
    name = assembly.node(key).name
    counted = assembly.counted
    if key not in counted:
        return Selection(name, table_of(()), basis_of)
    table = counted.node(key).table
    for group in reversed(assembly.groups_above(key)):
        table = table.repeated(group.copies.placements(group.pose.placement))
    return Selection(name, table, basis_of)
