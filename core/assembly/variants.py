"""Edits of a document's variants, and the totals of all of them side by side."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from core.assembly.nodes import Group, Node, walk
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.assembly.assembly import Assembly
    from core.moments import Moments

_MOST_SHOWN = 6


@dataclass(frozen=True, eq=False)
class VariantTotal:
    """What a variant adds up to.

    Attributes:
        variant: its name; "" for all lines.
        moments: of everything in it whose mass is known, in the document frame.
        inertia: kg·m² about the drive axis.
        without_mass: how many of its parts the totals leave out because nothing says what they weigh.
    """

    variant: str
    moments: Moments
    inertia: float
    without_mass: int


def totals_by_variant(assembly: Assembly) -> tuple[VariantTotal, ...]:
    """Return the totals of every variant in the document's order; of all lines where it has none."""
    return tuple(_total(replace(assembly, variant=name)) for name in assembly.variants or ("",))


def with_variant_added(assembly: Assembly, name: str) -> Assembly:
    """Return the assembly with one more variant, which every line that names none is in.

    Raises:
        EditRefused: the name is empty or taken.
    """
    return replace(assembly, variants=(*assembly.variants, name.strip()))


def with_variant_renamed(assembly: Assembly, old: str, new: str) -> Assembly:
    """Return the assembly with a variant called otherwise, on every line that names it.

    Raises:
        EditRefused: there is no such variant, or the new name is empty or taken.
    """
    _refuse_unknown(assembly, old)
    changes = {old: new.strip()}
    members = _with_memberships(
        assembly.members, lambda only_in: tuple(changes.get(name, name) for name in only_in)
    )
    return replace(
        assembly, members=members, variants=tuple(changes.get(name, name) for name in assembly.variants),
        variant=changes.get(assembly.variant, assembly.variant),
    )


def without_variant(assembly: Assembly, name: str) -> Assembly:
    """Return the assembly without a variant; where it was chosen, all lines count from then on.

    Raises:
        EditRefused: there is no such variant, or a line is in this one only and would come to be in all of them.
    """
    _refuse_unknown(assembly, name)
    only = [node.name for node, _ in walk(assembly.members) if node.only_in == (name,)]
    if only:
        more = f" and {len(only) - _MOST_SHOWN} more" if len(only) > _MOST_SHOWN else ""
        raise EditRefused(
            f'lines are in the variant "{name}" only, and would come to be in all of them',
            where=", ".join(only[:_MOST_SHOWN]) + more, remedy="Delete them, or put them into another variant first",
        )
    members = _with_memberships(assembly.members, lambda only_in: tuple(each for each in only_in if each != name))
    return replace(
        assembly, members=members, variants=tuple(each for each in assembly.variants if each != name),
        variant="" if assembly.variant == name else assembly.variant,
    )


def with_membership(assembly: Assembly, key: str, variants: frozenset[str]) -> Assembly:
    """Return the assembly with a line in these variants only; none, or every one of them: in all, also new ones.

    Raises:
        EditRefused: there is no such line or variant.
    """
    node = assembly.node(key)
    only_in = tuple(name for name in assembly.variants if name in variants)
    for name in sorted(variants - set(only_in)):
        _refuse_unknown(assembly, name)
    return assembly.replaced(replace(node, only_in=() if only_in == assembly.variants else only_in))


def _total(assembly: Assembly) -> VariantTotal:
    axis, total = assembly.drive_axis, assembly.total
    inertia = float(total.inertia_about_axis(axis.point, axis.unit)) if float(total.mass) else 0.0
    return VariantTotal(assembly.variant, total, inertia, len(assembly.without_mass))


def _refuse_unknown(assembly: Assembly, name: str) -> None:
    if name not in assembly.variants:
        raise EditRefused("the document has no such variant", read=name, remedy="Choose one of its variants")


def _with_memberships(
    members: tuple[Node, ...], change: Callable[[tuple[str, ...]], tuple[str, ...]]
) -> tuple[Node, ...]:
    changed: list[Node] = []
    for node in members:
        new: Node = node if change(node.only_in) == node.only_in else replace(node, only_in=change(node.only_in))
        if isinstance(new, Group):
            inner = _with_memberships(new.members, change)
            same = all(one is other for one, other in zip(inner, new.members, strict=True))
            new = new if same else replace(new, members=inner)
        changed.append(new)
    return tuple(changed)
