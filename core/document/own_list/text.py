"""The text of a list file: TOML, read by Python's own reader, appended to and shortened without touching the rest."""

from __future__ import annotations

import re
from contextlib import suppress
from typing import TYPE_CHECKING, Final, TypeVar

from core.document.own_list.entries import Named
from core.errors import FileRefused, MasswrightError
from core.material import plain_name
from core.quantity.tokens import quoted

if TYPE_CHECKING:
    from core.document.own_list.entries import ListKind

Entry = TypeVar("Entry", bound=Named)

MOST_ENTRIES: Final = 10_000
_REMEDY = "Mend it in a text editor, or put it aside"
_SHORT = {"\\": "\\\\", '"': '\\"', "\b": "\\b", "\t": "\\t", "\n": "\\n", "\f": "\\f", "\r": "\\r"}
_CONTROL = re.compile(r'[\\"\x00-\x1f\x7f]')


def entries_of(kind: ListKind[Entry], text: str) -> tuple[Entry, ...]:
    """Return the entries that a list's text holds.

    Raises:
        FileRefused: it is no TOML, holds something else, or an entry cannot be; the entry is named.
    """
    import tomllib

    try:
        data = tomllib.loads(text)
    except RecursionError as error:
        raise FileRefused("the values nest deeper than in any list", remedy=_REMEDY) from error
    except ValueError as error:  # TOMLDecodeError is one, and so is a number of too many digits
        raise FileRefused("the text cannot be read", read=str(error)[:120], remedy=_REMEDY) from error
    other = next((key for key in data if key != kind.table), None)
    if other is not None:
        raise FileRefused(f"this is no list of {kind.words}s", read=quoted(other), remedy=_REMEDY)
    tables = data.get(kind.table, [])
    if not isinstance(tables, list) or not all(isinstance(table, dict) for table in tables):
        raise FileRefused(f"each {kind.words} has to stand under [[{kind.table}]]", remedy=_REMEDY)
    if len(tables) > MOST_ENTRIES:
        raise FileRefused(f"a list holds at most {MOST_ENTRIES} entries", read=str(len(tables)), remedy=_REMEDY)
    entries = tuple(_entry(kind, table, at) for at, table in enumerate(tables, start=1))
    seen: set[str] = set()
    for entry in entries:
        if plain_name(entry.name) in seen:
            raise FileRefused("two entries have the same name", read=quoted(entry.name), remedy=_REMEDY)
        seen.add(plain_name(entry.name))
    return entries


def text_of(kind: ListKind[Entry], entry: Entry) -> str:
    """Return an entry as a block of TOML; the same entry always gives the same text."""
    lines = [f"[[{kind.table}]]"]
    for key, value in kind.texts_of(entry).items():
        lines.append(f"{key} = {_text(value) if isinstance(value, str) else _list(value)}")
    return "\n".join(lines) + "\n"


def with_appended(kind: ListKind[Entry], text: str, entries: tuple[Entry, ...]) -> str:
    """Return a list's text with entries behind what is there, which stays as it is to the letter."""
    start = text or kind.head
    start += "" if start.endswith("\n") else "\n"
    return start + "".join(f"\n{text_of(kind, entry)}" for entry in entries)


def without(kind: ListKind[Entry], text: str, name: str) -> str:
    """Return a list's text without the entry of a name; notes and the other entries stay as they are."""
    entries = entries_of(kind, text)
    left = tuple(entry for entry in entries if entry.name != name)
    heads = [head.start() for head in re.finditer(rf"^[ \t]*\[\[[ \t]*{kind.table}[ \t]*\]\]", text, re.MULTILINE)]
    if len(heads) == len(entries) and len(left) == len(entries) - 1:
        at = next(at for at, entry in enumerate(entries) if entry.name == name)
        block = text[heads[at] : (*heads, len(text))[at + 1]].splitlines(keepends=True)
        # Notes in front of the next entry belong to that one.
        while not block[-1].strip() or block[-1].lstrip().startswith("#"):
            block.pop()
        shortened = text[: heads[at]] + text[heads[at] + len("".join(block)) :].lstrip("\n")
        # An entry may be written in a way that is not taken apart line by line.
        with suppress(FileRefused):
            if entries_of(kind, shortened) == left:
                return shortened
    return with_appended(kind, "", left)


def _entry(kind: ListKind[Entry], table: dict[str, object], at: int) -> Entry:
    try:
        return kind.entry_of(table)
    except MasswrightError as error:
        name = table.get("name")
        which = quoted(name) if isinstance(name, str) else f"number {at}"
        where = f"{kind.words} {which}" + (f", {error.where}" if error.where else "")
        raise FileRefused(error.what, where=where, read=error.read, remedy=error.remedy or _REMEDY) from error


def _text(value: str) -> str:
    escaped = _CONTROL.sub(lambda sign: _SHORT.get(sign.group(), f"\\u{ord(sign.group()):04x}"), value)
    return f'"{escaped}"'


def _list(values: tuple[str, ...]) -> str:
    return f"[{', '.join(_text(value) for value in values)}]"
