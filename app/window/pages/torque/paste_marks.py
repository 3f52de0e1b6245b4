"""Two buttons that ask for the decimal mark of a pasted block whose numbers can be read in two ways."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QHBoxLayout, QPushButton, QWidget

from app.window.style import GRID
from core.errors import QuantityError

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.errors import MasswrightError
    from core.quantity.block import DecimalMark

WHICH = "Say which decimal mark the block has"


class PasteMarks(QWidget):
    """Hidden until a block is refused for its decimal mark; a click reads the same block again."""

    def __init__(self, read: Callable[[str, DecimalMark | None], None]) -> None:
        super().__init__()
        self._text = ""
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(GRID // 2)
        self.buttons: dict[DecimalMark, QPushButton] = {}
        marks: tuple[DecimalMark, DecimalMark] = (".", ",")
        for mark in marks:
            button = QPushButton(f'"{mark}" is the decimal mark')
            button.setStyleSheet("padding: 2px 8px;")
            button.clicked.connect(partial(self._read, read, mark))
            row.addWidget(button)
            self.buttons[mark] = button
        row.addStretch(1)
        self.hide()

    def offer(self, text: str, mark: DecimalMark | None, error: MasswrightError) -> None:
        """Ask for the mark of a block, where that is what it was refused for."""
        self._text = text
        self.setVisible(mark is None and isinstance(error, QuantityError) and error.remedy == WHICH)

    def _read(self, read: Callable[[str, DecimalMark | None], None], mark: DecimalMark, _checked: bool = False) -> None:
        read(self._text, mark)
