"""Named dimensions of a document: each a text that may use the others, evaluated in the order of their dependence."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.errors import EditRefused, QuantityError
from core.quantity import Kind, check_name, measure, names_in
from core.quantity.units import DIMENSIONS

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping, Sequence

    from core.quantity import Names
    from core.quantity.units import Dimension

MOST_NAMES = 1_000
# Between the steps of a chain: what stands behind it is used by what stands before it.
USES = " → "


@dataclass(frozen=True)
class NamedDimension:
    """A value of the document that number fields use by its name.

    Attributes:
        name: letters, digits and "_", a letter in front; no unit and no function.
        text: as typed, such as "plate_d/2 + 3 mm"; without a unit it is a plain number.
        kind: what it measures; of kinds with the same dimension (torque and energy) the first.
        value: in the SI unit of its kind.
        note: free text.
    """

    name: str
    text: str
    kind: Kind
    value: float
    note: str = ""


@dataclass(frozen=True)
class NameEntry:
    """What a person types for a named dimension."""

    name: str
    text: str
    note: str = ""


def evaluated(entries: Iterable[NameEntry]) -> tuple[NamedDimension, ...]:
    """Return named dimensions in the order given, each with its value.

    Raises:
        QuantityError: a name cannot be one, a text is no quantity, or one of a kind that is not used here.
        EditRefused: two have the same name, one depends on itself, or there are more than MOST_NAMES.
    """
    by_name: dict[str, NameEntry] = {}
    for entry in entries:
        check_name(entry.name, where="named dimension")
        if entry.name in by_name:
            raise EditRefused(
                "two named dimensions have the same name", read=entry.name, remedy="Give one of them another name"
            )
        by_name[entry.name] = entry
    if len(by_name) > MOST_NAMES:
        raise EditRefused(f"a document has at most {MOST_NAMES} named dimensions", read=str(len(by_name)))
    found: dict[str, NamedDimension] = {}
    values: dict[str, tuple[float, Dimension]] = {}
    for name in in_order(by_name):
        found[name] = _evaluated(by_name[name], by_name, values)
        values[name] = (found[name].value, DIMENSIONS[found[name].kind])
    return tuple(found[name] for name in by_name)


def values_of(names: Iterable[NamedDimension]) -> Names:
    """Return named dimensions as the parser of number fields takes them."""
    return {one.name: (one.value, DIMENSIONS[one.kind]) for one in names}


def in_order(entries: Mapping[str, NameEntry]) -> tuple[str, ...]:
    """Return the names so that each stands behind all that it depends on.

    Raises:
        EditRefused: one of them depends on itself; the chain is in the sentence.
    """
    done: dict[str, None] = {}
    for start in entries:
        # Depth first with a stack of its own: a chain of a thousand names must not end the program.
        path: dict[str, list[str]] = {} if start in done else {start: [*names_in(entries[start].text, entries)]}
        while path:
            last = next(reversed(path))
            if not path[last]:
                path.popitem()
                done[last] = None
                continue
            following = path[last].pop(0)
            if following in path:
                steps = [*path]
                chain = USES.join([*steps[steps.index(following) :], following])
                raise EditRefused(
                    "a named dimension depends on itself", where=following, read=chain,
                    remedy="Give one of them a value that does not use the others",
                )
            if following not in done:
                path[following] = [*names_in(entries[following].text, entries)]
    return tuple(done)


def chain_to(name: str, users: Mapping[str, Sequence[str]]) -> tuple[str, ...]:
    """Return how a name is reached: what uses it, before that what uses that one, back to one that nothing uses.

    Args:
        name: the last one of the chain.
        users: by name, the names whose texts use it.
    """
    chain = [name]
    while (above := next(iter(users.get(chain[0], ())), None)) is not None and above not in chain:
        chain.insert(0, above)
    return tuple(chain)


def _evaluated(entry: NameEntry, entries: Mapping[str, NameEntry], values: Names) -> NamedDimension:
    try:
        value, dimension = measure(entry.text, where=entry.name, names=values)
    except QuantityError as error:
        raise _with_chain(error, entry.name, entries) from error
    return NamedDimension(entry.name, entry.text, _kind(dimension, entry), value, entry.note)


def _with_chain(error: QuantityError, name: str, entries: Mapping[str, NameEntry]) -> QuantityError:
    """Return a refusal of a name's text with the names in it that depend on it, where there are any."""
    users: dict[str, list[str]] = {}
    for one in entries.values():
        for used in names_in(one.text, entries):
            users.setdefault(used, []).append(one.name)
    chain = chain_to(name, users)
    where = f"{USES.join(chain)}" if len(chain) > 1 else error.where
    return QuantityError(error.what, where=where, read=error.read, remedy=error.remedy)


def _kind(dimension: Dimension, entry: NameEntry) -> Kind:
    kind = next((kind for kind, known in DIMENSIONS.items() if known == dimension), None)
    if kind is None:
        raise QuantityError(
            "this is no kind of quantity that is used here", where=entry.name, read=f'"{entry.text}"',
            remedy="Check its units, or split it into two named dimensions",
        )
    return kind
