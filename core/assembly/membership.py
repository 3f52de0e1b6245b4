"""Which lines belong to which variants of a document; a line that names none belongs to all of them."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from core.assembly.nodes import Group, Node
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Sequence

MOST_VARIANTS = 100


def check_variants(variants: Sequence[str], chosen: str) -> None:
    """Refuse variants without a name, twice the same, or too many, and the choice of one that is not there.

    Raises:
        EditRefused: any of these.
    """
    if any(not name.strip() for name in variants):
        raise EditRefused("a variant needs a name", remedy='Type one such as "payload full"')
    if len(set(variants)) != len(variants):
        raise EditRefused("two variants have the same name", read=", ".join(variants), remedy="Rename one of them")
    if len(variants) > MOST_VARIANTS:
        raise EditRefused(f"a document has at most {MOST_VARIANTS} variants", read=str(len(variants)))
    if chosen and chosen not in variants:
        raise EditRefused("the document has no such variant", read=chosen, remedy="Choose one of its variants")


def check_membership(node: Node, variants: Sequence[str]) -> None:
    """Refuse a line that belongs to a variant that the document does not have.

    Raises:
        EditRefused: it does.
    """
    unknown = [name for name in node.only_in if name not in variants]
    if unknown:
        raise EditRefused(
            "the line belongs to a variant that the document does not have", where=node.name, read=unknown[0],
            remedy="Add the variant first",
        )


def belongs(node: Node, variant: str) -> bool:
    """Return whether a line is in a variant; the groups around it have a say of their own."""
    return not variant or not node.only_in or variant in node.only_in


def members_in(members: tuple[Node, ...], variant: str) -> tuple[Node, ...]:
    """Return the lines that are in a variant, inside groups too; the same tuple where nothing is left out."""
    kept = tuple(_inside(node, variant) for node in members if belongs(node, variant))
    same = len(kept) == len(members) and all(new is old for new, old in zip(kept, members, strict=True))
    return members if same else kept


def _inside(node: Node, variant: str) -> Node:
    if not isinstance(node, Group):
        return node
    inner = members_in(node.members, variant)
    return node if inner is node.members else replace(node, members=inner)
