"""Typed texts read with named dimensions: which of them a text uses, and whether it still means a number."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from core.errors import QuantityError
from core.quantity.expression import parse
from core.quantity.names import names_in

if TYPE_CHECKING:
    from collections.abc import Collection

    from core.quantity.expression import Names
    from core.quantity.units import Kind

# Relative: a text read again gives the number that was kept, but for the last bits.
SAME_VALUE = 1e-12


class Readings:
    """Texts read with the same names, each text once: a machine has thousands of lines with the same few."""

    def __init__(self, names: Names, wanted: Collection[str]) -> None:
        self._names = names
        self._wanted = wanted
        self._uses: dict[str, bool] = {}
        self._values: dict[tuple[str, Kind], float | None] = {}

    def uses(self, text: str) -> bool:
        """Return whether a text uses one of the names that are wanted."""
        if text not in self._uses:
            self._uses[text] = bool(names_in(text, self._wanted))
        return self._uses[text]

    def means(self, text: str, kind: Kind, value: float | None) -> bool:
        """Return whether a text still means the number of a kind that it was typed for; None means nothing."""
        if value is None:
            return False
        read = self._value(text, kind)
        return read is not None and math.isclose(read, value, rel_tol=SAME_VALUE)

    def _value(self, text: str, kind: Kind) -> float | None:
        if (text, kind) not in self._values:
            try:
                self._values[text, kind] = parse(text, kind, names=self._names).value
            except QuantityError:
                # What means nothing with these names is no longer what says the number.
                self._values[text, kind] = None
        return self._values[text, kind]
