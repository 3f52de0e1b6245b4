"""Turning values into text: for reading (significant digits, a true minus) and for cells of a spreadsheet."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Final

from core.errors import QuantityError

if TYPE_CHECKING:
    from collections.abc import Iterable

MINUS: Final = "−"  # U+2212
NO_VALUE: Final = "–"

# Powers of ten shown in plain decimal notation; beyond them the E-notation is easier to read.
_SMALLEST_POWER: Final = -4
SMALLEST_PLAIN: Final = 10.0**_SMALLEST_POWER
_LARGEST_PLAIN: Final = 6
_MOST_DECIMALS: Final = 12
_MOST_DIGITS: Final = 17


def significant(value: float, digits: int = 5, *, decimal_mark: str = ".") -> str:
    """Return value with the given number of significant digits (1 to 17), trailing zeros kept.

    Plain notation from 1e-4 to 1e7, "2.9264E−7" outside. Zero is "0", whatever its sign. A value that is not
    finite is "–" (no value) or "∞".

    >>> significant(12.4), significant(-0.000292639653429), significant(0.0)
    ('12.400', '−0.00029264', '0')
    """
    return _in_plain_words(value) or _marked(_rounded(value, digits), decimal_mark)


def compact(value: float, digits: int = 12, *, decimal_mark: str = ".") -> str:
    """Return value with at most the given number of significant digits, trailing zeros dropped.

    >>> compact(0.011525 / 0.001)
    '11.525'
    """
    return _in_plain_words(value) or _marked(_trimmed(_rounded(value, digits)), decimal_mark)


def fixed(value: float, decimals: int, *, decimal_mark: str = ".") -> str:
    """Return value with a fixed number of decimals, for a column that is aligned on its decimal marks.

    A value that would be all zeros is shown by two significant digits instead.

    >>> fixed(12.4, 2), fixed(-1e-6, 4), fixed(0.0, 4)
    ('12.40', '−1.0E−6', '0')
    """
    words = _in_plain_words(value)
    if words:
        return words
    text = f"{value:.{decimals}f}"
    if not any(digit in "123456789" for digit in text):
        text = _rounded(value, 2)
    return _marked(text, decimal_mark)


def decimals_for(values: Iterable[float], digits: int = 5) -> int:
    """Return how many decimals give the largest of values the given number of significant digits.

    >>> decimals_for([12.41, 0.82, 0.0])
    3
    """
    largest = max((abs(value) for value in values if math.isfinite(value)), default=0.0)
    if largest == 0.0:
        return 0
    return min(max(digits - 1 - _power_of_ten(largest, digits), 0), _MOST_DECIMALS)


def for_clipboard(value: float, decimal_mark: str = ".") -> str:
    """Return the shortest text that reads back as the same double: ASCII minus, "E" exponent, no grouping.

    Raises:
        QuantityError: value is not finite: a spreadsheet would take it as text.

    >>> for_clipboard(-0.0471), for_clipboard(1e-7, ","), for_clipboard(12.0)
    ('-0.0471', '1E-07', '12')
    """
    if not math.isfinite(value):
        raise QuantityError(
            "there is no number to copy", read=str(float(value)), remedy="Look at the checks of this value"
        )
    text = repr(float(value) or 0.0).upper().removesuffix(".0")
    return text.replace(".", decimal_mark)


def _in_plain_words(value: float) -> str:
    if math.isnan(value):
        return NO_VALUE
    if math.isinf(value):
        return "∞" if value > 0 else f"{MINUS}∞"
    return "0" if value == 0.0 else ""


def _power_of_ten(value: float, digits: int) -> int:
    """Return the power of ten of value once it is rounded to that many digits."""
    return int(f"{value:.{min(max(digits, 1), _MOST_DIGITS) - 1}e}".partition("e")[2])


def _rounded(value: float, digits: int) -> str:
    digits = min(max(digits, 1), _MOST_DIGITS)
    mantissa, _, power_text = f"{value:.{digits - 1}e}".partition("e")
    power = int(power_text)
    if not _SMALLEST_POWER <= power <= _LARGEST_PLAIN:
        return f"{mantissa}E{power}"
    sign = "-" if value < 0 else ""
    figures = mantissa.lstrip("-").replace(".", "")
    if power < 0:
        return f"{sign}0.{'0' * (-power - 1)}{figures}"
    figures = figures.ljust(power + 1, "0")
    whole, part = figures[: power + 1], figures[power + 1 :]
    return f"{sign}{whole}.{part}" if part else f"{sign}{whole}"


def _trimmed(text: str) -> str:
    mantissa, mark, power = text.partition("E")
    if "." in mantissa:
        mantissa = mantissa.rstrip("0").rstrip(".")
    return f"{mantissa}{mark}{power}"


def _marked(text: str, decimal_mark: str) -> str:
    return text.replace("-", MINUS).replace(".", decimal_mark)
