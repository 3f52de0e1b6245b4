"""assembly.json as text: sorted keys, a line per entry of a part, group or axis; a diff reads well."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

from core.errors import DocumentError

if TYPE_CHECKING:
    from core.document.migration import Data

_REMEDY = "Take the last good copy, or mend the JSON where it was changed by hand"

_flat = json.JSONEncoder(ensure_ascii=False, allow_nan=False, sort_keys=True).encode


def json_of(data: Data) -> bytes:
    """Return the data as UTF-8 JSON: the same data give the same bytes."""
    lines: list[str] = []
    _spread(lines, data, "  ")
    return "".join(["{", *lines, "\n}\n"]).encode()


def data_of(text: bytes) -> Data:
    """Return what JSON text holds.

    Raises:
        DocumentError: it is no UTF-8 or JSON, nests too deep, names an entry twice, or holds NaN or Infinity.

    """
    try:
        data = json.loads(text.decode("utf-8"), object_pairs_hook=_only_once, parse_constant=_refuse_constant)
    except DocumentError:
        raise
    except UnicodeDecodeError as error:
        read = f"byte {text[error.start]:#04x} at {error.start}"
        raise DocumentError("the text is not UTF-8", read=read, remedy=_REMEDY) from error
    except json.JSONDecodeError as error:
        what = f"the JSON is broken ({error.msg[:1].lower()}{error.msg[1:]})"
        where = f"line {error.lineno}, column {error.colno}"
        raise DocumentError(what, where=where, remedy=_REMEDY) from error
    except RecursionError as error:
        raise DocumentError("the entries nest deeper than in any document", remedy=_REMEDY) from error
    except ValueError as error:
        # A whole number of thousands of digits is not even turned into one.
        raise DocumentError("a number has more digits than any in a document", remedy=_REMEDY) from error
    if not isinstance(data, dict):
        raise DocumentError("the JSON has to hold named values", read=type(data).__name__, remedy=_REMEDY)
    return data


def _spread(lines: list[str], entries: Data, indent: str) -> None:
    """Add the entries, one on a line; a list of named values takes a block of lines for each of them."""
    comma = ""
    for name in sorted(entries):
        value = entries[name]
        lines.append(f"{comma}\n{indent}{_flat(name)}: ")
        if isinstance(value, list) and value and isinstance(value[0], dict):
            _spread_list(lines, value, indent + "  ")
            lines.append(f"\n{indent}]")
        else:
            lines.append(_flat(value))
        comma = ","


def _spread_list(lines: list[str], values: list[Data], indent: str) -> None:
    before = "["
    for value in values:
        lines.append(f"{before}\n{indent}{{")
        _spread(lines, value, indent + "  ")
        lines.append(f"\n{indent}}}")
        before = ","


def _only_once(pairs: list[tuple[str, Any]]) -> Data:
    entries = dict(pairs)
    if len(entries) != len(pairs):
        names = [name for name, _ in pairs]
        double = next(name for name in names if names.count(name) > 1)
        beside = entries.get("name")
        where = beside if isinstance(beside, str) else ""
        raise DocumentError("an entry is there twice", where=where, read=repr(double), remedy=_REMEDY)
    return entries


def _refuse_constant(text: str) -> None:
    raise DocumentError("a number has to be finite", read=text, remedy="Give an ordinary number")
