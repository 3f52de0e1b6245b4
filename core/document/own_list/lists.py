"""The list's text files in a folder: read, added to, shortened, imported and exported; nothing in them is replaced."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, Final, TypeVar

from core.document.own_list.entries import Named
from core.document.own_list.text import entries_of, with_appended, without
from core.document.replacing import replace_file, reserved
from core.errors import EditRefused, FileRefused
from core.material import plain_name

if TYPE_CHECKING:
    from collections.abc import Iterable
    from pathlib import Path

    from core.document.own_list.entries import ListKind

Entry = TypeVar("Entry", bound=Named)

MOST_BYTES: Final = 4 * 2**20


@dataclass(frozen=True)
class Imported:
    """What came of an import.

    Attributes:
        added: the names of the new entries, as they are in the list.
        renamed: (name in the file, name in the list) of those whose name was taken.
        same: the names of those that were in the list already, with the same values.
    """

    added: tuple[str, ...]
    renamed: tuple[tuple[str, str], ...]
    same: tuple[str, ...]


def read_list(kind: ListKind[Entry], folder: Path) -> tuple[Entry, ...]:
    """Return the entries of one of the list's files, in its order; none where there is no such file.

    Raises:
        FileRefused: it cannot be read; nothing of it is taken.
    """
    return _read(kind, folder / kind.file_name)[1]


def with_entry_kept(kind: ListKind[Entry], folder: Path, entry: Entry) -> tuple[Entry, ...]:
    """Write an entry behind the others of the list, and return them all.

    Raises:
        EditRefused: the name is taken.
        FileRefused: the file as it is cannot be read, or the new one not be written; it is as it was.
    """
    text, entries = _read(kind, folder / kind.file_name)
    if plain_name(entry.name) in _taken(kind, entries):
        home = "the table" if plain_name(entry.name) in kind.reserved else "your list"
        raise EditRefused(
            f"{home} has a {kind.words} of this name already", read=f'"{entry.name}"', remedy="Choose another name"
        )
    return _write(kind, folder, with_appended(kind, text, (entry,)), (*entries, entry))


def without_entry(kind: ListKind[Entry], folder: Path, name: str) -> tuple[Entry, ...]:
    """Take the entry of a name out of the list, and return the others.

    Raises:
        EditRefused: there is none.
        FileRefused: the file as it is cannot be read, or the new one not be written; it is as it was.
    """
    text, entries = _read(kind, folder / kind.file_name)
    left = tuple(entry for entry in entries if entry.name != name)
    if len(left) == len(entries):
        raise EditRefused(f"your list has no {kind.words} of this name", read=f'"{name}"')
    return _write(kind, folder, without(kind, text, name), left)


def with_entries_imported(kind: ListKind[Entry], folder: Path, path: Path) -> Imported:
    """Add the entries of another file of the same kind to the list; one whose name is taken gets another name.

    Raises:
        FileRefused: one of the files cannot be read, or the list not be written; it is as it was.
    """
    text, entries = _read(kind, folder / kind.file_name)
    if not path.is_file():
        raise FileRefused("there is no such file", where=str(path), remedy="Look at the name and the folder")
    there = {entry.name: entry for entry in entries}
    taken = _taken(kind, entries)
    added: list[Entry] = []
    renamed: list[tuple[str, str]] = []
    same: list[str] = []
    for entry in _read(kind, path)[1]:
        if there.get(entry.name) == entry:
            same.append(entry.name)
            continue
        new = _free(entry.name, taken)
        taken.add(plain_name(new))
        if new != entry.name:
            renamed.append((entry.name, new))
        added.append(_named(entry, new))
    if added:
        _ = _write(kind, folder, with_appended(kind, text, tuple(added)), (*entries, *added))
    return Imported(tuple(entry.name for entry in added), tuple(renamed), tuple(same))


def with_entries_exported(kind: ListKind[Entry], entries: Iterable[Entry], path: Path) -> None:
    """Write entries to a new file, which `with_entries_imported` reads.

    Raises:
        FileRefused: there is a file of this name, or none can be written.
    """
    text = with_appended(kind, "", tuple(entries))
    try:
        with reserved(path):
            replace_file(path, lambda file: file.write(_bytes(text)))
    except OSError as error:
        raise _not_written(path, error) from error


def _read(kind: ListKind[Entry], path: Path) -> tuple[str, tuple[Entry, ...]]:
    """Return the text of a list file and its entries; both empty where there is no file."""
    try:
        text = _text_in(path)
        return text, entries_of(kind, text) if text else ()
    except FileRefused as error:
        where = f"{path.name}, {error.where}" if error.where else path.name
        raise FileRefused(error.what, where=where, read=error.read, remedy=error.remedy) from error
    except UnicodeDecodeError as error:
        raise FileRefused("the text is not UTF-8", where=path.name, remedy="Save it as UTF-8") from error
    except OSError as error:
        raise FileRefused(
            "the file cannot be read", where=path.name, read=error.strerror or "", remedy="Look at its rights"
        ) from error


def _text_in(path: Path) -> str:
    if not path.exists():
        return ""
    if not path.is_file() or path.stat().st_size > MOST_BYTES:
        raise FileRefused("this is larger than any list, or no file", remedy="Choose another file")
    return path.read_bytes().decode("utf-8-sig").replace("\r\n", "\n")


def _write(kind: ListKind[Entry], folder: Path, text: str, wanted: tuple[Entry, ...]) -> tuple[Entry, ...]:
    """Put a list's new text in its place once it is known to say what is wanted, and return that."""
    path = folder / kind.file_name
    if len(_bytes(text)) > MOST_BYTES:
        raise FileRefused("the list would be larger than any list", where=path.name, remedy="Take something out first")
    if entries_of(kind, text) != wanted:
        raise FileRefused(
            "the list is written in a way that nothing can be added to", where=path.name,
            remedy=f"Write each {kind.words} under [[{kind.table}]] in a text editor",
        )
    try:
        folder.mkdir(parents=True, exist_ok=True)
        replace_file(path.resolve(), lambda file: file.write(_bytes(text)))
    except OSError as error:
        raise _not_written(path, error) from error
    return wanted


def _bytes(text: str) -> bytes:
    try:
        return text.encode("utf-8")
    except UnicodeEncodeError as error:
        raise FileRefused("a text holds half a character", read=repr(error.object[error.start]),
                          remedy="Type it anew") from error


def _taken(kind: ListKind[Entry], entries: Iterable[Entry]) -> set[str]:
    return {plain_name(entry.name) for entry in entries} | kind.reserved


def _free(name: str, taken: set[str]) -> str:
    """Return name, or name with the first number that makes it one that is not taken."""
    number, new = 2, name
    while plain_name(new) in taken:
        new, number = f"{name} ({number})", number + 1
    return new


def _named(entry: Any, name: str) -> Any:
    return entry if entry.name == name else replace(entry, name=name)


def _not_written(path: Path, error: OSError) -> FileRefused:
    return FileRefused(
        "the file cannot be written", where=path.name, read=error.strerror or "",
        remedy="Look at the folder and its rights",
    )
