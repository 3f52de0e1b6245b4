"""Parsing the text of an ASCII STL file, block by block.

A facet is 21 words in a fixed order. A block of text is cut after its last whole facet, and its words are compared
and converted all at once; only a block that does not fit is walked word by word, to say on which line it goes wrong.
"""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, BinaryIO, NoReturn

import numpy as np

from core.errors import MeshFileError
from core.mesh.stl_faults import AGAIN, BYTE_ORDER_MARK, MEND

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import FloatArray

# The words of a facet; "" stands for a number.
_FACET = (
    b"facet", b"normal", b"", b"", b"", b"outer", b"loop", b"vertex", b"", b"", b"", b"vertex", b"", b"", b"",
    b"vertex", b"", b"", b"", b"endloop", b"endfacet",
)
_CORNER_NUMBERS = (8, 9, 10, 12, 13, 14, 16, 17, 18)
_KEYWORDS = [(place, word) for place, word in enumerate(_FACET) if word]

_BLOCK = 1 << 19
# A line this long is no STL text; without a limit a file of one endless line would be held in memory whole.
_LONGEST_REST = 1 << 22

_SOLID_LINE = re.compile(rb"(?:^|(?<=[\r\n]))[ \t\v\f]*(?:end[ \t]*)?solid(?![^\s])[^\r\n]*", re.IGNORECASE)
# No two parts of it may match the same digits: a word of many digits would be tried in every split of them.
_NUMBER = re.compile(rb"[-+]?(\d+(?:\.\d*)?|\.\d+)(e[-+]?\d+)?\Z", re.IGNORECASE)
_DECIMAL_COMMA = re.compile(rb"[-+]?\d*,\d+(e[-+]?\d+)?\Z", re.IGNORECASE)
_LINE_END = re.compile(rb"\r\n|\r|\n")
_LARGEST = float(np.finfo(np.float32).max)


def facets_of_text(file: BinaryIO, name: str) -> Iterator[tuple[FloatArray, int]]:
    """Yield (corners (n, 3, 3), bytes read for them) until the text ends.

    Raises:
        MeshFileError: whatever is no STL text, with its line; a text without facets.
    """
    rest, line, facets = b"", 1, 0
    while block := file.read(_BLOCK):
        text = rest + block
        cut = text.lower().rfind(b"endfacet")
        # Eight bytes more than the word: what follows it, if anything, belongs to the next facet.
        cut = cut + 8 if cut >= 0 else 0
        if cut == 0 and len(text) > _LONGEST_REST:
            _complain(text, name, line, facets)
        rest = text[cut:]
        corners = _corners(text[:cut], name, line, facets)
        line += _count_lines(text[:cut])
        facets += len(corners)
        yield corners, len(block)
    if _without_solid_lines(rest).strip():
        _complain(rest, name, line, facets)
    if facets == 0:
        raise MeshFileError("the file holds no facets", where=name, read='"solid" and nothing more', remedy=AGAIN)


def _corners(text: bytes, name: str, line: int, facets: int) -> FloatArray:
    words = _without_solid_lines(text).lower().split()
    count, spare = divmod(len(words), len(_FACET))
    sound = spare == 0 and all(words[place :: len(_FACET)].count(word) == count for place, word in _KEYWORDS)
    corners = _converted(words, count) if sound else None
    if corners is None:
        _complain(text, name, line, facets)
    return corners


def _converted(words: list[bytes], count: int) -> FloatArray | None:
    """Return the corners (count, 3, 3), or None where a word is no finite number of STL's range."""
    corners = np.empty((9, count))
    for row, place in zip(corners, _CORNER_NUMBERS, strict=True):
        column = words[place :: len(_FACET)]
        try:
            row[:] = list(map(float, column))
        except ValueError:
            return None
        # float() takes "1_000", which is no number in an STL file.
        if b"_" in b" ".join(column):
            return None
    if not (np.abs(corners) <= _LARGEST).all():
        return None
    return corners.T.reshape(count, 3, 3)


def _without_solid_lines(text: bytes) -> bytes:
    """Return the text without the lines that begin or end a solid, where names may stand."""
    text = text.removeprefix(BYTE_ORDER_MARK)
    return _SOLID_LINE.sub(b"", text) if b"solid" in text.lower() else text


def _complain(text: bytes, name: str, line: int, facets: int) -> NoReturn:
    """Walk the words of a faulty text and raise what is wrong with the first one that does not fit."""
    # Names are blanked out at equal length, so that lines and places stay.
    plain = _SOLID_LINE.sub(lambda found: b" " * len(found.group()), text.removeprefix(BYTE_ORDER_MARK))
    place = 0
    for found in re.finditer(rb"\S+", plain):
        word, inside = found.group(), place % len(_FACET)
        if not _fits(word, inside):
            # Counted once only: counting lines anew at every word takes minutes for one block.
            where = _place(name, line + _count_lines(plain[: found.start()]), facets + place // len(_FACET))
            _refuse_word(word, inside, where)
        place += 1
    raise MeshFileError(
        "the file is cut short in the middle of a facet",
        where=_place(name, line + _count_lines(plain.rstrip()), facets + place // len(_FACET)),
        read=f"{place % len(_FACET)} of its {len(_FACET)} words",
        remedy=f"It was not copied or written to its end. {AGAIN}",
    )


def _place(name: str, line: int, facets_before: int) -> str:
    return f"{name}, line {line}, facet {facets_before + 1}"


def _fits(word: bytes, place: int) -> bool:
    """Tell whether a word may stand at this place of a facet."""
    if _FACET[place]:
        return word.lower() == _FACET[place]
    if place not in _CORNER_NUMBERS:
        return word.lower() not in _FACET
    return _NUMBER.match(word) is not None and abs(float(word)) <= _LARGEST


def _refuse_word(word: bytes, place: int, where: str) -> NoReturn:
    """Raise what is wrong with a word that does not fit at this place of a facet."""
    if _FACET[place]:
        raise MeshFileError(
            f'"{_FACET[place].decode()}" is missing in the STL text', where=where, read=_shown(word), remedy=AGAIN
        )
    if place not in _CORNER_NUMBERS:
        raise MeshFileError("a number of the normal is missing", where=where, read=_shown(word), remedy=AGAIN)
    if _DECIMAL_COMMA.match(word):
        raise MeshFileError(
            "a decimal comma stands in a coordinate", where=where, read=_shown(word),
            remedy="Export the part again with a decimal point; it is not guessed",
        )
    if word.lower().lstrip(b"+-").startswith((b"nan", b"inf", b"1.#")):
        raise MeshFileError("a coordinate is not a finite number", where=where, read=_shown(word), remedy=MEND)
    if not _NUMBER.match(word):
        raise MeshFileError("a coordinate is not a number", where=where, read=_shown(word), remedy=AGAIN)
    what = "a coordinate is larger than an STL file can hold"
    raise MeshFileError(what, where=where, read=_shown(word), remedy=AGAIN)


def _count_lines(text: bytes) -> int:
    return len(_LINE_END.findall(text)) if b"\r" in text else text.count(b"\n")


def _shown(word: bytes) -> str:
    return f'"{word[:40].decode("ascii", "replace")}"'
