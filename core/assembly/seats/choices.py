"""What a line can be seated by and on, to choose from."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.assembly.nodes import Part, walk
from core.assembly.seat import Anchor
from core.assembly.seats.datums import datums_of

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.assembly.assembly import Assembly

# Of a group the places of so many parts are listed; those of further ones are pointed at in the view.
MOST_PARTS_LISTED: Final = 60


def places_of(assembly: Assembly, key: str) -> tuple[tuple[str, Anchor], ...]:
    """Return the places of a line, and of the cuts in it, each with its name.

    Raises:
        EditRefused: no part or group has this key.
    """
    node = assembly.node(key)
    places = [(datum.name, Anchor(key, datum.name)) for datum in datums_of(node)]
    for cut in node.cuts if isinstance(node, Part) else ():
        places += [(f"{cut.name}: {datum.name}", Anchor(cut.key, datum.name)) for datum in datums_of(cut)]
    return tuple(places)


def own_places_of(assembly: Assembly, key: str) -> tuple[tuple[str, Anchor], ...]:
    """Return the places that a line can be seated by: its own, and of a group those of the first parts in it too.

    Raises:
        EditRefused: no part or group has this key.
    """
    node = assembly.node(key)
    places = [*places_of(assembly, key)]
    inner = [each for each, depth in walk((node,)) if depth and isinstance(each, Part)]
    for part in inner[:MOST_PARTS_LISTED]:
        places += [(f"{part.name}: {words}", anchor) for words, anchor in places_of(assembly, part.key)]
    return tuple(places)


def lines_to_seat_on(assembly: Assembly, key: str) -> Iterator[tuple[str, int, str]]:
    """Yield the lines that a line can be seated on: name, depth in the ledger, key.

    All are but the line itself and what is in it.
    """
    below: int | None = None
    for node, depth in walk(assembly.members):
        if below is not None and depth <= below:
            below = None
        if node.key == key:
            below = depth
        if below is None:
            yield node.name, depth, node.key


def said_place(assembly: Assembly, anchor: Anchor) -> str:
    """Return a place in words, such as "face +z of plate" or "the axis Spindle".

    Raises:
        EditRefused: no line has its key.
    """
    if not anchor.key:
        return f"the axis {anchor.datum}"
    return f"{anchor.datum} of {assembly.name_of_line(anchor.key)}"
