"""The hand that drags handles in the view: it holds one, tells how far it was dragged, and lets it go."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QObject, Signal

from app.window.view.dragging import NOTHING, Amount, Drag
from app.window.view.handles import grip_at, paths_of

if TYPE_CHECKING:
    from collections.abc import Callable

    from app.window.view.camera import Camera, Size
    from app.window.view.handles import Grip, Handles
    from core.placement import Triple

# A handle that was taken and moved less than this, px, was clicked through.
_STIR = 4.0
# With Shift, steps are so much finer.
_FINER = 0.1


@dataclass(frozen=True)
class Steps:
    """What amounts snap to: lengths in m, angles in rad; 0: to nothing."""

    length: float = 0.0
    angle: float = 0.0


@dataclass(frozen=True, eq=False)
class Shown:
    """What is drawn of the handles.

    Attributes:
        handles: where they stand now.
        grips: whether they are to be seen, beside the line's own frame.
        lit: the one that the pointer is on.
        held: whether it is being dragged.
        words: what to say beside the pointer; "" for nothing.
        spot: where the pointer is, px.
    """

    handles: Handles
    grips: bool = True
    lit: Grip | None = None
    held: bool = False
    words: str = ""
    spot: tuple[float, float] = (0.0, 0.0)


class Hand(QObject):
    """Holds at most one handle.

    Signals:
        carried(Amount): the pointer says another amount.
        placed(Amount): the handle was let go there.
        dropped: it was let go, and nothing is to be moved.

    Attributes:
        tell: says a grip, and an amount once there is one, in a few words.
    """

    carried = Signal(object)
    placed = Signal(object)
    dropped = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.tell: Callable[[Grip, Amount | None], str] = lambda _grip, _amount: ""
        self.shown: Shown | None = None
        self._steps = Steps()
        self._drag: Drag | None = None
        self._values: Triple = NOTHING
        self._amount: Amount | None = None

    @property
    def holds(self) -> bool:
        """Whether a handle is held."""
        return self._drag is not None

    @property
    def stirred(self) -> bool:
        """Whether the handle that is held was dragged so far that it was no click."""
        return self._amount is not None

    def show(self, handles: Handles | None, steps: Steps, *, grips: bool) -> None:
        """Offer these handles, or none; one that is held is dropped."""
        self.drop()
        self._steps = steps
        self.shown = None if handles is None else Shown(handles, grips)

    def look(self, spot: tuple[float, float], camera: Camera, size: Size) -> bool:
        """Light up the handle at a place in the picture, px; return whether another one is lit now."""
        if self.shown is None or self.holds:
            return False
        paths = paths_of(self.shown.handles, camera, size) if self.shown.grips else {}
        lit, before = grip_at(paths, spot), self.shown.lit
        words = "" if lit is None else self.tell(lit, None)
        self.shown = replace(self.shown, lit=lit, words=words, spot=spot)
        return lit != before or lit is not None

    def take(self, spot: tuple[float, float], camera: Camera, size: Size) -> bool:
        """Take the handle at a place in the picture, px; return whether there is one."""
        self.look(spot, camera, size)
        if self.shown is None or self.shown.lit is None:
            return False
        self._drag = Drag(self.shown.handles, self.shown.lit, camera, size, spot)
        self._values, self._amount = NOTHING, None
        return True

    def carry(self, spot: tuple[float, float], *, finer: bool) -> None:
        """Drag the handle to a place in the picture, px; in finer steps where that is wanted."""
        drag = self._drag
        if drag is None or self.shown is None:
            return
        if self._amount is None and np.hypot(spot[0] - drag.start[0], spot[1] - drag.start[1]) <= _STIR:
            return
        self._values = drag.values(spot, self._values)
        step = self._steps.angle if drag.grip.kind == "about" else self._steps.length
        before, self._amount = self._amount, drag.amount(self._values, step * (_FINER if finer else 1.0))
        moved = drag.handles.carried(self._amount.motion(drag.handles))
        words = self.tell(drag.grip, self._amount)
        self.shown = replace(self.shown, handles=moved, held=True, words=words, spot=spot)
        if self._amount != before:
            self.carried.emit(self._amount)

    def let_go(self) -> None:
        """Let the handle go where it is."""
        amount = self._amount
        self._end()
        if amount is None or not any(amount.values):
            self.dropped.emit()
        else:
            self.placed.emit(amount)

    def drop(self) -> None:
        """Let the handle go, and leave everything as it was."""
        if self.holds:
            self._end()
            self.dropped.emit()

    def _end(self) -> None:
        if self._drag is not None and self.shown is not None:
            self.shown = Shown(self._drag.handles, self.shown.grips)
        self._drag, self._amount = None, None
