"""Names for values in typed text: what can be one, where they stand, and the text with others in their place."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.errors import QuantityError
from core.quantity.functions import CONSTANTS, FUNCTIONS
from core.quantity.spelling import is_unit_spelling
from core.quantity.tokens import IDENTIFIER, quoted, tokens_of
from core.quantity.unit_text import is_effect
from core.quantity.units import UNITS

if TYPE_CHECKING:
    from collections.abc import Collection, Mapping

LONGEST_NAME: Final = 60
_RAISED: Final = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")


def check_name(name: str, *, where: str = "") -> None:
    """Refuse what cannot be the name of a value.

    Raises:
        QuantityError: it is empty, too long, not made of letters, digits and "_" with a letter in front, or it is
            a unit, a function or a constant.

    >>> check_name("plate_d")
    """
    if not name:
        raise QuantityError("a name is missing", where=where, remedy='Type one such as "plate_d"')
    if len(name) > LONGEST_NAME:
        raise QuantityError(
            f"a name has at most {LONGEST_NAME} signs", where=where, read=quoted(name), remedy="Choose a shorter one"
        )
    if not IDENTIFIER.fullmatch(name) or not name[0].isalpha():
        raise QuantityError(
            'a name is made of letters, digits and "_", with a letter in front', where=where, read=quoted(name),
            remedy='Choose one such as "plate_d"',
        )
    taken = _taken(name)
    if taken:
        raise QuantityError(f"{name} is {taken}", where=where, remedy=f'Choose another name, such as "{name}_1"')


def names_in(text: str, names: Collection[str]) -> tuple[str, ...]:
    """Return which of the names a text uses, each once, in the order of the text; none of a text without any sense.

    >>> names_in("2*a + mm/a - b", {"a", "b", "c"})
    ('a', 'b')
    """
    try:
        tokens = tokens_of(text, names=names)
    except QuantityError:
        return ()
    return tuple(dict.fromkeys(token.text for token in tokens if token.what == "reference"))


def with_names_changed(text: str, changes: Mapping[str, str]) -> str:
    """Return a text with other names in the place of some, everything else as it was typed.

    >>> with_names_changed("a/2 + ab", {"a": "plate_d"})
    'plate_d/2 + ab'
    """
    if not names_in(text, changes):
        return text
    changed, end = "", 0
    for token in tokens_of(text, names=changes):
        if token.what == "reference":
            changed += text[end : token.start] + changes[token.text]
            end = token.end
    return changed + text[end:]


def _taken(name: str) -> str:
    if name in FUNCTIONS:
        return "a function"
    if name in CONSTANTS:
        return "a constant"
    stem = name.rstrip("0123456789")
    power = name[len(stem) :]
    # mm2 is read as mm²; h1 or d2 is not written for a unit by anybody.
    raised = power and any(f"{stem}{power.translate(_RAISED)}" in unit.split("·") for unit in _written())
    return "a unit" if is_unit_spelling(name) or is_effect(name) or raised else ""


def _written() -> tuple[str, ...]:
    return tuple(part for symbol in UNITS for part in symbol.replace(" ", "·").split("/"))
