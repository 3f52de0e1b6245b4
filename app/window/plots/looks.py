"""How lines are told apart: a colour of Okabe and Ito and a pattern of dashes, so that either of them will do."""

from __future__ import annotations

from dataclasses import dataclass
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPen

from app.window.style import is_dark

if TYPE_CHECKING:
    from collections.abc import Mapping


@dataclass(frozen=True)
class Look:
    """Colours in the light and the dark theme, lengths of dash and gap in widths of the line, and its width in px.

    A line of 1 px is drawn in a third of the time that any wider one takes.
    """

    light: str
    dark: str
    dashes: tuple[float, ...] = ()
    width: float = 1.0

    @property
    def colour(self) -> QColor:
        """The colour in the theme that the system has now."""
        return QColor(self.dark if is_dark() else self.light)

    @property
    def pen(self) -> QPen:
        """What draws the line."""
        return self._pen(self.width)

    @property
    def hairline(self) -> QPen:
        """What draws a line that goes up and down in every pixel: at any other width that takes seconds."""
        return self._pen(1.0)

    def _pen(self, width: float) -> QPen:
        pen = QPen(self.colour, width)
        pen.setCosmetic(True)
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        if self.dashes:
            pen.setDashPattern(list(self.dashes))
        return pen


# Okabe & Ito, "Color Universal Design" (2008), darkened or lightened where a line would have less than 3:1.
LOOKS: Final[Mapping[str, Look]] = MappingProxyType({
    "sum": Look("#1a1c1e", "#e8e8e6", width=2.0),
    "acceleration": Look("#0072b2", "#56b4e9"),
    "gravity": Look("#d55e00", "#f08040", (10, 4)),
    "applied": Look("#00845f", "#2fbf95", (10, 4, 2, 4)),
    "friction": Look("#a36b00", "#e69f00", (2, 4)),
    "losses": Look("#a8548a", "#e29bc4", (6, 3, 2, 3, 2, 3)),
    "mean": Look("#5c6066", "#a4a8ad", (18, 6)),
    "single": Look("#0072b2", "#56b4e9", width=2.0),
    "continuous": Look("#00845f", "#2fbf95", (10, 4, 2, 4)),
    "peak": Look("#d55e00", "#f08040", (10, 4)),
})
