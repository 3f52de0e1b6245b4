"""Data held against the schema, and what does not fit said in plain words with its place."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from core.errors import DocumentError

if TYPE_CHECKING:
    from core.document.schema import DocumentEntry

# Longer than this, what was read is cut short in the sentence.
_LONGEST_READ = 60
# With more steps than this, the middle of a place is left out.
_MOST_STEPS = 12

# pydantic's kinds of error → what is wrong, and what to do; {…} are the limits that the kind carries.
_SAID = {
    "missing": ("this entry is missing", ""),
    "extra_forbidden": ("this version knows no such entry", ""),
    "recursion_depth_exceeded": ("the groups nest deeper than in any document", ""),
    "finite_number": ("a number has to be finite", "Give an ordinary number"),
    "float_type": ("this has to be a number", "Give a number, without quotation marks"),
    "int_type": ("this has to be a whole number", "Give a whole number"),
    "bool_type": ("this has to be true or false", "Give true or false"),
    "string_type": ("this has to be a text", "Put it in quotation marks"),
    "string_unicode": ("this text holds half a character", "Type the text anew"),
    "string_too_long": ("this text is longer than {max_length} characters", "Shorten it"),
    "string_pattern_mismatch": ("this has to be a SHA-256 of 64 hexadecimal digits", ""),
    "greater_than": ("this has to be more than {gt:g}", "Give a larger number"),
    "greater_than_equal": ("this has to be at least {ge:g}", "Give a larger number"),
    "less_than_equal": ("this has to be at most {le:g}", "Give a smaller number"),
    "tuple_type": ("this has to be a list of numbers", ""),
    "too_long": ("this holds more than {max_length} values", ""),
    "too_short": ("this holds fewer than {min_length} values", ""),
    "list_type": ("this has to be a list", ""),
    "dict_type": ("this has to hold named values", ""),
    "model_type": ("this has to hold named values", ""),
    "literal_error": ("this has to be {expected}", ""),
    "union_tag_invalid": ("the kind has to be one of {expected_tags}", ""),
    "union_tag_not_found": ("its kind is missing", ""),
}
_READ_NOTHING = {"missing", "union_tag_not_found", "recursion_depth_exceeded"}
# Entries, and lists of entries, that are of several kinds.
_UNIONS = {"body", "driver", "copies", "timing"}
_LISTS_OF_UNIONS = {"members", "stages", "linear", "steps"}


def checked(data: object, remedy: str = "") -> DocumentEntry:
    """Return the data as the schema's own value.

    Args:
        data: what the JSON holds, or is to hold.
        remedy: what to do about an entry that does not fit, where the kind of fault says nothing better.

    Raises:
        DocumentError: an entry is missing, unknown, of the wrong kind, or beyond its limit; one is named.

    """
    from pydantic import ValidationError

    from core.document.schema import DocumentEntry

    try:
        return DocumentEntry.model_validate(data)
    except ValidationError as error:
        first = error.errors(include_url=False)[0]
        raise _refusal(first, data, error.error_count(), remedy) from error


def place_of(location: tuple[int | str, ...]) -> str:
    """Return a place in the JSON as a person writes it; the tags that pydantic puts into unions are left out.

    >>> place_of(("members", 2, "part", "body", "shape", "dimensions", "diameter"))
    'members[2].body.dimensions.diameter'
    """
    kept: list[str] = []
    before: int | str = ""
    in_list = False
    for step in location:
        is_tag = before in _UNIONS or (isinstance(before, int) and in_list)
        if not is_tag:
            kept.append(f"[{step}]" if isinstance(step, int) else f".{step}")
            if isinstance(step, str):
                in_list = step in _LISTS_OF_UNIONS
        before = "" if is_tag else step
    return short_place("".join(kept).lstrip("."))


def short_place(place: str) -> str:
    """Return a place in the JSON with its middle left out where groups nest deep."""
    steps = place.split(".")
    return place if len(steps) <= _MOST_STEPS else f"{'.'.join(steps[:3])} … {'.'.join(steps[-4:])}"


def shown(value: object) -> str:
    """Return what was read, short enough for a sentence."""
    text = "named values" if isinstance(value, dict) else f"{value!r}"
    return text if len(text) <= _LONGEST_READ else f"{text[:_LONGEST_READ]} …"


def _refusal(first: Any, data: object, count: int, remedy: str) -> DocumentError:
    place = place_of(first["loc"])
    what, better = _SAID.get(first["type"], (first["msg"][:1].lower() + first["msg"][1:], ""))
    what = what.format_map(first.get("ctx", {}))
    more = f" (the first of {count} such places)" if count > 1 else ""
    name = _name_of_node(first["loc"], data)
    where = f"{place or 'the document'}{f' ({name})' if name else ''}"
    read = "" if first["type"] in _READ_NOTHING else shown(first.get("ctx", {}).get("tag", first["input"]))
    return DocumentError(what + more, where=where, read=read, remedy=better or remedy)


def _name_of_node(location: tuple[int | str, ...], data: object) -> str:
    """Return the name of the innermost part or group that a place lies in; "" where it has none."""
    name = ""
    at: Any = data
    for step in location:
        if isinstance(at, dict) and step in at and not (isinstance(step, str) and at.get("kind") == step):
            at = at[step]
        elif isinstance(at, list) and isinstance(step, int) and step < len(at):
            at = at[step]
            found = at.get("name") if isinstance(at, dict) else None
            name = found if isinstance(found, str) else name
    return name if len(name) <= _LONGEST_READ else f"{name[:_LONGEST_READ]} …"
