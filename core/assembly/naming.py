"""Edits of a document's named dimensions: every number that was typed with a name follows, or the edit is refused.

A text counts as long as it still means the number beside it: a number changed in another way (dragged, typed into the
ledger) has let go of its text.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, TypeVar

from core.assembly.axis import DriveAxis
from core.assembly.fields import AnyLine, Typable, kind_of, value_of, with_values, words_of
from core.assembly.names import USES, NameEntry, evaluated, in_order, values_of
from core.assembly.nodes import Group, Node, Part, walk
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity import Readings, check_name, names_in, parse, with_names_changed

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence

    from core.assembly.assembly import Assembly
    from core.quantity import Kind, Names

Each = TypeVar("Each", bound=Typable)

_MOST_SHOWN = 6


@dataclass(frozen=True)
class Use:
    """A place where a name is used.

    Attributes:
        key: of the line; "" for an axis and for another named dimension.
        where: the line or axis and what its number is called, or the named dimension.
        text: as typed.
    """

    key: str
    where: str
    text: str


def entries_of(assembly: Assembly) -> tuple[NameEntry, ...]:
    """Return what was typed for each named dimension, in order."""
    return tuple(NameEntry(one.name, one.text, one.note) for one in assembly.names)


def with_entries(assembly: Assembly, entries: Iterable[NameEntry]) -> Assembly:
    """Return the assembly with these named dimensions, and every number that was typed with one read again.

    Raises:
        QuantityError: a name cannot be one, a text is no quantity, or a number needs another kind; with the chain.
        EditRefused: a name is double, depends on itself, or is missing where it is used; a line cannot be with
            the number that follows.
    """
    kept = tuple(entries)
    names = evaluated(kept)
    before, after = values_of(assembly.names), values_of(names)
    moved = {name for name in {*before, *after} if before.get(name) != after.get(name)}
    for gone in sorted(moved - set(after)):
        _refuse_used(gone, _uses_in_numbers(assembly, gone))
    edited = replace(assembly, names=names)
    if not moved:
        return edited
    old = {entry.name: entry for entry in entries_of(assembly)}
    changed = {entry.name for entry in kept if old.get(entry.name) != entry}
    reader = _Reader(Readings(before, moved), after, {entry.name: entry for entry in kept}, changed)
    axes, members = _axes(assembly, reader.read_again), _mapped(assembly.members, reader.read_again)
    return replace(edited, members=members, axes=axes)


def with_entry(assembly: Assembly, entry: NameEntry) -> Assembly:
    """Return the assembly with a named dimension added, or the one of the same name changed; as `with_entries`."""
    entries = entries_of(assembly)
    if any(one.name == entry.name for one in entries):
        return with_entries(assembly, (entry if one.name == entry.name else one for one in entries))
    return with_entries(assembly, (*entries, entry))


def without_name(assembly: Assembly, name: str) -> Assembly:
    """Return the assembly without a named dimension.

    Raises:
        EditRefused: something uses it; the lines that do are named.
    """
    _refuse_used(name, uses_of(assembly, name))
    return with_entries(assembly, (entry for entry in entries_of(assembly) if entry.name != name))


def with_name_changed(assembly: Assembly, name: str, new: str) -> Assembly:
    """Return the assembly with a named dimension called otherwise, in every text that uses it; no number changes.

    Raises:
        QuantityError: the new name cannot be one.
        EditRefused: there is no such named dimension, or the new name is taken.
    """
    entries = entries_of(assembly)
    taken = {entry.name for entry in entries}
    check_name(new, where="named dimension")
    if name not in taken:
        raise EditRefused("there is no named dimension of this name", read=name)
    if new != name and new in taken:
        raise EditRefused("another named dimension has this name", read=new, remedy="Choose another one")
    changes = {name: new}
    names = evaluated(
        NameEntry(changes.get(entry.name, entry.name), with_names_changed(entry.text, changes), entry.note)
        for entry in entries
    )

    def rewritten(line: Each) -> Each:
        typed = tuple((path, with_names_changed(text, changes)) for path, text in line.typed)
        return line if typed == line.typed else replace(line, typed=typed)

    axes, members = _axes(assembly, rewritten), _mapped(assembly.members, rewritten)
    return replace(assembly, names=names, members=members, axes=axes)


def uses_of(assembly: Assembly, name: str) -> tuple[Use, ...]:
    """Return every named dimension and every number of an axis or line that a name says, lines as in the ledger."""
    readings = Readings(values_of(assembly.names), {name})
    named = (Use("", one.name, one.text) for one in assembly.names if readings.uses(one.text))
    return (*named, *_uses_in_numbers(assembly, name))


def _uses_in_numbers(assembly: Assembly, name: str) -> tuple[Use, ...]:
    """Return every number of an axis or line that a name says."""
    readings = Readings(values_of(assembly.names), {name})
    return tuple(
        Use("" if isinstance(line, DriveAxis) else line.key, f"{line.name}, {words_of(line, path)}", text)
        for line in (*assembly.axes, *_lines(assembly.members))
        for path, text in line.typed
        if readings.uses(text) and _is_meant(readings, line, path, text)
    )


def _is_meant(readings: Readings, line: Typable, path: str, text: str) -> bool:
    """Return whether a text that was typed for a number of a line still means that number."""
    value = value_of(line, path)
    return value is not None and readings.means(text, kind_of(line, path), value)


@dataclass(frozen=True)
class _Reader:
    """Reads the typed texts of lines again after names have changed.

    Attributes:
        before: the texts as they were, told by the names that have another value now, are new, or are gone.
        after: all names with their values now.
        entries: the texts of the names as they are now.
        edited: the names whose text or note is another one.
        known: values of texts that were read already.
    """

    before: Readings
    after: Names
    entries: Mapping[str, NameEntry]
    edited: set[str]
    known: dict[tuple[str, Kind], float] = field(default_factory=dict)

    def read_again(self, line: Each) -> Each:
        """Return a line with the numbers that its texts mean now."""
        values: dict[str, float] = {}
        for path, text in line.typed:
            if self.before.uses(text) and _is_meant(self.before, line, path, text):
                values[path] = self._value(line, path, text)
        if not values:
            return line
        try:
            return with_values(line, values)
        except ValueRefused as error:
            # A shape says its title, but which of the lines it is, only this place knows.
            chain = self._chain(dict(line.typed)[next(iter(values))])
            where = USES.join([line.name, *chain])
            raise EditRefused(error.what, where=where, read=error.read, remedy=error.remedy) from error

    def _value(self, line: Typable, path: str, text: str) -> float:
        kind = kind_of(line, path)
        try:
            if (text, kind) not in self.known:
                self.known[text, kind] = parse(text, kind, names=self.after).value
            return self.known[text, kind]
        except QuantityError as error:
            where = USES.join([f"{line.name}, {words_of(line, path)}", *self._chain(text)])
            raise QuantityError(error.what, where=where, read=error.read, remedy=error.remedy) from error

    def _chain(self, text: str) -> list[str]:
        """Return names from one in a text down to one whose own text was edited."""
        order = in_order(self.entries)
        down: dict[str, list[str]] = {}
        for name in order:
            used = names_in(self.entries[name].text, self.entries)
            deeper = next((down[one] for one in used if one in down), None)
            if name in self.edited or deeper is not None:
                down[name] = [name] if deeper is None else [name, *deeper]
        return next((down[name] for name in names_in(text, self.entries) if name in down), [])


def _refuse_used(name: str, uses: Sequence[Use]) -> None:
    """Refuse to take a name away that something uses."""
    if uses:
        shown = "; ".join(f'{use.where} ("{use.text}")' for use in uses[:_MOST_SHOWN])
        more = f" and {len(uses) - _MOST_SHOWN} more" if len(uses) > _MOST_SHOWN else ""
        raise EditRefused(f'the named dimension "{name}" is used', where=shown + more, remedy="Change those first")


def _lines(members: tuple[Node, ...]) -> Iterator[AnyLine]:
    for node, _ in walk(members):
        yield node
        if isinstance(node, Part):
            yield from node.cuts


def _axes(assembly: Assembly, change: Callable[[DriveAxis], DriveAxis]) -> tuple[DriveAxis, ...]:
    """Return the axes with each of them changed; the same object if a change leaves them all alone."""
    axes = tuple(change(axis) for axis in assembly.axes)
    return assembly.axes if all(new is old for new, old in zip(axes, assembly.axes, strict=True)) else axes


def _mapped(members: tuple[Node, ...], change: Callable[[AnyLine], AnyLine]) -> tuple[Node, ...]:
    """Return the members with every line in them changed; what a change leaves alone stays the same object."""
    changed = tuple(_mapped_node(node, change) for node in members)
    return members if all(new is old for new, old in zip(changed, members, strict=True)) else changed


def _mapped_node(node: Node, change: Callable[[AnyLine], AnyLine]) -> Node:
    new = change(node)
    if isinstance(new, Group):
        inner = _mapped(new.members, change)
        return new if inner is new.members else replace(new, members=inner)
    if isinstance(new, Part):
        cuts = tuple(change(cut) for cut in new.cuts)
        if any(one is not other for one, other in zip(cuts, new.cuts, strict=True)):
            return replace(new, cuts=cuts)  # type: ignore[arg-type]  # a change makes a cut of a cut
        return new
    raise TypeError(type(new))
