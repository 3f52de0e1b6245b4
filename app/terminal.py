"""Writing to standard output and standard error, whatever signs the terminal knows."""

from __future__ import annotations

import os
import sys
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Mapping
    from typing import TextIO

PROGRAM: Final = "masswright"

# How a sign is written where the stream's encoding does not have it.
_SPELLED: Final[Mapping[str, str]] = MappingProxyType(
    {
        "·": "*",
        "×": "x",
        "²": "^2",
        "³": "^3",
        "−": "-",
        "–": "-",
        "…": "...",
        "∫": "integral ",
        "√": "sqrt",
        "°": "deg",
        "±": "+-",
        "µ": "u",
        "∞": "inf",
        "⌀": "dia. ",
        "≥": ">=",
        "≤": "<=",
        "ₙ": "n",
        "“": '"',
        "”": '"',
        "’": "'",
    }
)


def show(text: str) -> None:
    """Write text to standard output."""
    _write(sys.stdout, text)


def complain(message: str) -> None:
    """Write one line to standard error, with the program's name in front."""
    sys.stdout.flush()
    _write(sys.stderr, f"{PROGRAM}: {' '.join(message.split())}\n")


def drop_output() -> None:
    """Let everything still written to standard output vanish: its reader has gone away."""
    sink = os.open(os.devnull, os.O_WRONLY)
    os.dup2(sink, sys.stdout.fileno())
    os.close(sink)


def in_signs_of(text: str, encoding: str) -> str:
    """Return text in signs that an encoding has: usual spellings for units, escapes for the rest.

    >>> in_signs_of("−0.5 kg·m²", "ascii")
    '-0.5 kg*m^2'
    """
    try:
        text.encode(encoding)
    except UnicodeEncodeError:
        return "".join(_known_sign(sign, encoding) for sign in text)
    return text


def _known_sign(sign: str, encoding: str) -> str:
    try:
        sign.encode(encoding)
    except UnicodeEncodeError:
        return _SPELLED.get(sign) or sign.encode(encoding, "backslashreplace").decode(encoding)
    return sign


def _write(stream: TextIO, text: str) -> None:
    stream.write(in_signs_of(text, stream.encoding or "utf-8"))
