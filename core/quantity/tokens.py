"""Cutting typed text into numbers, names, exponents and signs. Nothing is evaluated here."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Final

from core.errors import QuantityError

if TYPE_CHECKING:
    from collections.abc import Collection

LONGEST_TEXT: Final = 200
# Of a power of ten: beyond the range of a double, and still quick to hold exactly.
LARGEST_EXPONENT: Final = 400
_LONGEST_QUOTE: Final = 60

_DIGITS: Final = "⁰¹²³⁴⁵⁶⁷⁸⁹"
_SUPERSCRIPTS: Final = str.maketrans(_DIGITS + "⁻−", "0123456789--")
_TEN: Final = r"[eE][+\-−]?[0-9]+"
_TOKEN: Final = re.compile(
    rf"""
    (?P<blank>\s+)
    # A whole number, a blank and a proper fraction. Its numerator has at most two digits, so that no blank
    # that groups thousands can be taken for it.
    | (?P<mixed>(?P<whole>[0-9]+)[ \u00a0\u202f]+(?P<top>[0-9]{{1,2}})/(?P<bottom>[0-9]{{1,3}})
        (?![0-9.,]|{_TEN}))
    | (?P<number>(?:[0-9][0-9.,]*|[.,][0-9][0-9.,]*)(?:{_TEN})?)
    | (?P<name>[A-Za-zµμₙ_]+|[°"'′″%])
    | (?P<exponent>(?:\^|\*\*)\s*[-−]?[0-9]+|⁻?[{_DIGITS}]+)
    | (?P<sign>[-+−*/·⋅×();])
    """,
    re.VERBOSE,
)
# A letter, and then letters, digits and "_"; a raised digit is an exponent and no part of it.
IDENTIFIER: Final = re.compile(rf"[^\W\d{_DIGITS}][^\W{_DIGITS}]*")
_SIGNS: Final = str.maketrans("−·⋅×", "-***")
_DIAMETER_SIGNS: Final = "⌀Øø∅"


@dataclass(frozen=True)
class Token:
    """A piece of typed text and where it lies; `what` is "number", "name", "reference", "exponent", "sign" or "end".

    A reference is the name of a value that is known beside the text; any other name may be a unit.
    """

    what: str
    text: str
    start: int
    end: int
    number: Fraction = Fraction(0)
    mixed: bool = False


def quoted(text: str) -> str:
    """Return typed text in quotation marks, on one line and short enough for a message."""
    line = " ".join("".join(sign if sign.isprintable() else " " for sign in text).split())
    return f'"{line}"' if len(line) <= _LONGEST_QUOTE else f'"{line[: _LONGEST_QUOTE - 1]}…"'


def refusal(what: str, text: str, *, where: str, remedy: str) -> QuantityError:
    """Return the error that refuses text."""
    return QuantityError(what, where=where, read=quoted(text), remedy=remedy)


def tokens_of(text: str, *, where: str = "", names: Collection[str] = ()) -> tuple[Token, ...]:
    """Cut text into tokens, without blanks, with one "end" token behind them; names become references.

    Raises:
        QuantityError: the text is empty, too long, holds a sign that means nothing here, or a number with
            two decimal marks.
    """
    if len(text) > LONGEST_TEXT:
        raise refusal(
            f"the text is longer than {LONGEST_TEXT} signs", text, where=where, remedy="Write a shorter one"
        )
    if not text.strip():
        raise refusal("nothing was typed", text, where=where, remedy='Type a number, such as "12.5"')
    found: list[Token] = []
    place = 0
    while place < len(text):
        named = IDENTIFIER.match(text, place)
        if named is not None and named.group() in names:
            place = named.end()
            found.append(Token("reference", named.group(), named.start(), place))
            continue
        match = _TOKEN.match(text, place)
        if match is None:
            raise _strange_sign(text, text[place], where)
        place = match.end()
        if match["blank"] is None:
            found.append(_token(match, text, where, follows_name=bool(found) and found[-1].what == "name"))
            place = found[-1].end
    return (*found, Token("end", "", len(text), len(text)))


def _token(match: re.Match[str], text: str, where: str, *, follows_name: bool) -> Token:
    start, end = match.span()
    piece = match.group()
    if match["exponent"] is not None:
        return Token("exponent", piece.translate(_SUPERSCRIPTS).lstrip("^* "), start, end)
    if match["name"] is not None:
        return Token("name", piece, start, end)
    if match["sign"] is not None:
        return Token("sign", piece.translate(_SIGNS), start, end)
    power = re.match("[0-9]+", piece)
    if follows_name and power and text[start - 1].isalpha():
        return Token("exponent", power.group(), start, start + power.end())
    return _number_token(match, text, where)


def _number_token(match: re.Match[str], text: str, where: str) -> Token:
    start, end = match.span()
    piece = match.group()
    if match["mixed"] is None:
        return Token("number", piece, start, end, _number(piece, text, where))
    whole, top, bottom = (int(match[name]) for name in ("whole", "top", "bottom"))
    if top < bottom:
        return Token("number", piece, start, end, whole + Fraction(top, bottom), mixed=True)
    end = start + len(match["whole"])
    return Token("number", match["whole"], start, end, Fraction(whole))


def _number(piece: str, text: str, where: str) -> Fraction:
    mantissa, _, power = piece.lower().replace("−", "-").partition("e")
    if mantissa.count(".") + mantissa.count(",") > 1:
        raise refusal(
            f'"{mantissa}" has more than one decimal mark',
            text,
            where=where,
            remedy='Use one "." or "," as the decimal mark, and no marks between thousands',
        )
    if abs(int(power or 0)) > LARGEST_EXPONENT:
        raise refusal(f'"{piece}" is beyond all measure', text, where=where, remedy="Check the exponent")
    return Fraction(mantissa.replace(",", ".").strip() + (f"e{power}" if power else ""))


def _strange_sign(text: str, sign: str, where: str) -> QuantityError:
    if sign in _DIAMETER_SIGNS:
        return refusal(
            "a diameter sign is not taken: the field itself says whether it wants a diameter or a radius",
            text,
            where=where,
            remedy="Leave the sign out",
        )
    shown = f'"{sign}"' if sign.isprintable() else f"U+{ord(sign):04X}"
    return refusal(
        f"the sign {shown} means nothing here",
        text,
        where=where,
        remedy="Use digits, one decimal mark, + − * / ( ) and units",
    )
