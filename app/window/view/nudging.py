"""Keys that move or turn what is selected by a step, as the picture shows it."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtCore import Qt

# Key → which direction of the picture (0 right, 1 up, 2 toward the viewer), and its sign.
_WAYS: dict[int, tuple[int, int]] = {
    Qt.Key.Key_Right: (0, 1), Qt.Key.Key_Left: (0, -1), Qt.Key.Key_Up: (1, 1), Qt.Key.Key_Down: (1, -1),
    Qt.Key.Key_PageUp: (2, -1), Qt.Key.Key_PageDown: (2, 1),
}
# To turn, the near side follows the key: about up for right and left, about right for up and down.
_TURNS: dict[int, tuple[int, int]] = {
    Qt.Key.Key_Right: (1, 1), Qt.Key.Key_Left: (1, -1), Qt.Key.Key_Up: (0, -1), Qt.Key.Key_Down: (0, 1),
    Qt.Key.Key_PageUp: (2, 1), Qt.Key.Key_PageDown: (2, -1),
}


@dataclass(frozen=True)
class Nudge:
    """One step along, or about, a direction of the picture: 0 right, 1 up, 2 toward the viewer; sign 1 or −1."""

    turning: bool
    way: int
    sign: int


def nudge_of(key: int, modifiers: Qt.KeyboardModifier) -> Nudge | None:
    """Return what a key asks for, None where it is no nudge: Ctrl moves, Ctrl and Shift turn."""
    held = modifiers & ~Qt.KeyboardModifier.KeypadModifier
    control, shift = Qt.KeyboardModifier.ControlModifier, Qt.KeyboardModifier.ShiftModifier
    if key not in _WAYS or held not in {control, control | shift}:
        return None
    turning = held != control
    return Nudge(turning, *(_TURNS if turning else _WAYS)[key])
