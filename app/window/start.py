"""What an empty document shows: three ways in, and a line that refuses or offers something above the ledger."""

from __future__ import annotations

from dataclasses import dataclass
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QMenu, QPushButton, QToolButton, QVBoxLayout, QWidget

import app
from app.window.style import GRID, Words, heading_font, icon

if TYPE_CHECKING:
    from collections.abc import Callable

_FOLDER = Path(app.__file__).resolve().parents[1] / "sample_parts"


@dataclass(frozen=True)
class Sample:
    """A document that comes with the program: what a menu calls it, what it shows, and its file."""

    words: str
    tip: str
    path: Path


SAMPLES = (
    Sample(
        "Indexing dial", "A dial with six fixtures from a mesh; the motor sits on its shaft.",
        _FOLDER / "indexing_dial.masswright",
    ),
    Sample(
        "Winding reel", "A reel behind brake, gearbox and belt, with its duty and its balance.",
        _FOLDER / "winding_reel.masswright",
    ),
    Sample(
        "Tilting flap", "A flap with a counterweight, where gravity rules; with and without it.",
        _FOLDER / "tilting_flap.masswright",
    ),
)


def fill_samples(menu: QMenu, open_sample: Callable[[Path], None]) -> None:
    """Put the samples that are installed into a menu."""
    menu.setToolTipsVisible(True)
    for sample in SAMPLES:
        if sample.path.is_file():
            menu.addAction(sample.words, partial(open_sample, sample.path)).setToolTip(sample.tip)


class StartPanel(QWidget):
    """Three big ways in."""

    def __init__(
        self, add_shape: Callable[[], None], add_mesh: Callable[[], None], open_sample: Callable[[Path], None]
    ) -> None:
        super().__init__()
        self.setObjectName("start")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground, True)
        head = Words("What turns?")
        head.setFont(heading_font(head))
        words = Words("Put the parts into the ledger, one line each; the totals follow as you type.", "quiet")
        self.shape = _way("shape", "Add a shape", "from dimensions on a sketch")
        self.shape.clicked.connect(add_shape)
        self.mesh = _way("mesh", "Drop a mesh here", "or choose its file")
        self.mesh.clicked.connect(add_mesh)
        self.sample = _way("masswright", "Open a sample", "a dial, a reel or a flap")
        self.samples = QMenu("Open a sample", self)
        fill_samples(self.samples, open_sample)
        self.sample.setMenu(self.samples)
        self.sample.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        self.sample.setVisible(not self.samples.isEmpty())
        row = QHBoxLayout()
        row.setSpacing(2 * GRID)
        row.addStretch(1)
        for button in (self.shape, self.mesh, self.sample):
            row.addWidget(button)
        row.addStretch(1)
        layout = QVBoxLayout(self)
        layout.addStretch(1)
        for label in (head, words):
            label.setAlignment(Qt.AlignmentFlag.AlignCenter)
            layout.addWidget(label)
        layout.addSpacing(2 * GRID)
        layout.addLayout(row)
        layout.addStretch(2)

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "sample"):
            for button, drawing in ((self.shape, "shape"), (self.mesh, "mesh"), (self.sample, "masswright")):
                button.setIcon(icon(drawing))


def _way(drawing: str, words: str, more: str) -> QToolButton:
    button = QToolButton()
    button.setIcon(icon(drawing))
    button.setIconSize(QSize(32, 32))
    button.setText(f"{words}\n{more}")
    button.setAccessibleName(f"{words}, {more}")
    button.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonTextUnderIcon)
    button.setMinimumSize(220, 104)
    button.setObjectName("way")
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button


class Notice(QFrame):
    """One sentence across the window, with what can be done about it; gone when it is dealt with."""

    def __init__(self) -> None:
        super().__init__()
        self._mark = QLabel()
        self.words = Words()
        self.words.setWordWrap(True)
        self._close = QPushButton("Close")
        self._close.clicked.connect(self.hide)
        self._layout = QHBoxLayout(self)
        self._layout.setContentsMargins(GRID, 4, GRID, 4)
        self._layout.setSpacing(GRID)
        self._layout.addWidget(self._mark)
        self._layout.addWidget(self.words, 1)
        self._layout.addWidget(self._close)
        self._offers: list[QPushButton] = []
        self.setObjectName("notice")
        self.hide()

    def say(self, sentence: str, offers: dict[str, Callable[[], None]] | None = None) -> None:
        """Show a sentence, with buttons for what may be done about it."""
        for button in self._offers:
            button.deleteLater()
        self._offers = []
        for words, action in (offers or {}).items():
            button = QPushButton(words)
            button.clicked.connect(partial(self._accept, action))
            self._layout.insertWidget(self._layout.count() - 1, button)
            self._offers.append(button)
        self.words.set_role("text" if offers else "failed")
        self._mark.setVisible(not offers)
        self._mark.setPixmap(icon("failed", "failed").pixmap(16, 16))
        self.words.setText(sentence)
        self.setAccessibleName(sentence)
        self.show()

    def _accept(self, action: Callable[[], None]) -> None:
        for button in self._offers:
            button.deleteLater()
        self._offers = []
        self.hide()
        action()

    def clear_refusal(self) -> None:
        """Go where the sentence was a refusal: something else was done since. An offer stays."""
        if not self._offers:
            self.hide()


def stacked(above: QWidget, below: QWidget) -> QWidget:
    """Return a widget with one above the other, without a gap; the lower one takes the room."""
    both = QWidget()
    layout = QVBoxLayout(both)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setSpacing(0)
    layout.addWidget(above)
    layout.addWidget(below, 1)
    return both
