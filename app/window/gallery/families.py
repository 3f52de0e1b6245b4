"""What the gallery offers, in its groups: every registered shape, and standard sizes found by their name."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cache, cached_property
from typing import TYPE_CHECKING

from core.shapes import SHAPES, OutlinedShape, Section
from core.shapes.sections import section_sizes

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.shapes import Shape

SOLIDS, THIN, PROFILES, SECTIONS, SIZES = (
    "Solids", "Thin bodies", "Profiles", "Standard sections", "Standard sizes",
)
GROUPS = (SOLIDS, THIN, PROFILES, SECTIONS, SIZES)

# So many sizes are offered for one search; more words find the one that is meant.
MOST_SIZES = 24
# How long a section is when it is chosen by its size, m; its length is the one thing left to type.
USUAL_LENGTH = 0.5


@dataclass(frozen=True, eq=False)
class Choice:
    """One picture of the gallery.

    Attributes:
        title: its name below the picture, and of the line it becomes.
        group: one of GROUPS.
        key: of the family.
        values: the dimensions that its fields start from, where they are not the family's own.
    """

    title: str
    group: str
    key: str
    values: Mapping[str, float] = field(default_factory=dict)

    @cached_property
    def shape(self) -> Shape:
        """A single shape, as the picture shows it and as its fields start; made when it is first asked for."""
        return SHAPES[self.key].of(self.values)


def choices(search: str = "") -> list[Choice]:
    """Return what the gallery shows for a search, group by group; everything but sizes for ""."""
    words = search.casefold().replace("×", "x").split()
    found = [one for one in _families() if all(word in _words_of(one) for word in words)]
    if words:
        found += _sizes(words)
    return sorted(found, key=lambda one: GROUPS.index(one.group))


def best_of(found: list[Choice], search: str) -> int:
    """Return which of some choices a search means most likely: the same name, then one that begins so."""
    text = search.casefold().strip()
    titles = [one.title.casefold() for one in found]
    ranks = [(title != text, not title.startswith(text), at) for at, title in enumerate(titles)]
    return min(ranks)[-1]


def group_of(kind: type[Shape]) -> str:
    """Return the group that a family stands in."""
    if issubclass(kind, OutlinedShape):
        return PROFILES
    if issubclass(kind, Section):
        return SECTIONS
    return SOLIDS if kind.measure == "volume" else THIN


def size_named_for(shape: Shape) -> str:
    """Return the name of the standard size that has the dimensions of a shape, its length apart; "" for none."""
    values = {name: value for name, value in shape.values().items() if name != "length"}
    for size in section_sizes().values():
        if size.shape == shape.key and dict(size.dimensions) == values:
            return size.name
    return ""


@cache
def _families() -> tuple[Choice, ...]:
    return tuple(Choice(kind.title, group_of(kind), kind.key) for kind in SHAPES.values())


def _words_of(choice: Choice) -> str:
    return f"{choice.title} {choice.group} {choice.key}".casefold()


def _sizes(words: list[str]) -> list[Choice]:
    joined = "".join(words)
    named = [size for size in section_sizes().values() if joined in size.name.casefold().replace(" ", "")]
    # A name that begins as the search does comes first.
    named.sort(key=lambda size: not size.name.casefold().replace(" ", "").startswith(joined))
    return [
        Choice(size.name, SIZES, size.shape, {**size.dimensions, "length": USUAL_LENGTH})
        for size in named[:MOST_SIZES]
    ]
